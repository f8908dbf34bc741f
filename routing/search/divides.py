"""The divide between water body and outlet, and the places where it is worth crossing.

Ground belongs to whichever of the two a rising flood reaches it from first. Where both meet runs the divide: every
route crosses it. The way over a place on it is as long as the shortest lengths to it and on from it. A place is a
crossing of its own if it is the shortest or the lowest for some way round, and if joining it with a better one along
the divide costs at least 5 % more length than the longer of them or half a metre more lift than the lower; else it is
a wiggle of that one. So a longer way over a lower place counts as another way.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from routing.records import BoolArray, FloatArray
from routing.search import dividing
from routing.search.grid import Grid

MORE_LENGTH = 1.05
MORE_LIFT_M = 0.5
# Divide cells this close are neighbours: the line of cells along a divide has gaps where it turns.
_NEAR = 2

WATER, OUTLET = 1, 2


@dataclass(frozen=True, slots=True)
class Pass:
    """A place on the divide that is a crossing of its own.

    Attributes
    ----------
    cell
        Row and column.
    level_m
        Ground there.
    length_m
        Length of the shortest way over it.
    """

    cell: tuple[int, int]
    level_m: float
    length_m: float


def divide_cells(grid: Grid, water: BoolArray, outlet: BoolArray) -> BoolArray:
    """Return the cells on the water side of the divide, those that touch the outlet's side.

    Parameters
    ----------
    grid
        The grid; cells without ground part the two sides as walls do.
    water, outlet : (rows, cols) bool arrays
        The two seeds.
    """
    low, high = float(grid.level.min()), float(grid.level.max())
    scale = (dividing.RANKS - 1) / max(high - low, 1e-9)
    rank = ((grid.level - low) * scale).astype(np.uint16)
    mark = np.zeros(grid.shape, dtype=np.uint8)
    mark[water] = WATER
    mark[outlet & ~water] = OUTLET
    dividing.spread_marks(rank.ravel(), mark.ravel(), grid.has_ground.ravel(), grid.shape[1])
    divide: BoolArray = (mark == WATER) & _beside(mark == OUTLET)
    return divide


def _beside(mask: BoolArray) -> BoolArray:
    """Cells with an 8-neighbour in the mask."""
    padded = np.pad(mask, 1)
    rows, cols = mask.shape
    near = np.zeros(mask.shape, dtype=np.bool_)
    for down in (0, 1, 2):
        for right in (0, 1, 2):
            near |= padded[down : down + rows, right : right + cols]
    return near


def distinct_passes(divide: BoolArray, length_m: FloatArray, level_m: FloatArray, most: int = 9) -> list[Pass]:
    """Find the crossings of their own along the divide, the shortest first.

    Looked at are the places that no neighbour on the divide undercuts in length, or none in height. Two of them are one
    crossing if some way along the divide joins them over places that are all less than 5 % longer than the longer of
    the two and less than half a metre higher than the lower one. Places that no way is allowed
    over have no length; there only the height counts.

    Parameters
    ----------
    divide : (rows, cols) bool array
        Cells of the divide.
    length_m : (rows, cols) array
        Length of the shortest way over each cell; ``inf`` where none is allowed.
    level_m : (rows, cols) array
        Ground.
    most
        No more than this many are looked for.
    """
    cells = np.argwhere(divide)
    lengths, levels = length_m[cells[:, 0], cells[:, 1]], level_m[cells[:, 0], cells[:, 1]]
    if not np.isfinite(lengths).any():
        return []
    pairs = _neighbours(divide, cells)
    kept: list[int] = []
    for i in _least_of_their_own(lengths, levels, pairs):
        if len(kept) == most:
            break
        if not any(_joined(lengths, levels, pairs, i, other) for other in kept):
            kept.append(i)
    return [Pass((int(cells[i][0]), int(cells[i][1])), float(levels[i]), float(lengths[i])) for i in kept]


def _neighbours(divide: BoolArray, cells: NDArray[np.intp]) -> NDArray[np.intp]:
    """Return the pairs (by number) of divide cells that count as neighbours, as a (2, n) array."""
    padded = np.pad(np.full(divide.shape, -1, dtype=np.intp), _NEAR, constant_values=-1)
    padded[cells[:, 0] + _NEAR, cells[:, 1] + _NEAR] = np.arange(len(cells))
    found = []
    for down in range(-_NEAR, _NEAR + 1):
        for right in range(-_NEAR, _NEAR + 1):
            other = padded[cells[:, 0] + _NEAR + down, cells[:, 1] + _NEAR + right]
            there = (other >= 0) & (other != np.arange(len(cells)))
            found.append(np.stack([np.flatnonzero(there), other[there]]))
    return np.concatenate(found, axis=1)


def _undercut(order: NDArray[np.intp], pairs: NDArray[np.intp]) -> BoolArray:
    """Return the places that have a neighbour before them in an order."""
    place = np.empty(order.size, dtype=np.intp)
    place[order] = np.arange(order.size)
    undercut = np.zeros(order.size, dtype=np.bool_)
    undercut[pairs[0, place[pairs[1]] < place[pairs[0]]]] = True
    return undercut


def _least_of_their_own(lengths: FloatArray, levels: FloatArray, pairs: NDArray[np.intp]) -> list[int]:
    """Return the places that no neighbour undercuts in length, or none in height; the shortest first."""
    by_length, by_level = np.lexsort((levels, lengths)), np.lexsort((lengths, levels))
    least = ~_undercut(by_length, pairs) | ~_undercut(by_level, pairs)
    return [int(i) for i in by_length if least[i] and np.isfinite(lengths[i])]


def _joined(lengths: FloatArray, levels: FloatArray, pairs: NDArray[np.intp], one: int, other: int) -> bool:
    """Whether two places are one crossing."""
    from scipy.sparse import coo_array  # noqa: PLC0415 - slow to import
    from scipy.sparse.csgraph import connected_components  # noqa: PLC0415

    low = levels < min(levels[one], levels[other]) + MORE_LIFT_M
    near = ~np.isfinite(lengths) | (lengths < MORE_LENGTH * max(lengths[one], lengths[other]))
    passable = low & near
    kept = pairs[:, passable[pairs[0]] & passable[pairs[1]]]
    graph = coo_array((np.ones(kept.shape[1]), (kept[0], kept[1])), shape=(lengths.size, lengths.size))
    _, group = connected_components(graph, directed=False)
    return bool(group[one] == group[other])


def join_paths(one: NDArray[np.intp], other: NDArray[np.intp]) -> NDArray[np.intp] | None:
    """Join a path that ends where another starts; ``None`` where they share another cell."""
    way = np.concatenate([one, other[1:]])
    return way if len(np.unique(way, axis=0)) == len(way) else None
