"""The bilinear ground through the cell centres, told apart from nodata and from outside."""

from __future__ import annotations

from enum import IntEnum

import numpy as np
from numpy.typing import ArrayLike, NDArray

from routing.records import Cell, FloatArray, Terrain

StateArray = NDArray[np.uint8]

# Map coordinates carry some 1e-9 of a cell of rounding; a level moves by less than a millimetre over this.
_SNAP_CELLS = 1e-6


class SampleState(IntEnum):
    """What a sample lies on."""

    VALID = 0
    NODATA = 1
    OUTSIDE = 2


def sample(terrain: Terrain, x: ArrayLike, y: ArrayLike) -> tuple[FloatArray, StateArray]:
    """Sample the bilinear ground at map positions.

    Parameters
    ----------
    terrain
        Ground of the window.
    x, y
        Positions in the DEM's CRS, of any one shape.

    Returns
    -------
    level_m : array of that shape
        Level in metres; NaN where there is none.
    state : array of that shape
        ``SampleState``: valid, nodata (a corner that bears weight holds no ground), or outside the cell
        centres of the window.
    """
    row, col = rowcol_of(terrain, x, y)
    return sample_rowcol(terrain, row, col)


def sample_rowcol(terrain: Terrain, row: ArrayLike, col: ArrayLike) -> tuple[FloatArray, StateArray]:
    """Sample the bilinear ground at places counted in cells, cell centres at whole numbers.

    Within the patch between four neighbouring centres, at parts (u, v) of the way,
    ``z = (1-u)(1-v) z00 + (1-u) v z01 + u (1-v) z10 + u v z11``. A corner without weight is not looked at, so
    that a place on the line between two valid centres is valid whatever lies beside it.

    Parameters
    ----------
    terrain
        Ground of the window.
    row, col
        Places in the window, of any one shape.

    Returns
    -------
    level_m, state
        As for ``sample``.
    """
    r, c = np.broadcast_arrays(_snapped(row), _snapped(col))
    rows, cols = terrain.shape
    inside = (r >= 0.0) & (r <= rows - 1.0) & (c >= 0.0) & (c <= cols - 1.0)
    r, c = np.where(inside, r, 0.0), np.where(inside, c, 0.0)
    top, left = np.floor(r).astype(np.intp), np.floor(c).astype(np.intp)
    u, v = r - top, c - left
    bottom, right = np.minimum(top + 1, rows - 1), np.minimum(left + 1, cols - 1)
    level = np.zeros(r.shape)
    sound = np.ones(r.shape, dtype=np.bool_)
    corners = (
        (top, left, (1.0 - u) * (1.0 - v)),
        (top, right, (1.0 - u) * v),
        (bottom, left, u * (1.0 - v)),
        (bottom, right, u * v),
    )
    for at_row, at_col, weight in corners:
        level += weight * terrain.elevation_m[at_row, at_col]
        sound &= terrain.valid[at_row, at_col] | (weight == 0.0)
    state = np.where(inside, np.where(sound, SampleState.VALID, SampleState.NODATA), SampleState.OUTSIDE)
    return np.where(state == SampleState.VALID, level, np.nan), state.astype(np.uint8)


def rowcol_of(terrain: Terrain, x: ArrayLike, y: ArrayLike) -> tuple[FloatArray, FloatArray]:
    """Return map positions as places counted in cells of the window, cell centres at whole numbers.

    Parameters
    ----------
    terrain
        Ground of the window.
    x, y
        Positions in the DEM's CRS, of any one shape.
    """
    a, _, c, _, e, f = terrain.transform
    col = (np.asarray(x, dtype=np.float64) - c) / a - 0.5
    row = (np.asarray(y, dtype=np.float64) - f) / e - 0.5
    return row, col


def xy_of(terrain: Terrain, row: ArrayLike, col: ArrayLike) -> tuple[FloatArray, FloatArray]:
    """Return places counted in cells of the window as map positions in the DEM's CRS.

    Parameters
    ----------
    terrain
        Ground of the window.
    row, col
        Places in the window, of any one shape.
    """
    a, _, c, _, e, f = terrain.transform
    x = c + a * (np.asarray(col, dtype=np.float64) + 0.5)
    y = f + e * (np.asarray(row, dtype=np.float64) + 0.5)
    return x, y


def cell_at(terrain: Terrain, x: float, y: float) -> Cell | None:
    """Return the cell of the window that holds a map position, or ``None`` where none does.

    Parameters
    ----------
    terrain
        Ground of the window.
    x, y
        Position in the DEM's CRS.
    """
    row, col = rowcol_of(terrain, x, y)
    rows, cols = terrain.shape
    if not (-0.5 <= row <= rows - 0.5 and -0.5 <= col <= cols - 0.5):
        return None
    return Cell(min(int(row + 0.5), rows - 1), min(int(col + 0.5), cols - 1))


def _snapped(place: ArrayLike) -> FloatArray:
    exact = np.asarray(place, dtype=np.float64)
    near = np.rint(exact)
    return np.where(np.abs(exact - near) < _SNAP_CELLS, near, exact)
