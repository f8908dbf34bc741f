"""The note that the first run is slow."""

from __future__ import annotations

import pytest

from routing.commands.warming import tell_if_compiling


@pytest.mark.parametrize(
    ("ready", "quiet", "told"), [(False, False, True), (True, False, False), (False, True, False), (True, True, False)]
)
def test_it_is_told_once_to_those_who_want_to_know(behind, capsys, ready, quiet, told):
    behind.ready = ready
    tell_if_compiling(quiet=quiet)
    shown = capsys.readouterr()
    assert ("compiled" in shown.err) == told
    assert shown.out == ""  # results only
