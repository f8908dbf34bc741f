"""Three routes over distinct crossings, through the planner, against one free search of its own grid."""

import tempfile
import time
from pathlib import Path

import numpy as np
import rasterio
from grounds import bank
from rows import Row, best_of

import routing
from routing.planning import extras
from routing.search import Limitation, search_grid

SIZE = 1000
SITE = """
title = "benchmark"
[terrain]
file = "dem.tif"
vertical_unit = "m"
water_shown = "bed"
[air]
altitude_m = 0.0
[water]
present_level_m = 0.5
lowest_level_m = 0.0
[intake]
x = 500250.5
y = 4999499.5
mouth_level_m = -0.7
[outlet]
x = 500750.5
y = 4999499.5
[demand]
discharge_m3s = 0.03
most_pipes = 1
[[pipes]]
table = "ISO 4427"
material = "PE100"
outside_diameter_mm = 315.0
sdr = 11.0
"""


def ground_with_gaps():
    """The bank with three gaps, each lower and further from the straight way."""
    ground = bank(SIZE, 5.2)
    for row, level in ((420, 4.0), (620, 3.2), (760, 2.4)):
        part = ground[row : row + 9, 400:600]
        part[part > level] = level
    return ground.astype(np.float32)


def crossings():
    """Time the search for other ways over."""
    timed = []
    find = extras.other_ways

    def watched(bench, lead, known):
        start = time.perf_counter()
        found = find(bench, lead, known)
        timed.append((time.perf_counter() - start, bench, found))
        return found

    extras.other_ways = watched
    try:
        with tempfile.TemporaryDirectory() as folder:
            transform = rasterio.Affine(1.0, 0.0, 500_000.0, 0.0, -1.0, 5_000_000.0)
            profile = {"driver": "GTiff", "height": SIZE, "width": SIZE, "count": 1, "dtype": "float32"}
            with rasterio.open(Path(folder) / "dem.tif", "w", crs="EPSG:32631", transform=transform, **profile) as dem:
                dem.write(ground_with_gaps(), 1)
            site = Path(folder) / "site.toml"
            site.write_text(SITE, encoding="utf-8")
            for _ in range(3):
                routing.plan(routing.load_site(site))
    finally:
        extras.other_ways = find
    seconds, bench, found = min(timed, key=lambda one: one[0])
    grid = bench.scene.grid
    free = best_of(lambda: search_grid(grid, [bench.scene.intake_cell], Limitation()), 3)
    used = sum(way.crossing.used for way in found.ways)
    note = f"{used} routes over crossings of their own, {grid.shape[0]} x {grid.shape[1]} cells"
    ratio = seconds / free
    yield Row("three crossings: time over one free search", ratio, "at most 6", ratio <= 6 and used == 3, note)
