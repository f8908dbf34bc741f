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
from routing.outputs.pictures.style import BLACK, FURTHER_ROUTES, PAPER, ROUTE_LOOKS, SKY, YELLOW
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


#: Points of the line of each route, by name.
Paths = dict[str, tuple[FloatArray, FloatArray]]

#: A route that keeps closer to another than this share of the map's width is not drawn in a way of its own.
_APART = 0.012

INTAKE, OUTLET = MarkLook("o", PAPER, 6.5), MarkLook("s", PAPER, 6.0)
CREST, CROSSING, CROSSING_UNUSED = MarkLook("^", YELLOW, 8.5), MarkLook("D", SKY, 4.2), MarkLook("D", PAPER, 4.0)
#: Largest mark in the legend, whose lines are close.
_LEGEND_SIZE = 8.0
LOWEST_CREST = MarkLook("o", "none", 12.5)


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
    named = named_routes(subject, frame, paths)
    looks = {route.name: look for route, look in zip(named, ROUTE_LOOKS, strict=False)}
    for number, (name, (x, y)) in reversed(list(enumerate(paths.items()))):
        look = looks.get(name, FURTHER_ROUTES)
        order = 7.0 if name not in looks else 8.0 - 0.01 * min(number, 50)
        axes.plot(x, y, color=PAPER, linewidth=look.width + 1.4, solid_capstyle="round", zorder=order - 1.0)
        axes.plot(x, y, color=look.colour, linestyle=look.style, linewidth=look.width, zorder=order)
        labels.avoid(x, y)
    marks = [mark for mark in _marks(subject, named) if _inside(mark, frame)]
    for mark in marks:
        axes.plot(mark.x, mark.y, zorder=9, linestyle="none", **_marker(mark.look))
        labels.avoid_mark(mark.x, mark.y, mark.look.size + 1.0)
    for mark in marks:
        if mark.label:
            labels.place(mark.label, mark.x, mark.y, fontweight="bold" if mark.look in {INTAKE, OUTLET} else "normal")
    _name_routes(named, paths, labels)
    return [*_route_entries(subject, named), *_mark_entries(marks)]


def _inside(mark: Mark, frame: Frame) -> bool:
    return frame.west <= mark.x <= frame.east and frame.south <= mark.y <= frame.north


def named_routes(subject: Subject, frame: Frame, paths: Paths) -> list[Route]:
    """Return the routes that are named and drawn each in its own way: the best, and what lies apart from it.

    Of routes so close together that they would hide each other only the one ranked first is among them; of those
    that are left, the first over each crossing goes before the others.
    """
    if not subject.routes:
        return []
    first, order = subject.routes[0], {route.name: number for number, route in enumerate(subject.routes)}
    # The first route over each crossing; the dictionary keeps the ranking.
    opening: dict[str, Route] = {}
    for route in subject.routes:
        opening.setdefault(route.crossing, route)
    openers = [route for route in opening.values() if route is not first]
    rest = [route for route in subject.routes[1:] if opening[route.crossing] is not route]
    named, least = [first], _APART * (frame.east - frame.west)
    for route in (*openers, *rest):
        apart = [_farthest(paths[route.name], paths[other.name]) for other in named]
        if len(named) < len(ROUTE_LOOKS) and min(apart) > least:
            named.append(route)
    return sorted(named, key=lambda route: order[route.name])


def _marker(look: MarkLook) -> dict[str, Any]:
    return {
        "marker": look.marker,
        "markersize": look.size,
        "markerfacecolor": look.fill,
        "markeredgecolor": BLACK,
        "markeredgewidth": 0.9,
    }


def _marks(subject: Subject, named: list[Route]) -> Iterator[Mark]:
    plan, setting = subject.plan, subject.plan.setting
    route = subject.routes[0] if subject.routes else None
    start = (setting.intake.x, setting.intake.y) if route is None else (float(route.x[0]), float(route.y[0]))
    end = (setting.outlet.x, setting.outlet.y) if route is None else (float(route.x[-1]), float(route.y[-1]))
    yield Mark(*start, INTAKE, "intake", "intake")
    yield Mark(*end, OUTLET, "outlet", "outlet")
    for other in named[1:]:  # ends left open may lie elsewhere for each route
        yield from _other_end(float(other.x[0]), float(other.y[0]), start, INTAKE, "intake")
        yield from _other_end(float(other.x[-1]), float(other.y[-1]), end, OUTLET, "outlet")
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


def _other_end(x: float, y: float, known: tuple[float, float], look: MarkLook, legend: str) -> Iterator[Mark]:
    if (x, y) != known:
        yield Mark(x, y, look, "", legend)


def _crossing_mark(crossing: Crossing) -> Mark:
    if crossing.used:
        return Mark(crossing.x, crossing.y, CROSSING, shown(crossing.name), "crossing with a route over it")
    return Mark(crossing.x, crossing.y, CROSSING_UNUSED, shown(crossing.name), "crossing without a route")


def _name_routes(named: list[Route], paths: Paths, labels: Labels) -> None:
    """Name each route where it is farthest from the others."""
    for route, look in zip(named, ROUTE_LOOKS, strict=False):
        others = [paths[other.name] for other in named if other is not route]
        at_x, at_y = _own_place(*paths[route.name], others)
        labels.place(shown(route.name), at_x, at_y, color=_dark(look.colour), fontweight="bold")


def _farthest(path: tuple[FloatArray, FloatArray], other: tuple[FloatArray, FloatArray]) -> float:
    """Return how far a line gets away from another, taken at 100 places along it."""
    x, y = path
    along = np.concatenate([[0.0], np.cumsum(np.hypot(np.diff(x), np.diff(y)))])
    at = np.linspace(0.0, along[-1], 100)
    return float(_distances(np.interp(at, along, x), np.interp(at, along, y), *other).max())


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


def _route_entries(subject: Subject, named: list[Route]) -> Iterator[Entry]:
    for route, look in zip(named, ROUTE_LOOKS, strict=False):
        handle = Line2D([], [], color=look.colour, linestyle=look.style, linewidth=look.width)
        yield Entry(handle, f"{shown(route.name)}: {fixed(route.length_m, 0)} m, crest {fixed(route.crest_m, 2)} m")
    further = [shown(route.name) for route in subject.routes if all(route is not other for other in named)]
    if further:
        look = FURTHER_ROUTES
        handle = Line2D([], [], color=look.colour, linestyle=look.style, linewidth=look.width)
        yield Entry(handle, f"{len(further)} more: {', '.join(further)}")


def _mark_entries(marks: list[Mark]) -> Iterator[Entry]:
    told = set()
    for mark in marks:
        if mark.legend not in told:
            told.add(mark.legend)
            handle = Line2D([], [], linestyle="none", **_marker(mark.look))
            handle.set_markersize(min(mark.look.size, _LEGEND_SIZE))
            yield Entry(handle, mark.legend)
