"""Results on stdout, everything else on stderr, and a reader that leaves early (``| head``) is no fault."""

from __future__ import annotations

import io
import json
import os
import sys
import warnings
from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from typing import TYPE_CHECKING, Any, TextIO

import click

from routing.errors import OutputError, Problem

if TYPE_CHECKING:
    from rich.console import RenderableType

#: Columns of a table where stdout is no terminal.
_WIDTH = 100


def emit(text: str) -> None:
    """Print a result on stdout.

    Raises
    ------
    OutputError
        If stdout cannot be written, for instance because the disk it goes to is full.
    """
    try:
        click.echo(text)
        if sys.stdout is not None:
            sys.stdout.flush()
    except BrokenPipeError:
        silence(sys.stdout)
    except OSError as error:
        silence(sys.stdout)
        raise OutputError(
            Problem("the results cannot be printed", found=str(error), remedy="send stdout to a place with room")
        ) from error


def emit_table(table: RenderableType) -> None:
    """Print what rich can show on stdout: coloured on a terminal, plain text elsewhere."""
    from rich.console import Console

    terminal = sys.stdout is not None and sys.stdout.isatty()
    text = io.StringIO()
    Console(file=text, force_terminal=terminal, width=None if terminal else _WIDTH, highlight=False).print(table)
    emit("\n".join(line.rstrip() for line in text.getvalue().splitlines()))


def emit_json(document: Mapping[str, Any]) -> None:
    """Print one JSON document on stdout (plain ASCII, so that any terminal and any reader can take it)."""
    emit(json.dumps(document, indent=2, allow_nan=False))


def note(text: str) -> None:
    """Print a line for the user on stderr."""
    try:
        click.echo(text, err=True)
    except OSError:
        # Nobody reads stderr any more: the run goes on, its results matter more.
        silence(sys.stderr)


def silence(stream: TextIO | None) -> None:
    """Point a stream whose reader has gone at the null device, so that the flush at exit does not fail either."""
    if stream is None:
        return
    try:
        number = stream.fileno()
    except (OSError, ValueError):
        return
    null = os.open(os.devnull, os.O_WRONLY)
    os.dup2(null, number)
    os.close(null)


def never_fail_on_characters() -> None:
    """Let a terminal that lacks a character (a degree sign, say) show a stand-in, instead of ending the run."""
    for stream in (sys.stdout, sys.stderr):
        reconfigure = getattr(stream, "reconfigure", None)
        if reconfigure is not None:
            reconfigure(errors="replace")


@contextmanager
def library_warnings(*, shown: bool) -> Iterator[None]:
    """Show warnings of Python libraries as single lines on stderr, or not at all.

    What Overcrest itself has to warn of is part of its results, and never comes this way.
    """

    def show(
        message: Warning | str,
        category: type[Warning],
        filename: str,
        lineno: int,
        file: TextIO | None = None,
        line: str | None = None,
    ) -> None:
        del file, line
        if shown:
            note(f"library warning: {category.__name__}: {message} ({filename}:{lineno})")

    with warnings.catch_warnings():
        warnings.showwarning = show
        yield
