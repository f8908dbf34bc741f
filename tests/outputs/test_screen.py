import io
from dataclasses import replace

import pytest
from rich.console import Console
from rich.text import Text

from routing.outputs.cautions import CAUTIONS, INVENTED_PRICES
from routing.outputs.scheme_table import MOST_ROWS, scheme_table
from routing.outputs.screen import summary


def shown(renderable, width=100, **options):
    console = Console(file=io.StringIO(), width=width, **options)
    console.print(renderable)
    return console.file.getvalue()


def flat(text):
    return " ".join(text.split())


@pytest.fixture
def screen(plan):
    return shown(summary(plan))


def test_it_fits_100_columns(screen, make):
    for text in (screen, shown(summary(make.no_route()))):
        assert max(len(line.rstrip()) for line in text.splitlines()) <= 100


def test_names_are_not_read_as_markup(plan):
    best = plan.schemes[0]
    name = "[red]PE[/red] [x]"
    odd = replace(plan, schemes=(replace(best, pipe=replace(best.pipe, name=name)),), warnings=("see [bold]a[/]",))
    text = shown(summary(odd))
    assert name in text
    assert "see [bold]a[/]" in text


def test_what_is_said(screen, plan):
    found = flat(screen)
    assert plan.site.title in found
    assert "Limited by energy: 121 l/s a pipe at the lowest level, 133 l/s at the present level." in found
    assert "Stops when the water is down to 97.80 m: the intake mouth may then draw air." in found
    assert "Proven for the whole DEM." in found
    assert "1 check not made: Air drawn at the outlet. See checks.csv." in found
    assert "steel 168.3 x 4: the fall of 8.00 m carries 31 l/s at most" in found
    assert "the DEM's edge cuts the lake" in found
    assert "3 assumptions made: listed in run.json." in found
    assert all(caution in found for caution in CAUTIONS)


def test_a_proof_of_the_window_only_is_not_called_more(plan):
    found = flat(shown(summary(replace(plan, schemes=plan.schemes[2:]))))
    assert "Proven for the window read, not for the whole DEM." in found


def test_invented_prices_are_marked(plan):
    assert INVENTED_PRICES in flat(shown(summary(plan)))
    real = tuple(replace(s, cost=replace(s.cost, invented=False)) for s in plan.schemes)
    said = replace(plan, schemes=real, site=replace(plan.site, prices=replace(plan.site.prices, invented=False)))
    assert INVENTED_PRICES not in flat(shown(summary(said)))


def test_no_route_says_why_and_what_would_help(make):
    found = flat(shown(summary(make.no_route())))
    assert "No route works. PE 315 SDR 17: the ground is too high by 0.92 m. What would help: a trench" in found
    assert found.count("0.92 m") == 1  # the headline is not said again
    assert "PE 250 SDR 17: the ground is 1.35 m too high for 50 l/s" in found
    assert "Limited by" not in found


def test_a_verdict_that_rests_on_checks_not_made_shows_the_other(plan):
    best = plan.schemes[0]
    waiting = replace(best, verdict=replace(best.verdict, grade="caution"))
    found = flat(shown(summary(replace(plan, schemes=(waiting,)))))
    assert "caution (fit) suction" in found
    assert "in brackets: the verdict without the checks not made" in found
    assert "in brackets" not in flat(shown(summary(plan)))


def test_nothing_at_all_is_no_trouble(make):
    plan = make.plan(schemes=(), shortfalls=(), warnings=(), assumptions=())
    found = flat(shown(summary(plan)))
    assert "No route works." in found
    assert "0 assumptions made" in found


def test_long_rankings_are_cut_and_say_so(plan):
    many = tuple(replace(plan.schemes[0], rank=k + 1) for k in range(MOST_ROWS + 3))
    cut = replace(plan, schemes=many)
    assert len(shown(scheme_table(cut)).splitlines()) == 2 + MOST_ROWS
    assert "and 3 more in schemes.csv" in shown(summary(cut))


def test_a_pipe_named_in_its_shortfall_is_not_named_twice(make):
    plan = make.no_route()
    short = replace(plan.shortfalls[0], text="PE 250 SDR 17 needs 1.35 m more")
    assert "PE 250 SDR 17: PE" not in shown(summary(replace(plan, shortfalls=(short,))))


def test_verdicts_are_words_with_and_without_colour(plan):
    plain = shown(summary(plan))
    coloured = shown(summary(plan), force_terminal=True, color_system="standard", legacy_windows=False, _environ={})
    assert "\x1b" not in plain
    assert "\x1b[1;34mfit" in coloured
    assert Text.from_ansi(coloured).plain.split() == plain.split()
