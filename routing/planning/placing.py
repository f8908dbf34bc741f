"""Where the ends of the pipe lie on the DEM, and the window that must hold them; outlets may be lines or polygons."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from routing.errors import InputError, Problem, SiteError
from routing.planning.troubles import site_problem
from routing.records import GridWindow, PlacedPoint, Site, Terrain
from routing.terrain import Dem, LayerAsk, place_point, xy_of
from routing.terrain.shapes import read_shapes

if TYPE_CHECKING:
    from shapely.geometry.base import BaseGeometry

_SMALL_DEM_CELLS = 100_000
_LEAST_MARGIN_CELLS = 48


@dataclass(frozen=True, slots=True)
class Ends:
    """Intake and outlet, placed on the DEM.

    ``shapes``: lines or polygons that the outlet may lie on. An outlet that is not chosen yet stands at the place on
    them that is nearest to the intake, or at the intake where it may lie anywhere.
    """

    intake: PlacedPoint
    outlet: PlacedPoint
    shapes: BaseGeometry | None = None


def place_ends(site: Site, dem: Dem) -> Ends:
    """Place intake and outlet; both are tried, so that all problems show at once.

    Raises
    ------
    SiteError
        If either cannot be placed.
    """
    problems: list[Problem] = []
    intake = outlet = shapes = None
    try:
        intake = place_point(dem, site.intake.at, site.file, "intake")
    except InputError as error:
        problems.extend(error.problems)
    try:
        if site.outlet.kind == "point":
            outlet = place_point(dem, site.outlet.at, site.file, "outlet")
        else:
            shapes = _shapes(site, dem)
    except InputError as error:
        problems.extend(error.problems)
    if problems or intake is None:
        raise SiteError(*problems)
    if outlet is None:
        outlet = intake if shapes is None else _nearest(dem, shapes, intake)
    return Ends(intake, outlet, shapes)


def _shapes(site: Site, dem: Dem) -> BaseGeometry | None:
    at, kind = site.outlet.at, site.outlet.kind
    if at.file is None or kind not in ("line", "polygon"):
        return None
    layer = LayerAsk(at.file, at.layer, at.key or "outlet.file", at.line, site.file)
    return read_shapes(dem, layer, "line" if kind == "line" else "polygon")


def _nearest(dem: Dem, shapes: BaseGeometry, intake: PlacedPoint) -> PlacedPoint:
    from shapely import Point, shortest_line  # noqa: PLC0415 - not needed where both ends are points

    x, y = shortest_line(_on_dem(dem, shapes), Point(intake.x, intake.y)).coords[0]
    west, south, east, north = dem.bounds
    return placed(dem, min(max(x, west), east), min(max(y, south), north))


def _on_dem(dem: Dem, shapes: BaseGeometry) -> BaseGeometry:
    from shapely import box  # noqa: PLC0415

    return shapes.intersection(box(*dem.bounds))


def placed(dem: Dem, x: float, y: float) -> PlacedPoint:
    """Return a point of the DEM's CRS with its longitude and latitude."""
    lon, lat = dem.to_lonlat(x, y)
    return PlacedPoint(x, y, lon, lat)


def centre_of(dem: Dem, terrain: Terrain, cell: tuple[int, int]) -> PlacedPoint:
    """Return the centre of a cell."""
    x, y = xy_of(terrain, *cell)
    return placed(dem, float(x), float(y))


def shapes_inside(dem: Dem, terrain: Terrain, shapes: BaseGeometry) -> bool:
    """Return whether all of the shapes that lies on the DEM lies in the window."""
    from shapely import box  # noqa: PLC0415

    a, _, c, _, e, f = terrain.transform
    rows, cols = terrain.shape
    return bool(box(c, f + e * rows, c + a * cols, f).covers(_on_dem(dem, shapes)))


def first_window(site: Site, dem: Dem, ends: Ends) -> GridWindow:
    """Return the window to begin with: both ends with a margin of half their distance, or less where that is too much.

    A small DEM is read whole. Lines and polygons for the outlet are taken whole where they fit. With an outlet anywhere
    it is the whole DEM, or as much as may be read round the intake.

    Raises
    ------
    SiteError
        If even the least margin makes a window larger than the user's limit.
    """
    most = site.search.largest_window_cells
    if dem.whole.rows * dem.whole.cols <= min(most, _SMALL_DEM_CELLS):
        return dem.whole  # read in a few milliseconds: growing a window would take longer
    if site.outlet.kind == "anywhere":
        if dem.whole.rows * dem.whole.cols <= most:
            return dem.whole
        return dem.window_around([(ends.intake.x, ends.intake.y)], (int(most**0.5) - 1) // 2)
    points = [(point.x, point.y) for point in (ends.intake, ends.outlet)]
    if ends.shapes is not None:
        window = _window_within(dem, [*points, *_corners(dem, ends.shapes)], most)
        if not isinstance(window, str):
            return window
    window = _window_within(dem, points, most)
    if not isinstance(window, str):
        return window
    raise SiteError(
        site_problem(
            site,
            "search.largest_window_cells",
            "Intake and outlet are too far apart for the part of the DEM that may be read at once.",
            found=window,
            allowed=f"at most {most:,} cells",
            remedy="raise search.largest_window_cells (some 60 bytes of memory a cell), or take a DEM of larger cells",
        )
    )


def _corners(dem: Dem, shapes: BaseGeometry) -> list[tuple[float, float]]:
    west, south, east, north = _on_dem(dem, shapes).bounds
    return [(west, south), (east, north)]


def _window_within(dem: Dem, points: list[tuple[float, float]], most: int) -> GridWindow | str:
    """Return the window round points with the largest margin that fits, or what even the least margin makes."""
    rows, cols = np.array([dem.cell_of(*point) for point in points]).T
    margin = max(_LEAST_MARGIN_CELLS, max(int(np.ptp(rows)), int(np.ptp(cols))) // 2)
    while True:
        window = dem.window_around(points, margin)
        if window.rows * window.cols <= most:
            return window
        if margin == _LEAST_MARGIN_CELLS:
            return f"{window.rows} x {window.cols} cells around both, {window.rows * window.cols:,} in all"
        margin = max(_LEAST_MARGIN_CELLS, margin // 2)
