"""The governing figures of a scheme, as rows of a small table."""

from __future__ import annotations

import math

from routing.outputs.wording import figures, fixed, litres, sentence, still_water_lift_m
from routing.records import Plan, Scheme

Rows = list[tuple[str, str]]


def governing_rows(plan: Plan, scheme: Scheme) -> Rows:
    """Return name and value of each figure, the verdict last."""
    appraisal, asked = scheme.appraisal, plan.site.demand.discharge_m3s
    left = appraisal.reserve_left_m
    reserve = f"{fixed(left, 2)} m above {fixed(plan.setting.limits.reserve_m, 2)} m"
    missing = f"{fixed(-left, 2)} m missing to {fixed(plan.setting.limits.reserve_m, 2)} m"
    most = f"{litres(scheme.total_discharge_m3s)} in all"
    rows = [
        ("Scheme", f"{scheme.count} x {scheme.pipe.name}"),
        ("Route", f"{scheme.route.name}, {fixed(scheme.route.length_m, 0)} m long"),
        ("Discharge at duty", f"{litres(appraisal.duty.discharge_m3s)} each pipe"),
        ("Largest discharge", most if asked is None else f"{most} ({litres(asked)} asked)"),
        ("Lift", f"{fixed(appraisal.lift_m, 2)} m of {fixed(still_water_lift_m(plan.setting), 2)} m allowed"),
        ("Fall", f"{fixed(appraisal.fall_m, 2)} m"),
        ("Reserve left", reserve if left >= 0.0 else missing),
        ("Stops at level", f"{fixed(appraisal.breaking_level_m, 2)} m"),
        ("Cost", _cost(scheme)),
        ("Verdict", f"{scheme.verdict.grade}: {scheme.verdict.reason}"),
    ]
    return [(name, value) for name, value in rows if value]


def _cost(scheme: Scheme) -> str:
    cost = scheme.cost
    if not cost.total:
        return ""
    amount = f"{figures(cost.total)} {cost.currency}".strip()
    return f"{amount} (invented prices)" if cost.invented else amount


def lacking_texts(plan: Plan) -> list[str]:
    """Return why there is no scheme to draw: a text for each pipe, those that miss least first."""
    ordered = sorted(plan.shortfalls, key=lambda s: math.inf if s.raise_m is None else s.raise_m)
    return [sentence(shortfall.text) for shortfall in ordered] or ["No route works."]
