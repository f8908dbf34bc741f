"""Makes the elevation model of Vennaquil, an invented mountain lake held by a landslide at about 3,600 m.

Nothing here is drawn by chance: hills and hummocks are sums of cosines with fixed directions, so that every run gives
the same cells. Run it as ``python make_dem.py [target.tif]``; without a target it writes ``dem.tif`` beside itself.

Levels are in metres above the sea (EGM96), as the file itself says. The map position is in the open Pacific, so that
nobody takes Vennaquil for a real place.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import rasterio
from numpy.typing import NDArray
from rasterio import Affine

Grid = NDArray[np.float64]

ROWS, COLS, CELL_M = 300, 400, 5.0
WEST_M, NORTH_M, CRS = 280_000.0, 8_450_000.0, "EPSG:32717+5773"

WATER_LEVEL_M = 3604.0
MIDDLE_SOUTH_M, HALF_WIDTH_M = 740.0, 430.0  # of the valley floor
TOP_M = 3615.0  # of the slide mass, between its low places
WET_SLOPE, DRY_SLOPE = 3.5, 13.0  # the slide mass ran down the valley: horizontal metres to one of height
RIM_EAST_M, RIM_BEND_M = 900.0, 60.0  # its highest line crosses the valley here, bent down the valley in the middle
#: Low places of the slide mass: south, level, half width, how far down the dry side each remains a furrow, and how
#: far to the south it has turned by then.
LOW_PLACES = (
    (395.0, 3604.6, 30.0, 330.0, 70.0),
    (560.0, 3604.95, 27.0, 260.0, 45.0),
    (702.0, 3606.9, 24.0, 210.0, -25.0),
    (985.0, 3604.8, 30.0, 300.0, -95.0),
)


def positions() -> tuple[Grid, Grid]:
    """Return metres east of the western edge and south of the northern edge, at the cell centres."""
    east = (np.arange(COLS) + 0.5) * CELL_M
    south = (np.arange(ROWS) + 0.5) * CELL_M
    return np.broadcast_to(east, (ROWS, COLS)), np.broadcast_to(south[:, None], (ROWS, COLS))


def relief(east: Grid, south: Grid, longest_m: float, count: int) -> Grid:
    """Return smooth hills between about -1 and 1: cosines whose directions follow the golden angle."""
    total = np.zeros(east.shape)
    for k in range(count):
        angle, wave = 2.399963 * k + 1.1, longest_m * 0.8**k
        total += 0.84**k * np.cos(2 * np.pi * (east * np.cos(angle) + south * np.sin(angle)) / wave + 2.3 * k)
    return total / np.sqrt(count)


def warped(east: Grid, south: Grid) -> tuple[Grid, Grid]:
    """Return positions shifted a little this way and that, so that nothing on the map is drawn with a ruler."""
    by_east = 34.0 * relief(east, south, 520.0, 6)
    by_south = 34.0 * relief(east + 731.0, south - 412.0, 470.0, 6)
    return east + by_east, south + by_south


def valley(east: Grid, south: Grid) -> Grid:
    """Return the ground before the slide came down: a wide trough between steep flanks, closed in the west."""
    aside = np.abs(south - (MIDDLE_SOUTH_M + 45.0 * np.sin(east / 330.0)))
    head = 0.00022 * np.maximum(460.0 - east, 0.0) ** 2
    floor = 3587.0 - 0.016 * (east - RIM_EAST_M) + head
    flank = np.sqrt(np.maximum(aside - HALF_WIDTH_M, 0.0) ** 2 + 40.0**2) - 40.0
    # Spurs run down the flanks, with gullies between them.
    bent = east + 0.35 * flank + 40.0 * relief(east, south, 380.0, 5)
    spurs = 1.0 - np.abs(np.sin(bent / 88.0)) + 0.5 * np.abs(np.cos(bent / 37.0 + 1.0))
    ribs = (spurs - 0.6) * np.clip((aside - HALF_WIDTH_M + 40.0) / 240.0, 0.0, 1.0) * 26.0
    rough = relief(east - 57.0, south + 23.0, 90.0, 10) * 0.4
    return floor + 0.008 * aside + 0.45 * flank + ribs + rough


def slide(east: Grid, south: Grid) -> Grid:
    """Return the surface of the slide mass, with its hummocks and its low places."""
    bent_east, bent_south = warped(east, south)
    rim = RIM_EAST_M + RIM_BEND_M * np.cos((bent_south - MIDDLE_SOUTH_M) / 330.0)
    beyond = bent_east - rim
    hummocks = relief(east + 11.0, south, 170.0, 9) * 2.4 + relief(east, south - 40.0, 46.0, 7) * 0.5
    surface = TOP_M + hummocks
    for at, level, half_width, reach, turn in LOW_PLACES:
        # A furrow with a flat floor and steep sides; it grows shallow down the dry side, where the mass spread out.
        part = np.clip(beyond / reach, 0.0, 1.5)
        aside = np.abs(bent_south - at - turn * part**2) / (half_width * (1.0 + part))
        bank = (TOP_M - level) * (np.maximum(aside - 0.45, 0.0) / 0.75) ** 1.3
        surface = np.minimum(surface, level + 0.1 * hummocks + bank + 5.0 * np.minimum(part, 1.0) ** 2)
    away = np.maximum(np.abs(beyond) - 6.0, 0.0)
    dry = DRY_SLOPE + 2.5 * relief(east - 300.0, south, 420.0, 4)  # the foot is drawn out in lobes
    return surface - away / np.where(beyond < 0.0, WET_SLOPE, dry)


def make() -> NDArray[np.float32]:
    """Return the elevations, in metres, rounded to centimetres."""
    east, south = positions()
    ground = np.maximum(valley(east, south), slide(east, south))
    water = (east < RIM_EAST_M + RIM_BEND_M) & (ground < WATER_LEVEL_M)
    return np.round(np.where(water, WATER_LEVEL_M, ground), 2).astype(np.float32)


def write(target: Path) -> None:
    """Write the GeoTIFF."""
    profile = {
        "driver": "GTiff",
        "dtype": "float32",
        "count": 1,
        "height": ROWS,
        "width": COLS,
        "crs": CRS,
        "transform": Affine(CELL_M, 0.0, WEST_M, 0.0, -CELL_M, NORTH_M),
        "nodata": -9999.0,
        "compress": "deflate",
        "predictor": 3,
    }
    with rasterio.open(target, "w", **profile) as sink:
        sink.write(make(), 1)
        sink.set_band_unit(1, "m")
        sink.set_band_description(1, "ground and water surface, invented")


if __name__ == "__main__":
    write(Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).with_name("dem.tif"))
