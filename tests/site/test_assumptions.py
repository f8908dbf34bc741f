"""Defaults that matter are told; what the user states is not told back as an assumption."""

from __future__ import annotations

import pytest

from routing.site import load_site


def told(site, key):
    return [sentence for sentence in site.assumptions if f"({key})" in sentence]


@pytest.mark.parametrize(
    ("key", "says", "edit"),
    [
        ("terrain.surface", "bare ground", ('"dem.tif"', '"dem.tif"\nsurface = "ground"')),
        ("terrain.vertical_error_90_m", "vertical error", ('"dem.tif"', '"dem.tif"\nvertical_error_90_m = 0.1')),
        ("terrain.water_shown", "flat surface", ('"dem.tif"', '"dem.tif"\nwater_shown = "surface"')),
        ("air.barometric_low_pa", "3000 Pa", ("= 105.0", "= 105.0\nbarometric_low_pa = 3000")),
        ("water.temperature_c", "10 °C", ("[intake]", "temperature_c = 10\n[intake]")),
        ("outlet.tailwater_level_m", "freely", ("level_m = 93.3", "level_m = 93.3\ntailwater_level_m = 93")),
        ("losses.entrance", "K = 0.5", ("[air]", "[losses]\nentrance = 0.5\n[air]")),
        ("losses.exit", "K = 1", ("[air]", "[losses]\nexit = 1\n[air]")),
        ("losses.valve_open", "K = 0", ("[air]", "[losses]\nvalve_open = 0\n[air]")),
        ("losses.bend_loss_per_km", "K = 0", ("[air]", "[losses]\nbend_loss_per_km = 0\n[air]")),
        ("limits.least_submergence_m", "0.3 m", ("= 2.5", "= 2.5\nleast_submergence_m = 0.3")),
        ("limits.collapse_safety", "2", ("= 2.5", "= 2.5\ncollapse_safety = 2")),
        ("limits.pipe_load_hours", "8760 h", ("= 2.5", "= 2.5\npipe_load_hours = 8760")),
    ],
)
def test_a_default_is_told_until_it_is_stated(make, key, says, edit):
    (sentence,) = told(load_site(make()), key)
    assert says in sentence
    assert told(load_site(make(edit)), key) == []


@pytest.mark.parametrize(
    ("key", "edit"),
    [
        ("limits.reserve_m", ("reserve_m = 2.5", "")),
        ("air.altitude_m", ("altitude_m = 105.0", "")),
        ("water.present_level_m", ("present_level_m = 101.2\n", "")),
        ("outlet.height_above_ground_m", ("level_m = 93.3", "")),
    ],
)
def test_a_key_left_out_is_told(make, key, edit):
    assert told(load_site(make()), key) == []
    assert len(told(load_site(make(edit)), key)) == 1


def test_pipes_share_a_sentence(make):
    site = load_site(make())
    assert "pipes 1, 3: Out-of-roundness is taken as 3 % (ovality_pct)." in site.assumptions
    assert "pipe 2: Out-of-roundness is taken as 1 % (ovality_pct)." in site.assumptions
    assert "pipe 1: The material is taken to be PE100 (material)." in site.assumptions
    assert any(s.startswith("pipe 3: No modulus") for s in site.assumptions)
    assert any(s.startswith("pipe 3: The thinnest wall") for s in site.assumptions)
    assert any(s.startswith("pipe 3: Poisson") for s in site.assumptions)


def test_prices(make):
    assert len(told(load_site(make()), "pipes.supply_per_m")) == 1
    edits = [(size, f"{size}\nsupply_per_m = 5") for size in ("sdr = 17.0", "wall_mm = 6.3", "roughness_mm = 0.5")]
    site = load_site(make(*edits))
    assert told(site, "pipes.supply_per_m") == []
    assert len(told(site, "prices.currency")) == len(told(site, "prices.date")) == 1
    assert "pipes 1, 2, 3: laying_per_m is not given and counts as 0." in site.assumptions
