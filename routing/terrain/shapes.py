"""Lines and polygons of the user's as cells of a window: the places that an outlet may lie at."""

from __future__ import annotations

from typing import Literal

import numpy as np
import shapely
from pyproj import CRS, Transformer
from rasterio import Affine
from shapely import Polygon
from shapely.geometry.base import BaseGeometry

from routing.records import BoolArray, Terrain
from routing.terrain.outlines import moved_polygon, on_the_turn_of
from routing.terrain.reading import Dem
from routing.terrain.vectors import LayerAsk, out_of_reach, read_layer

ShapeKind = Literal["line", "polygon"]

_TYPES: dict[str, tuple[str, ...]] = {
    "line": ("LineString", "LinearRing"),
    "polygon": ("Polygon",),
}
# Straight lines bend in another CRS: parts this short bend by less than any cell shows.
_PARTS = 200
# Outlines of polygons follow their true images to this share of a cell.
_WITHIN_CELLS = 0.01


def read_shapes(dem: Dem, layer: LayerAsk, kind: ShapeKind) -> BaseGeometry:
    """Read the lines or polygons that an outlet may lie on, moved to the DEM's CRS.

    Parameters
    ----------
    dem
        Open DEM.
    layer
        File and layer, in any CRS.
    kind
        What the layer must hold.

    Returns
    -------
    shapely geometry
        All of them joined.

    Raises
    ------
    TerrainError
        If the file cannot be read, holds none of that kind or anything else besides, or lies outside the DEM.
    """
    geometries, own = read_layer(layer)
    parts = [part for one in geometries for part in _single(one)]
    kinds = sorted({part.geom_type for part in parts})
    if not parts or any(name not in _TYPES[kind] for name in kinds):
        raise layer.error(
            f"The file of the outlet must hold {kind}s and nothing else: {layer.file}.",
            found=f"{len(parts)} features" + (f" ({', '.join(kinds)})" if kinds else ""),
            allowed=f"{kind}s, one or more",
            remedy=f"export just the {kind}s, name their layer, or correct outlet.kind",
        )
    moved = [_moved(dem, part, own, layer) for part in parts]
    joined: BaseGeometry = shapely.union_all([one if one.is_valid else _mended(one) for one in moved])
    west, south, east, north = dem.bounds
    if not joined.intersects(shapely.box(west, south, east, north)):
        digits = 6 if dem.crs.is_geographic else 1
        raise layer.error(
            f"The {kind}s that the outlet may lie on are outside the DEM: {layer.file}.",
            found=_extent(joined.bounds, digits),
            allowed=f"{_extent(dem.bounds, digits)} ({dem.crs.name})",
            remedy=f"correct the {kind}s or their CRS, or use a DEM that reaches them",
        )
    return joined


def _mended(shape: BaseGeometry) -> BaseGeometry:
    mended: BaseGeometry = shapely.make_valid(shape, method="structure", keep_collapsed=False)
    return mended


def _extent(bounds: tuple[float, float, float, float], digits: int) -> str:
    west, south, east, north = bounds
    return f"x {west:.{digits}f} to {east:.{digits}f}, y {south:.{digits}f} to {north:.{digits}f}"


def _single(geometry: BaseGeometry) -> list[BaseGeometry]:
    parts = list(getattr(geometry, "geoms", [geometry]))
    return [part for one in parts for part in (_single(one) if hasattr(one, "geoms") else [one]) if not part.is_empty]


def _moved(dem: Dem, part: BaseGeometry, own: CRS, layer: LayerAsk) -> BaseGeometry:
    if isinstance(part, Polygon):
        a, _, _, _, e, _ = dem.facts.transform
        moved = moved_polygon(part, own, dem.crs, _WITHIN_CELLS * min(abs(a), abs(e)))
        if moved is None:
            raise out_of_reach(part, layer)
        return on_the_turn_of(moved, dem.crs, 0.5 * (dem.bounds[0] + dem.bounds[2]))
    transformer = Transformer.from_crs(own, dem.crs, always_xy=True)
    fine = shapely.segmentize(part, part.length / _PARTS) if part.length > 0.0 else part
    line = shapely.transform(fine, lambda xy: np.column_stack(transformer.transform(xy[:, 0], xy[:, 1])))
    if not np.isfinite(shapely.get_coordinates(line)).all():
        raise out_of_reach(part, layer)
    return line


def cells_on(terrain: Terrain, shapes: BaseGeometry, kind: ShapeKind) -> BoolArray:
    """Return the cells that lines cross, or those whose centre lies in polygons.

    Parameters
    ----------
    terrain
        Ground of the window.
    shapes, kind
        As `read_shapes` gave them.

    Returns
    -------
    (rows, cols) bool array
    """
    from rasterio.features import rasterize  # noqa: PLC0415

    a, b, c, d, e, f = terrain.transform
    rows, cols = terrain.shape
    if not shapes.intersects(shapely.box(c, f + e * rows, c + a * cols, f)):
        return np.zeros(terrain.shape, dtype=np.bool_)
    burnt = rasterize(
        [(shapes, 1)],
        out_shape=terrain.shape,
        transform=Affine(a, b, c, d, e, f),
        all_touched=kind == "line",
        dtype=np.uint8,
    )
    found: BoolArray = burnt == 1
    return found
