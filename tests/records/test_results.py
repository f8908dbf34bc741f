"""Appraisals, verdicts and plans: each flat name is the one that its page says."""

from __future__ import annotations

from types import SimpleNamespace

import numpy as np
import pytest

from routing.records import GRADES, Appraisal, Check, Plan, Scheme, SiphonRun, Verdict


def run(mark):
    """A running state whose every figure carries the mark, so that a mix-up shows."""
    names = [name for name in SiphonRun.__slots__ if name not in {"crown_pressure_pa", "governs", "breaking_cause"}]
    figures = {name: mark + 0.01 * number for number, name in enumerate(names)}
    return SiphonRun(**figures, governs=f"governs {mark}", crown_pressure_pa=np.full(3, mark), breaking_cause="none")


@pytest.fixture
def appraisal():
    return Appraisal(np.arange(3.0), run(1.0), run(2.0), run(3.0), 0.2, None, 4.0, 10.3)


@pytest.mark.parametrize(
    ("name", "state"),
    [
        ("discharge_m3s", "largest"),
        ("governs", "largest"),
        ("lift_m", "largest"),
        ("fall_m", "largest"),
        ("valve_loss", "largest"),
        ("breaking_level_m", "largest"),
        ("crown_pressure_pa", "duty"),
        ("reserve_left_m", "duty"),
    ],
)
def test_flat_names_are_those_of_the_largest_state_but_pressures_and_reserve_at_duty(appraisal, name, state):
    expected = getattr(getattr(appraisal, state), name)
    assert np.all(getattr(appraisal, name) == expected)
    for other in {"largest", "duty", "present"} - {state}:
        assert not np.all(getattr(getattr(appraisal, other), name) == expected)


def check(grade):
    return Check("c", "a check", grade, 1.0, 2.0, "m", 1.0, "for a reason", "common practice")


def verdict(*grades):
    checks = tuple(check(grade) for grade in grades)
    return Verdict(grades[0], grades[0], checks[0], "for a reason", checks)


def test_checks_not_made_are_told_apart():
    found = verdict("caution", None, "fit", None)
    assert found.not_made == (found.checks[1], found.checks[3])
    assert str(found) == "caution"


def test_grades_run_from_good_to_bad():
    assert GRADES == ("fit", "caution", "unfit")


def scheme(grade, count, appraisal):
    return Scheme(1, None, None, count, appraisal, None, verdict(grade))


def test_pipes_side_by_side_carry_so_many_times_as_much(appraisal):
    assert scheme("fit", 3, appraisal).total_discharge_m3s == 3 * appraisal.largest.discharge_m3s


@pytest.mark.parametrize(
    ("grades", "feasible"),
    [((), False), (("unfit",), False), (("unfit", "caution"), True), (("fit",), True), (("unfit", "unfit"), False)],
)
def test_a_plan_is_feasible_if_any_scheme_breaks_no_limit(appraisal, grades, feasible):
    schemes = tuple(scheme(grade, 1, appraisal) for grade in grades)
    plan = Plan(SimpleNamespace(), None, None, None, None, schemes, (), (), ())
    assert plan.feasible == feasible
    assert plan.timings_s == {}
