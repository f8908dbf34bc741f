"""Checks of trust and of air: both sides of each boundary."""

import math
from dataclasses import replace

import pytest

from routing.records import Levels
from routing.schemes.trust_checks import barrier, ground_error, high_points, lift_share, outlet_air, surface

UP, DOWN = math.inf, -math.inf


@pytest.fixture
def matter(job_of):
    return job_of().matter(0.1)


@pytest.mark.parametrize(
    ("lift", "grade", "words"),
    [
        (6.4, "fit", "the lift of 6.40 m is 0.64 of the barometric head; up to 0.65 is workable"),
        (6.5, "fit", "0.65 of"),
        (6.501, "caution", "0.6501 of the barometric head; up to 0.6500"),
        (0.0, "fit", "the crest is level with the lowest level: no lift"),
        (-1.5, "fit", "the crest lies 1.50 m below the lowest level: no lift"),
    ],
)
def test_lift_share(matter, changed, lift, grade, words):
    check = lift_share(changed(matter, largest={"lift_m": lift}, barometric_head_m=10.0))
    assert check.grade == grade
    assert words in check.reason


@pytest.mark.parametrize(
    ("error", "left", "grade", "words"),
    [
        (0.5, 0.5, "fit", "keeps within the 0.50 m of reserve left"),
        (math.nextafter(0.5, UP), 0.5, "caution", "is more than"),
        (0.502, 0.5, "caution", "the error of 0.502 m (90 %) is more than the 0.500 m"),
        (0.15, 0.0, "caution", "finds no reserve left"),
        (0.15, -1.0, "caution", "finds no reserve left"),
        (None, 5.0, "caution", "not stated"),
    ],
)
def test_ground_error(matter, changed, error, left, grade, words):
    check = ground_error(replace(changed(matter, duty={"reserve_left_m": left}), vertical_error_m=error))
    assert check.grade == grade
    assert words in check.reason


def test_surface(matter):
    grades = {kind: surface(replace(matter, surface=kind)).grade for kind in ("ground", "canopy", "unknown")}
    assert grades == {"ground": "fit", "canopy": "caution", "unknown": "caution"}


@pytest.mark.parametrize(
    ("cells", "grade", "words"),
    [(3.0, "fit", "3.0 cells"), (math.nextafter(3.0, DOWN), "caution", ""), (2.96, "caution", "2.96 cells wide")],
)
def test_barrier(matter, cells, grade, words):
    check = barrier(replace(matter, barrier_cells=cells))
    assert check.grade == grade
    assert words in check.reason
    assert ("cut its crest" in check.reason) == (grade == "caution")


# -- Air at a free outlet ----------------------------------------------------------------------------------------


def at_froude(matter, changed, froude, valve_loss=0.0):
    velocity = froude * math.sqrt(9.80665 * matter.pipe.bore_m)
    return changed(matter, duty={"velocity_ms": velocity, "valve_loss": valve_loss})


@pytest.mark.parametrize(("froude", "grade"), [(0.5421, "fit"), (0.5419, "caution")])
def test_a_free_open_outlet_draws_air_below_the_froude_number(matter, changed, froude, grade):
    check = outlet_air(at_froude(matter, changed, froude))
    assert check.grade == grade
    assert check.figure == pytest.approx(froude)
    assert f"= {froude:.4f}" in check.reason


@pytest.mark.parametrize(("share", "grade"), [(1.001, "fit"), (0.999, "caution")])
def test_a_valve_counts_where_it_wets_the_crown(matter, changed, share, grade):
    # K V^2/2g = D/2 with V = F sqrt(g D): K = 1/F^2.
    assert outlet_air(at_froude(matter, changed, 0.4, share / 0.4**2)).grade == grade


@pytest.mark.parametrize(("over", "grade"), [(0.51, "fit"), (0.49, "caution")])
def test_tailwater_counts_where_it_covers_the_crown(job_of, changed, over, grade):
    job = job_of()
    drowned = replace(job, lowest=replace(job.lowest, tailwater_m=93.0 + over * job.pipe.bore_m))
    assert outlet_air(at_froude(drowned.matter(0.1), changed, 0.4)).grade == grade


def test_where_nothing_flows_air_is_not_judged(job_of):
    check = outlet_air(job_of(lowest=Levels(98.8, 98.8)).matter())
    assert (check.grade, check.reason) == (None, "nothing flows")


@pytest.mark.parametrize(
    ("points", "grade", "words"),
    [
        ((), "fit", "no high point above the lowest level besides the crest"),
        ((90.4,), "caution", "1 more high point above the lowest level, where air gathers: chainage 90 m"),
        (tuple(range(7)), "caution", "7 more high points above the lowest level, where air gathers: chainage 0, 1, 2"),
    ],
)
def test_high_points(matter, changed, points, grade, words):
    check = high_points(changed(matter, high_points=points))
    assert (check.grade, check.figure) == (grade, len(points))
    assert check.reason.startswith(words)
    assert check.reason.endswith("4, 5, ... m") == (len(points) > 6)
