from dataclasses import replace

import pytest

from routing.outputs.wording import (
    best_scheme,
    breaking_text,
    counted,
    figures,
    fixed,
    headline,
    least_shortfall,
    litres,
    sentence,
    still_water_lift_m,
)


@pytest.mark.parametrize(
    ("value", "digits", "expected"),
    [
        (0.018234, 3, "0.0182"),
        (1.8234, 3, "1.82"),
        (182.34, 3, "182"),
        (1823.4, 3, "1820"),
        (84_321.0, 3, "84,300"),
        (9.9996, 3, "10.0"),
        (99.96, 3, "100"),
        (-0.8349, 2, "-0.83"),
        (0.0, 3, "0"),
        (1.25, 2, "1.2"),
        (None, 3, "-"),
        (float("inf"), 3, "-"),
        (float("nan"), 3, "-"),
    ],
)
def test_significant_figures(value, digits, expected):
    assert figures(value, digits) == expected


@pytest.mark.parametrize(
    ("value", "places", "expected"),
    [(3.715001, 2, "3.72"), (-0.001, 2, "0.00"), (12345.6, 0, "12,346"), (None, 2, "-"), (float("inf"), 1, "-")],
)
def test_fixed_places(value, places, expected):
    assert fixed(value, places) == expected


def test_litres_and_counts():
    assert litres(0.0605) == "60.5 l/s"
    assert litres(None) == "- l/s"
    assert (counted(1, "check"), counted(0, "check")) == ("1 check", "0 checks")


def test_sentences():
    assert sentence(" the ground is too high") == "The ground is too high."
    assert sentence("No way.") == "No way."
    assert sentence("") == "."


def test_still_water_lift(make):
    setting = make.setting(make.place())
    assert still_water_lift_m(setting) == pytest.approx(7.1669, abs=1e-4)
    limited = replace(setting, limits=replace(setting.limits, highest_lift_m=6.0))
    assert still_water_lift_m(limited) == 6.0


def test_headline_names_the_best_scheme_that_breaks_no_limit(plan):
    unfit_first = replace(plan, schemes=(plan.schemes[3], *plan.schemes[:3]))
    assert best_scheme(unfit_first) is plan.schemes[0]
    for found in (headline(plan), headline(unfit_first)):
        assert found.startswith("Best of 3 schemes within all limits: ")
        assert "1 x PE 315 SDR 17 on route R1, 281 m long, lift 3.72 m, up to 121 l/s" in found
        assert "(100 l/s asked)" in found
        assert found.endswith("Verdict fit: reserve left 2.32 m.")


def test_headline_of_parallel_pipes_says_together(plan):
    assert "up to 121 l/s together" in headline(replace(plan, schemes=plan.schemes[1:]))


def test_headline_without_a_demand_asks_nothing(plan):
    site = replace(plan.site, demand=replace(plan.site.demand, discharge_m3s=None))
    assert "asked" not in headline(replace(plan, site=site))


def test_headline_where_nothing_works(make):
    plan = make.no_route()
    assert headline(plan).startswith("No route works. PE 315 SDR 17: the ground is too high by 0.92 m. What would help")
    assert headline(replace(plan, shortfalls=())) == (
        "No route works. Nearest is 1 x PE 250 SDR 17 on route R2: 0.80 m of reserve missing."
    )
    assert headline(replace(plan, shortfalls=(), schemes=())) == "No route works."


def test_least_shortfall(make):
    plan = make.no_route()
    assert least_shortfall(plan).raise_m == 0.912
    assert least_shortfall(replace(plan, shortfalls=plan.shortfalls[2:])).cause == "cut off"
    assert least_shortfall(replace(plan, shortfalls=())) is None


def test_breaking_level_says_why():
    assert (
        breaking_text(97.8, "intake") == "Stops when the water is down to 97.80 m: the intake mouth may then draw air."
    )
    assert breaking_text(97.8, "a cause of another kind").endswith("97.80 m: a cause of another kind.")
    assert len({breaking_text(1.0, cause) for cause in ("suction", "outlet", "intake")}) == 3
