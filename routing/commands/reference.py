"""The reference page of the commands, made from the commands themselves.

``docs/reference/commands.md`` holds it; ``docs/refresh.py`` makes it, and a test compares the two.
"""

from __future__ import annotations

import inspect

import click

from routing.commands.group import COMMANDS, overcrest

_HEAD = """\
# Commands

Made from the program by `docs/refresh.py`; do not edit by hand.

Results go to stdout; progress and notes go to stderr. The exit codes are listed in
[Exit codes and errors](errors.md). `overcrest --version` prints the version, `overcrest COMMAND --help`
the help of a command.
"""


def commands_page() -> str:
    """Return the page as Markdown."""
    context = click.Context(overcrest, info_name="overcrest")
    return "\n".join([_HEAD, *(_section(name, context) for name in COMMANDS)])


def _section(name: str, parent: click.Context) -> str:
    command = overcrest.get_command(parent, name)
    if command is None:
        raise LookupError(f"no command is named {name!r}")
    context = click.Context(command, info_name=name, parent=parent)
    usage = " ".join(command.collect_usage_pieces(context))
    rows = [_row(parameter) for parameter in command.params if isinstance(parameter, click.Option)]
    return "\n".join(
        [
            f"## {name}",
            "",
            "```text",
            f"overcrest {name} {usage}",
            "```",
            "",
            inspect.cleandoc(command.help or ""),
            "",
            "| option | what it does |",
            "| --- | --- |",
            *rows,
            "",
        ]
    )


def _value(option: click.Option) -> str:
    if option.metavar:
        return option.metavar
    if isinstance(option.type, click.Choice):
        return ", ".join(f"`{choice}`" for choice in option.type.choices)
    return "PATH"


def _row(option: click.Option) -> str:
    names = ", ".join(f"`{name}`" for name in option.opts)
    value = "" if option.is_flag else f" {_value(option)}"
    default = f" Default: `{option.default}`." if option.show_default else ""
    return f"| {names}{value} | {option.help}{default} |"
