"""What the terminal shows of a plan: headline, ranked table, proof, other ways over, what would help, cautions."""

from __future__ import annotations

from rich.console import Group, RenderableType
from rich.text import Text

from routing.outputs.cautions import CAUTIONS, INVENTED_PRICES
from routing.outputs.pieces import MOST_LINES, bullets, heading
from routing.outputs.runfile import prices_invented
from routing.outputs.scheme_table import MOST_ROWS, scheme_table
from routing.outputs.ways_screen import least_bad_parts, ways_parts
from routing.outputs.wording import best_scheme, breaking_text, counted, headline, least_shortfall, litres
from routing.records import Plan, Scheme


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
        parts += ["", heading("Choice of ends"), bullets(plan.choice_notes)]
    parts += [*ways_parts(plan), *least_bad_parts(plan), *_shortfall_notes(plan)]
    if plan.warnings:
        parts += ["", heading("Warnings"), bullets(plan.warnings, "in run.json")]
    made = f"{counted(len(plan.assumptions), 'assumption')} made: listed in run.json."
    return Group(*parts, "", heading("Cautions"), bullets(CAUTIONS), "", Text(made))


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
