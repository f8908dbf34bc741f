from dataclasses import replace

import pytest

from routing.outputs.ways import (
    crossing_rows,
    either,
    finding,
    is_driven,
    least_bad,
    missing_m,
    own_samples,
    remedies,
    sample_rows,
    told_m,
)


@pytest.fixture
def plan(make):
    return make.beside()


def lacking(plan, metres, **changes):
    """The appraisal of the best scheme with its whole profile and pressure moved so that metres are missing."""
    appraisal = plan.schemes[0].appraisal
    gamma = plan.setting.water.density_kgm3 * plan.setting.limits.gravity_ms2
    lowered = metres + appraisal.duty.reserve_left_m
    pressure = appraisal.duty.crown_pressure_pa - lowered * gamma
    lift = appraisal.duty.lift_m + lowered
    duty = replace(appraisal.duty, crown_pressure_pa=pressure, reserve_left_m=-metres, lift_m=lift, **changes)
    return replace(appraisal, duty=duty)


def with_limits(plan, **changes):
    return replace(plan, setting=replace(plan.setting, limits=replace(plan.setting.limits, **changes)))


def test_crossings_know_the_best_scheme_over_them(plan):
    rows = crossing_rows(plan)
    assert [row.crossing.name for row in rows] == ["C1", "C2", "C3"]
    assert [row.best and row.best.rank for row in rows] == [1, 3, None]
    assert [row.schemes for row in rows] == [2, 2, 0]


def test_samples_know_the_routes_that_they_are(plan):
    assert [(row.number, row.same_as) for row in sample_rows(plan)] == [(1, ""), (2, "R1"), (3, "")]
    assert [row.sample.route.name for row in own_samples(plan)] == ["R3", "R4"]


def test_a_sample_that_became_a_route_of_the_schemes_is_known_by_its_name(plan):
    later = replace(plan.samples[0], route=replace(plan.samples[0].route, name="R2"))
    assert sample_rows(replace(plan, samples=(later,)))[0].same_as == "R2"


def test_a_sample_like_a_route_without_a_scheme_is_its_own(plan):
    lone = replace(plan.samples[0], same_as="R9")
    assert own_samples(replace(plan, samples=(lone,)))


def test_what_is_missing_is_never_negative(plan):
    assert missing_m(plan.schemes[0].appraisal) == 0.0
    assert missing_m(lacking(plan, 1e-9)) == 0.0
    assert missing_m(lacking(plan, 0.8)) == pytest.approx(0.8)


def test_what_helps_is_rounded_up():
    assert [told_m(value) for value in (0.561, 0.56, 0.5601, 0.0001, 1234.5)] == [
        "0.57", "0.56", "0.57", "0.01", "1,234.50",
    ]  # fmt: skip


def test_words_as_a_choice():
    assert [either(words) for words in (["a"], ["a", "b"], ["a", "b", "c"])] == ["a", "a or b", "a, b or c"]


@pytest.mark.parametrize(
    ("missing", "expected"),
    [
        (0.8, "0.80 m of trench, level or reserve"),
        (2.2, "2.20 m of trench or reserve"),  # the lowest level lies 2 m under the present one
        (2.6, "2.60 m of trench"),  # the reserve is 2.5 m
    ],
)
def test_only_what_can_still_be_set_is_offered(plan, missing, expected):
    assert remedies(plan, lacking(plan, missing)) == expected


def test_where_the_highest_lift_alone_is_broken_it_is_what_to_raise(plan):
    appraisal = plan.schemes[0].appraisal
    capped = with_limits(plan, highest_lift_m=appraisal.duty.lift_m - 0.3)
    broken = replace(appraisal, duty=replace(appraisal.duty, reserve_left_m=-0.3))
    assert remedies(capped, broken) == "0.30 m of trench, level or highest lift"


def test_where_suction_and_the_highest_lift_are_broken_neither_helps_alone(plan):
    capped = with_limits(plan, highest_lift_m=0.1)
    assert remedies(capped, lacking(plan, 0.8)) == "0.80 m of trench or level"


def test_findings(plan):
    high, _, weak = (row.reason for row in sample_rows(plan))
    assert high.startswith("1.00 m too high at chainage ")
    assert high.endswith("m: needs 1.00 m of trench, level or reserve")
    assert weak == "the fall drives 60.0 l/s of the 100 l/s asked of one pipe"
    left = plan.schemes[0].appraisal.reserve_left_m
    assert finding(plan, plan.schemes[0].appraisal) == f"keeps the limit of suction with {left:.2f} m to spare"


def test_both_lacks_are_told(plan):
    weak = plan.samples[2].appraisal
    assert not is_driven(weak)
    both = replace(weak, duty=replace(weak.duty, reserve_left_m=-0.5))
    assert finding(plan, both).startswith("the fall drives 60.0 l/s of the 100 l/s asked of one pipe; 0.50 m too high")


def test_a_duty_missed_by_rounding_is_driven(plan):
    appraisal = plan.schemes[0].appraisal
    assert is_driven(replace(appraisal, duty_m3s=appraisal.largest.energy_discharge_m3s * (1.0 + 1e-9)))
    assert is_driven(replace(appraisal, duty_m3s=None))


def test_least_bad_routes_in_order(make):
    plan = make.beside_no_route()
    found = least_bad(plan)
    assert [need.route for need in found] == ["R2", "R3"]
    assert [need.crossing for need in found] == ["C2", ""]
    assert found[0].pipes == "1 x PE 250 SDR 17"
    assert found[0].text == "needs 0.80 m of trench, level or reserve"
    assert found[1].missing_m == pytest.approx(1.0)


def test_what_is_neither_shorter_nor_nearer_to_working_is_left_out(make):
    plan = make.beside_no_route()
    high, weak = plan.samples
    assert weak.route.length_m > high.route.length_m
    assert [need.route for need in least_bad(replace(plan, schemes=(), samples=(weak, high)))] == ["R3"]
    short = replace(weak, route=replace(weak.route, chainage_m=0.5 * weak.route.chainage_m))
    found = least_bad(replace(plan, schemes=(), samples=(short, high)))
    assert [need.route for need in found] == ["R3", "R4"]
    assert found[1].text == "needs a wider pipe or more fall (for 100 l/s, not 60.0 l/s)"
    both = replace(short, appraisal=replace(weak.appraisal, duty=replace(weak.appraisal.duty, reserve_left_m=-0.5)))
    assert least_bad(replace(plan, schemes=(), samples=(both,)))[0].text == (
        "needs 0.50 m of trench, level or reserve, and a wider pipe or more fall (for 100 l/s, not 60.0 l/s)"
    )


def test_the_pipe_that_misses_by_least_stands_for_a_route(make):
    plan = make.beside_no_route()
    (scheme,) = plan.schemes
    nearer = replace(
        scheme,
        rank=2,
        count=3,
        appraisal=replace(scheme.appraisal, duty=replace(scheme.appraisal.duty, reserve_left_m=-0.25)),
    )
    found = least_bad(replace(plan, schemes=(scheme, nearer)))
    assert (found[0].pipes, found[0].text) == (
        "3 x PE 250 SDR 17", "needs 0.25 m of trench, level or reserve",
    )  # fmt: skip


def test_what_no_trench_mends_is_told_besides(make):
    plan = make.beside_no_route()
    (scheme,) = plan.schemes
    checks = tuple(replace(c, grade="unfit") if c.name == "collapse" else c for c in scheme.verdict.checks)
    thin = replace(scheme, verdict=replace(scheme.verdict, checks=checks))
    assert least_bad(replace(plan, schemes=(thin,)))[0].text.endswith("level or reserve; also unfit: collapse")
    kept = replace(thin, appraisal=replace(thin.appraisal, duty=replace(thin.appraisal.duty, reserve_left_m=0.4)))
    dear = replace(kept, verdict=replace(kept.verdict, reason="the wall is too thin."))
    assert least_bad(replace(plan, schemes=(dear,)))[0].text == "the wall is too thin"
