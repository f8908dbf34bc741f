"""Opening a DEM and reading a window of it."""

from __future__ import annotations

import math
import warnings
from collections.abc import Iterable, Mapping
from contextlib import ExitStack
from dataclasses import replace
from functools import cached_property
from pathlib import Path
from types import TracebackType
from typing import Any, Self

import numpy as np
import rasterio
from pyproj import CRS
from rasterio import Affine
from rasterio.enums import MaskFlags
from rasterio.errors import NotGeoreferencedWarning, RasterioError
from rasterio.windows import Window

from routing.errors import Problem, TerrainError
from routing.records import BoolArray, FloatArray, GridWindow, Terrain, TerrainAsk, TerrainFacts
from routing.terrain.facts import Understood, understand
from routing.terrain.levels import Conversion, to_levels
from routing.terrain.steps import check_steps, ground_steps
from routing.terrain.telling import Teller
from routing.terrain.wgs84 import Bounds, Wgs84


class Dem:
    """An open DEM: what was understood of it, and the way to read a window.

    Made by ``open_dem``; use it in a ``with`` block. Rows are counted from the north, columns from the west,
    however the file stores them.
    """

    def __init__(self, dataset: Any, ask: TerrainAsk, understood: Understood, teller: Teller) -> None:
        self._dataset = dataset
        self._ask = ask
        self._understood = understood
        self._teller = teller
        self._wgs84 = Wgs84(understood.crs, understood.grid.bounds, understood.geodetic)

    def __enter__(self) -> Self:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.close()

    def close(self) -> None:
        """Close the file."""
        self._dataset.close()

    @cached_property
    def facts(self) -> TerrainFacts:
        """What was understood of the DEM, and what was assumed."""
        facts = self._understood.facts
        return replace(facts, assumptions=facts.assumptions + self._wgs84.notes())

    @property
    def crs(self) -> CRS:
        """CRS of the plan coordinates (two-dimensional)."""
        return self._understood.crs

    @property
    def shape(self) -> tuple[int, int]:
        """Rows and columns of the whole DEM."""
        return self._understood.grid.rows, self._understood.grid.cols

    @property
    def transform(self) -> Affine:
        """Affine of the whole DEM, rows running south and columns east."""
        return self._understood.grid.transform

    @property
    def bounds(self) -> Bounds:
        """West, south, east and north edge in the DEM's CRS."""
        return self._understood.grid.bounds

    @property
    def bounds_lonlat(self) -> Bounds:
        """West, south, east and north edge in WGS 84 degrees."""
        return self._wgs84.bounds()

    @property
    def whole(self) -> GridWindow:
        """The window that is the whole DEM."""
        rows, cols = self.shape
        return GridWindow(0, 0, rows, cols, rows, cols)

    def to_lonlat(self, x: float, y: float) -> tuple[float, float]:
        """Return WGS 84 longitude and latitude of a map position (infinite where there is none).

        Parameters
        ----------
        x, y
            Position in the DEM's CRS.
        """
        return self._wgs84.of(x, y)

    def from_lonlat(self, lon: float, lat: float) -> tuple[float, float]:
        """Return the map position of a WGS 84 longitude and latitude (infinite where there is none).

        Parameters
        ----------
        lon, lat
            Position in WGS 84 degrees.
        """
        return self._wgs84.back(lon, lat)

    def holds(self, x: float, y: float) -> bool:
        """Return whether a map position lies on the DEM.

        Parameters
        ----------
        x, y
            Position in the DEM's CRS.
        """
        west, south, east, north = self.bounds
        return west <= x <= east and south <= y <= north

    def cell_of(self, x: float, y: float) -> tuple[int, int]:
        """Return row and column, in the whole DEM, of the cell that holds a map position.

        Parameters
        ----------
        x, y
            Position in the DEM's CRS.

        Raises
        ------
        TerrainError
            If it lies outside the DEM.
        """
        if not self.holds(x, y):
            west, south, east, north = self.bounds
            raise TerrainError(
                Problem(
                    "A position lies outside the DEM.",
                    found=f"x {x}, y {y}",
                    allowed=f"x {west} to {east}, y {south} to {north}",
                    remedy="give a position on the DEM, or a DEM that reaches it",
                    file=str(self._ask.file),
                )
            )
        rows, cols = self.shape
        t = self.transform
        return min(int((y - t.f) / t.e), rows - 1), min(int((x - t.c) / t.a), cols - 1)

    def window_around(self, points: Iterable[tuple[float, float]], margin_cells: int) -> GridWindow:
        """Return the least window that holds all points with a margin around them.

        Parameters
        ----------
        points
            Positions (x, y) in the DEM's CRS.
        margin_cells
            Cells added on every side, as far as the DEM goes.

        Raises
        ------
        TerrainError
            If a point lies outside the DEM.
        """
        cells = np.array([self.cell_of(x, y) for x, y in points])
        return self._clipped(cells.min(axis=0) - margin_cells, cells.max(axis=0) + margin_cells)

    def grown(self, window: GridWindow, *, factor: float | None = None, cells: int | None = None) -> GridWindow:
        """Return a larger window about the same middle, as far as the DEM goes.

        Parameters
        ----------
        window
            Window to grow.
        factor
            Times the size; at least one cell is added on every side.
        cells
            Or: cells added on every side.

        Raises
        ------
        ValueError
            If not exactly one of ``factor`` and ``cells`` is given.
        """
        if (factor is None) == (cells is None):
            raise ValueError(f"give factor or cells, not both and not neither: factor {factor}, cells {cells}")
        if factor is not None:
            more = [max(1, math.ceil(0.5 * (factor - 1.0) * size)) for size in (window.rows, window.cols)]
        else:
            more = [cells or 0] * 2
        first = np.array([window.row_start, window.col_start])
        last = first + np.array([window.rows - 1, window.cols - 1])
        return self._clipped(first - more, last + more)

    def _clipped(self, first: np.ndarray, last: np.ndarray) -> GridWindow:
        rows, cols = self.shape
        row, col = np.maximum(first, 0).tolist()
        last_row, last_col = np.minimum(last, (rows - 1, cols - 1)).tolist()
        return GridWindow(row, col, last_row - row + 1, last_col - col + 1, rows, cols)

    def read(self, window: GridWindow | None = None) -> Terrain:
        """Read a window, and only it.

        Parameters
        ----------
        window
            Part to read; ``None``: the whole DEM.

        Raises
        ------
        TerrainError
            If the file is damaged, holds no ground there, or ground lengths cannot be told there.
        """
        window = self.whole if window is None else window
        steps = ground_steps(self._understood.geodetic, self._window_transform(window), (window.rows, window.cols))
        check_steps(steps, self._middle(window), self._teller)
        elevation, valid, notes = self._levels(window)
        if not valid.any():
            raise self._teller.error(
                "terrain.file",
                f"The DEM {self._ask.file} holds no ground in the part that is needed.",
                found=f"no valid cell in rows {window.row_start} to {window.row_start + window.rows - 1}, "
                f"columns {window.col_start} to {window.col_start + window.cols - 1}",
                allowed="a DEM with elevations around intake and outlet",
                remedy="check the nodata value stored in the file, the band, and the positions of intake and outlet",
            )
        return Terrain(
            elevation_m=elevation,
            valid=valid,
            step_x_m=steps.step_x_m,
            step_y_m=steps.step_y_m,
            transform=self._window_transform(window),
            window=window,
            facts=replace(self.facts, assumptions=self.facts.assumptions + notes),
        )

    def _levels(self, window: GridWindow) -> tuple[FloatArray, BoolArray, tuple[str, ...]]:
        grid, band = self._understood.grid, self._ask.band
        row = grid.rows - window.row_start - window.rows if grid.flip_rows else window.row_start
        col = grid.cols - window.col_start - window.cols if grid.flip_cols else window.col_start
        part = Window(col, row, window.cols, window.rows)
        try:
            raw = self._dataset.read(band, window=part)
            flags = self._dataset.mask_flag_enums[band - 1]
            mask = None if flags == [MaskFlags.all_valid] else self._dataset.read_masks(band, window=part)
        except RasterioError as error:
            raise self._teller.error(
                "terrain.file",
                f"The DEM {self._ask.file} cannot be read: the file is damaged or incomplete.",
                found=str(error.__cause__ or error),
                allowed="a complete file",
                remedy="fetch or export it again",
            ) from error
        order = np.s_[:: -1 if grid.flip_rows else 1, :: -1 if grid.flip_cols else 1]
        conversion = Conversion(
            scale=self._dataset.scales[band - 1],
            offset=self._dataset.offsets[band - 1],
            unit_m=self.facts.metres_per_vertical_unit,
            datum_offset_m=self._ask.datum_offset_m,
        )
        return to_levels(
            np.ascontiguousarray(raw[order]), None if mask is None else np.ascontiguousarray(mask[order]), conversion
        )

    def _window_transform(self, window: GridWindow) -> tuple[float, float, float, float, float, float]:
        t = self.transform
        return t.a, 0.0, t.c + t.a * window.col_start, 0.0, t.e, t.f + t.e * window.row_start

    def _middle(self, window: GridWindow) -> tuple[float, float]:
        a, _, c, _, e, f = self._window_transform(window)
        lon, lat = self._understood.geodetic.degrees(c + 0.5 * a * window.cols, f + 0.5 * e * window.rows)
        place = float(lon), float(lat)
        return place if all(map(math.isfinite, place)) else (0.0, 0.0)


def open_dem(ask: TerrainAsk, lines: Mapping[str, int] | None = None, site_file: Path | None = None) -> Dem:
    """Open a DEM and understand it; nothing but its header is read.

    Parameters
    ----------
    ask
        The file (path already resolved) and what it does not say of itself.
    lines, site_file
        The site file and the line of each dotted key in it, for messages.

    Returns
    -------
    Dem
        Use it in a ``with`` block.

    Raises
    ------
    TerrainError
        If the file cannot be opened, or its band, CRS, grid or unit of height cannot be used.
    """
    return _open(ask, Teller(ask.file, site_file, lines or {}), unit_needed=True)


def inspect(path: Path, band: int = 1) -> TerrainFacts:
    """Say what a DEM file says of itself, even where it does not say the unit of height (then ``"unknown"``).

    Parameters
    ----------
    path
        DEM file.
    band
        Band that holds elevations, from 1.

    Raises
    ------
    TerrainError
        If the file cannot be opened, or its band, CRS or grid cannot be used.
    """
    with _open(TerrainAsk(file=path, band=band), Teller(path), unit_needed=False) as dem:
        return dem.facts


def _open(ask: TerrainAsk, teller: Teller, *, unit_needed: bool) -> Dem:
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore", NotGeoreferencedWarning)  # refused below, with a remedy
            dataset = rasterio.open(ask.file)
    except RasterioError as error:
        missing = not ask.file.exists()
        raise teller.error(
            "terrain.file",
            f"The DEM {ask.file} {'does not exist' if missing else 'cannot be opened'}.",
            found="no such file" if missing else str(error),
            allowed="a grid file that GDAL reads (GeoTIFF and many others)",
            remedy="correct the path (it is relative to the site file)" if missing else "check that it is a whole DEM",
        ) from error
    with ExitStack() as stack:
        stack.callback(dataset.close)
        dem = Dem(dataset, ask, understand(dataset, ask, teller, unit_needed=unit_needed), teller)
        stack.pop_all()
    return dem
