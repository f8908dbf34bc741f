"""``overcrest plan``, apart from planning itself."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from routing.commands import main


def test_writes_the_folder_and_prints_the_table(behind, capsys):
    assert main(["plan", "weir.toml", "--top", "3"]) == 0
    shown = capsys.readouterr()
    assert shown.out == "best 3 schemes\n"
    assert shown.err == "results: weir-plan\n"
    assert behind.calls == [
        ("plan", "site weir.toml"),
        ("write_run", Path("weir-plan"), False, ("overcrest", "plan", "weir.toml", "--top", "3")),
    ]


def test_no_feasible_route_is_exit_3_and_writes_all_the_same(behind, capsys):
    behind.feasible = False
    assert main(["plan", "weir.toml", "--out", "here"]) == 3
    assert behind.calls[-1][:2] == ("write_run", Path("here"))


def test_json_is_the_only_thing_on_stdout(behind, capsys):
    behind.feasible = False
    assert main(["plan", "weir.toml", "--json"]) == 3
    assert json.loads(capsys.readouterr().out) == {"feasible": False, "took_s": 0, "folder": "weir-plan"}


def test_a_taken_folder_is_refused_before_any_work(behind, capsys, tmp_path):
    (tmp_path / "here").mkdir()
    assert main(["plan", "weir.toml", "--out", "here"]) == 2
    assert "--replace" in capsys.readouterr().err
    assert behind.calls == []


def test_replace_reaches_the_writer(behind, tmp_path):
    (tmp_path / "here").mkdir()
    assert main(["plan", "weir.toml", "--out", "here", "--replace"]) == 0
    assert behind.calls[-1][:3] == ("write_run", Path("here"), True)


@pytest.mark.parametrize(
    ("asked", "wanted"),
    [
        ([], "overview"),
        (["--pictures", "all"], "all"),
        (["--pictures", "overview"], "overview"),
        (["--pictures", "none"], "none"),
        (["--no-pictures"], "none"),
    ],
)
def test_pictures_are_drawn_as_asked(behind, asked, wanted):
    assert main(["plan", "weir.toml", *asked]) == 0
    assert behind.pictures == wanted


def test_an_unknown_choice_of_pictures_is_refused(behind, capsys):
    assert main(["plan", "weir.toml", "--pictures", "some"]) == 2
    assert "some" in capsys.readouterr().err
    assert behind.calls == []


def test_first_run_says_that_it_compiles(behind, capsys):
    behind.ready = False
    assert main(["plan", "weir.toml"]) == 0
    assert "compiled" in capsys.readouterr().err


def test_quiet_leaves_stderr_empty(behind, capsys):
    behind.ready = False
    assert main(["plan", "weir.toml", "--quiet"]) == 0
    assert capsys.readouterr().err == ""


def test_a_stop_swallowed_below_still_keeps_the_folder_unwritten(behind, capsys, monkeypatch):
    from routing.commands.call import Stop

    asked = iter([False, True, True, True])
    monkeypatch.setattr(Stop, "asked", property(lambda self: next(asked), lambda self, value: None), raising=False)
    assert main(["plan", "weir.toml"]) == 130
    assert [name for name, *_ in behind.calls] == ["plan"]
