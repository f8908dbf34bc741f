"""What the terminal shows beside the ranking: other ways over, candidates by weights, least bad routes."""

from __future__ import annotations

from rich.console import RenderableType
from rich.text import Text

from routing.outputs.pieces import bullets, heading
from routing.outputs.scheme_table import table_of
from routing.outputs.ways import Need, crossing_rows, least_bad, own_samples
from routing.outputs.wording import counted, fixed, sentence
from routing.records import Crossing, Plan


def ways_parts(plan: Plan) -> list[RenderableType]:
    """Return the section on other ways over the divide, empty where nothing is known of them."""
    rows = crossing_rows(plan)
    parts: list[RenderableType] = []
    best = [row.best for row in rows if row.best is not None]
    # A single way over is that of the ranking: its row would only be said again.
    if len(best) > 1:
        parts.append(table_of(plan, best))
    left_out = [_why_none(row.crossing) for row in rows if row.best is None]
    if left_out:
        parts.append(bullets(left_out, "in crossings.csv"))
    if plan.crossings_note:
        parts.append(Text(sentence(plan.crossings_note)))
    if plan.samples:
        parts.append(Text(_samples_text(plan)))
    return ["", heading("Other ways over"), *parts] if parts else []


def least_bad_parts(plan: Plan) -> list[RenderableType]:
    """Return the section on what each route would need, empty where a route is feasible."""
    needs = [] if plan.feasible else least_bad(plan)
    if not needs:
        return []
    return [
        "",
        heading("Least bad routes"),
        bullets([_need_text(need) for need in needs], "in schemes.csv, samples.csv"),
    ]


def _why_none(crossing: Crossing) -> str:
    length, lift = fixed(crossing.length_m, 0), fixed(crossing.lift_m, 2)
    why = "no scheme goes over it" if crossing.used else crossing.note
    return f"{crossing.name}, at least {length} m, ground {lift} m above the lowest level: {why}"


def _samples_text(plan: Plan) -> str:
    found, own = len(plan.samples), len(own_samples(plan))
    if own == 0:
        among = "among the routes"
    elif own == found:
        among = "not among the routes" if own == 1 else "none of them among the routes"
    else:
        among = f"{own} of them not among the routes"
    return f"Weights tried: {counted(found, 'path')} found, {among}; see samples.csv."


def _need_text(need: Need) -> str:
    over = f" over {need.crossing}" if need.crossing else ""
    figures = f"{fixed(need.length_m, 0)} m, lift {fixed(need.lift_m, 2)} m"
    return f"{need.route}{over}, {figures}, {need.pipes}: {need.text}"
