"""The compiled floodings: the lowest possible crest, and the widest way by capacities of cells.

The first finds the lowest possible highest ground on the way from a water body to a goal.

The ground is the bilinear surface through the cell centres. Over it, a way along a grid line rises to the
higher of its ends; between opposite corners of a patch it need not rise above the higher of the two, unless
both other corners are higher: then it must pass the patch's saddle (closed form). So a flooding of the cells
with those eight moves is exact for the surface.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np
from numba import njit
from numpy.typing import NDArray

WALL = 1
GOAL = 2
OPEN_BORDER = 4
TAKEN = 8

PARENT_NONE = 255
PARENT_SOURCE = 254

DONE = 0
SLICE_OVER = 1
HEAP_SMALL = 2
GOAL_MET = 3

NO_RATING = 255

#: Cells taken between two moments at which the caller may show progress or stop.
SLICE_CELLS = 200_000

WAITING, GOAL_CELL, COUNT = range(3)
STATE_SIZE = 3


class Basin(NamedTuple):
    """The grid, flat, and what the flooding finds."""

    level: NDArray[np.float64]
    flags: NDArray[np.uint8]
    crest: NDArray[np.float64]  # lowest highest ground on the way to each cell
    parent: NDArray[np.uint8]
    drow: NDArray[np.intp]
    dcol: NDArray[np.intp]
    rows: int
    cols: int


class Heap(NamedTuple):
    """A binary heap of (key, cell)."""

    key: NDArray[np.float64]
    cell: NDArray[np.int32]


@njit(cache=True)
def heap_push(heap: Heap, state: NDArray[np.int64], key: float, cell: int) -> None:
    """Add an entry. The heap must have room."""
    place = state[WAITING]
    state[WAITING] += 1
    while place > 0:
        above = (place - 1) >> 1
        if heap.key[above] <= key:
            break
        heap.key[place] = heap.key[above]
        heap.cell[place] = heap.cell[above]
        place = above
    heap.key[place] = key
    heap.cell[place] = cell


@njit(cache=True)
def heap_pop(heap: Heap, state: NDArray[np.int64]) -> int:
    """Take the cell with the least key."""
    top = heap.cell[0]
    state[WAITING] -= 1
    size = state[WAITING]
    key, cell = heap.key[size], heap.cell[size]
    place = 0
    while True:
        below = 2 * place + 1
        if below >= size:
            break
        if below + 1 < size and heap.key[below + 1] < heap.key[below]:
            below += 1
        if heap.key[below] >= key:
            break
        heap.key[place] = heap.key[below]
        heap.cell[place] = heap.cell[below]
        place = below
    heap.key[place] = key
    heap.cell[place] = cell
    return top


@njit(cache=True)
def pass_level(basin: Basin, row: int, col: int, row_to: int, col_to: int) -> float:
    """Lowest highest ground between two neighbouring cells; ``inf`` where a wall spoils the patch."""
    cols = basin.cols
    here, there = basin.level[row * cols + col], basin.level[row_to * cols + col_to]
    highest = max(here, there)
    if row == row_to or col == col_to:
        return highest
    one, other = row * cols + col_to, row_to * cols + col
    if basin.flags[one] & WALL or basin.flags[other] & WALL:
        return np.inf
    if min(basin.level[one], basin.level[other]) <= highest:
        return highest
    twist = here + there - basin.level[one] - basin.level[other]
    return (here * there - basin.level[one] * basin.level[other]) / twist


@njit(cache=True)
def flood(basin: Basin, heap: Heap, state: NDArray[np.int64], budget: int) -> int:
    """Take at most ``budget`` cells in rising order of crest, then return why it stopped."""
    count = 0
    while state[WAITING] > 0:
        if count >= budget:
            return SLICE_OVER
        if heap.key.size - state[WAITING] < basin.drow.size:
            return HEAP_SMALL
        cell = heap_pop(heap, state)
        if basin.flags[cell] & TAKEN:
            continue
        basin.flags[cell] |= TAKEN
        count += 1
        state[COUNT] += 1
        if basin.flags[cell] & GOAL:
            state[GOAL_CELL] = cell
            return GOAL_MET
        row = cell // basin.cols
        col = cell - row * basin.cols
        for move in range(basin.drow.size):
            row_to, col_to = row + basin.drow[move], col + basin.dcol[move]
            if row_to < 0 or row_to >= basin.rows or col_to < 0 or col_to >= basin.cols:
                continue
            to = row_to * basin.cols + col_to
            if basin.flags[to] & (WALL | TAKEN):
                continue
            crest = max(basin.crest[cell], pass_level(basin, row, col, row_to, col_to))
            if crest < basin.crest[to]:
                basin.crest[to] = crest
                basin.parent[to] = move
                heap_push(heap, state, crest, to)
    return DONE


@njit(cache=True)
def rate_cells(
    level: NDArray[np.float64],
    before: NDArray[np.float32],
    after: NDArray[np.float32],
    steps: NDArray[np.float64],
    rating: NDArray[np.uint8],
) -> None:
    """Give each cell the largest step of a table that it allows, or ``NO_RATING``.

    ``steps`` is (n, 4): ceiling level, gradient, cap, longest length, falling from step to step. A cell allows a step
    if its ground is under the ceiling at the length ``before`` it, and the way through it is not too long. One that
    was not reached from both ends allows none.
    """
    for cell in range(level.size):
        low, high = -1, steps.shape[0] - 1  # the answer is in low..high
        whole = np.float64(before[cell]) + np.float64(after[cell])  # summed in float32 it might be rounded up
        if not whole < np.inf:
            high = -1
        while low < high:
            middle = (low + high + 1) >> 1
            top = min(steps[middle, 0] - steps[middle, 1] * before[cell], steps[middle, 2])
            if level[cell] <= top and whole <= steps[middle, 3]:
                low = middle
            else:
                high = middle - 1
        rating[cell] = NO_RATING if low < 0 else low


class Lists(NamedTuple):
    """Cells that wait for the widest way: one linked list a rating, and the narrowest cell on the way to each."""

    head: NDArray[np.int32]
    after: NDArray[np.int32]
    neck: NDArray[np.int32]  # -1: not met yet


@njit(cache=True)
def widen(  # noqa: PLR0913, PLR0917 - numba: plain arrays
    rating: NDArray[np.uint8],
    drow: NDArray[np.intp],
    dcol: NDArray[np.intp],
    cols: int,
    goal: int,
    lists: Lists,
    at: int,
    budget: int,
) -> int:
    """Take at most ``budget`` cells, widest first, from rating ``at`` on; return the rating at which it stopped.

    It is -1 where no cell waits any more. When the goal is next, it stays first in its list.
    """
    head, after, neck = lists.head, lists.after, lists.neck
    rows = rating.size // cols
    while at >= 0 and budget > 0:
        cell = head[at]
        if cell < 0:
            at -= 1
            continue
        if cell == goal:
            return at
        head[at] = after[cell]
        budget -= 1
        row = cell // cols
        col = cell - row * cols
        for move in range(drow.size):
            row_to, col_to = row + drow[move], col + dcol[move]
            if row_to < 0 or row_to >= rows or col_to < 0 or col_to >= cols:
                continue
            to = row_to * cols + col_to
            if neck[to] >= 0 or rating[to] == NO_RATING:
                continue
            slot = min(at, int(rating[to]))
            neck[to] = to if slot < at else neck[cell]
            after[to] = head[slot]
            head[slot] = to
    return at


def widest_way(
    rating: NDArray[np.uint8],
    drow: NDArray[np.intp],
    dcol: NDArray[np.intp],
    cols: int,
    source: int,
    goal: int,
    tick: Callable[[int], None] | None = None,
) -> tuple[int, int]:
    """Find the way whose least rating is largest; return that rating and its narrowest cell (-1, -1 for none).

    Cells without a rating are not entered. Cells wait in one list a rating and the best list is drained first, so each
    cell is looked at once. ``tick`` is called between slices with the number of cells taken; it may raise.
    """
    if rating[source] == NO_RATING:
        return -1, -1
    lists = Lists(
        head=np.full(256, -1, dtype=np.int32),
        after=np.empty(rating.size, dtype=np.int32),
        neck=np.full(rating.size, -1, dtype=np.int32),
    )
    at, taken = int(rating[source]), 0
    lists.head[at], lists.after[source], lists.neck[source] = source, -1, source
    while True:
        at = int(widen(rating, drow, dcol, cols, goal, lists, at, SLICE_CELLS))
        if at < 0:
            return -1, -1
        if lists.head[at] == goal:
            return at, int(lists.neck[goal])
        taken += SLICE_CELLS
        if tick is not None:
            tick(taken)
