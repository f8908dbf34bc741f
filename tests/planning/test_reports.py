"""Progress and timings of stages."""

from __future__ import annotations

import time

import pytest

from routing.planning.reports import Reporter, reporter


def test_a_stage_is_told_from_nothing_to_all_and_never_all_before_its_end():
    told = []
    with Reporter(lambda stage, share: told.append((stage, share))).stage("search", 200) as tick:
        for done in (0, 50, 199, 200, 5000):  # several searches of the same cells add up to more than all
            tick(done)
    assert told == [("search", share) for share in (0.0, 0.0, 0.25, 0.99, 0.99, 0.99, 1.0)]


def test_a_stage_of_unknown_size_has_no_share():
    told = []
    with Reporter(lambda _, share: told.append(share)).stage("look") as tick:
        tick(10)
    assert told == [0.0, 0.0, 1.0]


def test_times_of_a_stage_that_comes_again_add_up(monkeypatch):
    clock = iter([1.0, 3.0, 10.0, 10.5, 20.0, 27.0])
    monkeypatch.setattr(time, "perf_counter", lambda: next(clock))
    report = Reporter()
    for name in ("ground", "ground", "routes"):
        with report.stage(name):
            pass
    assert report.timings_s == {"ground": 2.5, "routes": 7.0}


def test_a_stage_that_is_stopped_has_no_time():
    def stop(_stage, share):
        if share > 0.0:
            raise KeyboardInterrupt

    report = Reporter(stop)
    with pytest.raises(KeyboardInterrupt), report.stage("search", 10) as tick:
        tick(5)
    assert report.timings_s == {}


def test_nobody_has_to_listen():
    report = reporter(None)
    with report.stage("search", 10) as tick:
        tick(5)
    assert list(report.timings_s) == ["search"]
    heard = []
    with reporter(lambda *what: heard.append(what)).stage("a"):
        pass
    assert heard == [("a", 0.0), ("a", 1.0)]


def test_two_reporters_share_no_timings():
    assert Reporter().timings_s is not Reporter().timings_s
