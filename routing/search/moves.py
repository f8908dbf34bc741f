"""The moves of a grid search and what each of them passes over.

A move is (rows, columns) from one cell centre to another with no centre between. Its segment runs over
bilinear patches (the squares between four cell centres) and over cells (the squares round the centres).
Both are worked out here once a move set, in plain Python with exact fractions, so that the kernels only
look them up.
"""

from __future__ import annotations

from fractions import Fraction
from functools import cache
from itertools import pairwise
from math import floor
from typing import Literal, NamedTuple

import numpy as np
from numpy.typing import NDArray

Neighbours = Literal[8, 16, 32]

#: One octant of each move set as (long, short): queen, + knight, + (3, 1) and (3, 2).
_FIRST_OCTANT = {8: ((1, 0), (1, 1)), 16: ((1, 0), (1, 1), (2, 1)), 32: ((1, 0), (1, 1), (2, 1), (3, 1), (3, 2))}


class MoveTable(NamedTuple):
    """A move set as arrays for the kernels.

    Attributes
    ----------
    drow, dcol : (m,) arrays
        The moves.
    piece_start : (m + 1,) array
        The pieces of move i are ``piece_start[i]:piece_start[i + 1]`` (none for moves along a grid line).
    piece_cell : (p, 2) array
        Row and column, relative to the start, of the first corner of the patch that a piece lies in.
    piece_ends : (p, 4) array
        Where the piece enters and leaves its patch, as (row, col, row, col) from 0 to 1.
    crossed_start, crossed : (m + 1,) and (c, 2) arrays
        Cells whose interior the move crosses, both end cells left out.
    corner_start, corner : (m + 1,) and (k, 4) arrays
        The other two cells at each corner that the move passes through exactly, as (row, col, row, col).
    cover_start, cover_cell, cover_share : (m + 1,), (c, 2) and (c,) arrays
        All cells that the move runs through, its ends included, and the share of its length in each.
    reach
        The longest row or column step of any move.
    """

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
    reach: int


def move_list(neighbours: Neighbours) -> list[tuple[int, int]]:
    """Return the moves as (rows, columns), sorted by bearing from east, counter-clockwise as rows grow.

    The order is the meaning of the bits in ``blocked_moves`` of `reach`.

    Raises
    ------
    ValueError
        If ``neighbours`` is not 8, 16 or 32.
    """
    if neighbours not in _FIRST_OCTANT:
        raise ValueError(f"neighbours is {neighbours!r}; allowed are 8, 16 and 32")
    moves = {
        (sign_row * row, sign_col * col)
        for long, short in _FIRST_OCTANT[neighbours]
        for row, col in ((long, short), (short, long))
        for sign_row in (-1, 1)
        for sign_col in (-1, 1)
    }
    return sorted(moves, key=lambda move: np.arctan2(move[0], move[1]) % (2 * np.pi))


def _cuts(move: tuple[int, int], offset: Fraction) -> list[Fraction]:
    """Shares of the move (0 and 1 included) at which it meets grid lines shifted by ``offset`` cells."""
    shares = {Fraction(0), Fraction(1)}
    for step in move:
        for line in range(-4, 5):
            if step != 0:
                share = (line + offset) / Fraction(step)
                if 0 < share < 1:
                    shares.add(share)
    return sorted(shares)


def _pieces(move: tuple[int, int]) -> list[tuple[tuple[int, int], tuple[Fraction, ...]]]:
    """Patches that a move runs through, with its entry and exit in each."""
    if 0 in move:
        return []
    shares = _cuts(move, Fraction(0))
    found = []
    for start, end in pairwise(shares):
        middle = (start + end) / 2
        cell = (floor(move[0] * middle), floor(move[1] * middle))
        ends = tuple(move[axis] * share - cell[axis] for share in (start, end) for axis in (0, 1))
        found.append((cell, ends))
    return found


def _cover(move: tuple[int, int]) -> list[tuple[tuple[int, int], Fraction]]:
    """Cells that a move runs through, each with the share of the move in it."""
    half = Fraction(1, 2)
    found = []
    for start, end in pairwise(_cuts(move, half)):
        middle = (start + end) / 2
        cell = (floor(move[0] * middle + half), floor(move[1] * middle + half))
        found.append((cell, end - start))
    return found


def _crossed(move: tuple[int, int]) -> list[tuple[int, int]]:
    """Cells whose interior a move crosses, without its end cells."""
    return [cell for cell, _ in _cover(move) if cell not in {(0, 0), move}]


def _corners(move: tuple[int, int]) -> list[tuple[int, int, int, int]]:
    """For each corner passed through exactly, the two cells there that the move does not enter."""
    half = Fraction(1, 2)
    found = []
    for share in _cuts(move, half)[1:-1]:
        row, col = move[0] * share, move[1] * share
        if (row - half).denominator == 1 and (col - half).denominator == 1:
            rows, cols = (floor(row), floor(row) + 1), (floor(col), floor(col) + 1)
            if (move[0] > 0) == (move[1] > 0):
                found.append((rows[0], cols[1], rows[1], cols[0]))
            else:
                found.append((rows[0], cols[0], rows[1], cols[1]))
    return found


def _starts(groups: list[list[tuple[int, ...]]]) -> NDArray[np.intp]:
    return np.cumsum([0, *(len(group) for group in groups)], dtype=np.intp)


@cache
def move_table(neighbours: Neighbours) -> MoveTable:
    """Return the move set with 8, 16 or 32 neighbours as arrays.

    Raises
    ------
    ValueError
        If ``neighbours`` is not 8, 16 or 32.
    """
    moves = move_list(neighbours)
    pieces = [_pieces(move) for move in moves]
    crossed = [_crossed(move) for move in moves]
    corners = [_corners(move) for move in moves]
    cover = [_cover(move) for move in moves]
    return MoveTable(
        drow=np.array([move[0] for move in moves], dtype=np.intp),
        dcol=np.array([move[1] for move in moves], dtype=np.intp),
        piece_start=np.cumsum([0, *(len(group) for group in pieces)], dtype=np.intp),
        piece_cell=np.array([cell for group in pieces for cell, _ in group], dtype=np.intp),
        piece_ends=np.array([[float(v) for v in ends] for group in pieces for _, ends in group], dtype=np.float64),
        crossed_start=_starts([list(group) for group in crossed]),
        crossed=np.array([cell for group in crossed for cell in group], dtype=np.intp).reshape(-1, 2),
        corner_start=_starts([list(group) for group in corners]),
        corner=np.array([pair for group in corners for pair in group], dtype=np.intp).reshape(-1, 4),
        cover_start=np.cumsum([0, *(len(group) for group in cover)], dtype=np.intp),
        cover_cell=np.array([cell for group in cover for cell, _ in group], dtype=np.intp),
        cover_share=np.array([float(share) for group in cover for _, share in group], dtype=np.float64),
        reach=max(abs(step) for move in moves for step in move),
    )
