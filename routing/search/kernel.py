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
    weight: NDArray[np.float64]  # (cells,) what a metre counts for, 1 or more; (0,) where all count the same
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
    cover_start: NDArray[np.intp]
    cover_cell: NDArray[np.intp]
    cover_share: NDArray[np.float64]


class Rules(NamedTuple):
    """What a label must keep to."""

    ceiling_level: float
    ceiling_gradient: float
    cap_level: float
    has_ceiling: bool
    bilinear: bool
    along: bool  # bilinear ground is held against the ceiling place by place, not at the far end of each edge
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
def edge_high(ground: Ground, moves: Moves, row: int, col: int, move: int, tilt: float) -> float:
    """Highest bilinear ground along a move: a quadratic in each patch, so the highest is at an end or a vertex.

    ``tilt`` is what the ceiling falls by along the move; the ground is then held against the ceiling at each place
    by lowering it towards the start (0 holds all of it against the ceiling at the far end).
    """
    cols = ground.cols
    cell = row * cols + col
    highest = max(ground.level[cell] - tilt, ground.level[cell + moves.step[move]])
    for piece in range(moves.piece_start[move], moves.piece_start[move + 1]):
        corner = cell + moves.piece_cell[piece, 0] * cols + moves.piece_cell[piece, 1]
        base = ground.level[corner]
        along_col = ground.level[corner + 1] - base
        along_row = ground.level[corner + cols] - base
        twist = ground.level[corner + cols + 1] - base - along_row - along_col
        row_a, col_a = moves.piece_ends[piece, 0], moves.piece_ends[piece, 1]
        row_d, col_d = moves.piece_ends[piece, 2] - row_a, moves.piece_ends[piece, 3] - col_a
        share = (moves.piece_cell[piece, 0] + row_a) / moves.drow[move]
        start = base + along_row * row_a + along_col * col_a + twist * row_a * col_a + tilt * (share - 1.0)
        slope = along_row * row_d + along_col * col_d + twist * (row_a * col_d + col_a * row_d)
        slope += tilt * row_d / moves.drow[move]
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
def under_ceiling(
    ground: Ground, moves: Moves, rules: Rules, cell: int, move: int, length_from: float, length: float
) -> bool:
    """Whether the ground of a move, reached at ``length``, is at or below the ceiling."""
    falling = rules.ceiling_level - rules.ceiling_gradient * length
    top = min(rules.cap_level, falling)
    if ground.high[cell] <= top:
        return True
    row = cell // ground.cols
    col = cell - row * ground.cols
    if ground.level[cell + moves.step[move]] > top:
        return False
    if not rules.bilinear:
        return crossed_high(ground, moves, row, col, move) <= top
    if corner_high(ground, moves, row, col, move) <= top:
        return True
    if not rules.along:
        return edge_high(ground, moves, row, col, move, 0.0) <= top
    if rules.cap_level < np.inf and edge_high(ground, moves, row, col, move, 0.0) > rules.cap_level:
        return False
    tilt = rules.ceiling_gradient * (length - length_from)
    return edge_high(ground, moves, row, col, move, tilt) <= falling


@njit(cache=True)
def weight_along(ground: Ground, moves: Moves, cell: int, move: int) -> float:
    """Mean of the weights of the cells that a move runs through, by the share of it in each."""
    total = 0.0
    for i in range(moves.cover_start[move], moves.cover_start[move + 1]):
        through = cell + moves.cover_cell[i, 0] * ground.cols + moves.cover_cell[i, 1]
        total += moves.cover_share[i] * ground.weight[through]
    return total


@njit(cache=True)
def source_fits(ground: Ground, rules: Rules, field: Field, cell: int, start: float) -> bool:
    """Whether a source may be used: on ground, not barred, under the ceiling, a better label than it has."""
    top = min(rules.cap_level, rules.ceiling_level - rules.ceiling_gradient * start)
    fits = start <= rules.longest and (not rules.has_ceiling or ground.level[cell] <= top)
    return fits and not field.flags[cell] & (BARRED | NO_GROUND) and start < field.length[cell]


@njit(cache=True)
def move_allowed(ground: Ground, moves: Moves, rules: Rules, field: Field, cell: int, move: int, length: float) -> bool:
    """Whether a move that stays on the grid keeps to every rule; cheap rules are looked at first."""
    if field.flags[cell] & CAREFUL and not is_open(ground, moves, field.flags, rules.bilinear, cell, move):
        return False
    if ground.blocked.size > 0 and (ground.blocked[cell] >> np.uint32(move)) & np.uint32(1):
        return False
    if not rules.has_ceiling:
        return True
    return under_ceiling(ground, moves, rules, cell, move, field.length[cell], length)


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
    stop, or make the pool larger. Within a call it lives in local variables: with the counters in memory, and
    the relaxing of edges in a function of its own, the search took three times as long.
    """
    head, pool_cell, pool_next, per_length = queue.head, queue.cell, queue.next, queue.per_length
    length, parent, flags = field.length, field.parent, field.flags
    level, plan = ground.level, ground.plan
    step, cols, rows, longest = moves.step, ground.cols, ground.rows, rules.longest
    ring = head.size - 1
    room = pool_cell.size - step.size - queue.source_cell.size
    high, ceiling, gradient, cap = ground.high, rules.ceiling_level, rules.ceiling_gradient, rules.cap_level
    weighted = ground.weight.size > 0
    has_ceiling, has_blocked, has_goal = rules.has_ceiling, ground.blocked.size > 0, rules.goal_row >= 0
    longest_to_goal = rules.longest * (1.0 + 1e-12)  # a route of exactly the longest length is kept
    bucket, live, free, used = state[BUCKET], state[LIVE], state[FREE], state[USED]
    source, targets = state[NEXT_SOURCE], state[TARGETS_LEFT]
    count = 0
    end = -1
    while end < 0:
        if live == 0 and source >= queue.source_cell.size:
            end = DONE
            break
        if live == 0:
            bucket = int(queue.source_start[source] * per_length)
        while source < queue.source_cell.size and int(queue.source_start[source] * per_length) <= bucket:
            cell, start = queue.source_cell[source], queue.source_start[source]
            source += 1
            if not source_fits(ground, rules, field, cell, start):
                continue
            length[cell], parent[cell] = start, PARENT_SOURCE
            entry = free if free >= 0 else used
            if free >= 0:
                free = pool_next[entry]
            else:
                used += 1
            slot = int(start * per_length) & ring
            pool_cell[entry], pool_next[entry] = cell, head[slot]
            head[slot] = entry
            live += 1
        slot_now = bucket & ring
        while head[slot_now] >= 0:
            if count >= budget or live > room:
                end = SLICE_OVER if count >= budget else POOL_SMALL
                break
            entry = head[slot_now]
            cell = pool_cell[entry]
            head[slot_now] = pool_next[entry]
            pool_next[entry] = free
            free = entry
            live -= 1
            if flags[cell] & SETTLED:
                continue
            flags[cell] |= SETTLED
            count += 1
            if flags[cell] & TARGET:
                targets -= 1
                if targets == 0:
                    end = TARGETS_MET
                    break
            row = cell // cols
            col = cell - row * cols
            here, from_level = length[cell], level[cell]
            careful = (flags[cell] & CAREFUL) != 0
            strict = careful or (has_blocked and ground.blocked[cell] != 0)
            for move in range(step.size):
                if careful:
                    row_to, col_to = row + moves.drow[move], col + moves.dcol[move]
                    if row_to < 0 or row_to >= rows or col_to < 0 or col_to >= cols:
                        continue
                to = cell + step[move]
                flat = plan[row, move]
                known = length[to]
                if known <= here + flat:  # no 3-D length can be below the plan length
                    continue
                rise = level[to] - from_level
                edge = np.sqrt(flat * flat + rise * rise)
                if weighted:
                    edge *= weight_along(ground, moves, cell, move)
                reached = here + edge
                if known <= reached or reached > longest:
                    continue
                if has_goal:  # leave out what even a straight line would make too long
                    across = (rules.goal_col - col - moves.dcol[move]) * rules.least_step_x
                    down = (rules.goal_row - row - moves.drow[move]) * rules.least_step_y
                    up = rules.goal_level - level[to]
                    if reached + np.sqrt(across * across + down * down + up * up) > longest_to_goal:
                        continue
                under = not has_ceiling or high[cell] <= min(cap, ceiling - gradient * reached)
                if (strict or not under) and not move_allowed(ground, moves, rules, field, cell, move, reached):
                    continue
                length[to], parent[to] = reached, move
                entry = free if free >= 0 else used
                if free >= 0:
                    free = pool_next[entry]
                else:
                    used += 1
                slot = int(reached * per_length) & ring
                pool_cell[entry], pool_next[entry] = to, head[slot]
                head[slot] = entry
                live += 1
        if end < 0:
            bucket += 1
    state[BUCKET], state[LIVE], state[FREE], state[USED] = bucket, live, free, used
    state[NEXT_SOURCE], state[TARGETS_LEFT] = source, targets
    state[SETTLED_CELLS] += count
    return end


@njit(cache=True)
def path_highs(
    ground: Ground, moves: Moves, bilinear: bool, cells: NDArray[np.intp], taken: NDArray[np.intp]
) -> NDArray[np.float64]:
    """Highest ground along each edge of a path: ``cells`` are the flat start cells, ``taken`` the moves."""
    highest = np.empty(taken.size)
    for i in range(taken.size):
        row = cells[i] // ground.cols
        col = cells[i] - row * ground.cols
        if bilinear:
            highest[i] = edge_high(ground, moves, row, col, taken[i], 0.0)
        else:
            highest[i] = crossed_high(ground, moves, row, col, taken[i])
    return highest


@njit(cache=True)
def path_tilted_highs(
    ground: Ground, moves: Moves, cells: NDArray[np.intp], taken: NDArray[np.intp], tilts: NDArray[np.float64]
) -> NDArray[np.float64]:
    """Highest bilinear ground along each edge of a path, lowered towards its start by its tilt (see `edge_high`)."""
    highest = np.empty(taken.size)
    for i in range(taken.size):
        row = cells[i] // ground.cols
        col = cells[i] - row * ground.cols
        highest[i] = edge_high(ground, moves, row, col, taken[i], tilts[i])
    return highest
