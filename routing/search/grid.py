"""The gatekeeper: turns heights, masks and steps into one checked record that every kernel trusts."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from routing.errors import InputError, Problem
from routing.records import BoolArray, FloatArray
from routing.search.compiling import use_cache_folder
from routing.search.moves import Neighbours, move_table

use_cache_folder()

from routing.search import kernel  # noqa: E402 - numba must know its cache folder before it is imported

_LARGEST_CELLS = 2**31 - 1  # cells are numbered by int32 in the queue
# A bucket must be narrower than the shortest edge, and by more than rounding can make of it.
_BUCKET_SHARE = 1.0 - 1e-9


@dataclass(frozen=True, slots=True)
class Grid:
    """Ground that is ready to be searched, however often.

    Attributes
    ----------
    ground, moves
        Arrays for the kernels.
    flags : (cells,) uint8 array
        Barred cells, cells without ground, and cells that need care.
    level : (rows, cols) float64 array
        Ground level; without meaning where there is no ground.
    has_ground : (rows, cols) bool array
        Where there is ground.
    step_x_m, step_y_m : (rows,) arrays
        Steps, one value a row.
    neighbours
        The move set.
    """

    ground: kernel.Ground
    moves: kernel.Moves
    flags: NDArray[np.uint8]
    level: FloatArray
    has_ground: BoolArray
    step_x_m: FloatArray
    step_y_m: FloatArray
    neighbours: Neighbours

    @property
    def shape(self) -> tuple[int, int]:
        """Rows and columns."""
        return self.ground.rows, self.ground.cols

    @property
    def least_step_m(self) -> float:
        """Shortest step of any row: no edge is shorter."""
        return float(min(self.step_x_m.min(), self.step_y_m.min()))

    @property
    def reach(self) -> int:
        """Longest row or column step of any move."""
        return int(np.abs(self.moves.drow).max())

    def straight_m(self, one: tuple[int, int], other: tuple[int, int]) -> float:
        """Return a 3-D length in m that no line between two cell centres falls short of.

        Where all rows have the same steps it is the straight distance. Else a line may stray to rows of smaller steps,
        but one that strays k rows beyond its ends has 2 k rows more to go: the least over k counts.
        """
        first, last = sorted((one[0], other[0]))
        least_x, least_y = _least_within(self.step_x_m, first, last), _least_within(self.step_y_m, first, last)
        across = (other[1] - one[1]) * least_x
        down = (last - first + 2.0 * np.arange(least_y.size)) * least_y
        return float(np.sqrt(across**2 + down**2 + (self.level[other] - self.level[one]) ** 2).min())


def _least_within(steps: FloatArray, first: int, last: int) -> FloatArray:
    """Least step of the rows from ``first`` to ``last``, of those and one row more on either side, and so on."""
    after = steps.size - 1 - last
    beyond = max(first, after)
    rows = np.pad(steps, (beyond - first, beyond - after), mode="edge")
    end = beyond + last - first + 1
    least: FloatArray = np.minimum.accumulate(
        np.concatenate([[rows[beyond:end].min()], np.minimum(rows[:beyond][::-1], rows[end:])])
    )
    return least


def _refuse(what: str, found: object, allowed: str, key: str) -> InputError:
    return InputError(Problem(what, found=str(found), allowed=allowed, remedy="correct the argument", key=key))


def _steps(value: ArrayLike, rows: int, key: str) -> FloatArray:
    steps = np.asarray(value, dtype=np.float64)
    if steps.ndim == 0:
        steps = np.full(rows, float(steps))
    if steps.shape != (rows,):
        raise _refuse("steps must be one number, or one a row", steps.shape, f"shape ({rows},)", key)
    if not np.all(np.isfinite(steps) & (steps > 0.0)):
        bad = steps[~(np.isfinite(steps) & (steps > 0.0))][0]
        raise _refuse("steps must be finite and above zero", bad, "metres > 0", key)
    return np.ascontiguousarray(steps)


def _mask(value: ArrayLike | None, shape: tuple[int, int], key: str) -> BoolArray | None:
    if value is None:
        return None
    mask = np.asarray(value)
    if mask.shape != shape or mask.dtype != np.bool_:
        raise _refuse(
            "a mask must be a bool array of the ground's shape", f"{mask.dtype} {mask.shape}", f"{shape}", key
        )
    return mask


def _levels(ground_m: ArrayLike, valid: BoolArray | None) -> tuple[FloatArray, BoolArray]:
    """Return finite levels and the mask of cells that hold ground (NaN means none)."""
    level = np.ascontiguousarray(ground_m, dtype=np.float64)
    if level.ndim != 2 or level.size == 0:
        raise _refuse("ground must be a 2-D array with cells in it", f"shape {level.shape}", "(rows, cols)", "ground_m")
    if level.size > _LARGEST_CELLS:
        raise _refuse("the grid is too large", f"{level.size} cells", f"{_LARGEST_CELLS} cells", "ground_m")
    if valid is not None and valid.shape != level.shape:
        raise _refuse("the mask of valid cells has another shape", valid.shape, f"{level.shape}", "valid")
    has_ground = ~np.isnan(level) if valid is None else valid & ~np.isnan(level)
    if np.any(np.isinf(level) & has_ground):
        raise _refuse("ground must not be infinite", "infinity", "finite levels, NaN for nodata", "ground_m")
    if not has_ground.all():
        level = np.where(has_ground, level, 0.0 if not has_ground.any() else level[has_ground].min())
    return level, has_ground


def _spread(mask: BoolArray, reach: int) -> BoolArray:
    """Return the mask grown by ``reach`` cells in every direction (as a square)."""
    grown = mask.copy()
    for axis in (0, 1):
        source = grown.copy()
        for shift in range(1, reach + 1):
            ahead = [slice(None), slice(None)]
            behind = [slice(None), slice(None)]
            ahead[axis], behind[axis] = slice(shift, None), slice(None, -shift)
            grown[tuple(ahead)] |= source[tuple(behind)]
            grown[tuple(behind)] |= source[tuple(ahead)]
    return grown


def _highest_within(level: FloatArray, reach: int) -> NDArray[np.float32]:
    """Return, rounded up to float32, the highest level within ``reach`` cells in every direction."""
    high = level.astype(np.float32)
    high[high < level] = np.nextafter(high[high < level], np.float32(np.inf))
    for axis in (0, 1):
        source = high.copy()
        for shift in range(1, reach + 1):
            ahead = [slice(None), slice(None)]
            behind = [slice(None), slice(None)]
            ahead[axis], behind[axis] = slice(shift, None), slice(None, -shift)
            np.maximum(high[tuple(ahead)], source[tuple(behind)], out=high[tuple(ahead)])
            np.maximum(high[tuple(behind)], source[tuple(ahead)], out=high[tuple(behind)])
    return high.ravel()


def _flags(has_ground: BoolArray, barred: BoolArray | None, reach: int) -> NDArray[np.uint8]:
    rows, cols = has_ground.shape
    walls = ~has_ground if barred is None else ~has_ground | barred
    careful = _spread(walls, reach) if walls.any() else walls.copy()
    for border in (slice(0, reach), slice(max(rows - reach, 0), rows)):
        careful[border, :] = True
    for border in (slice(0, reach), slice(max(cols - reach, 0), cols)):
        careful[:, border] = True
    flags = careful.view(np.uint8) * np.uint8(kernel.CAREFUL)
    flags |= (~has_ground).view(np.uint8) * np.uint8(kernel.NO_GROUND)
    if barred is not None:
        flags |= barred.view(np.uint8) * np.uint8(kernel.BARRED)
    return flags.ravel()


def _plan_lengths(step_x_m: FloatArray, step_y_m: FloatArray, table: Any) -> FloatArray:
    """Plan length of each move from each row: an edge between rows takes the mean of its two rows' steps."""
    rows = np.arange(step_x_m.size)[:, None]
    other = np.clip(rows + table.drow[None, :], 0, step_x_m.size - 1)
    across = table.dcol[None, :] * 0.5 * (step_x_m[rows] + step_x_m[other])
    down = table.drow[None, :] * 0.5 * (step_y_m[rows] + step_y_m[other])
    return np.ascontiguousarray(np.hypot(across, down))


def _blocked_bits(value: ArrayLike | None, shape: tuple[int, int], count: int) -> NDArray[np.uint32]:
    """Return one bit a move for each cell, from a bool array with a last axis of moves or from such bits."""
    if value is None:
        return np.zeros(0, dtype=np.uint32)
    blocked = np.asarray(value)
    if blocked.dtype == np.bool_ and blocked.shape == (*shape, count):
        bits = np.zeros(shape, dtype=np.uint32)
        for move in range(count):
            bits |= blocked[:, :, move].astype(np.uint32) << np.uint32(move)
        return bits.ravel()
    if blocked.shape == shape and np.issubdtype(blocked.dtype, np.unsignedinteger):
        return np.ascontiguousarray(blocked, dtype=np.uint32).ravel()
    allowed = f"bool {(*shape, count)}, or unsigned integers {shape} with a bit a move"
    raise _refuse("blocked moves have another shape", f"{blocked.dtype} {blocked.shape}", allowed, "blocked_moves")


def prepare_grid(
    ground_m: ArrayLike,
    step_x_m: ArrayLike,
    step_y_m: ArrayLike,
    *,
    valid: BoolArray | None = None,
    barred: ArrayLike | None = None,
    blocked_moves: ArrayLike | None = None,
    neighbours: Neighbours = 16,
) -> Grid:
    """Check the ground and make it ready for searches.

    Parameters
    ----------
    ground_m : (rows, cols) array
        Ground level of each cell centre. NaN means nodata; infinities are refused.
    step_x_m, step_y_m
        Ground distance between neighbouring centres along and across rows: a number, or one a row.
    valid : (rows, cols) bool array, optional
        Cells that hold ground, where that is not said by NaN.
    barred : (rows, cols) bool array, optional
        Cells that may not be entered or crossed.
    blocked_moves : optional
        Moves that may not be made: a bool array (rows, cols, neighbours) in the order of `move_list`, or an
        unsigned integer array (rows, cols) with a bit a move. Each direction of a move is blocked by itself.
    neighbours
        8, 16 or 32.

    Raises
    ------
    InputError
        If a shape, type or value is not allowed; the message names the argument.
    """
    if neighbours not in (8, 16, 32):
        raise _refuse("unknown move set", neighbours, "8, 16 or 32", "neighbours")
    level, has_ground = _levels(ground_m, valid)
    rows, cols = level.shape
    table = move_table(neighbours)
    step_x, step_y = _steps(step_x_m, rows, "step_x_m"), _steps(step_y_m, rows, "step_y_m")
    ground = kernel.Ground(
        level=level.ravel(),
        high=_highest_within(level, table.reach),
        blocked=_blocked_bits(blocked_moves, (rows, cols), table.drow.size),
        plan=_plan_lengths(step_x, step_y, table),
        weight=np.zeros(0),
        rows=rows,
        cols=cols,
    )
    moves = kernel.Moves(table.drow * cols + table.dcol, *table[:-1])
    flags = _flags(has_ground, _mask(barred, level.shape, "barred"), table.reach)
    return Grid(ground, moves, flags, level, has_ground, step_x, step_y, neighbours)


def with_barred(grid: Grid, barred: BoolArray) -> Grid:
    """Return the grid with further cells barred."""
    mask = _mask(barred, grid.shape, "barred")
    if mask is None or not mask.any():
        return grid
    flags = grid.flags.copy()
    flags[mask.ravel()] |= np.uint8(kernel.BARRED)
    flags[_spread(mask, grid.reach).ravel()] |= np.uint8(kernel.CAREFUL)
    return replace(grid, flags=flags)


def weighted_grid(grid: Grid, cell_weight: ArrayLike) -> tuple[Grid, float]:
    """Return the grid with edges that count for more or less than their length, and the scale of its lengths.

    An edge counts for its 3-D length times the mean weight of the cells it runs through, by the share in each. Such a
    grid knows no ceiling, since its labels are no longer lengths.

    Parameters
    ----------
    grid
        The grid.
    cell_weight : (rows, cols) array
        What a metre counts for in each cell, above 0 and finite.

    Returns
    -------
    Grid, float
        The grid with weights scaled to 1 at the least, and the least weight: labels times it are weighted lengths.

    Raises
    ------
    InputError
        If the weights have another shape, or one is not above 0 and finite.
    """
    weight = np.ascontiguousarray(cell_weight, dtype=np.float64)
    if weight.shape != grid.shape:
        raise _refuse("weights have another shape", weight.shape, f"{grid.shape}", "cell_weight")
    if not np.all(np.isfinite(weight) & (weight > 0.0)):
        bad = weight[~(np.isfinite(weight) & (weight > 0.0))][0]
        raise _refuse("weights must be finite and above zero", bad, "numbers > 0", "cell_weight")
    least = float(weight.min())
    return replace(grid, ground=grid.ground._replace(weight=(weight / least).ravel())), least


def free_ratio(grid: Grid) -> float:
    """Return the largest ratio of shortest grid path to straight line on level, free ground of this grid.

    Worked out from the actual moves, row by row. A direction between two neighbouring moves is made up of both; that
    is longest, against the straight line, half way between them: 1 / cos(half the angle), for moves of any length.

    Returns
    -------
    float
        At least 1. For level square cells 1.0824, 1.0275 and 1.0131 with 8, 16 and 32 neighbours.
    """
    shape = np.unique(grid.step_x_m / grid.step_y_m)[:, None]  # of the cells; their size does not matter
    angle = np.sort(np.arctan2(grid.moves.drow[None, :] * 1.0, grid.moves.dcol[None, :] * shape), axis=1)
    gaps = np.diff(angle, axis=1, append=angle[:, :1] + 2.0 * np.pi)
    return float(1.0 / np.cos(0.5 * gaps.max()))


def bucket_width(grid: Grid) -> float:
    """Width of the queue's buckets: just below the shortest edge."""
    return grid.least_step_m * _BUCKET_SHARE
