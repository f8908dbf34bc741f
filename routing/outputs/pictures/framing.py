"""What part of the ground a map shows, and the elevations in it, thinned to what a page can hold."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from routing.outputs.pictures.subject import Subject
from routing.records import BoolArray, FloatArray, Terrain

#: Share of the shown routes' extent that is added on each side.
MARGIN = 0.14
#: A frame is at least so many cells high: less shows no ground.
LEAST_CELLS = 12
#: Cells looked at along the side of a block.
_LOOKED_AT = 4


@dataclass(frozen=True, slots=True)
class Frame:
    """A rectangle of the map in units of the DEM's CRS, with the true ground length of one unit either way."""

    west: float
    east: float
    south: float
    north: float
    metres_per_x: float
    metres_per_y: float

    @property
    def width_m(self) -> float:
        """True ground length from west to east, at the middle of the routes."""
        return (self.east - self.west) * self.metres_per_x

    @property
    def height_m(self) -> float:
        """True ground length from south to north."""
        return (self.north - self.south) * self.metres_per_y


@dataclass(frozen=True, slots=True)
class Cut:
    """Elevations in a frame, north row first, west column first.

    Attributes
    ----------
    level_m : (rows, cols) array
        Mean level of each block of cells, NaN where none of them holds ground.
    dry : (rows, cols) bool array
        Whether no cell of the block lies in the water body.
    x : (cols,) array
    y : (rows,) array
        Middles of the blocks, in the DEM's CRS.
    step_x_m, step_y_m : (rows,) arrays
        True ground length between the middles.
    extent
        West, east, south, north.
    """

    level_m: FloatArray
    dry: BoolArray
    x: FloatArray
    y: FloatArray
    step_x_m: FloatArray
    step_y_m: FloatArray
    extent: tuple[float, float, float, float]


def frame_of(subject: Subject, shape: float) -> Frame:
    """Return the frame round the routes, intake and outlet of a subject, with a margin.

    Parameters
    ----------
    subject
        Gives what must be inside, and the terrain.
    shape
        Width over height on the page; the frame's true ground lengths have the same ratio.
    """
    terrain = subject.plan.terrain
    x, y = _inside(subject)
    a, _, _, _, e, f = terrain.transform
    row = int(np.clip((0.5 * (y.min() + y.max()) - f) / e, 0, terrain.shape[0] - 1))
    across, along = float(terrain.step_x_m[row] / abs(a)), float(terrain.step_y_m[row] / abs(e))
    least_m = LEAST_CELLS * float(max(terrain.step_x_m[row], terrain.step_y_m[row]))
    width_m, height_m = float(np.ptp(x)) * across, float(np.ptp(y)) * along
    margin_m = 2.0 * MARGIN * max(width_m, height_m)
    height_m = max(height_m + margin_m, (width_m + margin_m) / shape, least_m)
    half_x, half_y = 0.5 * height_m * shape / across, 0.5 * height_m / along
    west, south, east, north = _bounds(terrain)
    middle_x = _kept_inside(0.5 * (x.min() + x.max()), half_x, west, east)
    middle_y = _kept_inside(0.5 * (y.min() + y.max()), half_y, south, north)
    return Frame(middle_x - half_x, middle_x + half_x, middle_y - half_y, middle_y + half_y, across, along)


def _inside(subject: Subject) -> tuple[FloatArray, FloatArray]:
    """Return the map positions that a frame must hold."""
    plan = subject.plan
    places = [(end.x, end.y) for end in (plan.setting.intake, plan.setting.outlet)]
    places += [(crossing.x, crossing.y) for crossing in subject.crossings if crossing.used]
    if plan.lowest_crest is not None and not subject.routes:
        places.append((plan.lowest_crest.x, plan.lowest_crest.y))
    x, y = zip(*places, strict=True)
    return (
        np.concatenate([np.array(x, dtype=np.float64), *(route.x for route in subject.routes)]),
        np.concatenate([np.array(y, dtype=np.float64), *(route.y for route in subject.routes)]),
    )


def _bounds(terrain: Terrain) -> tuple[float, float, float, float]:
    """Return west, south, east, north of the window."""
    a, _, c, _, e, f = terrain.transform
    rows, cols = terrain.shape
    return min(c, c + a * cols), min(f, f + e * rows), max(c, c + a * cols), max(f, f + e * rows)


def _kept_inside(middle: float, half: float, low: float, high: float) -> float:
    """Shift a range into another where it fits into that, so that no paper is spent on what is not known."""
    if 2.0 * half >= high - low:
        return float(min(max(middle, high - half), low + half))
    return float(min(max(middle, low + half), high - half))


def cut_of(terrain: Terrain, water: BoolArray, frame: Frame, most: int) -> Cut | None:
    """Return the elevations in a frame as means of square blocks of cells, at most ``most`` blocks either way.

    Of blocks more than four cells wide a lattice of cells is taken.

    ``None`` where the frame holds no cell.
    """
    a, _, c, _, e, f = terrain.transform
    rows, cols = terrain.shape
    first_row, last_row = _range((frame.north - f) / e, (frame.south - f) / e, rows)
    first_col, last_col = _range((frame.west - c) / a, (frame.east - c) / a, cols)
    if first_row >= last_row or first_col >= last_col:
        return None
    k = max(1, -(-max(last_row - first_row, last_col - first_col) // most))
    # Of large blocks only so many cells are looked at, so that a huge window takes neither memory nor time.
    every = -(-k // _LOOKED_AT)
    side = -(-k // every)
    k = side * every
    part = np.s_[first_row + every // 2 : last_row : every, first_col + every // 2 : last_col : every]
    valid = terrain.valid[part]
    total = _blocks(np.where(valid, terrain.elevation_m[part], 0.0), side)
    count = _blocks(valid.astype(np.float64), side)
    level = np.divide(total, count, out=np.full_like(total, np.nan), where=count > 0)
    dry = _blocks(water[part].astype(np.float64), side) == 0
    block_rows, block_cols = level.shape
    middle_row = np.minimum(first_row + k * np.arange(block_rows) + k // 2, rows - 1)
    north, west = f + e * first_row, c + a * first_col
    south, east = north + e * k * block_rows, west + a * k * block_cols
    up, right = slice(None, None, 1 if e < 0 else -1), slice(None, None, 1 if a > 0 else -1)
    return Cut(
        level[up, right],
        dry[up, right],
        (west + a * k * (np.arange(block_cols, dtype=np.float64) + 0.5))[right],
        (north + e * k * (np.arange(block_rows, dtype=np.float64) + 0.5))[up],
        (k * terrain.step_x_m[middle_row])[up],
        (k * terrain.step_y_m[middle_row])[up],
        (min(west, east), max(west, east), min(north, south), max(north, south)),
    )


def _range(one: float, other: float, size: int) -> tuple[int, int]:
    """Return first and last-plus-one cell of a range, a cell more on each side."""
    low, high = min(one, other), max(one, other)
    return int(np.clip(np.floor(low) - 1, 0, size)), int(np.clip(np.ceil(high) + 1, 0, size))


def _blocks(values: FloatArray, k: int) -> FloatArray:
    """Return the sums of blocks of k by k cells; the last ones may be smaller."""
    if k == 1:
        return values
    rows, cols = values.shape
    padded = np.pad(values, ((0, -rows % k), (0, -cols % k)))
    shape = (padded.shape[0] // k, k, padded.shape[1] // k, k)
    return np.asarray(padded.reshape(shape).sum(axis=(1, 3)), dtype=np.float64)
