"""``python -m routing.commands`` is the program."""

from __future__ import annotations

import runpy
import sys

import pytest

import routing


@pytest.mark.parametrize(
    ("arguments", "code", "stdout"),
    [(["--version"], 0, f"overcrest, version {routing.__version__}\n"), (["no-such-command"], 2, "")],
)
def test_it_runs_the_program_and_hands_on_its_exit_code(monkeypatch, capsys, arguments, code, stdout):
    monkeypatch.setattr(sys, "argv", ["python -m routing.commands", *arguments])
    with pytest.raises(SystemExit) as ended:
        runpy.run_module("routing.commands", run_name="__main__")
    shown = capsys.readouterr()
    assert (ended.value.code, shown.out) == (code, stdout)
    assert ("no-such-command" in shown.err) == (code == 2)
