"""Ways out of the program: exit codes, and how errors are told."""

from __future__ import annotations

import contextlib
import json
import signal
import sys

import pytest

from routing.commands import main, main_inner
from routing.errors import InputError, SiteError


def test_no_arguments_show_the_help(behind, capsys):
    assert main([]) == 0
    assert "overcrest" in capsys.readouterr().out


@pytest.mark.parametrize("command", ["new", "look", "plan", "about"])
def test_every_command_has_a_help_page(command, capsys):
    assert main([command, "--help"]) == 0
    assert f"overcrest {command}" in capsys.readouterr().out


def test_version(capsys):
    assert main(["--version"]) == 0
    assert capsys.readouterr().out.startswith("overcrest, version ")


@pytest.mark.parametrize(
    ("arguments", "word"),
    [
        (["digup"], "digup"),
        (["plan"], "SITE"),
        (["plan", "site.toml", "--top", "0"], "--top"),
        (["look", "site.toml", "--colour"], "--colour"),
        (["new"], "DEM"),
    ],
)
def test_wrong_usage_is_exit_2_and_names_the_word(behind, capsys, arguments, word):
    assert main(arguments) == 2
    shown = capsys.readouterr()
    assert shown.out == ""
    assert word in shown.err
    assert "--help" in shown.err


def test_main_inner_raises_instead_of_telling(behind):
    with pytest.raises(InputError, match="--top") as caught:
        main_inner(["plan", "site.toml", "--top", "0"])
    assert caught.value.problems[0].key == "--top"
    assert caught.value.problems[0].allowed.startswith("overcrest plan")


def test_wrong_usage_is_one_json_document_too(behind, capsys):
    assert main(["plan", "--json"]) == 2
    shown = capsys.readouterr()
    assert json.loads(shown.out)["exit_code"] == 2
    assert shown.err == ""


def test_option_after_two_dashes_is_not_an_option(behind, capsys):
    assert main(["plan", "site.toml", "--", "--json"]) == 2
    assert capsys.readouterr().out == ""


def _raiser(error):
    def work(_report):
        raise error

    return work


def test_an_error_of_the_users_is_exit_2_without_traceback(behind, capsys):
    behind.work = _raiser(SiteError("the outlet is above the water"))
    assert main(["plan", "site.toml", "--verbose"]) == 2
    shown = capsys.readouterr().err
    assert "the outlet is above the water" in shown
    assert "Traceback" not in shown
    assert not any(name == "write_run" for name, *_ in behind.calls)


def test_a_fault_of_ours_is_exit_1_and_asks_for_a_report(behind, capsys):
    behind.work = _raiser(ZeroDivisionError("0/0"))
    assert main(["plan", "site.toml"]) == 1
    shown = capsys.readouterr().err
    assert "ZeroDivisionError: 0/0" in shown
    assert "report" in shown
    assert "Traceback" not in shown


def test_a_fault_shows_its_traceback_when_asked(behind, capsys):
    behind.work = _raiser(ZeroDivisionError("0/0"))
    assert main(["plan", "site.toml", "-v"]) == 1
    assert "Traceback" in capsys.readouterr().err


def test_a_fault_is_one_json_document_too(behind, capsys):
    behind.work = _raiser(ZeroDivisionError("0/0"))
    assert main(["plan", "site.toml", "--json"]) == 1
    document = json.loads(capsys.readouterr().out)
    assert document["exit_code"] == 1
    assert document["problems"][0]["found"] == "ZeroDivisionError: 0/0"


def test_memory_that_ran_out_is_told_with_a_remedy(behind, capsys):
    behind.work = _raiser(MemoryError())
    assert main(["plan", "site.toml"]) == 2
    assert "search.largest_window_cells" in capsys.readouterr().err


def test_an_interruption_is_exit_130_and_writes_nothing(behind, capsys):
    behind.work = _raiser(KeyboardInterrupt())
    assert main(["plan", "site.toml"]) == 130
    assert "stopped" in capsys.readouterr().err
    assert not any(name == "write_run" for name, *_ in behind.calls)


@pytest.mark.parametrize("error", [RuntimeError("no compiled object yet"), SiteError("cannot be read")])
def test_a_library_that_a_stop_tore_apart_is_no_fault(behind, capsys, error):
    def work(_report):
        with contextlib.suppress(KeyboardInterrupt):
            signal.raise_signal(signal.SIGINT)
        raise error

    behind.work = work
    assert main(["plan", "site.toml"]) == 130
    assert "stopped" in capsys.readouterr().err


def test_warnings_of_libraries_are_silent_unless_asked_for(behind, capsys):
    import warnings

    def work(_report):
        with warnings.catch_warnings():
            warnings.simplefilter("always")
            warnings.warn("old call", UserWarning, stacklevel=1)

    behind.work = work
    assert main(["plan", "site.toml"]) == 0
    assert "old call" not in capsys.readouterr().err
    assert main(["plan", "site.toml", "--replace", "-v"]) == 0
    assert "library warning: UserWarning: old call" in capsys.readouterr().err


def test_arguments_of_the_process_are_the_default(behind, capsys, monkeypatch):
    monkeypatch.setattr(sys, "argv", ["overcrest", "look", "here.toml"])
    assert main() == 0
    assert behind.calls == [("look", "site here.toml")]
