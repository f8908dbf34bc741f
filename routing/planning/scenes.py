"""The ground of a job: a window of the DEM with water body, grid and lowest crest, grown until they fit."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import ExitStack
from dataclasses import dataclass, replace
from typing import Literal

import numpy as np

from routing.errors import Problem, SiteError
from routing.planning.edges import gap_runs_out, outer_edge
from routing.planning.ends import check_outlet, check_wet
from routing.planning.grids import lay_zones, make_grid
from routing.planning.intakes import intake_places
from routing.planning.open_ends import Ground, IntakePlaces, OutletPlaces
from routing.planning.outlets import outlet_places
from routing.planning.placing import Ends, centre_of, shapes_inside
from routing.planning.reports import Reporter
from routing.planning.troubles import site_problem
from routing.planning.zoning import check_free
from routing.records import BoolArray, Cell, GridWindow, PlacedPoint, Saddle, Site, Terrain, WaterBody, ZoneMap
from routing.search import Crest, Grid, lowest_crest
from routing.terrain import (
    Dem,
    FlatWater,
    LayerAsk,
    cell_at,
    dry_cell,
    flat_water,
    share_above_level,
    water_body,
    water_body_from_polygon,
    with_voids_as_water,
    xy_of,
)

# A window that must grow doubles its sides: few re-reads, and never four times more than is needed.
_GROWTH = 2.0
# A drawn shoreline and the cells of a DEM never agree at the rim; more than this is no rim.
_MUCH_ABOVE = 0.1


@dataclass(frozen=True, slots=True)
class Scene:
    """Everything about the ground of one job, in one window.

    ``proven`` is false where the window could not be grown until water body and lowest crest fit. ``intakes`` and
    ``outlets`` hold the places for ends left open; the outlet's cell is then the one beyond the lowest crest, and the
    intake's cell says which water.
    """

    dem: Dem
    terrain: Terrain
    grid: Grid
    ends: Ends
    intake_cell: tuple[int, int]
    outlet_cell: tuple[int, int]
    flat: FlatWater | None
    present_m: float
    body: WaterBody
    crest: Saddle | None
    proven: bool
    warnings: tuple[str, ...]
    zones: ZoneMap | None = None
    intakes: IntakePlaces | None = None
    outlets: OutletPlaces | None = None


def grown_window(site: Site, dem: Dem, window: GridWindow) -> GridWindow | None:
    """Return the next larger window, or ``None`` where there is no more DEM or the user's limit forbids it."""
    if window.whole:
        return None
    larger = dem.grown(window, factor=_GROWTH)
    return larger if larger.rows * larger.cols <= site.search.largest_window_cells else None


def _cell(terrain: Terrain, point: PlacedPoint) -> tuple[int, int]:
    cell = cell_at(terrain, point.x, point.y)
    if cell is None:  # a point on the DEM's very edge
        a, _, c, _, e, f = terrain.transform
        rows, cols = terrain.shape
        cell = Cell(int(np.clip((point.y - f) / e, 0, rows - 1)), int(np.clip((point.x - c) / a, 0, cols - 1)))
    return cell.row, cell.col


def _present_level(site: Site, flat: FlatWater | None) -> float:
    """Return the present level: given, or read off the flat water."""
    if site.water.present_level_m is not None:
        return site.water.present_level_m
    if flat is not None:
        return flat.level_m
    raise SiteError(
        site_problem(
            site,
            "water.present_level_m",
            "The present water level is not given, and the DEM shows no flat water at the intake.",
            found="nothing",
            allowed="a level in metres, in the datum of the DEM",
            remedy="set water.present_level_m, or move the intake into the water",
        )
    )


def _body(site: Site, terrain: Terrain, ends: Ends, cell: tuple[int, int], level_m: float) -> WaterBody:
    if site.water.polygon_file is None:
        return water_body(terrain, Cell(*cell), level_m)
    key = "water.polygon_file"
    layer = LayerAsk(
        site.water.polygon_file, site.water.polygon_layer, site_file=site.file, key=key, line=site.lines.get(key)
    )
    return water_body_from_polygon(terrain, layer, level_m, ends.intake)


def _saddle(terrain: Terrain, crest: Crest | None, towards: Literal["outlet", "edge"]) -> Saddle | None:
    if crest is None:
        return None
    x, y = xy_of(terrain, crest.row, crest.col)
    return Saddle(crest.level_m, float(x), float(y), towards, proven=not crest.border_met)


def _read(site: Site, dem: Dem, ends: Ends, window: GridWindow) -> Terrain:
    """Read a window, grown until a gap in the data at the intake lies inside: only then is it seen to be water."""
    while True:
        terrain = dem.read(window)
        if not gap_runs_out(terrain, _cell(terrain, ends.intake)):
            return terrain
        larger = grown_window(site, dem, window)
        if larger is None:
            return terrain
        window = larger


def _look_at(site: Site, dem: Dem, ends: Ends, window: GridWindow, tick: Callable[[int], None]) -> Scene:
    """Read one window and find water body, lowest crest and spill in it."""
    terrain = _read(site, dem, ends, window)
    window = terrain.window
    intake, outlet = _cell(terrain, ends.intake), _cell(terrain, ends.outlet)
    flat = flat_water(terrain, Cell(*intake)) if site.terrain.water_shown == "surface" else None
    present = _present_level(site, flat)
    # Where the DEM shows a higher water than today's, the ground under it is unknown: its level stands for it.
    shown = max(present, flat.level_m) if flat is not None else present
    check_wet(site, terrain, intake, shown)
    body = _body(site, terrain, ends, intake, shown)
    terrain = with_voids_as_water(terrain, body)
    zones = lay_zones(site, terrain)
    grid = make_grid(site, terrain, zones)
    border, edge = window.open_border(), outer_edge(terrain)
    ground = Ground(terrain, grid, body, zones, present)
    outlets = None
    if site.outlet.kind != "point":
        found = outlet_places(site, ground, ends.shapes, edge | (border & grid.has_ground))
        if isinstance(found, Problem):
            larger = grown_window(site, dem, window)
            if larger is None:
                raise SiteError(found)
            return _look_at(site, dem, ends, larger, tick)
        outlets = found
    crest = lowest_crest(grid, body.cells, _goal(grid, outlet, outlets), open_border=border, tick=tick)
    to_outlet = _saddle(terrain, crest, "outlet")
    if outlets is not None:
        outlet = outlets.lowest if crest is None else crest.goal
        ends = replace(ends, outlet=centre_of(dem, terrain, outlet))
        if ends.shapes is not None:
            outlets = replace(outlets, more_outside=not shapes_inside(dem, terrain, ends.shapes))
    to_edge = None
    if edge.any() and not body.touches_edge:
        to_edge = _saddle(terrain, lowest_crest(grid, body.cells, edge, open_border=border, tick=tick), "edge")
    known = [saddle for saddle in (to_outlet, to_edge) if saddle is not None and saddle.proven]
    spill = min(known, key=lambda saddle: saddle.level_m) if known and not body.touches_edge else None
    return Scene(
        dem=dem,
        terrain=terrain,
        grid=grid,
        ends=ends,
        intake_cell=intake,
        outlet_cell=outlet,
        flat=flat,
        present_m=present,
        body=replace(body, spill=spill),
        crest=to_outlet,
        proven=not body.touches_open_border and (window.whole or (to_outlet is not None and to_outlet.proven)),
        warnings=(),
        zones=zones,
        outlets=outlets,
    )


def _goal(grid: Grid, outlet: tuple[int, int], outlets: OutletPlaces | None) -> BoolArray:
    if outlets is not None:
        return outlets.mask(grid.shape)
    goal = np.zeros(grid.shape, dtype=np.bool_)
    goal[outlet] = True
    return goal


def _warnings(site: Site, scene: Scene) -> tuple[str, ...]:
    notes = []
    if not scene.proven:
        notes.append(
            "The water body or the lowest way to the outlet runs on beyond the part of the DEM that was read: area, "
            f"spill level and lowest crest are not proven (search.largest_window_cells = "
            f"{site.search.largest_window_cells})."
        )
    if scene.body.touches_edge:
        notes.append(
            "The edge of the DEM cuts the water body: its area is a lower bound and its spill level is unknown. If it "
            "should not reach so far, the present level may be above a saddle."
        )
    if dry_cell(scene.terrain, Cell(*scene.intake_cell), scene.body.level_m):  # only a polygon allows that
        ground = float(scene.terrain.elevation_m[scene.intake_cell])
        notes.append(
            f"The DEM shows ground at {ground:.2f} m at the intake, above the water level of "
            f"{scene.body.level_m:.2f} m: check the place, the level and the datum of the DEM."
        )
    above = share_above_level(scene.terrain, scene.body)
    if above > _MUCH_ABOVE:
        notes.append(
            f"{100.0 * above:.0f} % of the water's polygon lies on ground above the water level of "
            f"{scene.body.level_m:.2f} m: check the polygon, the level and the datum of the DEM."
        )
    if scene.flat is not None and scene.flat.level_m > scene.present_m + 0.01:
        notes.append(
            f"The DEM shows the water at {scene.flat.level_m:.2f} m, above the present level: the ground between is "
            "unknown, and the shoreline drawn is that of the DEM."
        )
    if scene.flat is None and site.terrain.water_shown == "surface":
        notes.append(
            "No flat water surface was found at the intake, though the DEM is said to show one: check "
            "terrain.water_shown and the levels."
        )
    return (*notes, *(() if scene.zones is None else scene.zones.notes))


def survey(site: Site, dem: Dem, ends: Ends, window: GridWindow, reporter: Reporter) -> Scene:
    """Read a window and grow it until the water body and the lowest way to the outlet lie inside.

    Raises
    ------
    SiteError
        If the intake is dry, the outlet has no data or lies in the water, or no present level is known.
    TerrainError
        If the DEM cannot serve.
    """
    while True:
        with ExitStack() as stack:
            tick = stack.enter_context(reporter.stage("ground and water body", 2 * window.rows * window.cols))
            scene = _look_at(site, dem, ends, window, tick)
        larger = None if scene.proven else grown_window(site, dem, scene.terrain.window)
        if larger is None:
            break
        window = larger
    if scene.outlets is None:
        check_outlet(site, scene.terrain, scene.grid, scene.body, scene.crest, (scene.intake_cell, scene.outlet_cell))
    for end, at in (("intake", (ends.intake, scene.intake_cell)), ("outlet", (ends.outlet, scene.outlet_cell))):
        check_free(site, scene.terrain, scene.zones, end, at)
    ground = Ground(scene.terrain, scene.grid, scene.body, scene.zones, scene.present_m)
    scene = replace(scene, intakes=intake_places(site, ground, scene.intake_cell))
    return replace(scene, warnings=_warnings(site, scene))
