"""The compiled two-marker flooding: which of two seeds each cell belongs to, and so where the divide runs."""

from __future__ import annotations

import numpy as np
from numba import njit
from numpy.typing import NDArray

#: Heights are sorted into this many ranks: a centimetre on 650 m of relief.
RANKS = 65_536
NOBODY = 0


@njit(cache=True)
def spread_marks(rank: NDArray[np.uint16], mark: NDArray[np.uint8], open_cell: NDArray[np.bool_], cols: int) -> None:
    """Grow the marks over the open cells in rising order of rank; what is met first keeps a cell.

    Cells wait in one list a rank; the lowest list is drained first, and a cell lower than the one it is met from
    waits in the list at hand (it is flooded at once), so each cell is looked at once.
    """
    rows = rank.size // cols
    head = np.full(RANKS, -1, dtype=np.int32)
    tail = np.full(RANKS, -1, dtype=np.int32)  # first in, first out: flats are shared from both sides
    after = np.full(rank.size, -1, dtype=np.int32)
    for cell in range(rank.size):
        if mark[cell] != NOBODY:
            slot = rank[cell]
            if head[slot] < 0:
                head[slot] = cell
            else:
                after[tail[slot]] = cell
            tail[slot] = cell
    at = 0
    while at < RANKS:
        cell = head[at]
        if cell < 0:
            at += 1
            continue
        head[at] = after[cell]
        row = cell // cols
        col = cell - row * cols
        for row_to in range(max(row - 1, 0), min(row + 2, rows)):
            for col_to in range(max(col - 1, 0), min(col + 2, cols)):
                to = row_to * cols + col_to
                if mark[to] != NOBODY or not open_cell[to]:
                    continue
                mark[to] = mark[cell]
                slot = max(at, int(rank[to]))
                after[to] = -1
                if head[slot] < 0:
                    head[slot] = to
                else:
                    after[tail[slot]] = to
                tail[slot] = to
