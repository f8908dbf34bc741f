"""Checks against limits: both sides of each boundary, and what the sentences say."""

import math
from dataclasses import replace

import pytest

from routing.records import Cost, Levels
from routing.schemes.limit_checks import breaking, budget, collapse, discharge, submergence, suction

UP, DOWN = math.inf, -math.inf


@pytest.fixture
def matter(job_of):
    return job_of().matter(0.1)


@pytest.mark.parametrize(
    ("left", "grade", "words"),
    [
        (2.0, "fit", "2.00 m of water are left above the reserve of 2.5 m, least at chainage 30 m"),
        (0.5, "fit", "0.50 m of water"),
        (math.nextafter(0.5, DOWN), "caution", "(0.5 m are wanted)"),
        (0.498, "caution", "0.498 m of water are left above the reserve of 2.5 m (0.5 m are wanted), least at"),
        (0.001, "caution", "under 0.01 m of water are left"),
        (0.0, "caution", "0.00 m of water are left"),
        (-0.9e-6, "caution", "0.00 m of water are left"),
        (-1.1e-6, "unfit", "the crown lies under 0.01 m too high at chainage 30 m to keep the reserve of 2.5 m"),
        (-1.25, "unfit", "the crown lies 1.25 m too high"),
    ],
)
def test_suction(matter, changed, left, grade, words):
    check = suction(changed(matter, duty={"reserve_left_m": left}))
    assert (check.grade, check.reserve) == (grade, left)
    assert words in check.reason


@pytest.mark.parametrize(
    ("highest", "grade", "words"),
    [
        (9.0, "fit", "m of water are left above the reserve"),  # the pressure leaves less than 3 m
        (6.6, "fit", "the crest lies 0.60 m below the highest lift of 6.6 m"),
        (6.1, "caution", "the crest lies 0.10 m below the highest lift of 6.1 m (0.5 m are wanted), at chainage 30 m"),
        (5.5, "unfit", "the crest lies 0.50 m above the highest lift of 5.5 m"),
    ],
)
def test_highest_lift_is_named_where_it_leaves_least(job_of, highest, grade, words):
    job = job_of()
    check = suction(replace(job, limits=replace(job.limits, highest_lift_m=highest)).matter(0.05))
    assert (check.grade, words in check.reason) == (grade, True), check.reason


@pytest.mark.parametrize(
    ("total", "grade"), [(0.31, "fit"), (0.3, "fit"), (0.3 * (1 - 0.9e-6), "fit"), (0.3 * (1 - 1.1e-6), "unfit")]
)
def test_discharge(matter, changed, total, grade):
    asked = replace(matter, required_m3s=0.3, count=3)
    (check,) = discharge(changed(asked, largest={"discharge_m3s": total / 3}, duty={"discharge_m3s": total / 3}))
    assert check.grade == grade
    assert check.reserve == pytest.approx(total - 0.3)
    assert ("less than" if grade == "unfit" else "enough for") in check.reason
    assert check.reason.startswith("3 x PE100 315 SDR 11 carry ")


def test_discharge_says_what_bounds_it(job_of, parting):
    # The demo pipe carries less than 0.5 m3/s: suction; without the embankment the fall.
    (check,) = discharge(job_of().matter(0.5))
    assert "bounded by suction: less than the 0.500 m3/s asked" in check.reason
    assert check.reason.startswith("PE100 315 SDR 11 carries ")
    (check,) = discharge(job_of(crown_m=(98.0, 97.0, 96.0, 93.0)).matter(0.5))
    assert "bounded by the fall" in check.reason
    assert list(discharge(job_of().matter())) == []


def test_a_duty_beyond_suction_by_rounding_alone_is_carried(matter, changed):
    less = matter.required_m3s * (1 - 1e-5)
    held = changed(matter, largest={"discharge_m3s": less}, duty={"reserve_left_m": -0.9e-6})
    assert next(discharge(held)).grade == suction(held).grade.replace("caution", "fit") == "fit"
    lost = changed(matter, largest={"discharge_m3s": less}, duty={"reserve_left_m": -1.1e-6})
    assert next(discharge(lost)).grade == suction(lost).grade == "unfit"


@pytest.mark.parametrize(
    ("allowed_kpa", "grade", "words"),
    [
        (60.0, "fit", "the suction of 50 kPa keeps within the 60 kPa that the wall may bear (factor 2)"),
        (50.0, "fit", "keeps within"),
        (49.9, "unfit", "the suction of 50.0 kPa is more than the 49.9 kPa"),
        (10.0, "unfit", "50 kPa is more than the 10 kPa"),
    ],
)
def test_collapse(matter, changed, allowed_kpa, grade, words):
    made = changed(matter, collapse_pressure_pa=2e3 * allowed_kpa, least_inside_pressure_pa=97_070.0 - 50e3)
    check = collapse(made)
    assert check.grade == grade
    assert words in check.reason
    assert check.reserve == pytest.approx(1e3 * (allowed_kpa - 50.0))


def test_collapse_never_asks_for_more_than_a_vacuum(matter, changed):
    check = collapse(changed(matter, least_inside_pressure_pa=-40e3))
    assert check.figure == pytest.approx(97_070.0 - matter.conditions.water.vapour_pressure_pa)
    assert collapse(changed(matter, least_inside_pressure_pa=120e3)).figure == 0.0


def test_collapse_of_an_unknown_wall_is_not_made(matter, changed):
    check = collapse(changed(matter, collapse_pressure_pa=None))
    assert check.grade is None
    assert "not known" in check.reason


@pytest.mark.parametrize(
    ("level", "grade", "words"),
    [
        (97.2, "fit", "the siphon stops at level 97.20 m, 1.60 m below the lowest level"),
        (98.8, "fit", "level 98.80 m, the lowest level itself"),
        (98.8 + 0.9e-6, "fit", "the lowest level itself"),
        (98.8 + 1.1e-6, "unfit", "under 0.01 m above the lowest level"),
        (100.1, "unfit", "level 100.10 m, 1.30 m above the lowest level"),
    ],
)
def test_breaking(matter, changed, level, grade, words):
    check = breaking(changed(matter, largest={"breaking_level_m": level}))
    assert check.grade == grade
    assert words in check.reason


def test_what_does_not_run_does_not_work(job_of):
    level = job_of(lowest=Levels(98.8, 98.8, None, 98.0)).matter()
    assert not level.appraisal.largest.runs
    assert level.appraisal.reserve_left_m > 0.5  # still water is held with ease, and that is not enough
    assert breaking(level).grade == "unfit"


@pytest.mark.parametrize(
    ("lowest", "highest_lift", "words"),
    [
        (Levels(98.8, 93.0, None, 98.0), None, "the intake mouth then lacks its least submergence of 0.3 m"),
        (Levels(98.8, 93.0, None, 90.0), None, "the suction limit then leaves no flow"),
        (Levels(98.8, 93.0, None, 90.0), 6.1, "the lift is then the highest allowed"),
        (Levels(98.8, 98.4, None, 90.0), None, "the water is then level with the outlet"),
        (Levels(98.8, 93.0, 98.5, 90.0), None, "the water is then level with the tailwater"),
    ],
)
def test_what_stops_the_siphon(job_of, lowest, highest_lift, words):
    job = job_of(lowest=lowest)
    job = replace(job, limits=replace(job.limits, highest_lift_m=highest_lift))
    assert breaking(job.matter()).reason.endswith(f": {words}")


def test_cover_of_an_intake_of_unknown_level_is_not_made(job_of):
    assert list(submergence(job_of().matter())) == []
    (check,) = submergence(job_of(lowest=Levels(98.8, 93.0)).matter())
    assert (check.grade, check.reason) == (None, "the level of the intake mouth is not stated")


@pytest.mark.parametrize(
    ("total", "grade", "words"),
    [
        (43_900.0, "fit", "the cost of 43,900 EUR is 4,100 under the budget of 48,000 EUR (invented prices)"),
        (48_000.0, "fit", "the cost of 48,000.00 EUR is just the budget"),
        (48_000.004, "fit", "just the budget"),
        (48_000.01, "unfit", "the cost of 48,000.01 EUR is 0.01 over the budget of 48,000.00 EUR"),
        (50_000.0, "unfit", "2,000 over the budget"),
    ],
)
def test_budget(matter, total, grade, words):
    (check,) = budget(replace(matter, cost=replace(matter.cost, total=total)))
    assert check.grade == grade
    assert words in check.reason


def test_no_price_is_no_check_and_no_budget_neither(matter):
    (check,) = budget(replace(matter, cost=Cost((), 0.0, "", "", invented=False)))
    assert check.grade is None
    assert list(budget(replace(matter, budget=None))) == []
    real = replace(matter, cost=replace(matter.cost, currency="", invented=False))
    assert next(budget(real)).reason == "the cost of 30,000 is 18,000 under the budget of 48,000"
