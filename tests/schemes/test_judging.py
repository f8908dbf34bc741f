"""Verdicts: as bad as the worst check, said in sentences that hold."""

import re
from dataclasses import replace

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from routing.records import GRADES, Levels
from routing.schemes import NOT_MADE, judge, list_checks, worst_of

FT = 0.3048


def test_all_well_is_fit_on_the_checks_made(job_of):
    verdict = judge(job_of().matter(0.05))
    assert (verdict.grade, verdict.grade_of_made) == ("caution", "fit")
    assert verdict.governing.name == "suction"
    assert verdict.reason.startswith("all 11 checks made are fit; 9 are not made. ")
    assert [check.name for check in verdict.not_made] == [name for name, _, _ in NOT_MADE]


def test_every_check_is_listed_with_a_source(job_of):
    for job in (job_of(), job_of(lowest=Levels(98.8, 93.0)), job_of(lowest=Levels(98.8, 98.8))):
        checks = list_checks(job.matter(0.05))
        assert len({check.name for check in checks}) == len(checks)
        assert all(check.title and check.reason and check.source for check in checks)


def test_worst_of():
    assert worst_of(()) == "fit"
    assert worst_of(("fit", "fit")) == "fit"
    assert worst_of(("fit", None)) == "caution"
    assert worst_of(("fit", "caution", "unfit", None)) == "unfit"


@pytest.mark.parametrize(
    ("changes", "grade", "governing"),
    [
        ({"vertical_error_m": None}, "caution", "dem_error"),
        ({"surface": "canopy"}, "caution", "surface"),
        ({"barrier_cells": 2.0}, "caution", "barrier"),
        ({"budget": 10_000.0}, "unfit", "budget"),
        ({"budget": 10_000.0, "surface": "canopy"}, "unfit", "budget"),
        ({"required_m3s": 9.0, "budget": 10_000.0}, "unfit", "discharge"),
    ],
)
def test_the_first_of_the_worst_governs(job_of, changes, grade, governing):
    verdict = judge(job_of().matter(0.05, **changes))
    assert (verdict.grade_of_made, verdict.governing.name) == (grade, governing)
    assert verdict.reason == verdict.governing.reason


def test_a_duty_that_suction_refuses_is_unfit_by_suction(job_of, parting):
    for job, duty in ((parting, 95.2 * FT**3), (job_of(crown_m=(98.0, 105.9, 102.0, 93.0)), 0.15)):
        verdict = judge(job.matter(duty))
        assert (verdict.grade, verdict.governing.name) == ("unfit", "suction")
        assert "too high at chainage" in verdict.reason
        assert next(check for check in verdict.checks if check.name == "discharge").grade == "unfit"


def test_more_than_the_fall_drives_is_unfit_by_discharge(job_of):
    job = job_of(crown_m=(98.0, 97.0, 96.0, 93.0))
    verdict = judge(job.matter(1.1 * job.appraise().largest.energy_discharge_m3s))
    assert (verdict.grade, verdict.governing.name) == ("unfit", "discharge")


def test_judged_at_duty_not_at_the_largest_discharge(throttling):
    # Runs throttled: at its largest there is no reserve left, at half of it there is plenty.
    assert judge(throttling.matter()).governing.name == "suction"
    assert judge(throttling.matter()).grade_of_made == "caution"
    half = judge(throttling.matter(0.5 * throttling.appraise().discharge_m3s))
    assert next(check for check in half.checks if check.name == "suction").grade == "fit"


def test_judged_at_the_lowest_level(job_of):
    job = job_of(present_m=104.0)
    assert judge(job.matter(0.1)).checks[0] == judge(replace(job, present_m=101.2).matter(0.1)).checks[0]


NONSENSE = re.compile(
    r"-0(\.0+)?\b|nan|inf\b|  |^\s|\s$|None|e[+-]\d|(?<![\d.,])0\.00 m (too|above|below)", re.IGNORECASE
)
any_number = st.one_of(st.floats(-8.0, 8.0), st.sampled_from([0.0, -0.0, 1e-9, -1e-9, 2e-6, -2e-6, 0.004, -0.004]))


@settings(max_examples=150)
@given(data=st.data(), left=any_number, lift=any_number, over=any_number, cells=st.floats(0.0, 30.0))
def test_sentences_hold_whatever_the_figures(data, left, lift, over, cells, job_of, changed):
    base = job_of().matter(
        0.1, barrier_cells=cells, vertical_error_m=data.draw(st.one_of(st.none(), st.floats(0.01, 5.0)))
    )
    cost = replace(base.cost, total=48_000.0 + over)
    largest = {"breaking_level_m": 98.8 + over, "lift_m": lift, "discharge_m3s": 0.1 + 1e-3 * over}
    made = changed(replace(base, cost=cost), duty={"reserve_left_m": left}, largest=largest)
    verdict = judge(made)
    for check in verdict.checks:
        assert not NONSENSE.search(check.reason), check.reason
        assert not check.reason.endswith(".")
        if check.grade == "unfit" and check.reserve is not None:
            assert check.reserve < 0.0
    made_grades = [check.grade for check in verdict.checks if check.grade]
    assert verdict.grade_of_made == max(made_grades, key=GRADES.index)
    assert verdict.governing.grade == verdict.grade_of_made


@settings(max_examples=60)
@given(crest=st.floats(99.0, 108.0), duty=st.one_of(st.none(), st.floats(0.001, 0.4)))
def test_real_appraisals_are_said_without_nonsense_and_unfit_where_they_must(crest, duty, job_of):
    job = job_of(crown_m=(98.0, crest, 97.0, 93.0))
    verdict = judge(job.matter(duty))
    found = job.appraise(duty)
    for check in verdict.checks:
        assert not NONSENSE.search(check.reason), check.reason
    works = found.discharge_m3s > 0.0 and (duty is None or found.discharge_m3s >= duty * (1 - 1e-6))
    if not works:
        assert verdict.grade == "unfit"
    if verdict.grade != "unfit":
        assert works
        assert found.reserve_left_m > -1e-6
