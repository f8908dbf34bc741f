"""Whether intake and outlet lie where a siphon can begin and end: checks that need the ground."""

from __future__ import annotations

import numpy as np

from routing.errors import Problem, SiteError
from routing.planning.troubles import site_problem
from routing.records import Cell, Saddle, Site, Terrain, WaterBody
from routing.search import Crest, Grid, lowest_crest
from routing.terrain import dry_cell, level_slack_m, water_cells, xy_of

CellLike = tuple[int, int]


def check_wet(site: Site, terrain: Terrain, cell: CellLike, level_m: float) -> None:
    """Check that the intake lies in the water, at a place that the DEM or a polygon shows.

    Parameters
    ----------
    level_m
        Water level that the DEM must be at or below.

    Raises
    ------
    SiteError
        If it lies on dry ground, or where the DEM has a hole that is not all water.
    """
    key = site.intake.at.key or "intake"
    if site.water.polygon_file is not None:
        return  # the polygon says where water is, whatever a coarse or noisy DEM shows of its surface
    if dry_cell(terrain, Cell(*cell), level_m):
        raise SiteError(
            site_problem(
                site,
                key,
                "The intake is on dry ground.",
                found=f"ground at {terrain.elevation_m[cell]:.2f} m, water at {level_m:.2f} m",
                allowed="a cell whose ground is at or below the water level",
                remedy="move the intake into the water, correct the water level, or give water.polygon_file where the "
                "DEM is too rough to show the water",
            )
        )
    if terrain.valid[cell] or _in_enclosed_void(terrain, cell, level_m):
        return
    raise SiteError(
        site_problem(
            site,
            key,
            "The DEM has no data at the intake, and the gap is not enclosed by water.",
            found="nodata that meets dry ground or the edge of what was read",
            allowed=f"a cell with data, or a gap with ground at or below {level_m:.2f} m all round",
            remedy="move the intake to water that the DEM shows, give water.polygon_file, or fill the gap in the DEM",
        )
    )


def _in_enclosed_void(terrain: Terrain, cell: CellLike, level_m: float) -> bool:
    low = terrain.valid & (terrain.elevation_m <= level_m)
    rows, cols = np.nonzero(low)
    if rows.size == 0:
        return False
    nearest = int(np.argmin((rows - cell[0]) ** 2 + (cols - cell[1]) ** 2))
    return bool(water_cells(terrain, Cell(int(rows[nearest]), int(cols[nearest])), level_m)[cell])


def check_outlet(
    site: Site, terrain: Terrain, grid: Grid, body: WaterBody, crest: Saddle | None, ends: tuple[CellLike, CellLike]
) -> None:
    """Check that the outlet lies on ground outside the water.

    Parameters
    ----------
    crest
        Highest ground on the lowest way from the water body to the outlet.
    ends
        Cells of intake and outlet.

    Raises
    ------
    SiteError
        If the DEM has no data there, or the water reaches it; a level above a saddle is told with that saddle.
    """
    intake, outlet = ends
    key = site.outlet.at.key or "outlet"
    if not terrain.valid[outlet]:
        raise SiteError(
            site_problem(
                site,
                key,
                "The DEM has no data at the outlet.",
                found="nodata",
                allowed="a cell with a ground level",
                remedy="move the outlet onto ground that the DEM shows",
            )
        )
    if intake == outlet:
        raise SiteError(
            site_problem(
                site,
                key,
                "Intake and outlet lie in one cell of the DEM.",
                found=f"both in a cell of {terrain.step_x_m[outlet[0]]:.2f} x {terrain.step_y_m[outlet[0]]:.2f} m",
                allowed="two cells, one on either side of the barrier",
                remedy="move one of the two, or take a DEM of smaller cells",
            )
        )
    if body.cells[outlet] or (crest is not None and crest.level_m <= body.level_m):
        raise SiteError(_under_water(site, terrain, body, outlet, _saddle_between(grid, intake, outlet)))


def _saddle_between(grid: Grid, intake: CellLike, outlet: CellLike) -> Crest | None:
    """Return the saddle between two cells, wherever the water may stand; ``None`` where neither end is lower."""
    if not grid.has_ground[intake]:
        return None
    start, goal = np.zeros(grid.shape, dtype=np.bool_), np.zeros(grid.shape, dtype=np.bool_)
    start[intake], goal[outlet] = True, True
    crest = lowest_crest(grid, start, goal)
    ends_m = max(float(grid.level[intake]), float(grid.level[outlet]))
    return crest if crest is not None and crest.level_m > ends_m + level_slack_m(ends_m) else None


def _under_water(site: Site, terrain: Terrain, body: WaterBody, outlet: CellLike, saddle: Crest | None) -> Problem:
    """Say why nothing parts the water from the outlet."""
    outlet_key = site.outlet.at.key or "outlet"
    ground, water = float(terrain.elevation_m[outlet]), f"water at {body.level_m:.2f} m"
    if saddle is not None and saddle.level_m > body.level_m:
        return _over_the_barrier(site, body, saddle)
    if saddle is not None:
        x, y = xy_of(terrain, saddle.row, saddle.col)
        digits = 6 if abs(terrain.transform[0]) < 0.1 else 1
        return site_problem(
            site,
            "water.present_level_m" if site.water.present_level_m is not None else outlet_key,
            "The present level is above a saddle: the water would run over it to the outlet by itself.",
            found=f"{water}, saddle at {saddle.level_m:.2f} m at x {x:.{digits}f}, y {y:.{digits}f}",
            allowed=f"a level below {saddle.level_m:.2f} m",
            remedy="correct the level (it counts in the datum of the DEM), or move the outlet beyond a higher barrier",
        )
    if body.cells[outlet] and ground >= body.level_m - level_slack_m(body.level_m):
        return site_problem(
            site,
            outlet_key,
            "The outlet lies in the water.",
            found=f"{water}, ground at the outlet {ground:.2f} m, and no higher ground between",
            allowed="an outlet outside the water body",
            remedy="move the outlet beyond the barrier",
        )
    return site_problem(
        site,
        outlet_key,
        "No ground above the water lies between intake and outlet: there is nothing to siphon over.",
        found=f"{water}, ground at the outlet {ground:.2f} m",
        allowed="an outlet beyond ground that is higher than the water",
        remedy="check both positions and the level; a DEM of large cells can leave out a narrow dam",
    )


def _over_the_barrier(site: Site, body: WaterBody, saddle: Crest) -> Problem:
    """Say why the water body reaches the outlet although higher ground parts them."""
    between = f"water at {body.level_m:.2f} m, ground up to {saddle.level_m:.2f} m between intake and outlet"
    if body.source == "polygon":
        return site_problem(
            site,
            "water.polygon_file",
            "The polygon of the water reaches over the barrier to the outlet.",
            found=between,
            allowed="a polygon that ends at the shore",
            remedy="correct the polygon, or leave it out: the water is then found from its level",
        )
    return site_problem(
        site,
        site.outlet.at.key or "outlet",
        "By the DEM's cells the water reaches the outlet: low cells join across the barrier, at corners or by a gap.",
        found=between,
        allowed="an outlet outside the water body",
        remedy="give water.polygon_file, or correct the low cells of the DEM",
    )
