"""Why there is no place for an outlet left open: each with what was found and what would help."""

from __future__ import annotations

import numpy as np

from routing.errors import Problem
from routing.planning.open_ends import Ground, place_text
from routing.planning.troubles import site_problem
from routing.records import BoolArray, FloatArray, Site, Terrain


def none_dry(site: Site, ground: Ground) -> Problem:
    """Say that no ground is left outside the water."""
    kind = site.outlet.kind
    barred = " and the barred zones" if ground.zones is not None else ""
    what = "No ground" if kind == "anywhere" else f"No cell of the {kind}s that the outlet may lie on"
    return site_problem(
        site,
        site.outlet.at.key or "outlet",
        f"{what} is left for the outlet outside the water{barred}.",
        found="cells of water, without data or barred only",
        allowed="ground outside the water that the DEM shows",
        remedy="check the water level, or use a DEM that reaches the ground beyond the barrier"
        if kind == "anywhere"
        else f"correct the {kind}s (a polygon must hold the centre of a cell), the water level, or the zones",
    )


def _level_key(site: Site) -> str:
    if site.outlet.level_m is not None:
        return "outlet.level_m"
    return "outlet.height_above_ground_m" if "outlet.height_above_ground_m" in site.lines else "outlet.kind"


def none_low(site: Site, terrain: Terrain, on: BoolArray) -> Problem:
    """Say that no place is low enough; the lowest is named."""
    held = np.where(on, terrain.elevation_m, np.inf)
    at = np.unravel_index(int(np.argmin(held)), held.shape)
    cell, ground = (int(at[0]), int(at[1])), float(held[at])
    outlet, lowest = site.outlet, site.water.lowest_level_m
    found = f"the lowest ground is at {ground:.2f} m, at {place_text(terrain, cell)}"
    if outlet.level_m is None:
        found += f"; the axis there would be at {ground + outlet.height_above_ground_m:.2f} m"
    allowed = f"an axis below the lowest level, {lowest:.2f} m"
    if outlet.level_m is not None and outlet.kind == "anywhere":
        allowed = f"ground at or below outlet.level_m, {outlet.level_m:g} m"
    return site_problem(
        site,
        _level_key(site),
        "No place that the outlet may lie at is low enough: nothing would flow.",
        found=found,
        allowed=allowed,
        remedy="let the outlet lie on lower ground, or raise water.lowest_level_m",
    )


def none_drained(site: Site, terrain: Terrain, low: BoolArray, tolerance_m: float) -> Problem:
    """Say that all low ground lies in closed hollows."""
    held = np.where(low, terrain.elevation_m, np.inf)
    at = np.unravel_index(int(np.argmin(held)), held.shape)
    cell = int(at[0]), int(at[1])
    lowest = f"the lowest at {float(held[cell]):.2f} m, at {place_text(terrain, cell)}"
    return site_problem(
        site,
        "outlet.kind",
        "All ground that is low enough for the outlet lies in closed hollows, which would fill up.",
        found=f"{int(np.count_nonzero(low))} cells, {lowest}",
        allowed=f"ground that drains to the edge of the DEM, rising by {tolerance_m:g} m at most",
        remedy="use a larger DEM, or one without false dams across streams (culverts opened); or give the place "
        'yourself, with outlet.kind "point", "line" or "polygon": the plan then tells what the hollow holds',
    )


def none_far(site: Site, terrain: Terrain, distance: FloatArray) -> Problem:
    """Say that no place lies far enough beyond the toe; the farthest is named."""
    at = np.unravel_index(int(np.argmax(distance)), distance.shape)
    cell = int(at[0]), int(at[1])
    farthest = f"the farthest place lies {float(distance[cell]):.1f} m beyond the toe, at {place_text(terrain, cell)}"
    return site_problem(
        site,
        "outlet.beyond_toe_m",
        "No place that is low enough lies so far beyond the toe of the barrier.",
        found=f"{site.outlet.beyond_toe_m:g} m asked; {farthest}",
        allowed=f"at most {float(distance[cell]):.1f} m",
        remedy="ask for less, or use a DEM that reaches further",
    )
