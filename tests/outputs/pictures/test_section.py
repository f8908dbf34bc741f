from dataclasses import replace

import numpy as np
import pytest

from routing.outputs.pictures.section import section_of, thinned
from routing.outputs.pictures.subject import grade_line_m, overview
from routing.outputs.tables import sections_table


def test_the_grade_line_is_the_water_level_less_the_losses(plan):
    """By hand, as the records were made: K 1.5 and Darcy 0.015 along the bore, velocity head of 100 l/s."""
    scheme = plan.schemes[0]
    bore = 0.315 - 2 * 0.0196
    head = (0.1 / (0.25 * np.pi * bore**2)) ** 2 / (2 * 9.80665)
    expected = 100.0 - (1.5 + 0.015 * scheme.route.chainage_m / bore) * head
    np.testing.assert_allclose(grade_line_m(plan, scheme), expected, atol=1e-9)


def test_still_water_has_a_level_grade_line(plan):
    np.testing.assert_allclose(grade_line_m(plan, plan.schemes[3]), 100.0, atol=1e-9)


def test_the_section_drawn_is_the_one_in_the_table(plan):
    section = section_of(overview(plan), plan.schemes[0])
    rows = [line.split(",") for line in sections_table(plan).splitlines()]
    head, body = rows[0], [row for row in rows[1:] if row[0] == "R1"]
    for name, line in (
        ("chainage_m", section.chainage_m),
        ("ground_m", section.ground_m),
        ("crown_m", section.crown_m),
        ("ceiling_m", section.ceiling_m),
    ):
        np.testing.assert_allclose([float(row[head.index(name)]) for row in body], line, atol=1e-3)


def test_the_reserve_left_is_the_gap_between_ceiling_and_crown(plan):
    section = section_of(overview(plan), plan.schemes[0])
    gap = section.ceiling_m - section.crown_m
    assert gap.min() == pytest.approx(plan.schemes[0].appraisal.reserve_left_m)
    k = int(np.argmin(np.abs(section.chainage_m - section.lowest_pressure.chainage_m)))
    assert gap[k] == pytest.approx(gap.min())
    assert section.crest.level_m == section.crown_m.max()


def test_long_lines_are_thinned_without_losing_highest_and_lowest(rng):
    chainage = np.linspace(0.0, 5000.0, 40_001)
    level = np.cumsum(rng.normal(size=chainage.size))
    kept = thinned(chainage, level, (12_345,))
    assert len(kept) < 1500
    assert {0, 40_000, 12_345, int(level.argmax()), int(level.argmin())} <= set(kept)
    assert (np.diff(kept) > 0).all()


def test_short_lines_are_left_alone():
    chainage = np.linspace(0.0, 10.0, 50)
    assert (thinned(chainage, chainage, ()) == np.arange(50)).all()


def test_water_is_where_the_body_is(everything):
    section = section_of(overview(everything), everything.schemes[0])
    cells = everything.water_body.cells
    assert section.wet_present[0]
    assert not section.wet_present[len(section.wet_present) // 2]
    assert (section.wet_lowest <= section.wet_present).all()
    dry = replace(everything, water_body=replace(everything.water_body, cells=np.zeros_like(cells)))
    assert not section_of(overview(dry), dry.schemes[0]).wet_present.any()


def test_the_crossing_is_where_the_route_passes_it(everything):
    scheme = everything.schemes[0]
    at = section_of(overview(everything), scheme).crossing_m
    crossing = everything.crossings[0]
    x = np.interp(at, scheme.route.chainage_m, scheme.route.x)
    assert abs(x - crossing.x) < 8.0  # samples lie some 7 m apart
    plain = replace(everything, crossings=())
    assert section_of(overview(plain), scheme).crossing_m is None


@pytest.fixture
def rng():
    return np.random.default_rng(5)
