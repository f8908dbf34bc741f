"""The lazy group: commands and modules agree."""

from __future__ import annotations

from pathlib import Path

import click

import routing.commands
from routing.commands.group import COMMANDS, overcrest


def test_every_name_is_a_command_with_help():
    context = click.Context(overcrest)
    assert overcrest.list_commands(context) == list(COMMANDS)
    for name in COMMANDS:
        command = overcrest.get_command(context, name)
        assert command is not None
        assert command.name == name
        assert command.help
        assert command.short_help


def test_unknown_names_are_no_command():
    assert overcrest.get_command(click.Context(overcrest), "entry") is None


def test_command_modules_stay_short():
    for module in Path(routing.commands.__file__).parent.glob("*.py"):
        assert len(module.read_text(encoding="utf-8").splitlines()) <= 150, module
