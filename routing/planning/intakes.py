"""Intakes left open: the cells that a pipe may begin at along the shore at the lowest level."""

from __future__ import annotations

import numpy as np

from routing.errors import Problem, SiteError
from routing.planning.open_ends import CellLike, Ground, IntakePlaces, mouth_above_bed_m, place_text
from routing.planning.troubles import site_problem
from routing.records import BoolArray, Cell, Site
from routing.terrain import dry_cell, water_cells

_EIGHT = np.ones((3, 3), dtype=np.bool_)


def intake_places(site: Site, ground: Ground, at: CellLike) -> IntakePlaces | None:
    """Return the cells that a pipe may begin at; ``None`` where the intake is a point.

    With a stated underwater length they are the shore: cells of the water with dry ground beside or at a corner. With
    none the pipe lies on the bed from a place that is deep enough, and they are the rim of the deep water (a way from
    further inside passes the rim, and is longer).

    Parameters
    ----------
    at
        Cell of the point that says which water.

    Raises
    ------
    SiteError
        If the point is dry at the lowest level, or no cell serves.
    """
    if site.intake.kind == "point":
        return None
    water = _lowest_water(site, ground, at)
    length = site.intake.underwater_length_m
    found = _shore(ground, water) if length is not None else _deep_rim(site, ground, water)
    if not found.any():
        raise SiteError(_no_shore(site, ground, water))
    return IntakePlaces(np.argwhere(found), 0.0 if length is None else length, measured=length is None)


def _lowest_water(site: Site, ground: Ground, at: CellLike) -> BoolArray:
    """Return the water at the lowest level; where the DEM shows a surface, that surface stands for it."""
    if site.terrain.water_shown == "surface":
        return ground.body.cells
    lowest = site.water.lowest_level_m
    if dry_cell(ground.terrain, Cell(*at), lowest):
        raise SiteError(
            site_problem(
                site,
                site.intake.at.key or "intake",
                "The point that says which water the shore belongs to is dry at the lowest level.",
                found=f"bed at {ground.terrain.elevation_m[at]:.2f} m, lowest level {lowest:g} m",
                allowed=f"a point whose bed is at or below {lowest:g} m",
                remedy="move the point to deeper water, or correct water.lowest_level_m",
            )
        )
    return water_cells(ground.terrain, Cell(*at), lowest) & ground.body.cells


def _shore(ground: Ground, water: BoolArray) -> BoolArray:
    from scipy import ndimage  # noqa: PLC0415 - slow to import, and most intakes are points

    dry = ground.terrain.valid & ~water
    shore: BoolArray = ndimage.binary_dilation(dry, structure=_EIGHT) & water & ground.free
    return shore


def deepest_bed_m(site: Site) -> float:
    """Return the highest level that the bed may have under the mouth of a pipe that lies on it."""
    if site.intake.mouth_level_m is not None:
        return site.intake.mouth_level_m
    return site.water.lowest_level_m - site.limits.least_submergence_m - mouth_above_bed_m(site)


def _deep_rim(site: Site, ground: Ground, water: BoolArray) -> BoolArray:
    """Return the cells deep enough for the mouth from which a single move may leave the deep water."""
    from scipy import ndimage  # noqa: PLC0415

    deep = water & (ground.terrain.elevation_m <= deepest_bed_m(site)) & ground.free
    side = 2 * ground.grid.reach + 1
    inside = ndimage.minimum_filter(deep, size=side, mode="constant", cval=False)
    rim: BoolArray = deep & ~inside
    return rim


def _no_shore(site: Site, ground: Ground, water: BoolArray) -> Problem:
    if site.intake.underwater_length_m is not None:
        return site_problem(
            site,
            "intake.kind",
            "No shore was found: no cell of the water lies beside dry ground outside the barred zones.",
            found=f"{int(np.count_nonzero(water))} cells of water",
            allowed="water with a shore on the DEM",
            remedy="check the levels and the zones, or use a DEM that reaches the shore",
        )
    need = deepest_bed_m(site)
    held = np.where(water & ground.free, ground.terrain.elevation_m, np.inf)
    deepest = np.unravel_index(int(np.argmin(held)), held.shape)
    cell = int(deepest[0]), int(deepest[1])
    given = site.intake.mouth_level_m is not None
    why = "the level of the mouth" if given else "the lowest level less submergence and the largest pipe"
    found = "no water outside the barred zones"
    if np.isfinite(held[cell]):
        found = f"the deepest bed is at {held[cell]:.2f} m, at {place_text(ground.terrain, cell)}"
    return site_problem(
        site,
        "intake.mouth_level_m" if given else "intake.kind",
        "The water is nowhere deep enough for the intake at the lowest level.",
        found=found,
        allowed=f"a bed at or below {need:.2f} m: {why}",
        remedy="raise water.lowest_level_m, take smaller pipes, or state intake.underwater_length_m",
    )
