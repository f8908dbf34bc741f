"""What is shown while a run works."""

from __future__ import annotations

import pytest

from routing.commands import progress
from routing.commands.call import Stop
from routing.commands.progress import Lines, reporting


class Clock:
    def __init__(self):
        self.now_s = 0.0

    def __call__(self):
        return self.now_s


@pytest.fixture
def clock():
    return Clock()


def test_quick_stages_are_not_shown(clock, capsys):
    lines = Lines(clock)
    for stage in ("terrain", "water", "search"):
        lines(stage, 0.0)
        clock.now_s += 0.9
        lines(stage, 1.0)
    lines.close()
    assert capsys.readouterr().err == ""


def test_a_slow_stage_is_told_while_it_runs_and_when_it_ends(clock, capsys):
    lines = Lines(clock)
    lines("search", 0.0)
    clock.now_s = 1.5
    lines("search", 0.3)
    assert capsys.readouterr().err == "stage search ...\n"
    clock.now_s = 2.5
    lines("search", 0.6)
    lines("schemes", 0.0)
    assert capsys.readouterr().err == "stage search: done in 2.5 s\n"


def test_a_stage_that_never_reports_between_is_told_at_its_end(clock, capsys):
    lines = Lines(clock)
    lines("compile", 0.0)
    clock.now_s = 20.0
    lines.close()
    assert capsys.readouterr().err == "stage compile: done in 20.0 s\n"


def test_quiet_shows_nothing_but_still_stops(capsys):
    stop = Stop()
    with reporting(stop, quiet=True) as report:
        report("search", 0.5)
        stop.asked = True
        with pytest.raises(KeyboardInterrupt):
            report("search", 0.6)
    assert capsys.readouterr().err == ""


def test_a_terminal_gets_bars_on_stderr_only(monkeypatch, capsys):
    monkeypatch.setattr(progress.sys.stderr, "isatty", lambda: True, raising=False)
    monkeypatch.setenv("TERM", "xterm")
    with reporting(Stop(), quiet=False) as report:
        report("terrain", 0.0)
        report("terrain", 1.0)
        report("search", 1.7)
    shown = capsys.readouterr()
    assert shown.out == ""


def test_bars_finish_the_stage_before():
    bars = progress._bars()
    try:
        bars("terrain", 0.2)
        bars("search", 0.5)
        shares = {task.description: task.completed for task in bars.display.tasks}
    finally:
        bars.close()
    assert shares == {"terrain": 1.0, "search": 0.5}
