"""Order of schemes."""

from dataclasses import replace

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from routing.records import GRADES
from routing.schemes import rank


@pytest.fixture(scope="module")
def stock(job_of, changed, scheme_of):
    """Schemes of every grade, with the figure that made it."""
    schemes = []
    for left in (2.0, 0.6, 0.3, -0.4, -2.0):
        for total in (20_000.0, 30_000.0, 60_000.0):
            for count in (1, 2):
                matter = changed(job_of().matter(0.1), duty={"reserve_left_m": left})
                cost = replace(matter.cost, total=total)
                schemes.append(scheme_of(replace(matter, cost=cost, count=count)))
    return schemes


def names(schemes):
    return [(s.verdict.grade_of_made, s.appraisal.reserve_left_m, s.cost.total, s.count) for s in schemes]


@settings(max_examples=80)
@given(data=st.data(), asked=st.booleans())
def test_strict_order_from_1_whatever_came_first(data, asked, stock):
    chosen = data.draw(st.lists(st.sampled_from(range(len(stock))), max_size=12, unique=True))
    ranked = rank((stock[i] for i in chosen), asked=asked)
    assert [scheme.rank for scheme in ranked] == list(range(1, len(chosen) + 1))
    assert sorted(names(ranked)) == sorted(names(stock[i] for i in chosen))
    grades = [GRADES.index(scheme.verdict.grade_of_made) for scheme in ranked]
    assert grades == sorted(grades)
    assert names(rank(ranked, asked=asked)) == names(ranked)
    if asked:
        again = rank((stock[i] for i in reversed(chosen)), asked=asked)
        sound = [scheme.cost.total for scheme in ranked if scheme.verdict.grade_of_made == "fit"]
        assert sound == sorted(sound)
        assert [n[0] for n in names(again)] == [n[0] for n in names(ranked)]
    else:
        sound = [scheme.total_discharge_m3s for scheme in ranked if scheme.verdict.grade_of_made == "fit"]
        assert sound == sorted(sound, reverse=True)


def test_equals_keep_their_order(stock):
    twins = [replace(stock[0], route=replace(stock[0].route, name=name)) for name in ("R3", "R1", "R2")]
    assert [scheme.route.name for scheme in rank(twins, asked=True)] == ["R3", "R1", "R2"]


def test_fewer_pipes_then_the_shorter_route_at_one_price(job_of, scheme_of):
    two, one = (scheme_of(job_of().matter(0.05, count=count)) for count in (2, 1))
    assert rank([two, one], asked=True)[0].count == 1
    long, short = (scheme_of(job_of().matter(0.05), length_m=length) for length in (200.0, 150.0))
    assert rank([long, short], asked=True)[0].route.length_m == 150.0


def test_unfit_schemes_are_ordered_by_what_is_missing(job_of, changed, scheme_of):
    matter = job_of().matter(0.1)
    dear = scheme_of(replace(matter, budget=10_000.0))  # works, costs three times the budget
    high = scheme_of(changed(matter, duty={"reserve_left_m": -0.5}))
    higher = scheme_of(changed(matter, duty={"reserve_left_m": -3.0}))
    weak = scheme_of(replace(matter, required_m3s=0.16))  # carries some 0.145
    weaker = scheme_of(replace(matter, required_m3s=2.5))
    assert {s.verdict.grade for s in (dear, high, higher, weak, weaker)} == {"unfit"}
    assert weak.total_discharge_m3s == pytest.approx(0.1445, rel=0.01)
    ranked = rank([weaker, higher, weak, high, dear], asked=True)
    missing = {id(s.appraisal): name for s, name in ((high, "high"), (higher, "higher"))}
    order = [
        missing.get(id(s.appraisal)) or f"{s.verdict.governing.name} {s.verdict.governing.limit:g}" for s in ranked
    ]
    # Shares missing: 0.05 of 9.9 m, 0.1 of 0.16 m3/s, 0.3 of 9.9 m, 0.9 of 2.5 m3/s.
    assert order == ["budget 10000", "high", "discharge 0.16", "higher", "discharge 2.5"]


@settings(max_examples=40)
@given(required=st.floats(0.05, 1.0), count=st.integers(1, 8))
def test_one_more_pipe_never_carries_less_nor_leaves_less_reserve(required, count, job_of, scheme_of):
    job = job_of()
    fewer, more = (
        scheme_of(job.matter(required, count=number, appraisal=job.appraise(required / number)))
        for number in (count, count + 1)
    )
    assert more.total_discharge_m3s >= fewer.total_discharge_m3s
    if fewer.appraisal.duty.discharge_m3s == pytest.approx(required / count):
        assert more.appraisal.reserve_left_m >= fewer.appraisal.reserve_left_m
    if fewer.verdict.grade != "unfit":
        assert more.verdict.grade != "unfit"


def test_where_nothing_flows_the_least_missing_suction_is_first(job_of, changed, scheme_of):
    def lacking(metres, cost):
        matter = changed(
            job_of().matter(0.1), duty={"reserve_left_m": -metres, "discharge_m3s": 0.0}, largest={"discharge_m3s": 0.0}
        )
        return scheme_of(replace(matter, cost=replace(matter.cost, total=cost), required_m3s=0.2, budget=None))

    ranked = rank([lacking(2.96, 1000.0), lacking(0.65, 9000.0)], asked=True)
    assert [scheme.cost.total for scheme in ranked] == [9000.0, 1000.0]
