"""The draft holds what can be used, and only that."""

from __future__ import annotations

from routing.site.draft import Draft


def test_given_default_refused_and_absent(tmp_path):
    raw = {
        "terrain": {"file": "a/dem.tif", "band": 2},
        "water": {"lowest_level_m": 3, "temperature_c": 99},
        "pipes": [{"sdr": 11.0}, 5, {"wall_mm": 2.0}],
    }
    draft = Draft(raw, {"water.temperature_c"}, tmp_path)
    assert draft.given("water.lowest_level_m")
    assert draft.number("water.lowest_level_m") == 3.0
    assert draft.number("limits.reserve_m") == 2.5
    assert not draft.given("limits.reserve_m")
    assert draft.number("water.temperature_c") is None
    assert draft.number("water.present_level_m") is None
    assert draft.number("terrain.file") is None
    assert draft.text("terrain.file") == "a/dem.tif"
    assert draft.text("terrain.surface") == "unknown"
    assert draft.path("terrain.file") == tmp_path / "a" / "dem.tif"
    assert draft.path("water.polygon_file") is None
    assert draft.pipes() == ["pipes[1]", "pipes[3]"]
    assert "intake" not in draft.sections
    assert "limits" in draft.sections


def test_sections_that_are_no_tables_are_left_out(tmp_path):
    draft = Draft({"water": 3, "pipes": "no", "limits": 1}, {"water", "pipes", "limits"}, tmp_path)
    assert draft.pipes() == []
    assert draft.number("water.lowest_level_m") is None
    assert draft.number("limits.reserve_m") is None
