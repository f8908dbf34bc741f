"""Outlets left open: the cells that a pipe may end at, on lines, in polygons, or anywhere low that drains."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from routing.errors import Problem
from routing.planning.no_outlets import none_drained, none_dry, none_far, none_low
from routing.planning.open_ends import Ground, OutletPlaces, axis_m
from routing.planning.toes import toe_distance_m
from routing.records import BoolArray, Site, Terrain
from routing.search import Grid, crest_levels
from routing.terrain import level_slack_m
from routing.terrain.shapes import ShapeKind, cells_on

if TYPE_CHECKING:
    from shapely.geometry.base import BaseGeometry

#: Water may have to rise by this much on its way to the edge: less is within the noise of a DEM.
DRAIN_TOLERANCE_M = 0.25


def outlet_places(site: Site, ground: Ground, shapes: BaseGeometry | None, edge: BoolArray) -> OutletPlaces | Problem:
    """Return the cells that a pipe may end at, or why there is none.

    They lie outside the water and the barred zones, on the lines or in the polygons given, and their axis is below the
    lowest level. Anywhere means: where water drains to the edge of the DEM, and at the distance asked from the toe.

    Parameters
    ----------
    shapes
        Lines or polygons; ``None`` where the outlet may lie anywhere.
    edge : (rows, cols) bool array
        Cells at which water leaves the ground that is known.
    """
    terrain = ground.terrain
    dry = ground.free & terrain.valid & ~ground.body.cells
    if ground.body.source == "polygon":  # rim cells that a polygon leaves out, though no higher ground parts them
        dry &= crest_levels(ground.grid, ground.body.cells) > ground.body.level_m + level_slack_m(ground.body.level_m)
    on = dry if shapes is None else dry & cells_on(terrain, shapes, _shape_kind(site))
    if not on.any():
        return none_dry(site, ground)
    low = on & _is_low(site, terrain)
    if not low.any():
        return none_low(site, terrain, on)
    if shapes is not None:
        return _places(site, ground, low, _told_on_shapes(site, on, low), more_outside=False)
    drained = low & drains(ground.grid, edge)
    if not drained.any():
        return none_drained(site, terrain, low, DRAIN_TOLERANCE_M)
    return _beyond_the_toe(site, ground, low, drained)


def _shape_kind(site: Site) -> ShapeKind:
    return "line" if site.outlet.kind == "line" else "polygon"


def _is_low(site: Site, terrain: Terrain) -> BoolArray:
    """Return where the axis is below the lowest level; where its level is given, ground may not be above it too far.

    With a level of its own an outlet anywhere lies on ground at or below that level, so that it need not be dug in; on
    lines and in polygons the ground is below the lowest level.
    """
    lowest, outlet = site.water.lowest_level_m, site.outlet
    if outlet.level_m is None:
        low: BoolArray = terrain.elevation_m + outlet.height_above_ground_m < lowest
        return low
    highest = outlet.level_m if outlet.kind == "anywhere" else lowest
    held: BoolArray = terrain.elevation_m <= highest
    return held & (outlet.level_m < lowest)


def drains(grid: Grid, edge: BoolArray) -> BoolArray:
    """Return the cells from which water reaches the edge without rising more than `DRAIN_TOLERANCE_M` above the cell.

    The others lie in closed hollows.
    """
    reached: BoolArray = crest_levels(grid, edge) <= grid.level + DRAIN_TOLERANCE_M
    return reached


def _beyond_the_toe(site: Site, ground: Ground, low: BoolArray, drained: BoolArray) -> OutletPlaces | Problem:
    least, far = site.outlet.beyond_toe_m, drained
    if least > 0.0:
        distance = toe_distance_m(ground.terrain, ground.body.cells, ground.present_m)
        far = drained & (distance >= least)
        if not far.any():
            return none_far(site, ground.terrain, np.where(drained, distance, -1.0))
    note, whole = _told_anywhere(site, low, drained, far), ground.terrain.window.whole
    if not whole:
        note += " The border of what was read of the DEM counts as its edge."
    return _places(site, ground, far, note, more_outside=not whole)


def _places(site: Site, ground: Ground, found: BoolArray, note: str, *, more_outside: bool) -> OutletPlaces:
    cells = np.argwhere(found)
    return OutletPlaces(cells, axis_m(site, ground.terrain, cells), more_outside, note)


def _told_on_shapes(site: Site, on: BoolArray, low: BoolArray) -> str:
    where = "that the lines cross" if site.outlet.kind == "line" else "whose centre lies in the polygons"
    count, kept = int(np.count_nonzero(on)), int(np.count_nonzero(low))
    return f"The outlet may lie in {kept} cells {where}: of {count} outside the water, those that are low enough."


def _told_anywhere(site: Site, low: BoolArray, drained: BoolArray, far: BoolArray) -> str:
    counts = [int(np.count_nonzero(cells)) for cells in (low, drained, far)]
    told = f"The outlet may lie in {counts[2]} cells: {counts[0]} cells outside the water are low enough"
    if counts[1] < counts[0]:
        told += (
            f"; {counts[0] - counts[1]} of them lie in closed hollows, out of which water would have to rise by more "
            f"than {DRAIN_TOLERANCE_M:g} m, and are left out, since a hollow fills up"
        )
    if site.outlet.beyond_toe_m > 0.0:
        told += (
            f"; {counts[1] - counts[2]} lie nearer than {site.outlet.beyond_toe_m:g} m to the toe, where the ground "
            "beyond the barrier first falls back to the present level"
        )
    return f"{told}."
