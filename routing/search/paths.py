"""What a path on the grid is like, edge by edge, and whether a better one might lie outside the window."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from routing.errors import InputError, Problem
from routing.records import BoolArray, FloatArray
from routing.search import kernel
from routing.search.grid import Grid
from routing.search.reaching import GroundRule, Reach


@dataclass(frozen=True, slots=True)
class PathEdges:
    """A path by its edges, as the search judges them.

    Attributes
    ----------
    cells : (n, 2) int array
        Cells visited.
    far_length_m : (n,) array
        Length at the far end of each edge; the first entry is the start itself, at its start length.
    high_m : (n,) array
        Highest ground of each edge by the ground rule; the first entry is the start's own ground.
    """

    cells: NDArray[np.intp]
    far_length_m: FloatArray
    high_m: FloatArray

    @property
    def length_m(self) -> float:
        """Length of the whole path."""
        return float(self.far_length_m[-1])


def path_edges(grid: Grid, cells: NDArray[np.intp], rule: GroundRule, start_length_m: float = 0.0) -> PathEdges:
    """Work out the edges of a path on the grid.

    Raises
    ------
    InputError
        If two successive cells are not joined by a move of the grid.
    """
    moves = grid.moves
    number = {(int(r), int(c)): i for i, (r, c) in enumerate(zip(moves.drow, moves.dcol, strict=True))}
    steps = np.diff(cells, axis=0)
    try:
        taken = np.array([number[int(r), int(c)] for r, c in steps], dtype=np.intp)
    except KeyError as error:
        raise InputError(
            Problem(
                "two cells of the path are not one move apart", found=f"{error}", allowed=f"{grid.neighbours} moves"
            )
        ) from error
    flat = (cells[:, 0] * grid.ground.cols + cells[:, 1]).astype(np.intp)
    level = grid.ground.level[flat]
    edge = np.hypot(grid.ground.plan[cells[:-1, 0], taken], np.diff(level))
    highest = kernel.path_highs(grid.ground, moves, rule == "bilinear", flat[:-1], taken)
    return PathEdges(
        cells,
        start_length_m + np.concatenate([[0.0], np.cumsum(edge)]),
        np.concatenate([level[:1], highest]),
    )


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


def may_escape(grid: Grid, found: Reach, band: BoolArray, goal: tuple[int, int], longest_m: float) -> bool:
    """Whether a path through ground outside the window might be shorter than ``longest_m``.

    Such a path leaves over a band cell, so it is at least as long as the length to that cell plus the straight
    distance from there to the goal.
    """
    cells = np.argwhere(band & np.isfinite(found.length_m))
    if cells.size == 0:
        return False
    across = (goal[1] - cells[:, 1]) * grid.step_x_m.min()
    down = (goal[0] - cells[:, 0]) * grid.step_y_m.min()
    up = grid.level[goal] - grid.level[cells[:, 0], cells[:, 1]]
    least = found.length_m[cells[:, 0], cells[:, 1]] + np.sqrt(across**2 + down**2 + up**2)
    return bool(np.any(least < longest_m * (1.0 - 1e-12)))
