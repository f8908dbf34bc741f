"""Ends left open: the records of the places that a pipe may begin and end at."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from routing.records import BoolArray, FloatArray, Site, Terrain, WaterBody, ZoneMap
from routing.search import Grid, OpenEnds
from routing.terrain import xy_of

CellLike = tuple[int, int]


@dataclass(frozen=True, slots=True)
class Ground:
    """What the places are looked for on: one window with its water body at the level shown, and zones."""

    terrain: Terrain
    grid: Grid
    body: WaterBody
    zones: ZoneMap | None
    present_m: float

    @property
    def free(self) -> BoolArray:
        """Cells with ground outside all barred zones."""
        return self.grid.has_ground if self.zones is None else self.grid.has_ground & ~self.zones.barred


@dataclass(frozen=True, slots=True)
class IntakePlaces:
    """Cells that a pipe may begin at.

    Attributes
    ----------
    cells : (n, 2) int array
        Rows and columns.
    start_m
        Length of pipe from the mouth to each of them.
    measured
        Whether the pipe lies on the bed from its mouth on, so that its underwater length is part of the route.
    """

    cells: NDArray[np.intp]
    start_m: float
    measured: bool


@dataclass(frozen=True, slots=True)
class OutletPlaces:
    """Cells that a pipe may end at.

    Attributes
    ----------
    cells : (m, 2) int array
        Rows and columns.
    axis_m : (m,) array
        Level of the outlet's axis at each.
    more_outside
        Whether there may be places beyond the part of the DEM that was read.
    note
        How they were found.
    """

    cells: NDArray[np.intp]
    axis_m: FloatArray
    more_outside: bool
    note: str

    @property
    def lowest(self) -> CellLike:
        """The cell whose outlet would be lowest."""
        row, col = self.cells[int(np.argmin(self.axis_m))]
        return int(row), int(col)

    def mask(self, shape: tuple[int, int]) -> BoolArray:
        """Return the places as a (rows, cols) mask."""
        found = np.zeros(shape, dtype=np.bool_)
        found[self.cells[:, 0], self.cells[:, 1]] = True
        return found


def axis_m(site: Site, terrain: Terrain, cells: NDArray[np.intp]) -> FloatArray:
    """Return the level of the outlet's axis at (n, 2) cells: as given, or by its height above the ground there."""
    if site.outlet.level_m is not None:
        return np.full(len(cells), site.outlet.level_m)
    level: FloatArray = terrain.elevation_m[cells[:, 0], cells[:, 1]] + site.outlet.height_above_ground_m
    return level


def place_text(terrain: Terrain, cell: CellLike) -> str:
    """Return where the centre of a cell lies, as text."""
    x, y = xy_of(terrain, *cell)
    digits = 6 if abs(terrain.transform[0]) < 0.1 else 1
    return f"x {float(x):.{digits}f}, y {float(y):.{digits}f}"


def mouth_above_bed_m(site: Site) -> float:
    """Return how far the top of the mouth lies above the bed, for the largest of the pipes."""
    return max(pipe.outside_diameter_m for pipe in site.pipes) + max(site.search.bed_offset_m, 0.0)


def mouth_m(
    site: Site, terrain: Terrain, places: IntakePlaces | None, intake: CellLike, known_m: float | None
) -> float | None:
    """Return the level of the top of the intake mouth; ``known_m`` unless the pipe lies on the bed from a cell on."""
    if places is None or not places.measured or known_m is not None:
        return known_m
    return float(terrain.elevation_m[intake]) + mouth_above_bed_m(site)


def join_ends(
    intakes: IntakePlaces | None,
    outlets: OutletPlaces | None,
    ends: tuple[CellLike, CellLike],
    tailwater_m: float | None,
) -> OpenEnds | None:
    """Return the ends as the search takes them; ``None`` where both are points.

    Parameters
    ----------
    ends
        Cells of intake and outlet, where one of them is a point.
    tailwater_m
        Water level outside any outlet.
    """
    if intakes is None and outlets is None:
        return None
    sources = np.array([ends[0]], dtype=np.intp) if intakes is None else intakes.cells
    goals = np.array([ends[1]], dtype=np.intp) if outlets is None else outlets.cells
    receiving = np.zeros(1) if outlets is None else outlets.axis_m
    if outlets is not None and tailwater_m is not None:
        receiving = np.maximum(receiving, tailwater_m)
    return OpenEnds(
        sources=sources,
        start_length_m=np.full(len(sources), 0.0 if intakes is None else intakes.start_m),
        goals=goals,
        goal_above_m=receiving - receiving.min(),
        more_outside=outlets is not None and outlets.more_outside,
    )
