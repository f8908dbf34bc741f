"""Labels that do not overlap: each goes to the first free place round its point that hides least."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any, Literal

import numpy as np
from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import RendererAgg
from matplotlib.text import Annotation, Text
from matplotlib.transforms import Bbox

from routing.outputs.pictures.style import BLACK, GREY, LABEL, PAPER
from routing.records import FloatArray

#: Directions from the point, by preference, as (x, y) signs.
_SIDES = ((1, 1), (1, -1), (-1, 1), (-1, -1), (1, 0), (-1, 0), (0, 1), (0, -1))
#: Distances from the point, in points of type; beyond the second a leader line is drawn.
_REACHES = (5.0, 11.0, 20.0, 32.0, 48.0, 70.0)
_LEADER_FROM = 25.0
_ALIGN_X: dict[int, Literal["left", "right", "center"]] = {1: "left", -1: "right", 0: "center"}
_ALIGN_Y: dict[int, Literal["bottom", "top", "center"]] = {1: "bottom", -1: "top", 0: "center"}
#: Room kept free round every label, in pixels.
_GAP_PX = 3.0


@dataclass(slots=True)
class Labels:
    """The labels in one axes.

    Attributes
    ----------
    taken
        Boxes that no label may touch, in pixels.
    lines
        Points of drawn lines and marks, in pixels, that a label should not hide.
    left_out
        Labels for which no place was free.
    """

    axes: Axes
    renderer: RendererAgg
    taken: list[Bbox] = field(default_factory=list)
    lines: list[FloatArray] = field(default_factory=list)
    left_out: list[str] = field(default_factory=list)

    def avoid(self, x: FloatArray, y: FloatArray) -> None:
        """Keep labels off a line, as far as that can be done."""
        points = self.axes.transData.transform(np.column_stack([x, y]))
        steps = np.hypot(*np.diff(points, axis=0).T)
        along = np.concatenate([[0.0], np.cumsum(steps)])
        dense = np.arange(0.0, along[-1] + 6.0, 6.0)
        self.lines.append(np.column_stack([np.interp(dense, along, points[:, k]) for k in (0, 1)]))

    def avoid_mark(self, x: float, y: float, size_pt: float = 7.0) -> None:
        """Keep labels off a mark, strictly."""
        half = 0.5 * size_pt * self.renderer.dpi / 72.0
        px, py = self.axes.transData.transform((x, y))
        self.taken.append(Bbox.from_extents(px - half, py - half, px + half, py + half))

    def place(self, text: str, x: float, y: float, **look: Any) -> Annotation | None:
        """Write a label near a point, or note it as left out.

        Parameters
        ----------
        text
            The label.
        x, y
            The point, in data units.
        look
            Further properties of the text, besides ``sides``: directions to try, by preference.
        """
        sides: Sequence[tuple[int, int]] = look.pop("sides", _SIDES)
        usual: dict[str, Any] = {"fontsize": LABEL, "color": BLACK, "annotation_clip": False, "zorder": 20}
        usual["bbox"] = {"facecolor": PAPER, "edgecolor": "none", "alpha": 0.82, "pad": 0.8}
        note = self.axes.annotate(text, (x, y), (0.0, 0.0), textcoords="offset points", **(usual | look))
        best = self._best(note, sides)
        if best is None:
            note.remove()
            self.left_out.append(text)
            return None
        side, reach = best
        self._move(note, side, reach)
        self.taken.append(self._box(note))
        if reach > _LEADER_FROM:
            self._lead(note, x, y)
        return note

    def claim(self, text: Text, gap_px: float) -> bool:
        """Take the room of a text that is already placed, and a gap round it; say whether it was free."""
        box = self._box(text).padded(gap_px)
        if not self._free(box) or self._hidden(box):
            return False
        self.taken.append(box)
        return True

    def _best(self, note: Annotation, sides: Sequence[tuple[int, int]]) -> tuple[tuple[int, int], float] | None:
        best, least = None, np.inf
        for reach in _REACHES:
            for order, side in enumerate(sides):
                self._move(note, side, reach)
                box = self._box(note)
                if not self._free(box):
                    continue
                cost = 3.0 * self._hidden(box) + 0.15 * reach + 0.4 * order + self._crossed(note, reach)
                if cost < least:
                    best, least = (side, reach), cost
            if best is not None and least < 0.15 * reach + 4.0:
                break
        return best

    def _crossed(self, note: Annotation, reach: float) -> float:
        """Return what it costs that a leader line would run through other labels or marks."""
        if reach <= _LEADER_FROM:
            return 0.0
        start, box = self.axes.transData.transform(note.xy), self._box(note)
        end = np.clip(start, box.min, box.max)
        points = start + np.linspace(0.0, 1.0, 30)[:, None] * (end - start)
        return 25.0 * sum(other.count_contains(points) > 0 for other in self.taken if not other.contains(*start))

    def _move(self, note: Annotation, side: tuple[int, int], reach: float) -> None:
        dx, dy = side
        part = 1.0 if 0 in side else 0.75
        note.set_position((dx * reach * part, dy * reach * part))
        note.set_horizontalalignment(_ALIGN_X[dx])
        note.set_verticalalignment(_ALIGN_Y[dy])

    def _lead(self, note: Annotation, x: float, y: float) -> None:
        """Draw a line from the label to its point."""
        box = Text.get_window_extent(note, self.renderer)
        px, py = self.axes.transData.transform((x, y))
        end = self.axes.transData.inverted().transform(
            (np.clip(px, box.x0, box.x1), np.clip(py, box.y0, box.y1)),
        )
        self.axes.plot([x, end[0]], [y, end[1]], color=GREY, linewidth=0.6, zorder=19)

    def _box(self, text: Text) -> Bbox:
        # An annotation's own box would hold its point too.
        if isinstance(text, Annotation):
            text.update_positions(self.renderer)
        return Text.get_window_extent(text, self.renderer).padded(_GAP_PX)

    def _free(self, box: Bbox) -> bool:
        inside = self.axes.get_window_extent(self.renderer)
        if box.x0 < inside.x0 or box.x1 > inside.x1 or box.y0 < inside.y0 or box.y1 > inside.y1:
            return False
        return not any(box.overlaps(other) for other in self.taken)

    def _hidden(self, box: Bbox) -> int:
        """Return how many points of lines a box would hide."""
        return sum(
            int(
                np.count_nonzero(
                    (line[:, 0] > box.x0) & (line[:, 0] < box.x1) & (line[:, 1] > box.y0) & (line[:, 1] < box.y1)
                )
            )
            for line in self.lines
        )
