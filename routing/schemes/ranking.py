"""Schemes put in order."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from routing.records import GRADES, Check, Scheme

# Checks that are broken whenever nothing flows, whatever the reason.
_CONSEQUENCES = frozenset({"discharge", "breaking"})
_UNFIT = GRADES.index("unfit")


def _missing(check: Check, barometric_head_m: float) -> float:
    """Return what is missing to a broken limit, as a share: of the barometric head for metres, else of the limit."""
    if check.reserve is None:
        return 0.0
    scale = barometric_head_m if check.unit == "m" else abs(check.limit or 0.0)
    return -check.reserve / scale if scale > 0.0 else -check.reserve


def _shortage(scheme: Scheme) -> tuple[float, float]:
    """Return how far an unfit scheme is from working: whether more than money is missing, and the largest share."""
    broken = [check for check in scheme.verdict.checks if check.grade == "unfit"]
    head = scheme.appraisal.barometric_head_m
    if not scheme.appraisal.largest.runs:
        # Where nothing flows all of the discharge is missing, to every scheme alike: what keeps it from flowing counts.
        broken = [check for check in broken if check.name not in _CONSEQUENCES] or broken
    worst = max((_missing(check, head) for check in broken), default=0.0)
    return float(any(check.name != "budget" for check in broken)), worst


def _order(scheme: Scheme, *, asked: bool) -> tuple[float, ...]:
    """Sort key: verdict on the checks made, then cost (or discharge, where none is asked), then simplicity."""
    grade = GRADES.index(scheme.verdict.grade_of_made)
    total = scheme.total_discharge_m3s
    shortage = _shortage(scheme) if grade == _UNFIT else (0.0, 0.0)
    worth = scheme.cost.total if asked else -total
    return (grade, *shortage, worth, scheme.count, scheme.route.length_m, -total)


def rank(schemes: Iterable[Scheme], *, asked: bool) -> tuple[Scheme, ...]:
    """Return the schemes from best to worst, with their ranks from 1.

    Fit before caution before unfit, by the checks made. Among the unfit those come first that are only too dear,
    then those that miss their worst limit by the least share: they are the nearest to working. What is equal in
    every respect keeps its order.

    Parameters
    ----------
    schemes
        In any order.
    asked
        Whether a discharge is asked: then the cheapest fit scheme is best, else the one that carries most.
    """
    ordered = sorted(schemes, key=lambda scheme: _order(scheme, asked=asked))
    return tuple(replace(scheme, rank=place) for place, scheme in enumerate(ordered, start=1))
