"""The water body: the cells joined to the intake at or below the water surface."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from routing.errors import Problem, TerrainError
from routing.records import BoolArray, Cell, Terrain, WaterBody
from routing.terrain.shores import cells_area_m2, level_slack_m, shoreline_of, touched_borders

_EIGHT = np.ones((3, 3), dtype=np.bool_)


@dataclass(frozen=True, slots=True)
class _Flood:
    """The cells of a body; those of them that are voids; voids beside it that it may reach into unseen."""

    cells: BoolArray
    voids: int
    open_voids: BoolArray


def dry_cell(terrain: Terrain, cell: Cell, level_m: float) -> bool:
    """Return whether a cell holds ground above a water level.

    Parameters
    ----------
    terrain
        Ground of the window.
    cell
        Cell of the window.
    level_m
        Water level.
    """
    ground = float(terrain.elevation_m[cell.row, cell.col])
    return bool(terrain.valid[cell.row, cell.col]) and ground > level_m + level_slack_m(level_m)


def water_cells(terrain: Terrain, cell: Cell, level_m: float) -> BoolArray:
    """Return the cells joined to a cell, side or corner, at or below a water level.

    A void (cells without data) whose whole surrounding ring is at or below the level is water too, as lidar
    seldom returns from open water.

    Parameters
    ----------
    terrain
        Ground of the window.
    cell
        Cell of the intake.
    level_m
        Water level.

    Returns
    -------
    (rows, cols) bool array

    Raises
    ------
    TerrainError
        If the cell is dry, or lies in a void that is not enclosed by water.
    """
    return _flood(terrain, cell, level_m).cells


def water_body(terrain: Terrain, cell: Cell, level_m: float) -> WaterBody:
    """Return the water body at a level, found by flooding from the intake.

    Parameters
    ----------
    terrain
        Ground of the window.
    cell
        Cell of the intake.
    level_m
        Water level.

    Returns
    -------
    WaterBody
        Its area is the ground area of its cells; where it would spill is left open (``spill=None``).

    Raises
    ------
    TerrainError
        If the cell is dry, or lies in a void that is not enclosed by water.
    """
    flood = _flood(terrain, cell, level_m)
    touches_edge, touches_open = touched_borders(terrain, flood.cells)
    if flood.open_voids.any():
        # A void beside the water that runs on to the border: the body may go on in it.
        void_edge, void_open = touched_borders(terrain, flood.open_voids)
        touches_edge, touches_open = touches_edge or void_edge, touches_open or void_open
    return WaterBody(
        cells=flood.cells,
        level_m=level_m,
        area_m2=cells_area_m2(terrain, flood.cells),
        shoreline=shoreline_of(terrain, flood.cells),
        void_cells=flood.voids,
        touches_edge=touches_edge,
        touches_open_border=touches_open,
        spill=None,
        source="level",
    )


def with_voids_as_water(terrain: Terrain, body: WaterBody) -> Terrain:
    """Return the terrain with the voids of a water body filled to its level.

    For a DEM that shows the water surface: there the level is a safe bound for a pipe's crown.

    Parameters
    ----------
    terrain
        Ground of the window.
    body
        Its water body.
    """
    if body.void_cells == 0:
        return terrain
    voids = body.cells & ~terrain.valid
    note = f"{body.void_cells} cells without data over the water are taken to lie at its level {body.level_m:g} m."
    return replace(
        terrain,
        elevation_m=np.where(voids, body.level_m, terrain.elevation_m),
        valid=terrain.valid | voids,
        facts=replace(terrain.facts, assumptions=(*terrain.facts.assumptions, note)),
    )


def _flood(terrain: Terrain, cell: Cell, level_m: float) -> _Flood:
    from scipy import ndimage  # noqa: PLC0415

    if dry_cell(terrain, cell, level_m):
        raise _dry(terrain, cell, level_m)
    wet = terrain.valid & (terrain.elevation_m <= level_m + level_slack_m(level_m))
    void = ~terrain.valid
    rest = void
    if void.any():
        filled = _enclosed(terrain, void, wet)
        wet |= filled
        rest = void & ~filled
    if not wet[cell.row, cell.col]:
        raise _in_void(terrain, cell, level_m)
    labels, _ = ndimage.label(wet, structure=_EIGHT)
    cells = labels == labels[cell.row, cell.col]
    del labels
    beside = rest
    if rest.any():
        near = ndimage.binary_dilation(cells, structure=_EIGHT) & rest
        names, _ = ndimage.label(rest, structure=_EIGHT)
        beside = np.isin(names, np.unique(names[near])) & rest
    return _Flood(cells, int(np.count_nonzero(cells & void)), beside)


def _enclosed(terrain: Terrain, void: BoolArray, wet: BoolArray) -> BoolArray:
    """Return the voids that touch neither dry ground nor the window's border."""
    from scipy import ndimage  # noqa: PLC0415

    names, count = ndimage.label(void, structure=_EIGHT)
    beside_dry = ndimage.binary_dilation(terrain.valid & ~wet, structure=_EIGHT) & void
    refused = np.zeros(count + 1, dtype=np.bool_)
    refused[0] = True
    refused[names[beside_dry]] = True
    for border in (names[0], names[-1], names[:, 0], names[:, -1]):
        refused[border] = True
    return np.asarray(~refused[names])


def _dry(terrain: Terrain, cell: Cell, level_m: float) -> TerrainError:
    ground = float(terrain.elevation_m[cell.row, cell.col])
    return TerrainError(
        Problem(
            "The intake lies on dry ground.",
            found=f"ground {ground:.3f} m, {ground - level_m:.3f} m above the water level {level_m:.3f} m",
            allowed="an intake at or below the water level",
            remedy="move the intake into the water, correct the level, or the datum offset of the DEM",
            file=terrain.facts.file,
        )
    )


def _in_void(terrain: Terrain, cell: Cell, level_m: float) -> TerrainError:
    return TerrainError(
        Problem(
            "The intake lies where the DEM holds no data, and not all the ground around is water.",
            found=f"a void at row {cell.row + terrain.window.row_start}, column {cell.col + terrain.window.col_start}",
            allowed=f"a cell with data, or a void with ground at or below {level_m:.3f} m all around it",
            remedy="give the water body as a polygon, or fill the void in the DEM",
            file=terrain.facts.file,
        )
    )
