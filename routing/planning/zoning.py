"""What barred zones forbid: ends that lie in one, lines that meet one."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from routing.errors import OvercrestError, Problem, SiteError
from routing.planning.troubles import site_problem
from routing.records import PlacedPoint, Route, Site, Terrain, Zone, ZoneMap
from routing.terrain import barred_shapes, meets_interior, xy_of

if TYPE_CHECKING:
    from shapely import LineString

CellLike = tuple[int, int]


def check_free(site: Site, terrain: Terrain, zones: ZoneMap | None, end: str, at: tuple[PlacedPoint, CellLike]) -> None:
    """Check that an end lies in no barred zone, neither as given nor at the centre of its cell, where routes begin.

    Parameters
    ----------
    end
        ``"intake"`` or ``"outlet"``.
    at
        The point and its cell.

    Raises
    ------
    SiteError
        Naming the zone.
    """
    asked = site.intake if end == "intake" else site.outlet
    if zones is None or asked.kind != "point":
        return
    point, cell = at
    x, y = xy_of(terrain, *cell)
    for place, what in (((point.x, point.y), "lies"), ((float(x), float(y)), "has its cell's centre")):
        names = _zones_at(zones.zones, place)
        if names:
            digits = 6 if abs(terrain.transform[0]) < 0.1 else 2
            raise SiteError(
                site_problem(
                    site,
                    asked.at.key or end,
                    f"The {end} {what} in the barred zone {' and '.join(names)}.",
                    found=f"x {place[0]:.{digits}f}, y {place[1]:.{digits}f} inside " + _entries(site, names),
                    allowed="a place outside all barred zones, by half a cell at least",
                    remedy=f"move the {end} out of the zone, or draw the zone so that it leaves the {end} out",
                )
            )


def _zones_at(zones: Iterable[Zone], place: tuple[float, float]) -> list[str]:
    from shapely import contains_xy  # noqa: PLC0415 - only with zones

    return [zone.name for zone in zones if zone.kind == "barred" and contains_xy(zone.shape, *place)]


def _entries(site: Site, names: list[str]) -> str:
    """Return the entries of the site file that hold zones, with their lines."""
    found = []
    for number, zone in enumerate(site.zones, start=1):
        line = site.lines.get(f"zones[{number}]")
        if zone.name in names:
            found.append(f"zones[{number}] ({zone.file.name}" + (f", line {line})" if line else ")"))
    return ", ".join(found)


def route_line(
    terrain: Terrain, zones: ZoneMap | None, cells: NDArray[np.intp], corners: NDArray[np.intp]
) -> LineString:
    """Return the line of a route through its corners.

    Where cell centres are no round numbers, the long pieces between corners and the single moves on them differ in the
    last digits. Should that make a piece meet a barred zone which its moves only touch, the line keeps every cell.
    """
    from shapely import LineString  # noqa: PLC0415 - not needed by look

    line = LineString(np.column_stack(xy_of(terrain, corners[:, 0], corners[:, 1])))
    if zones is not None and _met(zones.zones, line):
        return LineString(np.column_stack(xy_of(terrain, cells[:, 0], cells[:, 1])))
    return line


def _met(zones: Iterable[Zone], line: LineString) -> bool:
    lines = np.array([line], dtype=object)
    return any(meets_interior(shape, lines)[0] for shape in barred_shapes(tuple(zones)))


def names_met(zones: Iterable[Zone], line: LineString) -> list[str]:
    """Return the names of the barred zones whose interior a line meets."""
    return [zone.name for zone in zones if _met((zone,), line)]


def check_lines(zones: ZoneMap | None, routes: Iterable[Route]) -> None:
    """Check, as the last thing, that no line meets the interior of a barred zone: with shapely, and no tolerance.

    Raises
    ------
    OvercrestError
        If one does: a fault of ours.
    """
    if zones is None:
        return
    for route in {route.name: route for route in routes}.values():
        if _met(zones.zones, route.line):
            names = names_met(zones.zones, route.line)
            raise OvercrestError(
                Problem(
                    f"Route {route.name} runs through barred ground: a fault of the program, not of your files.",
                    found=f"barred zone {' and '.join(names) or 'on a seam between two zones'}",
                    allowed="routes outside all barred zones",
                    remedy="please report it with the site file, the DEM and the zones",
                )
            )
