"""An upper bound on the discharge from cells alone, and a good route through the narrowest of them.

Any route reaches a cell at the shortest length to it or later, and needs at least the shortest length from it to go
on. So the ceiling at the one, and the energy limit at the sum, bound what a route through the cell carries; the
route whose least cell allows most bounds every route. Joining the two shortest paths at that least cell is then
close to the best.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from routing.search import flooding
from routing.search.grid import Grid
from routing.search.reaching import CellLike, Limitation, Reach, Tick

# Discharges between the best known and the bound at hand: fine enough to leave one or two probes.
_STEPS = 250


@dataclass(frozen=True, slots=True)
class Bound:
    """What cells alone say.

    Attributes
    ----------
    high
        No path carries more.
    way : (n, 2) int array or None
        The shortest paths to and from the narrowest cell, joined; ``None`` where they cross each other.
    """

    high: float
    way: NDArray[np.intp] | None


def compact(found: Reach) -> Reach:
    """Return the same with lengths stored in half the room, rounded down: they stay lower bounds."""
    length = found.length_m.astype(np.float32)
    return replace(found, length_m=np.nextafter(length, np.float32(-np.inf), out=length, where=np.isfinite(length)))


def bound_by_cells(
    grid: Grid,
    ends: tuple[CellLike, CellLike],
    ways: tuple[Reach, Reach],
    limits: list[Limitation],
    figures: list[float],
    tick: Tick | None = None,
) -> Bound:
    """Bound the discharge of every path by the cells it must pass.

    Parameters
    ----------
    grid
        The grid.
    ends
        Source and goal.
    ways
        Shortest lengths from the source and from the goal, under limits that every path keeps to (see `compact`).
    limits, figures
        Limitations of rising discharges, and those discharges; the last one is known to be a bound.
    tick
        Called between slices with the number of cells done; may raise to stop.
    """
    steps = np.array([[it.ceiling_level_m, it.ceiling_gradient, it.cap_level_m, it.longest_m] for it in limits])
    rating = np.empty(grid.flags.size, dtype=np.uint8)
    forward, backward = ways
    before, after = (np.asarray(way.length_m, dtype=np.float32).ravel() for way in ways)
    for start in range(0, rating.size, flooding.SLICE_CELLS):
        part = slice(start, start + flooding.SLICE_CELLS)
        flooding.rate_cells(grid.ground.level[part], before[part], after[part], steps, rating[part])
        if tick is not None:
            tick(start)
    rating[~grid.has_ground.ravel()] = flooding.NO_RATING
    cols = grid.ground.cols
    source, goal = (row * cols + col for row, col in ends)
    at, neck = flooding.widest_way(rating, grid.moves.drow, grid.moves.dcol, cols, source, goal, tick)
    if at < 0:
        return Bound(figures[0], None)
    place = divmod(int(neck), cols)
    way = np.concatenate([forward.path_to(*place), backward.path_to(*place)[-2::-1]])
    crosses_itself = len(np.unique(way, axis=0)) < len(way)
    return Bound(figures[min(at + 1, len(figures) - 1)], None if crosses_itself else way)


def spread(low: float, high: float) -> list[float]:
    """Return discharges between two, both included."""
    return [float(figure) for figure in np.linspace(low, high, _STEPS)]
