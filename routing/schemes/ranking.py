"""Schemes put in order."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from routing.records import GRADES, Scheme


def _order(scheme: Scheme, *, asked: bool) -> tuple[float, ...]:
    """Sort key: verdict on the checks made, then cost (or discharge, where none is asked), then simplicity."""
    grade = GRADES.index(scheme.verdict.grade_of_made)
    total = scheme.total_discharge_m3s
    worth = scheme.cost.total if asked else -total
    if grade == GRADES.index("unfit"):
        worth = -scheme.appraisal.reserve_left_m  # the least bad first
    return (grade, worth, scheme.count, scheme.route.length_m, -total)


def rank(schemes: Iterable[Scheme], *, asked: bool) -> tuple[Scheme, ...]:
    """Return the schemes from best to worst, with their ranks from 1.

    Parameters
    ----------
    schemes
        In any order.
    asked
        Whether a discharge is asked: then the cheapest fit scheme is best, else the one that carries most.
    """
    ordered = sorted(schemes, key=lambda scheme: _order(scheme, asked=asked))
    return tuple(replace(scheme, rank=place) for place, scheme in enumerate(ordered, start=1))
