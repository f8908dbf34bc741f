"""Which cells and which moves of a grid meet the interior of a shape: exact, by shapely, near its outline only.

Exact means: decided by robust predicates on the very coordinates of shape and cell centres, with no tolerance. A centre
or a move that only touches the outline is free.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import shapely
from numpy.typing import NDArray
from shapely import MultiPolygon, Polygon

from routing.records import BoolArray, Terrain
from routing.terrain.sampling import rowcol_of, xy_of

_FOUR = np.array([[0, 1, 0], [1, 1, 1], [0, 1, 0]], dtype=np.bool_)
# Segments tested at once: about 30 MB of shapely objects.
_BLOCK = 100_000


@dataclass(frozen=True, slots=True)
class Overlay:
    """A shape on the cells of a window.

    ``inside`` and ``near`` are (rows, cols) masks: centre in the interior; outline within reach of a move.
    """

    shape: Polygon | MultiPolygon
    inside: BoolArray
    near: BoolArray


def lay_over(terrain: Terrain, shape: Polygon | MultiPolygon, reach: int = 0) -> Overlay:
    """Lay a shape over the cells of a window.

    Parameters
    ----------
    terrain
        Ground of the window.
    shape
        Valid polygon or multipolygon in the DEM's CRS.
    reach
        Longest row or column step of a move, in cells.
    """
    from scipy import ndimage  # noqa: PLC0415 - slow to import, and most sites have no zones

    shapely.prepare(shape)
    near = _near_outline(terrain, shape, reach)
    inside = np.zeros(terrain.shape, dtype=np.bool_)
    inside[near] = _centres_inside(terrain, shape, *np.nonzero(near))
    # No outline runs between neighbours that are not near it: a whole region of them lies inside or outside.
    regions, count = ndimage.label(~near, structure=_FOUR)
    if count:
        _, first = np.unique(regions, return_index=True)
        rows, cols = np.unravel_index(first[-count:], regions.shape)
        full = np.concatenate([[False], _centres_inside(terrain, shape, rows, cols)])
        inside |= full[regions]
    return Overlay(shape, inside, near)


def _near_outline(terrain: Terrain, shape: Polygon | MultiPolygon, reach: int) -> BoolArray:
    """Return the cells from which a move could meet the outline: those within ``reach`` and one cell of it."""
    from scipy import ndimage  # noqa: PLC0415

    a, _, _, _, e, _ = terrain.transform
    rows, cols = terrain.shape
    corner, far = xy_of(terrain, rows + 0.5, -1.5), xy_of(terrain, -1.5, cols + 0.5)
    outline = shapely.clip_by_rect(shape.boundary, float(corner[0]), float(corner[1]), float(far[0]), float(far[1]))
    hit = np.zeros(terrain.shape, dtype=np.bool_)
    # Points half a cell apart: every point of the outline has one in its own cell or in one beside it.
    points = shapely.get_coordinates(shapely.segmentize(outline, 0.5 * min(abs(a), abs(e))))
    at_row, at_col = (np.rint(place).astype(np.intp) for place in rowcol_of(terrain, points[:, 0], points[:, 1]))
    hit[np.clip(at_row, 0, rows - 1), np.clip(at_col, 0, cols - 1)] = True
    near: BoolArray = ndimage.maximum_filter(hit, size=2 * (reach + 1) + 1, mode="constant", cval=False)
    return near


def _centres_inside(
    terrain: Terrain, shape: Polygon | MultiPolygon, rows: NDArray[np.intp], cols: NDArray[np.intp]
) -> BoolArray:
    found: BoolArray = shapely.contains_xy(shape, *xy_of(terrain, rows, cols))
    return found


def blocked_by(terrain: Terrain, overlay: Overlay, moves: list[tuple[int, int]]) -> NDArray[np.uint32]:
    """Return the moves whose segment, straight from centre to centre, meets the interior of a shape.

    Parameters
    ----------
    terrain
        Ground of the window.
    overlay
        The shape, laid over with the reach of the moves.
    moves
        At most 32 moves as (rows, columns).

    Returns
    -------
    (rows, cols) uint32 array
        Bit i for ``moves[i]``. Moves off the window are left out.
    """
    bits = np.zeros(terrain.shape, dtype=np.uint32)
    number_of = {move: number for number, move in enumerate(moves)}
    for number, move in enumerate(moves):
        back = number_of.get((-move[0], -move[1]))
        if back is not None and back < number:
            continue  # done with its reverse: one segment, two moves
        start, end = _starts_and_ends(terrain.shape, move)
        clips = _clips(terrain, overlay, move, (start, end))
        bits[start] |= clips.astype(np.uint32) << np.uint32(number)
        if back is not None:
            bits[end] |= clips.astype(np.uint32) << np.uint32(back)
    return bits


def _starts_and_ends(shape: tuple[int, int], move: tuple[int, int]) -> tuple[tuple[slice, slice], tuple[slice, slice]]:
    """Return the cells that a move may begin at, and those that it then ends at."""
    starts, ends = [], []
    for size, step in zip(shape, move, strict=True):
        first, last = max(0, -step), max(0, -step, min(size, size - step))
        starts.append(slice(first, last))
        ends.append(slice(first + step, last + step))
    return (starts[0], starts[1]), (ends[0], ends[1])


def _clips(
    terrain: Terrain, overlay: Overlay, move: tuple[int, int], at: tuple[tuple[slice, slice], tuple[slice, slice]]
) -> BoolArray:
    """Return for each start whether the move from it meets the interior."""
    start, end = at
    clips: BoolArray = overlay.inside[start] | overlay.inside[end]
    rows, cols = np.nonzero(overlay.near[start] & ~clips)
    row_0, col_0 = start[0].start, start[1].start
    for first in range(0, rows.size, _BLOCK):
        row, col = rows[first : first + _BLOCK], cols[first : first + _BLOCK]
        tail = np.column_stack(xy_of(terrain, row + row_0, col + col_0))
        head = np.column_stack(xy_of(terrain, row + row_0 + move[0], col + col_0 + move[1]))
        clips[row, col] = meets_interior(overlay.shape, shapely.linestrings(np.stack([tail, head], axis=1)))
    return clips


def meets_interior(shape: Polygon | MultiPolygon, lines: NDArray[np.object_]) -> BoolArray:
    """Return whether lines meet the interior of a shape; touching its outline is not enough.

    Parameters
    ----------
    shape
        Prepared polygon or multipolygon.
    lines
        Array of lines.
    """
    meets = np.asarray(shapely.intersects(shape, lines))
    if meets.any():
        meets[meets] = ~shapely.touches(shape, lines[meets])
    return meets
