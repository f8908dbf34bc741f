"""Arguments and options that several commands share, declared once."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import click

from routing.errors import OutputError, Problem

#: Ends of the process, as ``docs/reference/errors.md`` lists them.
EXIT_DONE, EXIT_FAULT, EXIT_INPUT, EXIT_NO_ROUTE, EXIT_INTERRUPTED = 0, 1, 2, 3, 130


def _discard(_context: click.Context, _parameter: click.Parameter, _value: Any) -> None:
    """Take an option that `routing.commands.entry` reads from the call itself."""


site_argument = click.argument("site_file", metavar="SITE", type=click.Path(path_type=Path))

json_option = click.option(
    "--json", "as_json", is_flag=True, help="Print one JSON document on stdout, also on failure."
)

quiet_option = click.option("-q", "--quiet", is_flag=True, help="Nothing on stderr but errors.")

replace_option = click.option("--replace", is_flag=True, help="Replace what an earlier run left there.")

verbose_option = click.option(
    "-v",
    "--verbose",
    is_flag=True,
    expose_value=False,
    callback=_discard,
    help="Show warnings of libraries, and the traceback of a fault.",
)


def refuse_existing(path: Path, *, replace: bool) -> None:
    """Refuse to touch what is already there, before any work is done.

    Raises
    ------
    OutputError
        If the path exists and `replace` is not set.
    """
    if path.exists() and not replace:
        raise OutputError(
            Problem(
                "the place for the results is taken",
                found=str(path),
                allowed="a path that does not exist yet",
                remedy="give another path, or add --replace",
                file=str(path),
            )
        )
