"""Long sections: the bilinear ground along a line, with its highest and lowest points hit exactly."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from routing.errors import Problem, TerrainError
from routing.records import FloatArray, GroundLine, Terrain
from routing.terrain.sampling import SampleState, rowcol_of, sample_rowcol, xy_of

IndexArray = NDArray[np.intp]

_TINY_CELLS = 1e-9
_TINY_RISE_M = 1e-9
_WHY = {
    SampleState.NODATA: ("ground without data", "go round it, or fill the gap in the DEM"),
    SampleState.OUTSIDE: ("outside the part of the DEM that was read", "keep the line on the DEM"),
}


@dataclass(frozen=True, slots=True)
class _Legs:
    """Straight legs in cells: from (row, col) by (by_row, by_col), each of ``length`` cells."""

    row: FloatArray
    col: FloatArray
    by_row: FloatArray
    by_col: FloatArray
    length: FloatArray

    def place(self, leg: IndexArray, part: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Return row and column at a part of the way along each leg.

        Parameters
        ----------
        leg
            (n,) numbers of legs.
        part
            (n,) parts of the way along each.
        """
        return self.row[leg] + part * self.by_row[leg], self.col[leg] + part * self.by_col[leg]


def long_section(terrain: Terrain, cells: NDArray[np.integer], most_spacing_cells: float = 0.5) -> GroundLine:
    """Return the long section of a path over cell centres.

    Parameters
    ----------
    terrain
        Ground of the window.
    cells
        (n, 2) integer array: row and column in the window. Straight legs join them; any move is right.
    most_spacing_cells
        Samples are at most this far apart, in cells.

    Returns
    -------
    GroundLine
        Sampled at every cell, at every crossing of a line between cell centres, at the highest or lowest point
        inside each patch, and between. Chainage is 3-D ground length, strictly rising from 0.

    Raises
    ------
    TerrainError
        If the path has no length, or meets ground without data.
    """
    path = np.asarray(cells, dtype=np.float64)
    return _section(terrain, path[:, 0], path[:, 1], most_spacing_cells)


def ground_along(terrain: Terrain, x: ArrayLike, y: ArrayLike, most_spacing_cells: float = 0.5) -> GroundLine:
    """Return the long section of any polyline.

    Parameters
    ----------
    terrain
        Ground of the window.
    x, y
        (n,) arrays: its vertices in the DEM's CRS.
    most_spacing_cells
        Samples are at most this far apart, in cells.

    Returns
    -------
    GroundLine
        Sampled as by ``long_section``.

    Raises
    ------
    TerrainError
        If the line has no length, or leaves the ground that holds data.
    """
    row, col = rowcol_of(terrain, x, y)
    return _section(terrain, row, col, most_spacing_cells)


def _section(terrain: Terrain, row: FloatArray, col: FloatArray, most_spacing_cells: float) -> GroundLine:
    legs = _legs(row, col)
    leg, start, end = _pieces(legs)
    piece, part = _places_within(terrain, legs, (leg, start, end), most_spacing_cells)
    at_row, at_col = legs.place(leg[piece], start[piece] + part * (end - start)[piece])
    at_row, at_col = np.append(at_row, row[-1]), np.append(at_col, col[-1])
    level = _levels_at(terrain, at_row, at_col)
    x, y = xy_of(terrain, at_row, at_col)
    return GroundLine(x=x, y=y, chainage_m=_chainage(terrain, at_row, at_col, level), ground_m=level)


def _legs(row: FloatArray, col: FloatArray) -> _Legs:
    by_row, by_col = np.diff(row), np.diff(col)
    length = np.hypot(by_row, by_col)
    moves = length > _TINY_CELLS
    if not moves.any():
        raise TerrainError(
            Problem(
                "A long section needs a line with a length.",
                found=f"{row.size} points at one place",
                allowed="two different points at least",
                remedy="give a line from the intake to the outlet",
            )
        )
    return _Legs(row[:-1][moves], col[:-1][moves], by_row[moves], by_col[moves], length[moves])


def _crossings(start: FloatArray, by: FloatArray) -> tuple[IndexArray, FloatArray]:
    """Return (leg, part of the way) where legs cross whole numbers of a coordinate, ends left out."""
    stop = start + by
    first = np.floor(np.minimum(start, stop)) + 1.0
    count = np.maximum(np.ceil(np.maximum(start, stop)) - first, 0.0).astype(np.intp)
    leg = np.repeat(np.arange(start.size), count)
    within = np.arange(leg.size) - np.repeat(np.cumsum(count) - count, count)
    return leg, (first[leg] + within - start[leg]) / by[leg]


def _pieces(legs: _Legs) -> tuple[IndexArray, FloatArray, FloatArray]:
    """Cut legs where they pass from patch to patch; return leg, start and end (parts of the leg) of each piece."""
    row_leg, row_part = _crossings(legs.row, legs.by_row)
    col_leg, col_part = _crossings(legs.col, legs.by_col)
    every = np.arange(legs.row.size)
    leg = np.concatenate([every, row_leg, col_leg])
    part = np.concatenate([np.zeros(every.size), row_part, col_part])
    leg, part = _in_order(leg, part, legs.length)
    last = np.append(leg[1:] != leg[:-1], True)
    end = np.where(last, 1.0, np.append(part[1:], 1.0))
    return leg, part, end


def _in_order(owner: IndexArray, part: FloatArray, length: FloatArray) -> tuple[IndexArray, FloatArray]:
    """Sort places by owner and part; drop those that repeat the place before, or the owner's end."""
    order = np.lexsort((part, owner))
    owner, part = owner[order], part[order]
    tiny = _TINY_CELLS / length[owner]
    repeats = np.append(False, (owner[1:] == owner[:-1]) & (np.diff(part) < tiny[1:]))
    kept = ~repeats & (part < 1.0 - tiny)
    return owner[kept], part[kept]


def _places_within(
    terrain: Terrain, legs: _Legs, pieces: tuple[IndexArray, FloatArray, FloatArray], most_spacing_cells: float
) -> tuple[IndexArray, FloatArray]:
    """Return the sample places of all pieces: (piece, part of the piece), its end left out.

    Along a straight line within one patch the bilinear ground is a quadratic ``z(s) = z0 + B s + A s^2``, given by
    its ends and its middle; its turning point is at ``s = -B / 2A``.
    """
    leg, start, end = pieces
    z0 = _levels_at(terrain, *legs.place(leg, start))
    zm = _levels_at(terrain, *legs.place(leg, 0.5 * (start + end)))
    z1 = _levels_at(terrain, *legs.place(leg, end))
    A = 2.0 * (z0 + z1 - 2.0 * zm)
    B = z1 - z0 - A
    turn = np.divide(-B, 2.0 * A, out=np.full(A.shape, -1.0), where=A != 0.0)
    # The ground between the turning point and the nearer end differs by A s^2 there: below that it is rounding.
    turns = np.flatnonzero((turn > 0.0) & (turn < 1.0) & (np.abs(A) * np.minimum(turn, 1.0 - turn) ** 2 > _TINY_RISE_M))
    length = legs.length[leg] * (end - start)
    count = np.maximum(np.ceil(length / most_spacing_cells - _TINY_CELLS), 1.0).astype(np.intp)
    piece = np.repeat(np.arange(leg.size), count)
    step = np.arange(piece.size) - np.repeat(np.cumsum(count) - count, count)
    return _in_order(np.concatenate([piece, turns]), np.concatenate([step / count[piece], turn[turns]]), length)


def _levels_at(terrain: Terrain, row: FloatArray, col: FloatArray) -> FloatArray:
    level, state = sample_rowcol(terrain, row, col)
    if state.any():
        first = int(np.argmax(state != SampleState.VALID))
        what, remedy = _WHY[SampleState(int(state[first]))]
        x, y = xy_of(terrain, row[first], col[first])
        raise TerrainError(
            Problem(
                f"The line meets {what}.",
                found=f"first at x {float(x):.10g}, y {float(y):.10g}; {np.count_nonzero(state)} samples in all",
                allowed="ground with elevations all along the line",
                remedy=remedy,
                file=terrain.facts.file,
            )
        )
    return level


def _chainage(terrain: Terrain, row: FloatArray, col: FloatArray, level: FloatArray) -> FloatArray:
    """Sum 3-D lengths, the steps taken between the rows that a piece lies between."""
    middle = 0.5 * (row[1:] + row[:-1])
    rows = np.arange(terrain.step_x_m.size)
    along = np.diff(col) * np.interp(middle, rows, terrain.step_x_m)
    across = np.diff(row) * np.interp(middle, rows, terrain.step_y_m)
    length = np.sqrt(along**2 + across**2 + np.diff(level) ** 2)
    return np.concatenate([[0.0], np.cumsum(length)])
