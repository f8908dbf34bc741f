"""What the user asks: defaults that every output states."""

from __future__ import annotations

import dataclasses
from pathlib import Path

import pytest

from routing.records import AirAsk, DemandAsk, LimitsAsk, OutletAsk, PointAsk, SearchAsk, Site, TerrainAsk, WaterAsk


@pytest.fixture
def site():
    point = PointAsk(x=1.0, y=2.0)
    from routing.records import IntakeAsk

    return Site(
        Path("site.toml"),
        "t",
        TerrainAsk(Path("dem.tif")),
        WaterAsk(lowest_level_m=9.0),
        IntakeAsk(point),
        OutletAsk(point),
        (),
    )


def test_nothing_is_guessed_of_what_was_not_said(site):
    """Unknown stays unknown: ``None`` or the word for it, never a figure."""
    terrain = site.terrain
    assert (terrain.vertical_unit, terrain.vertical_datum, terrain.vertical_error_m) == (None, None, None)
    assert terrain.surface == "unknown"
    assert (site.water.present_level_m, site.intake.mouth_level_m, site.outlet.level_m) == (None, None, None)
    assert (site.air.pressure_pa, site.air.altitude_m) == (None, None)
    assert (site.demand.discharge_m3s, site.demand.budget) == (None, None)
    assert site.liquid is None


def test_defaults_are_on_the_safe_side():
    """Air falls, suction is kept off boiling, and the pipe must stand what it is put under."""
    assert AirAsk().barometric_low_pa > 0.0
    assert LimitsAsk().reserve_m > 0.0
    assert LimitsAsk().collapse_safety > 1.0
    assert LimitsAsk().least_submergence_m > 0.0
    assert LimitsAsk().highest_lift_m is None
    assert DemandAsk().most_pipes >= 1
    assert 0.0 < SearchAsk().tolerance < 0.01
    assert SearchAsk().ground_rule == "bilinear"


def test_two_sites_share_no_lines(site):
    other = dataclasses.replace(site, lines={"air": 3})
    assert site.lines == {}
    assert other.lines == {"air": 3}
    with pytest.raises(dataclasses.FrozenInstanceError):
        site.title = "another"


def test_an_outlet_on_the_ground_is_the_default(site):
    assert site.outlet.height_above_ground_m == 0.0
    assert site.outlet.tailwater_level_m is None
