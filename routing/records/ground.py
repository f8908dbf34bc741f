"""The ground that a job lies on: arrays on the DEM's own cells, levels in metres."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np
from numpy.typing import NDArray

if TYPE_CHECKING:
    from shapely import MultiPolygon, Polygon

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]

SurfaceKind = Literal["ground", "canopy", "unknown"]
WaterShown = Literal["surface", "bed"]
ZoneKind = Literal["barred", "cost"]


@dataclass(frozen=True, slots=True)
class Cell:
    """A cell of the window, by row and column from its north-west (first) cell."""

    row: int
    col: int


@dataclass(frozen=True, slots=True)
class GridWindow:
    """The part of the DEM that was read."""

    row_start: int
    col_start: int
    rows: int
    cols: int
    dem_rows: int
    dem_cols: int

    @property
    def whole(self) -> bool:
        """Whether the window is the whole DEM."""
        return self.rows == self.dem_rows and self.cols == self.dem_cols

    @property
    def open_sides(self) -> tuple[bool, bool, bool, bool]:
        """Whether the DEM goes on beyond the first row, last row, first column, last column."""
        return (
            self.row_start > 0,
            self.row_start + self.rows < self.dem_rows,
            self.col_start > 0,
            self.col_start + self.cols < self.dem_cols,
        )

    def open_border(self) -> BoolArray:
        """Return a (rows, cols) mask of the border cells beyond which the DEM goes on."""
        mask = np.zeros((self.rows, self.cols), dtype=np.bool_)
        north, south, west, east = self.open_sides
        mask[0, :] |= north
        mask[-1, :] |= south
        mask[:, 0] |= west
        mask[:, -1] |= east
        return mask


@dataclass(frozen=True, slots=True)
class TerrainFacts:
    """What was understood of a DEM, and what was assumed.

    ``transform`` is the affine (a, b, c, d, e, f) of the whole DEM: x = a col + b row + c, y = d col + e row + f.
    ``vertical_error_m`` is the 90 % error that the user states, ``None`` where unknown.
    """

    file: str
    sha256: str
    driver: str
    dtype: str
    rows: int
    cols: int
    transform: tuple[float, float, float, float, float, float]
    crs_wkt: str
    crs_name: str
    horizontal_unit: str
    vertical_unit: str
    vertical_unit_source: str
    vertical_datum: str
    metres_per_vertical_unit: float
    datum_offset_m: float
    nodata: float | None
    vertical_error_m: float | None
    surface: SurfaceKind
    water_shown: WaterShown
    assumptions: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Terrain:
    """A window of a DEM, ready to compute on.

    Attributes
    ----------
    elevation_m : (rows, cols) float64 array
        Level of each cell centre in metres (datum offset applied). Finite everywhere; at cells that are not
        valid the value has no meaning.
    valid : (rows, cols) bool array
        Whether the cell holds ground.
    step_x_m, step_y_m : (rows,) arrays
        True ground distance between neighbouring cell centres along the row and across it.
    transform
        Affine of the window.
    """

    elevation_m: FloatArray
    valid: BoolArray
    step_x_m: FloatArray
    step_y_m: FloatArray
    transform: tuple[float, float, float, float, float, float]
    window: GridWindow
    facts: TerrainFacts

    @property
    def shape(self) -> tuple[int, int]:
        """Rows and columns of the window."""
        rows, cols = self.elevation_m.shape
        return rows, cols


@dataclass(frozen=True, slots=True)
class Saddle:
    """The lowest place on the way from one water to another, or to the DEM's edge.

    ``towards`` says which: ``"outlet"`` or ``"edge"``. ``proven`` is false where the window's border was met
    first, so that a lower way might exist outside.
    """

    level_m: float
    x: float
    y: float
    towards: Literal["outlet", "edge"]
    proven: bool


@dataclass(frozen=True, slots=True)
class WaterBody:
    """The water joined to the intake at one level.

    Attributes
    ----------
    cells : (rows, cols) bool array
        Its cells, enclosed voids included.
    shoreline
        Polygon (or several) in the DEM's CRS.
    void_cells
        How many of the cells are nodata enclosed by the body.
    touches_edge
        Whether the DEM's edge cuts the body: its area, and its spill level towards the edge, are then unknown.
    spill
        Where it would overflow first, or ``None`` where that is unknown.
    source
        How it was found: ``"level"`` (flooded from the intake) or ``"polygon"`` (given by the user).
    """

    cells: BoolArray
    level_m: float
    area_m2: float
    shoreline: Polygon | MultiPolygon
    void_cells: int
    touches_edge: bool
    touches_open_border: bool
    spill: Saddle | None
    source: Literal["level", "polygon"]


@dataclass(frozen=True, slots=True)
class Zone:
    """One zone of the user's, in the DEM's CRS, made valid and joined."""

    name: str
    kind: ZoneKind
    cost_factor: float
    shape: Polygon | MultiPolygon


@dataclass(frozen=True, slots=True)
class ZoneMap:
    """Zones laid over a window.

    Attributes
    ----------
    zones
        The zones, also those outside the window.
    barred : (rows, cols) bool array
        Cells whose centre lies in the interior of a barred zone.
    blocked_moves : (rows, cols) uint32 array
        A bit for each move whose segment runs through the interior of a barred zone.
    cost_factor : (rows, cols) float64 array
        What a metre costs in each cell, 1 outside all zones; where zones overlap, the dearest counts.
    notes
        What was found and mended (invalid shapes, slivers, zones outside the DEM).
    """

    zones: tuple[Zone, ...]
    barred: BoolArray
    blocked_moves: NDArray[np.uint32]
    cost_factor: FloatArray
    notes: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class ZoneLength:
    """How many metres along the ground a line has in a cost zone."""

    zone: str
    cost_factor: float
    length_m: float


@dataclass(frozen=True, slots=True)
class GroundLine:
    """A polyline on the ground with its sampled long section.

    Attributes
    ----------
    x, y : (n,) arrays
        Sample points in the DEM's CRS.
    chainage_m : (n,) array
        3-D ground length from the first point.
    ground_m : (n,) array
        Bilinear ground level.
    """

    x: FloatArray
    y: FloatArray
    chainage_m: FloatArray
    ground_m: FloatArray


@dataclass(frozen=True, slots=True)
class PlacedPoint:
    """A point of the user's, placed on the terrain: map position in the DEM's CRS and lon/lat."""

    x: float
    y: float
    lon: float
    lat: float
