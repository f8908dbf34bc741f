"""Moves over gaps: those through a bilinear patch that has a cell without ground at a corner.

The bilinear rule never takes such a move. The rule that looks at cells only would, past the corner of a gap; where a
long section is to be drawn along the path, these moves have to be blocked for it too.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from routing.records import BoolArray
from routing.search.moves import Neighbours, move_table


def moves_over_gaps(valid: BoolArray, neighbours: Neighbours) -> NDArray[np.uint32]:
    """Return the moves from each cell that run through a patch with a corner that holds no ground.

    Parameters
    ----------
    valid : (rows, cols) bool array
        Cells that hold ground.
    neighbours
        The move set.

    Returns
    -------
    (rows, cols) uint32 array
        A bit a move, as `prepare_grid` takes them. Moves off the grid are left out.
    """
    rows, cols = valid.shape
    bits = np.zeros(valid.shape, dtype=np.uint32)
    if rows < 2 or cols < 2:
        return bits
    spoilt = ~(valid[:-1, :-1] & valid[:-1, 1:] & valid[1:, :-1] & valid[1:, 1:])
    table = move_table(neighbours)
    for move in range(table.drow.size):
        for piece in range(table.piece_start[move], table.piece_start[move + 1]):
            down, right = (int(step) for step in table.piece_cell[piece])
            first_row, last_row = max(0, -down), min(rows, rows - 1 - down)
            first_col, last_col = max(0, -right), min(cols, cols - 1 - right)
            if first_row >= last_row or first_col >= last_col:
                continue
            patch = spoilt[first_row + down : last_row + down, first_col + right : last_col + right]
            bits[first_row:last_row, first_col:last_col] |= patch.astype(np.uint32) << np.uint32(move)
    return bits
