"""Shorelines: the outline and area of a water body, and a water body given as a polygon."""

from __future__ import annotations

import numpy as np
import shapely
from pyproj import CRS
from rasterio import Affine
from shapely import MultiPolygon, Polygon
from shapely.geometry.base import BaseGeometry
from shapely.geometry.polygon import orient

from routing.records import BoolArray, PlacedPoint, Terrain, WaterBody
from routing.terrain.frames import geodetic_of
from routing.terrain.vectors import LayerAsk, read_geometries


def water_body_from_polygon(terrain: Terrain, layer: LayerAsk, level_m: float, intake: PlacedPoint) -> WaterBody:
    """Return the water body that a polygon of the user's gives.

    Parameters
    ----------
    terrain
        Ground of the window.
    layer
        File and layer of the polygons, in any CRS; the one that holds the intake is taken.
    level_m
        Water level.
    intake
        The intake.

    Returns
    -------
    WaterBody
        Its cells are those whose centre lies in the polygon, and the intake's own; its area is the polygon's, on
        the ellipsoid.

    Raises
    ------
    TerrainError
        If the file cannot be read, holds no polygon, or none that holds the intake.
    """
    from rasterio.features import geometry_mask  # noqa: PLC0415

    shore = _polygon_with(read_geometries(layer, CRS.from_wkt(terrain.facts.crs_wkt)), layer, intake)
    a, b, c, d, e, f = terrain.transform
    rows, cols = terrain.shape
    frame = shapely.box(c, f + e * rows, c + a * cols, f)
    cells = np.zeros(terrain.shape, dtype=np.bool_)
    if frame.intersects(shore):
        cells = geometry_mask([shore], terrain.shape, Affine(a, b, c, d, e, f), invert=True)
    row, col = int((intake.y - f) / e), int((intake.x - c) / a)
    cells[min(max(row, 0), rows - 1), min(max(col, 0), cols - 1)] = True
    touches_edge, touches_open = touched_borders(terrain, cells)
    if not frame.covers(shore):
        touches_edge, touches_open = touches_edge or terrain.window.whole, touches_open or not terrain.window.whole
    return WaterBody(
        cells=cells,
        level_m=level_m,
        area_m2=_polygon_area_m2(shore, CRS.from_wkt(terrain.facts.crs_wkt)),
        shoreline=shore,
        void_cells=int(np.count_nonzero(cells & ~terrain.valid)),
        touches_edge=touches_edge,
        touches_open_border=touches_open,
        spill=None,
        source="polygon",
    )


def share_above_level(terrain: Terrain, body: WaterBody) -> float:
    """Return which share of a body's cells holds ground above its level: much of it means a wrong level or polygon.

    Parameters
    ----------
    terrain
        Ground of the window.
    body
        Its water body.
    """
    held = body.cells & terrain.valid
    if not held.any():
        return 0.0
    return float(np.mean(terrain.elevation_m[held] > body.level_m + level_slack_m(body.level_m)))


def level_slack_m(level_m: float) -> float:
    """Return the rounding of a level stored as a 4-byte float: cells that near a water surface belong to it.

    Parameters
    ----------
    level_m
        Level.
    """
    return float(np.spacing(np.float32(abs(level_m))))


def cells_area_m2(terrain: Terrain, cells: BoolArray) -> float:
    """Return the ground area of cells, from the ground steps of their rows.

    Parameters
    ----------
    terrain
        Ground of the window.
    cells
        (rows, cols) bool array.
    """
    return float(np.sum(cells.sum(axis=1) * terrain.step_x_m * terrain.step_y_m))


def shoreline_of(terrain: Terrain, cells: BoolArray) -> Polygon | MultiPolygon:
    """Return the outline of cells as a valid polygon (several where parts meet at corners only).

    Parameters
    ----------
    terrain
        Ground of the window.
    cells
        (rows, cols) bool array, true somewhere.
    """
    from rasterio.features import shapes  # noqa: PLC0415

    rows, cols = np.flatnonzero(cells.any(axis=1)), np.flatnonzero(cells.any(axis=0))
    part = cells[rows[0] : rows[-1] + 1, cols[0] : cols[-1] + 1]
    a, b, c, d, e, f = terrain.transform
    transform = Affine(a, b, c + a * cols[0], d, e, f + e * rows[0])
    # Sides only: outlines that pass a corner twice would be invalid; parts that meet at a corner become several.
    found = shapes(part.astype(np.uint8), mask=part, connectivity=4, transform=transform)
    outline = shapely.union_all([_sound(shapely.geometry.shape(one)) for one, _ in found])
    return _as_area(outline)


def touched_borders(terrain: Terrain, cells: BoolArray) -> tuple[bool, bool]:
    """Return whether cells lie at the DEM's own edge, and at a border beyond which the DEM goes on.

    Parameters
    ----------
    terrain
        Ground of the window.
    cells
        (rows, cols) bool array.
    """
    open_border = terrain.window.open_border()
    north, south, west, east = terrain.window.open_sides
    sides = ((north, cells[0]), (south, cells[-1]), (west, cells[:, 0]), (east, cells[:, -1]))
    edge = any(bool(line.any()) for is_open, line in sides if not is_open)
    return edge, bool((cells & open_border).any())


def _polygon_with(geometries: list[BaseGeometry], layer: LayerAsk, intake: PlacedPoint) -> Polygon | MultiPolygon:
    areas = [one for one in geometries if one.geom_type in ("Polygon", "MultiPolygon")]
    if not areas:
        raise layer.error(
            f"The file of the water body holds no polygon: {layer.file}.",
            found=", ".join(sorted({one.geom_type for one in geometries})) or "nothing",
            allowed="polygons",
            remedy="export the shoreline as a polygon",
        )
    point = shapely.Point(intake.x, intake.y)
    whole = shapely.union_all([_sound(one) for one in areas])
    holding = [part for part in shapely.get_parts(whole) if part.covers(point)]
    if not holding:
        raise layer.error(
            f"No polygon of {layer.file} holds the intake.",
            found=f"{len(areas)} polygons, the nearest {whole.distance(point):.6g} map units away from the intake",
            allowed="a polygon of the water around the intake",
            remedy="move the intake into the water, or correct the polygon",
        )
    return _as_area(holding[0])


def _polygon_area_m2(shore: Polygon | MultiPolygon, crs: CRS) -> float:
    geodetic = geodetic_of(crs)
    parts = [orient(part) for part in shapely.get_parts(shore)]
    degrees = shapely.transform(parts, lambda xy: np.column_stack(geodetic.degrees(xy[:, 0], xy[:, 1])))
    return float(sum(abs(geodetic.geod.geometry_area_perimeter(part)[0]) for part in degrees))


def _sound(geometry: BaseGeometry) -> BaseGeometry:
    return geometry if geometry.is_valid else shapely.make_valid(geometry)


def _as_area(geometry: BaseGeometry) -> Polygon | MultiPolygon:
    parts = [part for part in shapely.get_parts(geometry) if isinstance(part, Polygon)]
    return parts[0] if len(parts) == 1 else MultiPolygon(parts)
