"""The search again, as plainly as it can be said: dictionaries, a heap, one edge at a time.

Nothing here is shared with routing.search: crossed cells and patches come from cutting the segment at every
grid line with exact fractions, and the highest ground of a patch piece from a parabola through three points.
"""

import heapq
import math
from fractions import Fraction
from itertools import pairwise

import numpy as np

MOVES = {
    8: [(r, c) for r in (-1, 0, 1) for c in (-1, 0, 1) if (r, c) != (0, 0)],
    16: [(r, c) for r in range(-2, 3) for c in range(-2, 3) if math.gcd(r, c) == 1],
    32: [(r, c) for r in range(-3, 4) for c in range(-3, 4) if math.gcd(r, c) == 1],
}


def _shares(move, offset):
    """Shares of the way at which a move from (0, 0) meets lines ``offset`` beside whole rows and columns."""
    lines = [k + offset for k in range(-4, 5)]
    found = {Fraction(0), Fraction(1)} | {line / Fraction(m) for m in move if m for line in lines}
    return sorted(s for s in found if 0 <= s <= 1)


def crossed_cells(move):
    half = Fraction(1, 2)
    spans = pairwise(_shares(move, half))
    mids = [(a + b) / 2 for a, b in spans]
    return [(math.floor(move[0] * s + half), math.floor(move[1] * s + half)) for s in mids]


def corners(move):
    """Pairs of cells on both sides of each corner that the move passes exactly."""
    pairs = []
    cells = crossed_cells(move)
    for one, other in pairwise(cells):
        if one[0] != other[0] and one[1] != other[1]:
            pairs.append(((one[0], other[1]), (other[0], one[1])))
    return pairs


def bilinear(ground, patch, row, col):
    """Bilinear ground at a place in the patch whose first corner is given."""
    y, x = float(row - patch[0]), float(col - patch[1])
    near, far = ground[patch[0]], ground[patch[0] + 1]
    upper = near[patch[1]] * (1 - x) + near[patch[1] + 1] * x
    lower = far[patch[1]] * (1 - x) + far[patch[1] + 1] * x
    return upper * (1 - y) + lower * y


def patches(move):
    """First corners of the patches that a move runs through (none along a grid line)."""
    if 0 in move:
        return []
    mids = [(a + b) / 2 for a, b in pairwise(_shares(move, 0))]
    return [(math.floor(move[0] * s), math.floor(move[1] * s)) for s in mids]


def highest_bilinear(ground, start, move):
    if 0 in move:
        return max(ground[start], ground[start[0] + move[0], start[1] + move[1]])
    best = -math.inf
    for a, b in pairwise(_shares(move, 0)):
        at = [(start[0] + move[0] * s, start[1] + move[1] * s) for s in (a, (a + b) / 2, b)]
        patch = (math.floor(at[1][0]), math.floor(at[1][1]))
        left, middle, right = (bilinear(ground, patch, *place) for place in at)
        best = max(best, left, right)
        bend = left + right - 2 * middle
        if bend < -1e-12:
            peak = 0.5 * (left - right) / (2 * bend)
            if abs(peak) <= 0.5:
                best = max(best, middle + (right - left) * peak + 2 * bend * peak * peak)
    return best


def edge(ground, steps, start, move, barred, rule):
    """Return (length, highest ground) of an edge, or None where it is not allowed."""
    end = (start[0] + move[0], start[1] + move[1])
    rows, cols = ground.shape
    if not (0 <= end[0] < rows and 0 <= end[1] < cols):
        return None
    wall = barred | np.isnan(ground)
    visited = [(start[0] + r, start[1] + c) for r, c in crossed_cells(move)]
    if any(wall[cell] for cell in visited):
        return None
    for one, other in corners(move):
        if wall[start[0] + one[0], start[1] + one[1]] and wall[start[0] + other[0], start[1] + other[1]]:
            return None
    if rule == "bilinear":
        for r, c in patches(move):
            if np.isnan(ground[start[0] + r : start[0] + r + 2, start[1] + c : start[1] + c + 2]).any():
                return None
        high = highest_bilinear(ground, start, move)
    else:
        high = max(ground[cell] for cell in visited)
    step_x, step_y = steps
    across = move[1] * 0.5 * (step_x[start[0]] + step_x[end[0]])
    down = move[0] * 0.5 * (step_y[start[0]] + step_y[end[0]])
    return math.sqrt(across**2 + down**2 + (ground[end] - ground[start]) ** 2), high


def shortest(
    ground,
    step_x,
    step_y,
    sources,
    *,
    starts=None,
    barred=None,
    neighbours=16,
    rule="bilinear",
    level=math.inf,
    gradient=0.0,
    longest=math.inf,
    blocked=frozenset(),
):
    """Return {cell: length} by Dijkstra's method with a heap."""
    rows = ground.shape[0]
    steps = (np.broadcast_to(step_x, rows), np.broadcast_to(step_y, rows))
    barred = np.zeros(ground.shape, dtype=bool) if barred is None else barred
    labels, heap = {}, []
    for cell, start in zip(sources, starts or [0.0] * len(sources), strict=True):
        if not barred[cell] and ground[cell] <= level - gradient * start and start <= longest:
            heapq.heappush(heap, (start, cell))
    while heap:
        length, cell = heapq.heappop(heap)
        if cell in labels:
            continue
        labels[cell] = length
        for move in MOVES[neighbours]:
            if (cell, move) in blocked:
                continue
            found = edge(ground, steps, cell, move, barred, rule)
            if found is None:
                continue
            far = length + found[0]
            end = (cell[0] + move[0], cell[1] + move[1])
            if end not in labels and far <= longest and found[1] <= level - gradient * far:
                heapq.heappush(heap, (far, end))
    return labels


def along_edge(ground, start, move, length, parts=96):
    """Return (length, ground) at many places of an edge, the start left out."""
    if 0 in move:
        shares = np.array([1.0])
        return shares * length, np.array([ground[start[0] + move[0], start[1] + move[1]]])
    lengths, levels = [], []
    for a, b in pairwise(_shares(move, 0)):
        middle = (a + b) / 2
        patch = (math.floor(start[0] + move[0] * middle), math.floor(start[1] + move[1] * middle))
        for share in np.linspace(float(a), float(b), parts):
            lengths.append(share * length)
            levels.append(bilinear(ground, patch, start[0] + move[0] * share, start[1] + move[1] * share))
    return np.array(lengths), np.array(levels)


def simple_paths_along(ground, steps, source, goal, neighbours):
    """Yield every simple path as (lengths, ground) at many places along it, and its whole length."""
    barred = np.zeros(ground.shape, dtype=bool)
    onward = {}
    for cell in np.ndindex(*ground.shape):
        onward[cell] = []
        for move in MOVES[neighbours]:
            found = edge(ground, steps, cell, move, barred, "bilinear")
            if found is not None:
                end = (cell[0] + move[0], cell[1] + move[1])
                onward[cell].append((end, found[0], *along_edge(ground, cell, move, found[0])))

    def grow(cell, seen, length, lengths, levels):
        if cell == goal:
            yield np.concatenate(lengths), np.concatenate(levels), length
            return
        for end, step, at, level in onward[cell]:
            if end not in seen:
                yield from grow(end, seen | {end}, length + step, [*lengths, length + at], [*levels, level])

    yield from grow(source, {source}, 0.0, [np.zeros(1)], [np.array([ground[source]])])


def simple_paths(ground, steps, source, goal, neighbours, rule):
    """Yield every simple path as (lengths at far ends, highest ground of edges), source entry first."""
    barred = np.zeros(ground.shape, dtype=bool)
    onward = {}
    for cell in np.ndindex(*ground.shape):
        edges = ((move, edge(ground, steps, cell, move, barred, rule)) for move in MOVES[neighbours])
        onward[cell] = [((cell[0] + m[0], cell[1] + m[1]), *found) for m, found in edges if found is not None]

    def grow(cell, seen, lengths, highs):
        if cell == goal:
            yield np.array(lengths), np.array(highs)
            return
        for end, length, high in onward[cell]:
            if end not in seen:
                yield from grow(end, seen | {end}, [*lengths, lengths[-1] + length], [*highs, high])

    yield from grow(source, {source}, [0.0], [ground[source]])
