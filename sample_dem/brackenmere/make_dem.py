"""Makes the elevation model and the zones of Brackenmere, an invented reservoir behind an old earth embankment.

Nothing here is drawn by chance: the hills are sums of cosines with fixed directions, so that every run gives the
same cells. Run it as ``python make_dem.py [target.tif]``; without a target it writes ``dem.tif`` beside itself.
The zones are written into the same folder.

Levels are in metres of an invented local datum. The map position is in the open North Sea, so that nobody takes
Brackenmere for a real place.
"""

from __future__ import annotations

import itertools
import json
import sys
from pathlib import Path

import numpy as np
import rasterio
from numpy.typing import NDArray
from pyproj import Transformer
from rasterio import Affine

Grid = NDArray[np.float64]

ROWS, COLS, CELL_M = 240, 320, 2.0
WEST_M, NORTH_M, CRS = 480_000.0, 6_150_000.0, "EPSG:32631"

WATER_LEVEL_M = 101.2
DAM_EAST_M = 330.0  # the embankment runs north to south here
DAM_CREST_M, DAM_SAG_M, SAG_SOUTH_M = 104.9, 0.4, 262.0
DAM_HALF_WIDTH_M, WET_SLOPE, DRY_SLOPE = 2.0, 3.0, 2.5
SILL_M = 103.2  # highest bed of the old spillway cut round the northern end
#: Spillway: east, south, bed level of its corners.
SPILLWAY = (
    (262.0, 198.0, 100.4),
    (318.0, 138.0, SILL_M),
    (342.0, 136.0, SILL_M),
    (392.0, 168.0, 100.2),
    (446.0, 232.0, 93.4),
)

#: Zones by file, with the east and south of their corners: a strip of the embankment, and land below it.
ZONES = {
    "orchid_bank.geojson": ((331.0, 206.0), (341.0, 204.0), (341.0, 256.0), (331.0, 260.0)),
    "wet_meadow.geojson": ((362.0, 225.0), (400.0, 228.0), (405.0, 265.0), (365.0, 275.0)),
}


def positions() -> tuple[Grid, Grid]:
    """Return metres east of the western edge and south of the northern edge, at the cell centres."""
    east = (np.arange(COLS) + 0.5) * CELL_M
    south = (np.arange(ROWS) + 0.5) * CELL_M
    return np.broadcast_to(east, (ROWS, COLS)), np.broadcast_to(south[:, None], (ROWS, COLS))


def relief(east: Grid, south: Grid, longest_m: float, count: int) -> Grid:
    """Return smooth hills between about -1 and 1: cosines whose directions follow the golden angle."""
    total = np.zeros(east.shape)
    for k in range(count):
        angle, wave = 2.399963 * k + 0.4, longest_m * 0.82**k
        total += 0.86**k * np.cos(2 * np.pi * (east * np.cos(angle) + south * np.sin(angle)) / wave + 1.7 * k)
    return total / np.sqrt(count)


def valley(east: Grid, south: Grid) -> tuple[Grid, Grid]:
    """Return the ground before anybody built on it, and the distance from the middle of the valley."""
    aside = np.abs(south - (245.0 + 24.0 * np.sin(east / 115.0)))
    floor = np.where(east < DAM_EAST_M, 94.0 + 0.029 * (DAM_EAST_M - east), 94.0 - 0.012 * (east - DAM_EAST_M))
    side = np.sqrt(np.maximum(aside - 9.0, 0.0) ** 2 + 14.0**2) - 14.0
    hills = relief(east, south, 260.0, 9) * np.clip((aside - 15.0) / 70.0, 0.0, 1.0) * 2.6
    rough = relief(east + 31.0, south - 17.0, 34.0, 8) * 0.06
    return floor + 0.135 * side + hills + rough, aside


def with_embankment(ground: Grid, east: Grid, south: Grid) -> Grid:
    """Return the ground with the embankment on it; its crest has sagged a little near the old outlet."""
    crest = DAM_CREST_M - DAM_SAG_M * np.exp(-(((south - SAG_SOUTH_M) / 16.0) ** 2))
    away = np.maximum(np.abs(east - DAM_EAST_M) - DAM_HALF_WIDTH_M, 0.0)
    slope = np.where(east < DAM_EAST_M, WET_SLOPE, DRY_SLOPE)
    return np.maximum(ground, crest - away / slope)


def with_spillway(ground: Grid, east: Grid, south: Grid) -> Grid:
    """Return the ground with the old spillway cut into it."""
    cut = np.full(ground.shape, np.inf)
    for (x0, y0, z0), (x1, y1, z1) in itertools.pairwise(SPILLWAY):
        length2 = (x1 - x0) ** 2 + (y1 - y0) ** 2
        along = np.clip(((east - x0) * (x1 - x0) + (south - y0) * (y1 - y0)) / length2, 0.0, 1.0)
        aside = np.hypot(east - x0 - along * (x1 - x0), south - y0 - along * (y1 - y0))
        bed = z0 + along * (z1 - z0)
        cut = np.minimum(cut, bed + np.maximum(aside - 3.0, 0.0) * 0.7)
    return np.minimum(ground, cut)


def make() -> NDArray[np.float32]:
    """Return the elevations, in metres, rounded to centimetres."""
    east, south = positions()
    ground, aside = valley(east, south)
    below = np.clip((east - DAM_EAST_M - 22.0) / 10.0, 0.0, 1.0)
    ground = ground - 0.7 * below * np.exp(-((aside / 3.0) ** 2))  # the stream
    ground = with_spillway(with_embankment(ground, east, south), east, south)
    water = (east < DAM_EAST_M) & (ground < WATER_LEVEL_M)
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


def zone_text(corners: tuple[tuple[float, float], ...]) -> str:
    """Return a zone as GeoJSON: one polygon in longitude and latitude."""
    lonlat = Transformer.from_crs(CRS, "OGC:CRS84", always_xy=True)
    places = [lonlat.transform(WEST_M + east, NORTH_M - south) for east, south in (*corners, corners[0])]
    ring = [[round(lon, 7), round(lat, 7)] for lon, lat in places]
    feature = {"type": "Feature", "properties": {}, "geometry": {"type": "Polygon", "coordinates": [ring]}}
    return json.dumps({"type": "FeatureCollection", "features": [feature]}) + "\n"


def write_zones(folder: Path) -> None:
    """Write the zones."""
    for name, corners in ZONES.items():
        (folder / name).write_text(zone_text(corners), encoding="utf-8", newline="\n")


if __name__ == "__main__":
    dem = Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).with_name("dem.tif")
    write_zones(dem.parent)
    write(dem)
