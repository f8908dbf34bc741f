"""What a path on the grid is like, edge by edge, and whether a better one might lie outside the window."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from routing.errors import InputError, Problem
from routing.records import BoolArray, FloatArray
from routing.search import kernel
from routing.search.grid import Grid
from routing.search.reaching import Limitation, Reach

# Shares of an edge at which it is looked at: every patch border of every move is among them (halves and thirds).
_SHARES = np.arange(25) / 24.0


@dataclass(frozen=True, slots=True)
class PathEdges:
    """A path as the search judges it.

    Attributes
    ----------
    cells : (n, 2) int array
        Cells visited.
    length_m
        Length of the whole path.
    at_length_m, at_level_m : (m,) arrays
        What the ceiling must clear: ground levels and the lengths that they count at. By the far-end rule, the
        start and then the highest ground of each edge at the length of its far end; by the rule along the edge, the
        ground at 24 places of each and at its highest.
    start_length_m
        Length already behind the first cell; it is part of all lengths here.
    """

    cells: NDArray[np.intp]
    length_m: float
    at_length_m: FloatArray
    at_level_m: FloatArray
    start_length_m: float = 0.0


def _moves_of(grid: Grid, cells: NDArray[np.intp]) -> NDArray[np.intp]:
    moves = grid.moves
    number = {(int(r), int(c)): i for i, (r, c) in enumerate(zip(moves.drow, moves.dcol, strict=True))}
    try:
        return np.array([number[int(r), int(c)] for r, c in np.diff(cells, axis=0)], dtype=np.intp)
    except KeyError as error:
        raise InputError(
            Problem(
                "two cells of the path are not one move apart", found=f"{error}", allowed=f"{grid.neighbours} moves"
            )
        ) from error


def _edges_of(grid: Grid, cells: NDArray[np.intp]) -> tuple[NDArray[np.intp], NDArray[np.intp], FloatArray]:
    """Return the moves of a path, its cells as flat numbers, and the 3-D lengths of its edges."""
    taken = _moves_of(grid, cells)
    flat = (cells[:, 0] * grid.ground.cols + cells[:, 1]).astype(np.intp)
    rise = np.diff(grid.ground.level[flat])
    return taken, flat, np.hypot(grid.ground.plan[cells[:-1, 0], taken], rise)


def _ground_at(grid: Grid, row: FloatArray, col: FloatArray) -> FloatArray:
    """Bilinear ground at places inside the grid."""
    rows, cols = grid.shape
    r0 = np.minimum(row.astype(np.intp), max(rows - 2, 0))
    c0 = np.minimum(col.astype(np.intp), max(cols - 2, 0))
    r1, c1 = np.minimum(r0 + 1, rows - 1), np.minimum(c0 + 1, cols - 1)
    y, x = row - r0, col - c0
    upper = grid.level[r0, c0] * (1.0 - x) + grid.level[r0, c1] * x
    lower = grid.level[r1, c0] * (1.0 - x) + grid.level[r1, c1] * x
    ground: FloatArray = upper * (1.0 - y) + lower * y
    return ground


def _peak_share(level_at: FloatArray) -> FloatArray:
    """Share of each edge at which its ground is highest, from the parabola through the three samples there."""
    best = np.argmax(level_at, axis=1)
    middle = np.clip(best, 1, _SHARES.size - 2)
    edges = np.arange(len(level_at))
    left, peak, right = (level_at[edges, middle + side] for side in (-1, 0, 1))
    bend = left - 2.0 * peak + right
    inside = (best == middle) & (bend < 0.0)
    offset = np.where(inside, 0.5 * (left - right) / np.where(inside, bend, 1.0), 0.0)
    share: FloatArray = np.where(inside, _SHARES[middle] + np.clip(offset, -0.5, 0.5) / 24.0, _SHARES[best])
    return share


def path_edges(grid: Grid, cells: NDArray[np.intp], limitation: Limitation, start_length_m: float = 0.0) -> PathEdges:
    """Work out what the search judges of a path, by the rules of a limitation.

    Raises
    ------
    InputError
        If two successive cells are not joined by a move of the grid.
    """
    taken, flat, edge = _edges_of(grid, cells)
    level = grid.ground.level[flat]
    far = start_length_m + np.concatenate([[0.0], np.cumsum(edge)])
    if limitation.rule == "bilinear" and limitation.along:
        row = cells[:-1, 0:1] + np.diff(cells[:, 0:1], axis=0) * _SHARES
        col = cells[:-1, 1:2] + np.diff(cells[:, 1:2], axis=0) * _SHARES
        level_at = _ground_at(grid, row, col)
        share, exact = _peak_share(level_at), kernel.path_highs(grid.ground, grid.moves, True, flat[:-1], taken)  # noqa: FBT003
        at_length = np.append((far[:-1, None] + edge[:, None] * _SHARES[1:]).ravel(), far[:-1] + edge * share)
        at_level = np.append(level_at[:, 1:].ravel(), exact)
    else:
        at_length = far[1:]
        at_level = kernel.path_highs(grid.ground, grid.moves, limitation.rule == "bilinear", flat[:-1], taken)
    return PathEdges(
        cells,
        float(far[-1]),
        np.concatenate([far[:1], at_length]),
        np.concatenate([level[:1], at_level]),
        start_length_m,
    )


def with_highest(grid: Grid, path: PathEdges, limitation: Limitation) -> PathEdges:
    """Return a path with the very place of each edge that stands highest under a falling ceiling, told at its far end.

    Between the samples of the rule along edges ground can stand a little higher; by the far-end rule nothing is added.
    """
    if not (limitation.along and limitation.rule == "bilinear"):
        return path
    taken, flat, edge = _edges_of(grid, path.cells)
    tilts = limitation.ceiling_gradient * edge
    level = kernel.path_tilted_highs(grid.ground, grid.moves, flat[:-1], taken, tilts)
    far = path.start_length_m + np.cumsum(edge)
    return replace(path, at_length_m=np.append(path.at_length_m, far), at_level_m=np.append(path.at_level_m, level))


def raise_needed(grid: Grid, path: PathEdges, limitation: Limitation) -> float:
    """Return how far ceiling and cap of a limitation must be raised for a path, in m: 0 where it keeps to them.

    ``path`` is to be judged by the rules of the limitation (see `path_edges`).
    """
    path = with_highest(grid, path, limitation)
    falling = limitation.ceiling_level_m - limitation.ceiling_gradient * path.at_length_m
    return float(max(np.max(path.at_level_m - np.minimum(falling, limitation.cap_level_m)), 0.0))


def border_band(grid: Grid, open_sides: tuple[bool, bool, bool, bool]) -> BoolArray:
    """Return the cells from which a move may leave the window (north, south, west, east sides open)."""
    band = np.zeros(grid.shape, dtype=np.bool_)
    north, south, west, east = open_sides
    width = grid.reach
    band[:width, :] |= north
    band[-width:, :] |= south
    band[:, :width] |= west
    band[:, -width:] |= east
    return band


def may_escape(grid: Grid, found: Reach, band: BoolArray, goals: ArrayLike | None, longest_m: float) -> bool:
    """Whether a path through ground outside the window might be shorter than ``longest_m``.

    Such a path leaves over a band cell, so it is at least as long as the length to that cell plus the straight
    distance from there to the goal. ``goals`` is a cell or a (m, 2) array of cells; of several, the nearest side of
    the box round them counts. ``None``: there may be goals anywhere outside, so only the length to the border counts.
    """
    cells = np.argwhere(band & np.isfinite(found.length_m))
    if cells.size == 0:
        return False
    if goals is None:
        return bool(np.any(found.length_m[cells[:, 0], cells[:, 1]] < longest_m * (1.0 - 1e-12)))
    goals = np.atleast_2d(np.asarray(goals, dtype=np.intp))
    first, last = goals.min(axis=0), goals.max(axis=0)
    outside = np.maximum(np.maximum(first - cells, cells - last), 0)
    across, down = outside[:, 1] * grid.step_x_m.min(), outside[:, 0] * grid.step_y_m.min()
    levels = grid.level[goals[:, 0], goals[:, 1]]
    here = grid.level[cells[:, 0], cells[:, 1]]
    up = np.maximum(np.maximum(levels.min() - here, here - levels.max()), 0.0)
    least = found.length_m[cells[:, 0], cells[:, 1]] + np.sqrt(across**2 + down**2 + up**2)
    return bool(np.any(least < longest_m * (1.0 - 1e-12)))
