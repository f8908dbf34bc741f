"""Pieces of terminal output. Texts from files are never read as markup."""

from __future__ import annotations

from collections.abc import Sequence

from rich.console import RenderableType
from rich.table import Table
from rich.text import Text

#: How many lines of a list are shown where the rest can be looked up.
MOST_LINES = 5


def heading(text: str) -> Text:
    """Return a heading."""
    return Text(text, style="bold")


def bullets(lines: Sequence[str], rest: str | None = None) -> RenderableType:
    """Return lines with a hanging indent.

    Parameters
    ----------
    lines
        One text each.
    rest
        Where all of them stand; then only the first five are shown. ``None`` shows them all.
    """
    grid = Table.grid(padding=(0, 1, 0, 0))
    grid.add_column(no_wrap=True)
    grid.add_column(overflow="fold")
    kept = lines if rest is None else lines[:MOST_LINES]
    for line in kept:
        grid.add_row("-", Text(line))
    if len(kept) < len(lines):
        grid.add_row("", Text(f"and {len(lines) - len(kept)} more, {rest}", style="dim"))
    return grid


def pairs(rows: Sequence[tuple[str, str]]) -> RenderableType:
    """Return names and findings in two columns."""
    grid = Table.grid(padding=(0, 2, 0, 0))
    grid.add_column(no_wrap=True, style="bold")
    grid.add_column(overflow="fold")
    for name, finding in rows:
        grid.add_row(Text(name), Text(finding))
    return grid
