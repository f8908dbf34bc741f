"""Schemes as a table on the terminal, one line a scheme.

A verdict is always a word; its colour (blue, yellow, magenta: apart for every common kind of colour blindness)
only repeats it.
"""

from __future__ import annotations

from collections.abc import Sequence

from rich.table import Table
from rich.text import Text

from routing.outputs.field import Field, Shown
from routing.outputs.fields import SCHEME_FIELDS
from routing.outputs.values import Value, clean
from routing.outputs.wording import figures, fixed
from routing.records import Grade, Plan, Scheme, Verdict

#: Rows of the table where nothing else is asked; the rest is in ``schemes.csv``.
MOST_ROWS = 12
_LEAST_WIDTH = 22
GRADE_STYLES: dict[Grade, str] = {"fit": "bold blue", "caution": "bold yellow", "unfit": "bold magenta"}


def scheme_table(plan: Plan, top: int = MOST_ROWS) -> Table:
    """Return the ranked table of the first ``top`` schemes."""
    return table_of(plan, plan.schemes[:top])


def table_of(plan: Plan, schemes: Sequence[Scheme]) -> Table:
    """Return a table of some schemes of a plan, in the order given.

    The crossing that a route takes stands behind its name, where any is known. The cost is left out where nothing has
    a price.
    """
    table = Table(box=None, pad_edge=False, padding=(0, 2, 0, 0), header_style="bold")
    priced = any(scheme.cost.lines for scheme in plan.schemes)
    shown = [
        (field, field.shown)
        for field in SCHEME_FIELDS
        if field.shown is not None and (priced or field.unit != "currency")
    ]
    crossed = any(scheme.route.crossing for scheme in schemes)
    for field, how in shown:
        cells = [_cell(plan, field, how, scheme) for scheme in schemes]
        words = how.style == "text"
        # A name is folded only where it is long: without a least width the last column would squeeze it.
        longest = max(map(len, cells), default=0)
        table.add_column(
            Text(f"{how.head}\n{_under(field, how, schemes, crossed=crossed)}".rstrip()),
            justify="left" if words else "right",
            no_wrap=not words,
            min_width=min(longest, _LEAST_WIDTH) if words else None,
            overflow="fold",
        )
    table.add_column("verdict", no_wrap=True)
    table.add_column("decided by", overflow="fold")
    for scheme in schemes:
        row = [Text(_cell(plan, field, how, scheme)) for field, how in shown]
        table.add_row(*row, _verdict_text(scheme.verdict), Text(scheme.verdict.governing.name.replace("_", " ")))
    return table


def shown_text(how: Shown, value: Value) -> str:
    """Return a value as a cell of the terminal's table: a dash for what is not known."""
    if value is None:
        return "-"
    if isinstance(value, str | bool):
        return str(value)
    scaled = value * how.factor
    if how.style == "three figures":
        return figures(scaled)
    return fixed(scaled, 2 if how.style == "two" else 0)


def _cell(plan: Plan, field: Field[Scheme], how: Shown, scheme: Scheme) -> str:
    text = shown_text(how, clean(field.get(plan, scheme)))
    # A column of its own would cost the room that long pipe names need.
    return f"{text} {scheme.route.crossing}".rstrip() if field.name == "route" else text


def _under(field: Field[Scheme], how: Shown, schemes: Sequence[Scheme], *, crossed: bool) -> str:
    """Return the second line of a column's head: the unit."""
    if field.name == "route" and crossed:
        return "over"
    return schemes[0].cost.currency if field.unit == "currency" else how.unit


def _verdict_text(verdict: Verdict) -> Text:
    """Return the verdict, and in brackets what it would be without the checks not made."""
    found = Text(verdict.grade, style=GRADE_STYLES[verdict.grade])
    if verdict.grade_of_made != verdict.grade:
        found.append(f" ({verdict.grade_of_made})", style=GRADE_STYLES[verdict.grade_of_made])
    return found
