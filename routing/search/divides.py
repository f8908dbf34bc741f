"""The divide between water body and outlet, and the places where it is worth crossing.

Ground belongs to whichever of the two a rising flood reaches it from first. Where both meet runs the divide: every
route crosses it. The way over a place on it is as long as the shortest lengths to it and on from it. A place is a
crossing of its own if joining it with a better one along the divide costs at least 5 % more length or half a metre
more lift, or if it is a real choice beside it: at least 5 % longer, half a metre lower, and well away from it (a fifth
of the shorter way), so that two places on the flank of one saddle are not two. Else it is a wiggle of that one.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from routing.records import BoolArray, FloatArray
from routing.search import dividing
from routing.search.grid import Grid

MORE_LENGTH = 1.05
MORE_LIFT_M = 0.5
#: A choice lies at least this share of the shorter way's length from it.
APART = 0.2
# ... and as many cells: what lies closer is one place to a DEM.
_APART_CELLS = 5
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


@dataclass(frozen=True, slots=True)
class Divide:
    """The divide of a grid.

    Attributes
    ----------
    cells : (rows, cols) bool array
        Cells on the water side that touch the outlet's side.
    water_side, outlet_side : (rows, cols) bool arrays
        The two sides; cells that neither reaches belong to none.
    level_m : (rows, cols) float64 array
        How high a step over the divide must rise from each of its cells: the cell's own ground or the lowest beside it
        on the outlet's side, whichever is higher. Without meaning elsewhere.
    step_m
        Mean ground distance between neighbouring cells along a row and across rows.
    """

    cells: BoolArray
    water_side: BoolArray
    outlet_side: BoolArray
    level_m: FloatArray
    step_m: tuple[float, float] = (1.0, 1.0)


def find_divide(grid: Grid, water: BoolArray, outlet: BoolArray) -> Divide:
    """Find the divide between two seeds.

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
    water_side, outlet_side = mark == WATER, mark == OUTLET
    beside = _lowest_beside(np.where(outlet_side, grid.level, np.inf))
    return Divide(
        cells=water_side & np.isfinite(beside),
        water_side=water_side,
        outlet_side=outlet_side,
        level_m=np.maximum(grid.level, beside),
        step_m=(float(grid.step_x_m.mean()), float(grid.step_y_m.mean())),
    )


def _lowest_beside(level: FloatArray) -> FloatArray:
    """Lowest of each cell's 8 neighbours and itself."""
    rows, cols = level.shape
    padded = np.pad(level, 1, constant_values=np.inf)
    lowest = np.full(level.shape, np.inf)
    for down in (0, 1, 2):
        for right in (0, 1, 2):
            np.minimum(lowest, padded[down : down + rows, right : right + cols], out=lowest)
    return lowest


def distinct_passes(
    divide: BoolArray,
    length_m: FloatArray,
    level_m: FloatArray,
    *,
    step_m: tuple[float, float] = (1.0, 1.0),
    most: int = 9,
) -> list[Pass]:
    """Find the crossings of their own along the divide, the shortest first.

    Looked at are the places that no neighbour on the divide undercuts in length, or none in height. Two of them are one
    crossing if some way along the divide joins them over places that are all less than 5 % longer than the longer of
    the two and less than half a metre higher than the higher one - unless the longer is 5 % longer and half a metre
    lower than the other, and at least a fifth of the shorter way from it. Places that no way is allowed over have no
    length; there only the height counts.

    Parameters
    ----------
    divide : (rows, cols) bool array
        Cells of the divide.
    length_m : (rows, cols) array
        Length of the shortest way over each cell; ``inf`` where none is allowed.
    level_m : (rows, cols) array
        Ground.
    step_m
        Ground distance between neighbouring cells along a row and across rows.
    most
        No more than this many are looked for.
    """
    cells = np.argwhere(divide)
    line = _line(divide, cells, length_m, level_m, step_m)
    if not np.isfinite(line.lengths).any():
        return []
    kept = _of_their_own(line, most)
    return [Pass((int(cells[i][0]), int(cells[i][1])), float(line.levels[i]), float(line.lengths[i])) for i in kept]


def same_pass(
    divide: BoolArray,
    length_m: FloatArray,
    level_m: FloatArray,
    passes: Sequence[Pass],
    place: Pass,
    *,
    step_m: tuple[float, float] = (1.0, 1.0),
) -> Pass | None:
    """Return the crossing, the shortest of those given, that a place on the divide is one with; ``None`` without one.

    Parameters
    ----------
    divide, length_m, level_m, step_m
        As for `distinct_passes`.
    passes
        Crossings found there.
    place
        A cell of the divide, with the length of a way over it that is known to be allowed.
    """
    cells = np.argwhere(divide)
    line = _line(divide, cells, length_m, level_m, step_m)
    number = {(int(row), int(col)): i for i, (row, col) in enumerate(cells)}
    here = number[place.cell]
    line.lengths[here] = min(line.lengths[here], place.length_m)
    return next((one for one in passes if _one_crossing(line, here, number[one.cell])), None)


class _Line(NamedTuple):
    """The cells of a divide, by number: lengths over them, levels, neighbours, and where they lie in metres."""

    lengths: FloatArray
    levels: FloatArray
    pairs: NDArray[np.intp]
    at_m: FloatArray
    least_apart_m: float


def _line(
    divide: BoolArray,
    cells: NDArray[np.intp],
    length_m: FloatArray,
    level_m: FloatArray,
    step_m: tuple[float, float],
) -> _Line:
    rows, cols = cells[:, 0], cells[:, 1]
    at = np.column_stack([cols * step_m[0], rows * step_m[1]])
    pairs = _neighbours(divide, cells) if len(cells) else np.zeros((2, 0), dtype=np.intp)
    return _Line(length_m[rows, cols], level_m[rows, cols], pairs, at, _APART_CELLS * max(step_m))


def _of_their_own(line: _Line, most: int) -> list[int]:
    """Return the places of which no two are one crossing, the shortest first.

    A hardly longer place that is lower stands for its crossing in place of the shortest there; only the first one
    stays, since it is the shortest of all.
    """
    kept: list[int] = []
    shortest: list[float] = []  # of each crossing, so that steps of a few per cent do not add up
    lengths, levels = line.lengths, line.levels
    for i in _least_of_their_own(line):
        same = [k for k, other in enumerate(kept) if _one_crossing(line, i, other)]
        if not same and len(kept) < most:
            kept.append(i)
            shortest.append(lengths[i])
        elif len(same) == 1 and same[0] > 0:
            k = same[0]
            if levels[i] < levels[kept[k]] and lengths[i] < MORE_LENGTH * shortest[k]:
                kept[k] = i
    return sorted(kept, key=lambda i: lengths[i])


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


def _least_of_their_own(line: _Line) -> list[int]:
    """Return the places that no neighbour undercuts in length, or none in height; the shortest first."""
    lengths, levels, pairs = line.lengths, line.levels, line.pairs
    by_length, by_level = np.lexsort((levels, lengths)), np.lexsort((lengths, levels))
    least = ~_undercut(by_length, pairs) | ~_undercut(by_level, pairs)
    return [int(i) for i in by_length if least[i] and np.isfinite(lengths[i])]


def _one_crossing(line: _Line, one: int, other: int) -> bool:
    """Whether two places are one crossing."""
    short, long = sorted((one, other), key=lambda i: line.lengths[i])
    length = line.lengths[short]
    longer, lower = line.lengths[long] >= MORE_LENGTH * length, line.levels[long] <= line.levels[short] - MORE_LIFT_M
    away = float(np.hypot(*(line.at_m[one] - line.at_m[other]))) >= max(APART * length, line.least_apart_m)
    return not (longer and lower and away) and _joined(line, one, other)


def _joined(line: _Line, one: int, other: int) -> bool:
    """Whether a way along the divide joins two places without much more length or lift."""
    from scipy.sparse import coo_array  # noqa: PLC0415 - slow to import
    from scipy.sparse.csgraph import connected_components  # noqa: PLC0415

    lengths, levels, pairs = line.lengths, line.levels, line.pairs
    low = levels < max(levels[one], levels[other]) + MORE_LIFT_M
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
