"""The lowest crest: how high any way from the water body to a goal must rise."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from routing.errors import InputError, Problem
from routing.records import BoolArray, FloatArray
from routing.search import flooding
from routing.search.grid import Grid
from routing.search.moves import move_table

_SLICE_CELLS = 200_000
_FIRST_HEAP = 65_536


@dataclass(frozen=True, slots=True)
class Crest:
    """The lowest crest between sources and goal.

    Attributes
    ----------
    level_m
        Lowest possible highest ground on the bilinear surface.
    row, col
        Where it is, in fractions of cells (a patch saddle lies between centres).
    goal
        The goal cell that is reached first.
    border_met
        Whether the flooding met an open border cell at a lower level: a lower way might then exist outside.
    """

    level_m: float
    row: float
    col: float
    goal: tuple[int, int]
    border_met: bool


def _mask_of(grid: Grid, cells: BoolArray, name: str) -> BoolArray:
    if cells.shape != grid.shape or cells.dtype != np.bool_:
        raise InputError(
            Problem(
                "the mask has another shape than the grid",
                found=f"{cells.dtype} {cells.shape}",
                allowed=f"bool {grid.shape}",
                key=name,
            )
        )
    return cells


def _start(grid: Grid, masks: dict[int, BoolArray], sources: BoolArray) -> tuple[flooding.Basin, np.ndarray]:
    """Return a basin with its flags set, and the flat source cells."""
    flags = (~grid.has_ground.ravel()).astype(np.uint8) * np.uint8(flooding.WALL)
    for bit, mask in masks.items():
        flags[mask.ravel()] |= np.uint8(bit)
    table = move_table(8)
    rows, cols = grid.shape
    crest = np.full(flags.size, np.inf)
    parent = np.full(flags.size, flooding.PARENT_NONE, dtype=np.uint8)
    basin = flooding.Basin(grid.ground.level, flags, crest, parent, table.drow, table.dcol, rows, cols)
    cells = np.flatnonzero(sources.ravel() & grid.has_ground.ravel())
    crest[cells] = grid.ground.level[cells]
    parent[cells] = flooding.PARENT_SOURCE
    return basin, cells


def _run(basin: flooding.Basin, cells: np.ndarray, tick: Callable[[int], None] | None) -> int | None:
    """Flood until a goal is met; return the goal cell, or ``None``."""
    size = _FIRST_HEAP + 2 * cells.size
    heap = flooding.Heap(np.empty(size), np.empty(size, dtype=np.int32))
    state = np.zeros(flooding.STATE_SIZE, dtype=np.int64)
    order = np.argsort(basin.crest[cells], kind="stable")
    heap.key[: cells.size] = basin.crest[cells][order]  # a sorted array is a heap
    heap.cell[: cells.size] = cells[order]
    state[flooding.WAITING] = cells.size
    while True:
        end = flooding.flood(basin, heap, state, _SLICE_CELLS)
        if end == flooding.HEAP_SMALL:
            heap = flooding.Heap(
                np.concatenate([heap.key, np.empty_like(heap.key)]),
                np.concatenate([heap.cell, np.empty_like(heap.cell)]),
            )
        elif end == flooding.GOAL_MET:
            return int(state[flooding.GOAL_CELL])
        elif end == flooding.DONE:
            return None
        if tick is not None:
            tick(int(state[flooding.COUNT]))


def crest_levels(grid: Grid, sources: BoolArray, *, tick: Callable[[int], None] | None = None) -> FloatArray:
    """Find for each cell the lowest level that any way over the ground from the sources must rise to.

    Exact for the bilinear surface through the cell centres; cells without ground are walls.

    Parameters
    ----------
    sources : (rows, cols) bool array
        Where ways start.
    tick
        Called between slices with the number of cells taken; may raise.

    Returns
    -------
    (rows, cols) array
        At least the ground of source and cell; ``inf`` where no ground joins a cell to a source.

    Raises
    ------
    InputError
        If the mask has another shape.
    """
    basin, cells = _start(grid, {}, _mask_of(grid, sources, "sources"))
    _run(basin, cells, tick)
    levels: FloatArray = basin.crest.reshape(grid.shape)
    return levels


def _highest_on_path(basin: flooding.Basin, cell: int) -> tuple[float, float, float]:
    """Walk back to the source; return the level and place of the highest pass."""
    cols = basin.cols
    row, col = divmod(cell, cols)
    best = (float(basin.level[cell]), float(row), float(col))
    while basin.parent[cell] != flooding.PARENT_SOURCE:
        move = basin.parent[cell]
        row_from, col_from = row - int(basin.drow[move]), col - int(basin.dcol[move])
        level = float(flooding.pass_level(basin, row_from, col_from, row, col))
        if level > best[0]:
            best = (level, *_place_of_pass(basin, (row_from, col_from), (row, col), level))
        row, col = row_from, col_from
        cell = row * cols + col
    return best


def _place_of_pass(
    basin: flooding.Basin, one: tuple[int, int], other: tuple[int, int], level: float
) -> tuple[float, float]:
    """Where between two neighbouring cells the pass is: at the higher cell, or at the patch's saddle."""
    for row, col in (one, other):
        if basin.level[row * basin.cols + col] == level:
            return float(row), float(col)
    row, col = min(one[0], other[0]), min(one[1], other[1])
    corner = row * basin.cols + col
    base = basin.level[corner]
    along_col, along_row = basin.level[corner + 1] - base, basin.level[corner + basin.cols] - base
    twist = basin.level[corner + basin.cols + 1] - base - along_row - along_col
    return float(row - along_col / twist), float(col - along_row / twist)


def lowest_crest(
    grid: Grid,
    sources: BoolArray,
    goal: BoolArray,
    *,
    open_border: BoolArray | None = None,
    tick: Callable[[int], None] | None = None,
) -> Crest | None:
    """Find the lowest level that any way over the ground from the sources to the goal must rise to.

    Exact for the bilinear surface through the cell centres; cells without ground are walls.

    Parameters
    ----------
    sources, goal : (rows, cols) bool arrays
        Where ways start and where they end (the goal cell met first counts).
    open_border : (rows, cols) bool array, optional
        Cells beyond which there is ground that is not in the grid.
    tick
        Called between slices with the number of cells taken; may raise.

    Returns
    -------
    Crest or None
        ``None`` where no ground joins sources and goal.

    Raises
    ------
    InputError
        If a mask has another shape, or if there is no source on ground.
    """
    masks = {flooding.GOAL: _mask_of(grid, goal, "goal")}
    if open_border is not None:
        masks[flooding.OPEN_BORDER] = _mask_of(grid, open_border, "open_border")
    basin, cells = _start(grid, masks, _mask_of(grid, sources, "sources"))
    if cells.size == 0:
        raise InputError(Problem("no source lies on ground", found="0 cells", allowed="1 or more", key="sources"))
    met = _run(basin, cells, tick)
    if met is None:
        return None
    level, row, col = _highest_on_path(basin, met)
    # A way that leaves over a border cell rises to that cell's own crest at least: only lower ones leave doubt. Beyond
    # the crest every cell of the valley has the crest's level, and many a border cell is met there before the goal.
    at_border = (basin.flags & flooding.OPEN_BORDER) != 0
    border_met = bool(np.any(at_border & ((basin.flags & flooding.TAKEN) != 0) & (basin.crest < basin.crest[met])))
    return Crest(level, row, col, (met // basin.cols, met % basin.cols), border_met)
