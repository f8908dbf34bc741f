"""Routes, crossings, intake, outlet and crests on the map, with their names."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.lines import Line2D

from routing.outputs.pictures.framing import Frame
from routing.outputs.pictures.mapview import Entry
from routing.outputs.pictures.placing import Labels
from routing.outputs.pictures.shapes import line_points
from routing.outputs.pictures.style import BLACK, FURTHER_ROUTES, PAPER, ROUTE_LOOKS, SKY, YELLOW, LineLook
from routing.outputs.pictures.subject import Subject
from routing.outputs.pictures.texts import shown
from routing.outputs.wording import fixed
from routing.records import Crossing, FloatArray, Route


@dataclass(frozen=True, slots=True)
class MarkLook:
    """How a mark is drawn."""

    marker: str
    fill: str
    size: float


INTAKE, OUTLET = MarkLook("o", PAPER, 6.5), MarkLook("s", PAPER, 6.0)
CREST, CROSSING, CROSSING_UNUSED = MarkLook("^", YELLOW, 6.0), MarkLook("D", SKY, 4.8), MarkLook("D", PAPER, 4.0)
#: Largest mark in the legend, whose lines are close.
_LEGEND_SIZE = 8.0
LOWEST_CREST = MarkLook("o", "none", 11.0)


@dataclass(frozen=True, slots=True)
class Mark:
    """A named place on the map."""

    x: float
    y: float
    look: MarkLook
    label: str
    legend: str


def draw_routes(axes: Axes, subject: Subject, frame: Frame, labels: Labels) -> list[Entry]:
    """Draw routes and marks, name them, and return their lines of the legend.

    The strongest is drawn last, so that nothing hides it.
    """
    paths = {route.name: line_points(route.line, frame) for route in subject.routes}
    looks = {route.name: look_of(number) for number, route in enumerate(subject.routes)}
    for number, (name, (x, y)) in reversed(list(enumerate(paths.items()))):
        look, order = looks[name], 8.0 - 0.1 * min(number, 15)
        axes.plot(x, y, color=PAPER, linewidth=look.width + 1.4, solid_capstyle="round", zorder=6.0)
        axes.plot(x, y, color=look.colour, linestyle=look.style, linewidth=look.width, zorder=order)
        labels.avoid(x, y)
    marks = [mark for mark in _marks(subject) if _inside(mark, frame)]
    for mark in marks:
        axes.plot(mark.x, mark.y, zorder=9, linestyle="none", **_marker(mark.look))
        labels.avoid_mark(mark.x, mark.y, mark.look.size + 1.0)
    for mark in marks:
        if mark.label:
            labels.place(mark.label, mark.x, mark.y, fontweight="bold" if mark.look in {INTAKE, OUTLET} else "normal")
    _name_routes(subject, paths, labels)
    return [*_route_entries(subject), *_mark_entries(marks)]


def _inside(mark: Mark, frame: Frame) -> bool:
    return frame.west <= mark.x <= frame.east and frame.south <= mark.y <= frame.north


def look_of(number: int) -> LineLook:
    """Return how the route of that number in the ranking is drawn."""
    return ROUTE_LOOKS[number] if number < len(ROUTE_LOOKS) else FURTHER_ROUTES


def _marker(look: MarkLook) -> dict[str, Any]:
    return {
        "marker": look.marker,
        "markersize": look.size,
        "markerfacecolor": look.fill,
        "markeredgecolor": BLACK,
        "markeredgewidth": 0.9,
    }


def _marks(subject: Subject) -> Iterator[Mark]:
    plan, setting = subject.plan, subject.plan.setting
    route = subject.routes[0] if subject.routes else None
    start = (setting.intake.x, setting.intake.y) if route is None else (float(route.x[0]), float(route.y[0]))
    end = (setting.outlet.x, setting.outlet.y) if route is None else (float(route.x[-1]), float(route.y[-1]))
    yield Mark(*start, INTAKE, "intake", "intake")
    yield Mark(*end, OUTLET, "outlet", "outlet")
    if route is not None:
        k = route.crest_index
        label = f"crest {fixed(route.crest_m, 2)} m"
        yield Mark(float(route.x[k]), float(route.y[k]), CREST, label, "highest ground on the route")
    for crossing in subject.crossings:
        yield _crossing_mark(crossing)
    crest = plan.lowest_crest
    if crest is not None:
        legend = f"lowest crest, {fixed(crest.level_m, 2)} m"
        yield Mark(crest.x, crest.y, LOWEST_CREST, "", legend)


def _crossing_mark(crossing: Crossing) -> Mark:
    if crossing.used:
        return Mark(crossing.x, crossing.y, CROSSING, shown(crossing.name), "crossing with a route over it")
    return Mark(crossing.x, crossing.y, CROSSING_UNUSED, shown(crossing.name), "crossing without a route")


def _name_routes(subject: Subject, paths: dict[str, tuple[FloatArray, FloatArray]], labels: Labels) -> None:
    """Name each route where it is farthest from the others."""
    for route in subject.routes[: len(ROUTE_LOOKS)]:
        x, y = paths[route.name]
        at_x, at_y = _own_place(x, y, [paths[other] for other in paths if other != route.name])
        colour = look_of(subject.routes.index(route)).colour
        labels.place(shown(route.name), at_x, at_y, color=_dark(colour), fontweight="bold")


def _own_place(x: FloatArray, y: FloatArray, others: list[tuple[FloatArray, FloatArray]]) -> tuple[float, float]:
    """Return the point of a line, away from its ends, that is farthest from all other lines."""
    along = np.concatenate([[0.0], np.cumsum(np.hypot(np.diff(x), np.diff(y)))])
    at = np.linspace(0.2, 0.8, 25) * along[-1]
    px, py = np.interp(at, along, x), np.interp(at, along, y)
    if not others:
        return float(px[8]), float(py[8])
    apart = np.min([_distances(px, py, *other) for other in others], axis=0)
    k = int(np.argmax(apart))
    return float(px[k]), float(py[k])


def _distances(px: FloatArray, py: FloatArray, x: FloatArray, y: FloatArray) -> FloatArray:
    """Return how far each point is from a line, taken at 200 places along it."""
    along = np.concatenate([[0.0], np.cumsum(np.hypot(np.diff(x), np.diff(y)))])
    at = np.linspace(0.0, along[-1], 200)
    lx, ly = np.interp(at, along, x), np.interp(at, along, y)
    return np.asarray(np.min(np.hypot(px[:, None] - lx, py[:, None] - ly), axis=1))


def _dark(colour: str) -> str:
    """Return a colour that is read well as text: the light ones of the palette as black."""
    return colour if colour in {ROUTE_LOOKS[0].colour, ROUTE_LOOKS[5].colour} else BLACK


def _route_entries(subject: Subject) -> Iterator[Entry]:
    for number, route in enumerate(subject.routes[: len(ROUTE_LOOKS)]):
        look = look_of(number)
        handle = Line2D([], [], color=look.colour, linestyle=look.style, linewidth=look.width)
        yield Entry(handle, f"{shown(route.name)}: {fixed(route.length_m, 0)} m, crest {fixed(route.crest_m, 2)} m")
    further: tuple[Route, ...] = subject.routes[len(ROUTE_LOOKS) :]
    if further:
        look = FURTHER_ROUTES
        handle = Line2D([], [], color=look.colour, linestyle=look.style, linewidth=look.width)
        yield Entry(handle, f"{len(further)} more, ranked after these")


def _mark_entries(marks: list[Mark]) -> Iterator[Entry]:
    told = set()
    for mark in marks:
        if mark.legend not in told:
            told.add(mark.legend)
            handle = Line2D([], [], linestyle="none", **_marker(mark.look))
            handle.set_markersize(min(mark.look.size, _LEGEND_SIZE))
            yield Entry(handle, mark.legend)
