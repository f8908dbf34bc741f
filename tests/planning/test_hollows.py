"""How much a hollow round the outlet holds, against closed forms."""

from __future__ import annotations

import re

import numpy as np
import pytest
from pyproj import Geod
from rasterio import Affine

STEP = 10.0 / 0.9996  # ground length of a 10 m cell at the central meridian of UTM


def notes_of(job):
    return [text for text in job.look().warnings if "closed hollow" in text]


def told(job):
    """Volume and level of the one note."""
    (text,) = notes_of(job)
    found = re.search(r"holds about ([\d,]+) m3 up to (-?[\d.]+) m", text)
    return float(found[1].replace(",", "")), float(found[2])


def pit(ground, floor, deep, foot=95.0, half=4, slope=0.0):
    """A valley with a square pit round the outlet; with a slope, an upturned pyramid of that fall per cell."""
    values = ground.reservoir(foot=foot)
    row, col = np.indices(values.shape)
    away = np.maximum(np.abs(row - 20), np.abs(col - 60))
    inside = away <= half
    values[inside] = np.minimum(floor + slope * away[inside], foot)
    assert values[20, 60] == foot - deep
    return values


def test_a_square_pit_holds_its_area_times_its_depth(make_job, ground):
    job = make_job(pit(ground, 90.0, 5.0), outlet={"level_m": 90.0})
    volume, level = told(job)
    assert level == 95.0
    assert volume == pytest.approx(81 * STEP**2 * 5.0, rel=5e-3)  # three figures are told


def test_an_upturned_pyramid_holds_the_sum_of_its_rings(make_job, ground):
    """Ring k of 8 k cells lies k slopes above the bottom."""
    job = make_job(pit(ground, 91.0, 4.0, half=4, slope=0.9), outlet={"level_m": 91.0})
    by_hand = STEP**2 * (4.0 + sum(8 * k * (4.0 - 0.9 * k) for k in range(1, 5)))
    volume, level = told(job)
    assert (volume, level) == (pytest.approx(by_hand, rel=5e-3), 95.0)


def test_it_fills_no_higher_than_the_lowest_level_of_the_water(make_job, ground):
    """Ground at 102 m all round: when the pit stands at 99 m the siphon has nothing left to fall."""
    job = make_job(pit(ground, 90.0, 12.0, foot=102.0), outlet={"level_m": 90.0})
    volume, level = told(job)
    assert (volume, level) == (pytest.approx(81 * STEP**2 * 9.0, rel=5e-3), 99.0)


def test_a_notch_in_the_rim_lets_it_drain_from_there(make_job, ground):
    values = pit(ground, 90.0, 5.0)
    values[20, 60:] = np.minimum(values[20, 60:], 92.5)
    volume, level = told(make_job(values, outlet={"level_m": 90.0}))
    assert level == 92.5
    assert volume == pytest.approx(81 * STEP**2 * 2.5, rel=5e-3)


@pytest.mark.parametrize(("deep", "noted"), [(0.24, False), (0.26, True)])
def test_shallow_hollows_are_within_the_noise_of_a_dem(make_job, ground, deep, noted):
    job = make_job(pit(ground, 95.0 - deep, deep), outlet={"level_m": 90.0})
    assert bool(notes_of(job)) == noted


@pytest.mark.parametrize(("outlet_m", "noted"), [(94.8, False), (94.7, True)])
def test_an_outlet_above_the_rim_is_never_drowned(make_job, ground, outlet_m, noted):
    assert bool(notes_of(make_job(pit(ground, 90.0, 5.0), outlet={"level_m": outlet_m}))) == noted


def test_ground_that_drains_is_no_hollow(make_job, ground):
    assert notes_of(make_job(ground.reservoir())) == []


def test_cells_of_degrees_have_the_area_of_their_latitude(make_job, ground):
    """The pit's geodesic area by Karney 2013, in PROJ: at 60 degrees half of what its degrees would be at the equator."""
    cell = 0.0001
    values = pit(ground, 90.0, 5.0)
    dem = {"crs": "EPSG:4326", "transform": Affine(cell, 0, 10.0, 0, -cell, 60.0)}
    places = {
        what: {"x": None, "y": None, "lon": 10.0 + (col + 0.5) * cell, "lat": 60.0 - 20.5 * cell}
        for what, col in (("intake", 10), ("outlet", 60))
    }
    volume, _ = told(make_job(values, dem=dem, **places))
    west, north, side = 10.0 + 56 * cell, 60.0 - 16 * cell, 9 * cell
    lon, lat = [west, west, west + side, west + side], [north, north - side, north - side, north]
    area, _ = Geod(ellps="WGS84").polygon_area_perimeter(lon, lat)
    assert volume == pytest.approx(area * 5.0, rel=5e-3)
