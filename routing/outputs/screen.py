"""What the terminal shows of a plan: headline, ranked table, proof, what would help, cautions.

A verdict is always a word; its colour (blue, yellow, magenta: apart for every common kind of colour blindness)
only repeats it.
"""

from __future__ import annotations

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from routing.outputs.cautions import CAUTIONS, INVENTED_PRICES
from routing.outputs.field import Shown
from routing.outputs.fields import SCHEME_FIELDS
from routing.outputs.pieces import MOST_LINES, bullets, heading
from routing.outputs.runfile import prices_invented
from routing.outputs.values import Value, clean
from routing.outputs.wording import (
    best_scheme,
    breaking_text,
    counted,
    figures,
    fixed,
    headline,
    least_shortfall,
    litres,
)
from routing.records import Grade, Plan, Scheme, Verdict

#: Rows of the table where nothing else is asked; the rest is in ``schemes.csv``.
MOST_ROWS = 12
_LEAST_WIDTH = 22
GRADE_STYLES: dict[Grade, str] = {"fit": "bold blue", "caution": "bold yellow", "unfit": "bold magenta"}


def summary(plan: Plan, *, top: int = MOST_ROWS) -> RenderableType:
    """Return what the terminal shows of a plan, made to fit 100 columns.

    Parameters
    ----------
    plan
        What was planned.
    top
        Most schemes to show.

    Returns
    -------
    rich renderable
        Print it with ``rich.console.Console.print``.
    """
    parts: list[RenderableType] = [heading(plan.site.title)] if plan.site.title else []
    parts += [Text(headline(plan))]
    if plan.schemes:
        parts += ["", scheme_table(plan, top), *_table_notes(plan, top)]
    best = best_scheme(plan)
    if best is not None:
        parts += ["", heading(f"Scheme {best.rank}"), bullets(_best_notes(best))]
    if plan.choice_notes:
        parts += ["", heading("Ends left open"), bullets(plan.choice_notes)]
    parts += _shortfall_notes(plan)
    if plan.warnings:
        parts += ["", heading("Warnings"), bullets(plan.warnings, "in run.json")]
    made = f"{counted(len(plan.assumptions), 'assumption')} made: listed in run.json."
    return Group(*parts, "", heading("Cautions"), bullets(CAUTIONS), "", Text(made))


def scheme_table(plan: Plan, top: int = MOST_ROWS) -> Table:
    """Return the ranked table of the first ``top`` schemes."""
    table = Table(box=None, pad_edge=False, padding=(0, 2, 0, 0), header_style="bold")
    shown = [(field, field.shown) for field in SCHEME_FIELDS if field.shown is not None]
    for field, how in shown:
        unit = plan.schemes[0].cost.currency if field.unit == "currency" else how.unit
        words = how.style == "text"
        # A name is folded only where it is long: without a least width the last column would squeeze it.
        longest = max(len(shown_text(how, clean(field.get(plan, scheme)))) for scheme in plan.schemes[:top])
        table.add_column(
            Text(f"{how.head}\n{unit}".rstrip()),
            justify="left" if words else "right",
            no_wrap=not words,
            min_width=min(longest, _LEAST_WIDTH) if words else None,
            overflow="fold",
        )
    table.add_column("verdict", no_wrap=True)
    table.add_column("decided by", overflow="fold")
    for scheme in plan.schemes[:top]:
        cells = [Text(shown_text(how, clean(field.get(plan, scheme)))) for field, how in shown]
        table.add_row(*cells, _verdict_text(scheme.verdict), Text(scheme.verdict.governing.name.replace("_", " ")))
    return table


def _verdict_text(verdict: Verdict) -> Text:
    """Return the verdict, and in brackets what it would be without the checks not made."""
    found = Text(verdict.grade, style=GRADE_STYLES[verdict.grade])
    if verdict.grade_of_made != verdict.grade:
        found.append(f" ({verdict.grade_of_made})", style=GRADE_STYLES[verdict.grade_of_made])
    return found


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


def _table_notes(plan: Plan, top: int) -> list[RenderableType]:
    found: list[RenderableType] = []
    if len(plan.schemes) > top:
        found.append(Text(f"and {len(plan.schemes) - top} more in schemes.csv", style="dim"))
    if any(scheme.verdict.grade_of_made != scheme.verdict.grade for scheme in plan.schemes[:top]):
        found.append(Text("in brackets: the verdict without the checks not made", style="dim"))
    if prices_invented(plan):
        found.append(Text(INVENTED_PRICES, style="bold"))
    return found


def _best_notes(best: Scheme) -> list[str]:
    run, proof = best.appraisal, best.route.proof
    scope = "the whole DEM" if proof.whole_dem else "the window read, not for the whole DEM"
    at_lowest, at_present = litres(run.discharge_m3s), litres(run.present.discharge_m3s)
    found = [
        f"Limited by {run.governs}: {at_lowest} a pipe at the lowest level, {at_present} at the present level.",
        breaking_text(run.breaking_level_m, run.largest.breaking_cause),
        f"Proven for {scope}. {proof.text}",
    ]
    not_made = best.verdict.not_made
    if not_made:
        names = "; ".join(check.title for check in not_made[:MOST_LINES])
        more = f"; and {len(not_made) - MOST_LINES} more" if len(not_made) > MOST_LINES else ""
        found.append(f"{counted(len(not_made), 'check')} not made: {names}{more}. See checks.csv.")
    return found


def _shortfall_notes(plan: Plan) -> list[RenderableType]:
    least = least_shortfall(plan)
    # Where nothing works, the least shortfall is the headline already.
    left = [s for s in plan.shortfalls if plan.feasible or s is not least]
    if not left:
        return []
    lines = [s.text if s.pipe in s.text else f"{s.pipe}: {s.text}" for s in left]
    return ["", heading("No route for"), bullets(lines, "in run.json")]
