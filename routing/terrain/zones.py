"""Zones of the user's: polygons read, moved to the DEM's CRS, mended, and laid over the cells and moves of a window."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from pathlib import Path

import numpy as np
import shapely
from pyproj import CRS
from shapely import MultiPolygon, Polygon
from shapely.geometry.base import BaseGeometry

from routing.records import FloatArray, Terrain, Zone, ZoneAsk, ZoneMap
from routing.terrain.clipping import Overlay, blocked_by, lay_over
from routing.terrain.outlines import moved_polygon, on_the_turn_of
from routing.terrain.vectors import LayerAsk, out_of_reach, read_layer

#: Edges of a zone follow their true images in the DEM's CRS to this share of a cell.
EDGE_WITHIN_CELLS = 1e-3
#: Polygons narrower than this share of a cell are told as slivers.
SLIVER_CELLS = 0.01


def zone_map(
    terrain: Terrain, asks: tuple[ZoneAsk, ...], moves: list[tuple[int, int]], site_file: Path | None = None
) -> ZoneMap:
    """Read zones and lay them over a window.

    A barred zone bars its interior: a cell whose centre lies in it, and every move whose segment, straight from centre
    to centre on the map, meets it; touching the outline is free. The test is exact (see `clipping`). Polygons of one
    zone, and barred zones that touch or overlap, are joined, so that no way is left along a seam. Where cost zones
    overlap, the dearest counts.

    Parameters
    ----------
    terrain
        Ground of the window.
    asks
        Zones as the user named them, paths resolved; in any CRS. Edges that a change of CRS bends are followed to a
        thousandth of a cell.
    moves
        Moves of the search as (rows, columns), at most 32, in the order of their bits.
    site_file
        Named in messages.

    Returns
    -------
    ZoneMap
        Its notes tell what was mended, joined, and of no effect.

    Raises
    ------
    TerrainError
        If a file cannot be read, holds no polygon or something else beside polygons, or cannot be moved to the DEM's
        CRS; the message names the zone.
    """
    notes: list[str] = []
    zones = tuple(_zone(terrain, ask, site_file, notes) for ask in asks)
    reach = max((abs(step) for move in moves for step in move), default=0)
    barred = np.zeros(terrain.shape, dtype=np.bool_)
    blocked = np.zeros(terrain.shape, dtype=np.uint32)
    for shape in barred_shapes(zones):
        overlay = lay_over(terrain, shape, reach)
        barred |= overlay.inside
        blocked |= blocked_by(terrain, overlay, moves)
    return ZoneMap(zones, barred, blocked, _cost_factors(terrain, zones), tuple(notes))


def barred_shapes(zones: Sequence[Zone]) -> Iterator[Polygon | MultiPolygon]:
    """Return the barred shapes, and where some meet also all joined: a seam between two of them is no way through.

    Parameters
    ----------
    zones
        Zones of any kind, in the DEM's CRS.
    """
    shapes = [zone.shape for zone in zones if zone.kind == "barred"]
    yield from shapes
    if any(shapely.intersects(one, np.array(shapes[k + 1 :])).any() for k, one in enumerate(shapes[:-1])):
        yield shapely.union_all(shapes)


def _cost_factors(terrain: Terrain, zones: Sequence[Zone]) -> FloatArray:
    factor = np.ones(terrain.shape)
    dear = sorted((zone for zone in zones if zone.kind == "cost"), key=lambda zone: zone.cost_factor)
    for zone in dear:
        overlay: Overlay = lay_over(terrain, zone.shape)
        factor[overlay.inside] = zone.cost_factor
    return factor


def _zone(terrain: Terrain, ask: ZoneAsk, site_file: Path | None, notes: list[str]) -> Zone:
    layer = LayerAsk(ask.file, ask.layer, ask.key or None, ask.line, site_file)
    crs = CRS.from_user_input(terrain.facts.crs_wkt)
    a, _, _, _, e, _ = terrain.transform
    cell = min(abs(a), abs(e))
    geometries, own = read_layer(layer)
    moved = []
    for polygon in _polygons(ask, layer, geometries):
        shape = moved_polygon(polygon, own, crs, EDGE_WITHIN_CELLS * cell)
        if shape is None:
            raise out_of_reach(polygon, layer)
        moved.append(on_the_turn_of(shape, crs, _middle_x(terrain)))
    parts = _mended(ask, layer, moved, notes)
    thin = sum(_is_sliver(part, SLIVER_CELLS * cell) for part in parts)
    if thin:
        notes.append(
            f"Zone {ask.name}: {thin} of its {len(parts)} polygons {_are(thin)} narrower than a hundredth of a cell of "
            "the DEM, as left over from drawing; they count all the same."
        )
    joined = parts[0] if len(parts) == 1 else shapely.union_all(parts)
    notes.extend(_out_of_sight(terrain, ask, joined))
    return Zone(ask.name, ask.kind, ask.cost_factor, joined)


def _are(count: int) -> str:
    return "is" if count == 1 else "are"


def _middle_x(terrain: Terrain) -> float:
    a, _, c, _, _, _ = terrain.facts.transform
    return c + 0.5 * a * terrain.facts.cols


def _polygons(ask: ZoneAsk, layer: LayerAsk, geometries: list[BaseGeometry]) -> list[Polygon]:
    """Return the single polygons; refused where there is none, or anything else."""
    parts = list(_single(geometries))
    others = sorted({part.geom_type for part in parts if not isinstance(part, Polygon)})
    if others:
        count = sum(not isinstance(part, Polygon) for part in parts)
        raise layer.error(
            f"The zone {ask.name} holds features that are no polygons: {ask.file}.",
            found=f"{count} of {len(parts)} features: {', '.join(others)}",
            allowed="polygons and multipolygons",
            remedy="export its polygons alone (close lines to polygons, or buffer them), or name another layer",
        )
    polygons = [part for part in parts if isinstance(part, Polygon)]
    if not polygons:
        raise layer.error(
            f"The zone {ask.name} holds no polygon: {ask.file}.",
            found="an empty layer",
            allowed="one polygon or more",
            remedy="draw the zone, name another layer, or remove this entry of [[zones]]",
        )
    return polygons


def _single(geometries: Sequence[BaseGeometry]) -> Iterator[BaseGeometry]:
    for geometry in geometries:
        parts = getattr(geometry, "geoms", None)
        if parts is None:
            yield geometry
        else:
            yield from _single([part for part in parts if not part.is_empty])


def _mended(ask: ZoneAsk, layer: LayerAsk, polygons: list[Polygon], notes: list[str]) -> list[Polygon]:
    """Return valid polygons; what a ring winds round twice counts as inside, so that a bar never gets a hole by it."""
    sound = shapely.is_valid(np.array(polygons))
    parts: list[Polygon] = []
    flat = 0
    for polygon, valid in zip(polygons, sound, strict=True):
        shape = polygon if valid else shapely.make_valid(polygon, method="structure", keep_collapsed=False)
        kept = [part for part in shapely.get_parts(shape) if isinstance(part, Polygon) and part.area > 0.0]
        flat += not kept
        parts += kept
    if not parts:
        raise layer.error(
            f"The zone {ask.name} encloses no ground: {ask.file}.",
            found=f"{len(polygons)} polygons without area",
            allowed="one polygon or more with an area",
            remedy="draw the zone anew, or remove this entry of [[zones]]",
        )
    mended = int(np.sum(~sound)) - flat
    if mended:
        notes.append(
            f"Zone {ask.name}: {mended} of its {len(polygons)} polygons had an outline that crosses or touches itself, "
            "and was mended: everything that it goes round counts as inside, its holes apart. Look at the result."
        )
    if flat:
        notes.append(f"Zone {ask.name}: {flat} of its {len(polygons)} polygons {_are(flat)} without area and left out.")
    return parts


def _is_sliver(polygon: Polygon, width: float) -> bool:
    """Return whether no circle of that diameter fits in; a wide shape is told at once by area over outline."""
    return bool(polygon.area <= width * polygon.length and polygon.buffer(-0.5 * width).is_empty)


def _out_of_sight(terrain: Terrain, ask: ZoneAsk, shape: Polygon | MultiPolygon) -> Iterator[str]:
    whole = (terrain.facts.transform, (terrain.facts.rows, terrain.facts.cols))
    window = (terrain.transform, terrain.shape)
    for (transform, size), what in ((whole, "the DEM"), (window, "the part of the DEM that was read")):
        a, _, c, _, e, f = transform
        if not shapely.box(c, f + e * size[0], c + a * size[1], f).intersects(shape):
            yield f"Zone {ask.name} lies wholly outside {what}, so it has no effect: check its place and its CRS."
            return
