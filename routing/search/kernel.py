"""The compiled search: shortest 3-D lengths over a grid, under a ceiling that falls with length.

Why labels are settled once: for one discharge the ceiling only falls with length, so of two arrivals at a
cell the shorter one can go wherever the longer one can. Shortest labels are therefore exact although each
edge has a deadline of its own.

The queue is a ring of buckets (Dial 1969; Denardo and Fox 1979) a hair narrower than the shortest edge: a
label made from a bucket always falls in a later one, so the labels of the bucket at hand are final and can be
taken in any order.

All kernels that call each other stand in this file, since numba's cache does not see edits in another one.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numba import njit
from numpy.typing import NDArray

# Bits of the flags kept for each cell.
BARRED = 1  # may not be entered or crossed
NO_GROUND = 2  # nodata: also spoils the bilinear patches round it
CAREFUL = 4  # a barred cell, nodata or the grid's border is within one move
SETTLED = 8
TARGET = 16

# Codes of the parent array beside the move numbers.
PARENT_NONE = 255
PARENT_SOURCE = 254

# What a slice ends with.
DONE = 0
SLICE_OVER = 1
POOL_SMALL = 2
TARGETS_MET = 3

# Places in the state array.
BUCKET, LIVE, FREE, USED, SETTLED_CELLS, NEXT_SOURCE, TARGETS_LEFT = range(7)
STATE_SIZE = 7


class Ground(NamedTuple):
    """The grid, flat: cell = row * cols + col."""

    level: NDArray[np.float64]  # (cells,)
    high: NDArray[np.float32]  # (cells,) at or above the highest ground within one move; (0,) without a ceiling
    blocked: NDArray[np.uint32]  # (cells,) a bit a move; (0,) where no move is blocked
    plan: NDArray[np.float64]  # (rows, moves) plan length of each move from each row
    rows: int
    cols: int


class Moves(NamedTuple):
    """The move set (see moves.py); ``step`` is the move as a difference of flat cells."""

    step: NDArray[np.intp]
    drow: NDArray[np.intp]
    dcol: NDArray[np.intp]
    piece_start: NDArray[np.intp]
    piece_cell: NDArray[np.intp]
    piece_ends: NDArray[np.float64]
    crossed_start: NDArray[np.intp]
    crossed: NDArray[np.intp]
    corner_start: NDArray[np.intp]
    corner: NDArray[np.intp]


class Rules(NamedTuple):
    """What a label must keep to."""

    ceiling_level: float
    ceiling_gradient: float
    cap_level: float
    has_ceiling: bool
    bilinear: bool
    longest: float
    goal_row: int  # -1: no goal
    goal_col: int
    goal_level: float
    least_step_x: float
    least_step_y: float


class Queue(NamedTuple):
    """Labels waiting: linked lists of (cell, next), one list a bucket of the ring."""

    head: NDArray[np.int32]
    cell: NDArray[np.int32]
    next: NDArray[np.int32]
    per_length: float  # 1 / bucket width
    source_cell: NDArray[np.int32]  # sorted by start length
    source_start: NDArray[np.float64]


class Field(NamedTuple):
    """What the search finds for each cell."""

    length: NDArray[np.float64]
    parent: NDArray[np.uint8]
    flags: NDArray[np.uint8]


@njit(cache=True)
def edge_high(ground: Ground, moves: Moves, row: int, col: int, move: int) -> float:
    """Highest bilinear ground along a move: a quadratic in each patch, so the highest is at an end or a vertex."""
    cols = ground.cols
    cell = row * cols + col
    highest = max(ground.level[cell], ground.level[cell + moves.step[move]])
    for piece in range(moves.piece_start[move], moves.piece_start[move + 1]):
        corner = cell + moves.piece_cell[piece, 0] * cols + moves.piece_cell[piece, 1]
        base = ground.level[corner]
        along_col = ground.level[corner + 1] - base
        along_row = ground.level[corner + cols] - base
        twist = ground.level[corner + cols + 1] - base - along_row - along_col
        row_a, col_a = moves.piece_ends[piece, 0], moves.piece_ends[piece, 1]
        row_d, col_d = moves.piece_ends[piece, 2] - row_a, moves.piece_ends[piece, 3] - col_a
        start = base + along_row * row_a + along_col * col_a + twist * row_a * col_a
        slope = along_row * row_d + along_col * col_d + twist * (row_a * col_d + col_a * row_d)
        bend = twist * row_d * col_d
        highest = max(highest, start, start + slope + bend)
        if bend < 0.0 and slope > 0.0 and slope < -2.0 * bend:
            highest = max(highest, start - 0.25 * slope * slope / bend)
    return highest


@njit(cache=True)
def corner_high(ground: Ground, moves: Moves, row: int, col: int, move: int) -> float:
    """Highest corner of the patches that a move runs through: never below the bilinear ground on it."""
    cols = ground.cols
    cell = row * cols + col
    highest = max(ground.level[cell], ground.level[cell + moves.step[move]])
    for piece in range(moves.piece_start[move], moves.piece_start[move + 1]):
        corner = cell + moves.piece_cell[piece, 0] * cols + moves.piece_cell[piece, 1]
        highest = max(highest, ground.level[corner], ground.level[corner + 1])
        highest = max(highest, ground.level[corner + cols], ground.level[corner + cols + 1])
    return highest


@njit(cache=True)
def crossed_high(ground: Ground, moves: Moves, row: int, col: int, move: int) -> float:
    """Highest cell whose interior a move crosses."""
    cell = row * ground.cols + col
    highest = max(ground.level[cell], ground.level[cell + moves.step[move]])
    for i in range(moves.crossed_start[move], moves.crossed_start[move + 1]):
        highest = max(highest, ground.level[cell + moves.crossed[i, 0] * ground.cols + moves.crossed[i, 1]])
    return highest


@njit(cache=True)
def is_open(ground: Ground, moves: Moves, flags: NDArray[np.uint8], bilinear: bool, cell: int, move: int) -> bool:
    """Whether a move that stays on the grid is free of barred cells, closed corners and patches without ground."""
    cols = ground.cols
    wall = BARRED | NO_GROUND
    if flags[cell + moves.step[move]] & wall:
        return False
    for i in range(moves.crossed_start[move], moves.crossed_start[move + 1]):
        if flags[cell + moves.crossed[i, 0] * cols + moves.crossed[i, 1]] & wall:
            return False
    for i in range(moves.corner_start[move], moves.corner_start[move + 1]):
        one = cell + moves.corner[i, 0] * cols + moves.corner[i, 1]
        other = cell + moves.corner[i, 2] * cols + moves.corner[i, 3]
        if flags[one] & wall and flags[other] & wall:
            return False
    if bilinear:
        for piece in range(moves.piece_start[move], moves.piece_start[move + 1]):
            corner = cell + moves.piece_cell[piece, 0] * cols + moves.piece_cell[piece, 1]
            spoilt = flags[corner] | flags[corner + 1] | flags[corner + cols] | flags[corner + cols + 1]
            if spoilt & NO_GROUND:
                return False
    return True


@njit(cache=True)
def under_ceiling(ground: Ground, moves: Moves, rules: Rules, row: int, col: int, move: int, length: float) -> bool:
    """Whether the ground of a move is at or below the ceiling at its far end, reached at ``length``."""
    top = min(rules.cap_level, rules.ceiling_level - rules.ceiling_gradient * length)
    cell = row * ground.cols + col
    if ground.high[cell] <= top:
        return True
    if ground.level[cell] > top or ground.level[cell + moves.step[move]] > top:
        return False
    if not rules.bilinear:
        return crossed_high(ground, moves, row, col, move) <= top
    if corner_high(ground, moves, row, col, move) <= top:
        return True
    return edge_high(ground, moves, row, col, move) <= top


@njit(cache=True)
def beyond_hope(rules: Rules, level: float, row: int, col: int, length: float) -> bool:
    """Whether even the straight line from here to the goal would make the route too long."""
    if rules.goal_row < 0:
        return False
    across = (rules.goal_col - col) * rules.least_step_x
    down = (rules.goal_row - row) * rules.least_step_y
    up = rules.goal_level - level
    # The 1e-12 keeps a route of exactly the longest length from being lost to rounding.
    return length + np.sqrt(across * across + down * down + up * up) > rules.longest * (1.0 + 1e-12)


@njit(cache=True)
def push(queue: Queue, state: NDArray[np.int64], cell: int, length: float) -> None:
    """Put a label in its bucket. The pool must have a free entry."""
    entry = state[FREE]
    if entry >= 0:
        state[FREE] = queue.next[entry]
    else:
        entry = state[USED]
        state[USED] += 1
    slot = int(length * queue.per_length) & (queue.head.size - 1)
    queue.cell[entry] = cell
    queue.next[entry] = queue.head[slot]
    queue.head[slot] = entry
    state[LIVE] += 1


@njit(cache=True)
def relax(
    ground: Ground, moves: Moves, rules: Rules, queue: Queue, field: Field, state: NDArray[np.int64], cell: int
) -> None:
    """Try every move from a settled cell."""
    row = cell // ground.cols
    col = cell - row * ground.cols
    here = field.length[cell]
    level = ground.level[cell]
    careful = (field.flags[cell] & CAREFUL) != 0
    for move in range(moves.step.size):
        if careful:
            row_to, col_to = row + moves.drow[move], col + moves.dcol[move]
            if row_to < 0 or row_to >= ground.rows or col_to < 0 or col_to >= ground.cols:
                continue
        to = cell + moves.step[move]
        plan = ground.plan[row, move]
        known = field.length[to]
        if known <= here + plan:  # no 3-D length can be below the plan length
            continue
        rise = ground.level[to] - level
        length = here + np.sqrt(plan * plan + rise * rise)
        if known <= length or length > rules.longest:
            continue
        if careful and not is_open(ground, moves, field.flags, rules.bilinear, cell, move):
            continue
        if ground.blocked.size > 0 and (ground.blocked[cell] >> np.uint32(move)) & np.uint32(1):
            continue
        if rules.has_ceiling and not under_ceiling(ground, moves, rules, row, col, move, length):
            continue
        if beyond_hope(rules, ground.level[to], row + moves.drow[move], col + moves.dcol[move], length):
            continue
        field.length[to] = length
        field.parent[to] = move
        push(queue, state, to, length)


@njit(cache=True)
def admit_sources(ground: Ground, rules: Rules, queue: Queue, field: Field, state: NDArray[np.int64]) -> None:
    """Push the sources whose start length falls in the bucket at hand (or before it)."""
    while state[NEXT_SOURCE] < queue.source_cell.size:
        start = queue.source_start[state[NEXT_SOURCE]]
        if int(start * queue.per_length) > state[BUCKET]:
            return
        cell = queue.source_cell[state[NEXT_SOURCE]]
        state[NEXT_SOURCE] += 1
        top = min(rules.cap_level, rules.ceiling_level - rules.ceiling_gradient * start)
        walled = field.flags[cell] & (BARRED | NO_GROUND)
        fits = start <= rules.longest and (not rules.has_ceiling or ground.level[cell] <= top)
        if fits and not walled and start < field.length[cell]:
            field.length[cell] = start
            field.parent[cell] = PARENT_SOURCE
            push(queue, state, cell, start)


@njit(cache=True)
def settle(
    ground: Ground,
    moves: Moves,
    rules: Rules,
    queue: Queue,
    field: Field,
    state: NDArray[np.int64],
    budget: int,
) -> int:
    """Settle at most ``budget`` cells, then return why it stopped.

    ``state`` is kept between calls, so a search runs in slices between which the caller can show progress,
    stop, or make the pool larger.
    """
    mask = queue.head.size - 1
    count = 0
    while True:
        if state[LIVE] == 0:
            if state[NEXT_SOURCE] >= queue.source_cell.size:
                return DONE
            state[BUCKET] = int(queue.source_start[state[NEXT_SOURCE]] * queue.per_length)
        admit_sources(ground, rules, queue, field, state)
        slot = state[BUCKET] & mask
        while queue.head[slot] >= 0:
            if count >= budget:
                return SLICE_OVER
            if queue.cell.size - state[LIVE] < moves.step.size + queue.source_cell.size:
                return POOL_SMALL
            entry = queue.head[slot]
            cell = queue.cell[entry]
            queue.head[slot] = queue.next[entry]
            queue.next[entry] = state[FREE]
            state[FREE] = entry
            state[LIVE] -= 1
            if field.flags[cell] & SETTLED:
                continue
            field.flags[cell] |= SETTLED
            count += 1
            state[SETTLED_CELLS] += 1
            relax(ground, moves, rules, queue, field, state, cell)
            if field.flags[cell] & TARGET:
                state[TARGETS_LEFT] -= 1
                if state[TARGETS_LEFT] == 0:
                    return TARGETS_MET
        state[BUCKET] += 1
