import io
from dataclasses import replace

import pytest
from rich.console import Console

from routing.outputs.field import Shown
from routing.outputs.scheme_table import GRADE_STYLES, scheme_table, shown_text, table_of
from routing.records import GRADES


def shown(renderable, width=100, **options):
    console = Console(file=io.StringIO(), width=width, **options)
    console.print(renderable)
    return console.file.getvalue()


def test_the_table_holds_one_line_a_scheme(plan):
    head, units, *rows = shown(scheme_table(plan)).splitlines()
    assert head.split()[:4] == ["total", "length", "lift", "reserve"]
    assert units.split() == [
        "#",
        "route",
        "pipe",
        "n",
        "l/s",
        "m",
        "m",
        "left,",
        "m",
        "EUR",
        "verdict",
        "decided",
        "by",
    ]
    lines = [row.split() for row in rows]
    assert len(lines) == 4
    assert lines[0] == [
        "1",
        "R1",
        "PE",
        "315",
        "SDR",
        "17",
        "1",
        "121",
        "281",
        "3.72",
        "2.32",
        "19,800",
        "fit",
        "suction",
    ]
    assert lines[3][-6:] == ["306", "7.97", "-0.80", "21,300", "unfit", "suction"]


def test_where_nothing_has_a_price_no_cost_is_shown(plan):
    free = [replace(scheme, cost=replace(scheme.cost, lines=(), total=0.0)) for scheme in plan.schemes]
    assert "cost" in shown(scheme_table(plan))
    assert "cost" not in shown(scheme_table(replace(plan, schemes=tuple(free))))


def test_long_names_are_folded_not_cut(plan):
    best = plan.schemes[0]
    name = "PE 100 RC SDR 17 DN 315 with a protective coat, coil of 100 m, on stock"
    wide = replace(plan, schemes=(replace(best, pipe=replace(best.pipe, name=name)),))
    text = shown(scheme_table(wide))
    assert max(len(line.rstrip()) for line in text.splitlines()) <= 100
    assert "…" not in text
    for word in ("protective", "19,800", "fit", "2.32"):
        assert word in text


def test_names_of_usual_length_are_not_folded(plan):
    best = plan.schemes[0]
    long_name = replace(best.verdict.governing, name="drawdown_rate")
    pipe = replace(best.pipe, name="PE100 RC 315 SDR 17.6")
    wide = replace(plan, schemes=(replace(best, pipe=pipe, verdict=replace(best.verdict, governing=long_name)),))
    text = shown(scheme_table(wide))
    assert "PE100 RC 315 SDR 17.6" in text
    assert max(len(line.rstrip()) for line in text.splitlines()) <= 100


def test_verdict_colours_differ_and_are_not_red_and_green():
    assert set(GRADE_STYLES) == set(GRADES)
    assert len(set(GRADE_STYLES.values())) == 3
    assert not any("red" in style or "green" in style for style in GRADE_STYLES.values())


@pytest.mark.parametrize(
    ("how", "value", "expected"),
    [
        (Shown("x", "l/s", 1e3, "three figures"), 0.0123456, "12.3"),
        (Shown("x", style="two"), -0.8049, "-0.80"),
        (Shown("x", style="whole"), 1234.5678, "1,235"),
        (Shown("x", style="count"), 3, "3"),
        (Shown("x"), "R1", "R1"),
        (Shown("x"), None, "-"),
    ],
)
def test_cells(how, value, expected):
    assert shown_text(how, value) == expected


def test_the_crossing_stands_behind_the_name_of_the_route(make):
    plan = make.beside()
    names, units, *rows = shown(scheme_table(plan)).splitlines()
    assert names.split()[:2] == ["route", "total"]
    assert units.split()[:3] == ["#", "over", "pipe"]
    assert [row.split()[1:3] for row in rows] == [["R1", "C1"], ["R1", "C1"], ["R2", "C2"], ["R2", "C2"]]


def test_a_table_of_some_schemes_keeps_their_ranks(plan):
    rows = shown(table_of(plan, plan.schemes[2:])).splitlines()[2:]
    assert [row.split()[0] for row in rows] == ["3", "4"]


def test_many_dear_schemes_still_fit_100_columns(make):
    """The widest that is usual: two figures of rank, seven of cost, a verdict in brackets, a long pipe name."""
    plan = make.beside()
    best = plan.schemes[0]
    wide = replace(
        best,
        pipe=replace(best.pipe, name="PE100 RC 315 SDR 17.6"),
        cost=replace(best.cost, total=1_234_567.0),
        verdict=replace(best.verdict, grade="caution"),
    )
    many = tuple(replace(wide, rank=rank) for rank in range(1, 56))
    lines = [line.rstrip() for line in shown(scheme_table(replace(plan, schemes=many), 55)).splitlines()]
    assert max(map(len, lines)) <= 100
    assert len(lines) == 2 + 55
