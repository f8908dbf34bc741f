"""``overcrest look``, apart from planning itself."""

from __future__ import annotations

import json

from routing.commands import main


def test_prints_what_was_understood(behind, capsys):
    assert main(["look", "weir.toml"]) == 0
    assert capsys.readouterr().out == "what was understood\n"
    assert behind.calls == [("look", "site weir.toml")]


def test_json_is_one_document(behind, capsys):
    assert main(["look", "weir.toml", "--json"]) == 0
    assert json.loads(capsys.readouterr().out) == {
        "looked": True,
        "command": ["overcrest", "look", "weir.toml", "--json"],
    }
