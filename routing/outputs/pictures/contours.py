"""Contour lines at round levels, labelled where there is room."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from contourpy import contour_generator
from matplotlib.axes import Axes
from matplotlib.collections import LineCollection

from routing.outputs.pictures.framing import Cut, Frame
from routing.outputs.pictures.placing import Labels
from routing.outputs.pictures.steps import multiples, places_of, round_step
from routing.outputs.pictures.style import SMALL
from routing.records import FloatArray

COLOUR = "#5A4636"
_MOST_LEVELS = 16.0
_MOST_LABELS = 14
#: Room between two labels, in pixels: neighbours would hide each other's lines.
_GAP_PX = 16.0
#: Shortest line that is labelled, in pixels; where along a line a label is tried.
_LEAST_PX = 110.0
_SPOTS = (0.5, 0.3, 0.7, 0.15, 0.85, 0.4, 0.6)


@dataclass(frozen=True, slots=True)
class Contours:
    """What was drawn: interval in metres, and the lines of each level."""

    interval_m: float
    lines: dict[float, list[FloatArray]]


def draw_contours(axes: Axes, cut: Cut, frame: Frame) -> Contours | None:
    """Draw the contour lines of dry ground; ``None`` where the ground is flat or too small for any."""
    inside_x = (cut.x >= frame.west) & (cut.x <= frame.east)
    inside_y = (cut.y >= frame.south) & (cut.y <= frame.north)
    level = np.where(cut.dry, cut.level_m, np.nan)
    seen = level[np.ix_(inside_y, inside_x)]
    seen = seen[np.isfinite(seen)]
    if min(level.shape) < 2 or seen.size == 0 or np.ptp(seen) <= 0.0:
        return None
    interval = round_step(float(np.ptp(seen)), _MOST_LEVELS)
    generator = contour_generator(cut.x, cut.y, np.ma.masked_invalid(level))
    lines = {
        float(at): [np.asarray(line) for line in generator.lines(float(at))]
        for at in multiples(float(seen.min()), float(seen.max()), interval)
    }
    for at, found in lines.items():
        width = 0.75 if _is_index(at, interval) else 0.35
        axes.add_collection(LineCollection(found, colors=COLOUR, linewidths=width, alpha=0.75, zorder=3), autolim=False)
    return Contours(interval, lines)


def _is_index(level_m: float, interval_m: float) -> bool:
    return round(level_m / interval_m) % 5 == 0


def label_contours(axes: Axes, contours: Contours, labels: Labels) -> None:
    """Write levels on contour lines, index lines first, where nothing else is hidden."""
    written = 0
    order = sorted(contours.lines, key=lambda at: (not _is_index(at, contours.interval_m), at))
    for at in order:
        found = [(line, axes.transData.transform(line)) for line in contours.lines[at]]
        found.sort(key=lambda pair: -_length(_visible(pair[1], axes)))
        for line, pixels in found[:2]:
            if written >= _MOST_LABELS or _length(_visible(pixels, axes)) < _LEAST_PX:
                break
            written += _label(axes, labels, at, line, contours.interval_m)


def _visible(pixels: FloatArray, axes: Axes) -> FloatArray:
    box = axes.bbox
    keep = (pixels[:, 0] > box.x0) & (pixels[:, 0] < box.x1) & (pixels[:, 1] > box.y0) & (pixels[:, 1] < box.y1)
    return np.asarray(pixels[keep])


def _length(pixels: FloatArray) -> float:
    return float(np.hypot(*np.diff(pixels, axis=0).T).sum()) if len(pixels) > 1 else 0.0


def _label(axes: Axes, labels: Labels, level_m: float, line: FloatArray, interval_m: float) -> bool:
    """Write one level on one line; say whether there was room."""
    pixels = axes.transData.transform(line)
    box = axes.bbox
    inside = np.flatnonzero(
        (pixels[:, 0] > box.x0) & (pixels[:, 0] < box.x1) & (pixels[:, 1] > box.y0) & (pixels[:, 1] < box.y1)
    )
    text = axes.text(
        0.0,
        0.0,
        f"{level_m:.{places_of(interval_m)}f}",
        fontsize=SMALL,
        color=COLOUR,
        ha="center",
        va="center",
        rotation_mode="anchor",
        zorder=5,
        bbox={"facecolor": "#EFEBE6", "edgecolor": "none", "alpha": 0.95, "pad": 0.4},
    )
    for share in _SPOTS:
        k = int(inside[int(share * (len(inside) - 1))])
        before, after = pixels[max(0, k - 6)], pixels[min(len(pixels) - 1, k + 6)]
        slope = np.degrees(np.arctan2(after[1] - before[1], after[0] - before[0]))
        text.set_position((line[k, 0], line[k, 1]))
        text.set_rotation(90.0 - float((90.0 - slope) % 180.0))
        if labels.claim(text, _GAP_PX):
            return True
    text.remove()
    return False
