"""The map: shaded relief, contours, water, zones, coordinate grid; routes and marks are in ``mapmarks``."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

import numpy as np
from matplotlib.artist import Artist
from matplotlib.axes import Axes
from matplotlib.lines import Line2D
from matplotlib.patches import Patch

from routing.outputs.pictures.contours import COLOUR, Contours, draw_contours
from routing.outputs.pictures.framing import Cut, Frame, cut_of
from routing.outputs.pictures.relief import shade
from routing.outputs.pictures.shapes import area_patch
from routing.outputs.pictures.steps import multiples, places_of, round_step
from routing.outputs.pictures.style import BLACK, BLUE, GREY, PALE, PURPLE, SKY, SMALL, TEXT
from routing.outputs.pictures.subject import Subject
from routing.outputs.pictures.texts import Ruler, shown
from routing.outputs.wording import figures, fixed
from routing.records import Plan, TerrainFacts, Zone

#: Most blocks of cells either way that the relief and the contours are drawn from.
_RELIEF_BLOCKS, _CONTOUR_BLOCKS = 700, 260
_MOST_TICKS_X, _MOST_TICKS_Y = 7.0, 5.0


@dataclass(frozen=True, slots=True)
class Entry:
    """A line of the legend."""

    handle: Artist
    text: str


def draw_ground(axes: Axes, subject: Subject, frame: Frame) -> tuple[list[Entry], Contours | None]:
    """Draw what lies under the routes; return its lines of the legend, and the contours to be labelled last."""
    plan = subject.plan
    axes.set_xlim(frame.west, frame.east)
    axes.set_ylim(frame.south, frame.north)
    axes.set_facecolor(PALE)
    entries: list[Entry] = []
    relief = cut_of(plan.terrain, plan.water_body.cells, frame, _RELIEF_BLOCKS)
    contours = None
    if relief is not None:
        _relief(axes, relief)
        thinned = cut_of(plan.terrain, plan.water_body.cells, frame, _CONTOUR_BLOCKS)
        contours = None if thinned is None else draw_contours(axes, thinned, frame)
    if contours is not None:
        entries.append(
            Entry(Line2D([], [], color=COLOUR, linewidth=0.75), f"contours every {figures(contours.interval_m, 1)} m")
        )
    entries += _water(axes, plan, frame)
    for kind in ("barred", "cost"):
        entries += [entry for zone in plan.zones if zone.kind == kind for entry in _zone(axes, zone, frame)]
    if relief is None or _has_void(relief, frame):
        entries.append(Entry(Patch(facecolor=PALE, edgecolor=GREY, linewidth=0.4), "no elevation data"))
    axes.set_xlim(frame.west, frame.east)
    axes.set_ylim(frame.south, frame.north)
    return entries, contours


def _relief(axes: Axes, cut: Cut) -> None:
    bright = shade(cut)
    grey = 0.58 + 0.42 * np.nan_to_num(bright, nan=0.0) ** 0.9
    # Whole numbers: the drawing library takes three times as long over fractions.
    image = np.round(255.0 * np.stack([grey, grey, 0.985 * grey, np.isfinite(bright)], axis=-1)).astype(np.uint8)
    axes.imshow(image, extent=cut.extent, origin="upper", interpolation="bilinear", aspect="auto", zorder=1)


def _has_void(cut: Cut, frame: Frame) -> bool:
    west, east, south, north = cut.extent
    outside = frame.west < west or frame.east > east or frame.south < south or frame.north > north
    return outside or bool((~np.isfinite(cut.level_m) & cut.dry).any())


def _water(axes: Axes, plan: Plan, frame: Frame) -> Iterator[Entry]:
    bodies: list[tuple[Any, str, dict[str, Any]]] = [
        (
            plan.water_body,
            "present",
            {"facecolor": SKY + "8C", "edgecolor": BLUE, "linewidth": 0.8, "linestyle": "-", "zorder": 2},
        )
    ]
    if plan.lowest_water is not None:
        bodies.append(
            (
                plan.lowest_water,
                "lowest",
                {"facecolor": BLUE + "8C", "edgecolor": BLACK, "linewidth": 0.8, "linestyle": (0, (2, 1.2))}
                | {"zorder": 2.2},
            )
        )
    elif plan.setting.lowest.water_m < plan.setting.present.water_m:
        # A DEM that holds the water's surface knows no shore below it.
        yield Entry(Line2D([], [], linestyle="none"), "(lowest shore not in the DEM)")
    for body, name, look in bodies:
        patch = None if body.shoreline.is_empty else area_patch(body.shoreline, frame, **look)
        if patch is not None:
            axes.add_patch(patch)
            yield Entry(Patch(**look), f"{name} water, {fixed(body.level_m, 2)} m")


def _zone(axes: Axes, zone: Zone, frame: Frame) -> Iterator[Entry]:
    barred = zone.kind == "barred"
    look: dict[str, Any] = {
        "facecolor": "none",
        "edgecolor": BLACK if barred else PURPLE,
        "hatch": "////" if barred else "..",
        "linewidth": 1.0 if barred else 0.8,
        "linestyle": "-" if barred else "--",
        "zorder": 4,
    }
    patch = area_patch(zone.shape, frame, **look)
    if patch is None:
        return
    axes.add_patch(patch)
    name = f"“{shown(zone.name)}”" if zone.name else "zone"
    # The patch of the legend is small: its hatch has to be denser to show.
    handle = Patch(**(look | {"hatch": "/////" if barred else "...."}))
    yield Entry(handle, f"barred: {name}" if barred else f"cost x {figures(zone.cost_factor)}: {name}")


def draw_grid(axes: Axes, facts: TerrainFacts, frame: Frame, ruler: Ruler) -> None:
    """Draw the coordinate grid of the DEM's CRS, and name CRS and unit on the axes."""
    angular = is_angular(facts)
    unit = unit_text(facts)
    width_in = axes.get_position().width * axes.get_figure(root=True).get_figwidth()  # type: ignore[union-attr]
    for axis, low, high, most in (
        (axes.xaxis, frame.west, frame.east, _MOST_TICKS_X),
        (axes.yaxis, frame.south, frame.north, _MOST_TICKS_Y),
    ):
        step = round_step(high - low, most)
        at = multiples(low, high, step)
        axis.set_ticks(at, [f"{value:.{places_of(step)}f}".replace("-", "−") for value in at])
    axes.tick_params(labelsize=SMALL, length=2.5, width=0.5, pad=2)
    for text in axes.get_yticklabels():
        text.set_rotation(90)
        text.set_verticalalignment("center")
    axes.grid(color=BLACK, alpha=0.28, linewidth=0.35, zorder=3.5)
    axes.set_axisbelow(False)
    across, up = ("Longitude", "Latitude") if angular else ("Easting", "Northing")
    crs = ruler.shortened(f"{across}, {unit}  ({facts.crs_name})", TEXT, width_in)
    axes.set_xlabel(crs, fontsize=TEXT, labelpad=2)
    axes.set_ylabel(f"{up}, {unit}", fontsize=TEXT, labelpad=2)


def is_angular(facts: TerrainFacts) -> bool:
    """Return whether the map is in degrees or the like."""
    return facts.horizontal_unit.lower().startswith(("deg", "grad", "rad", "°"))


def unit_text(facts: TerrainFacts) -> str:
    """Return the map's unit as a plural, short for metres."""
    unit = shown(facts.horizontal_unit)
    plurals = {"metre": "m", "meter": "m", "degree": "degrees", "grad": "grads", "radian": "radians"}
    return plurals.get(unit.lower(), unit.replace("foot", "feet"))
