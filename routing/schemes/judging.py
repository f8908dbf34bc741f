"""Verdicts: every check of a scheme, at duty and at the lowest level, and the worst of them."""

from __future__ import annotations

from collections.abc import Iterator

from routing.records import GRADES, Check, Grade, Verdict
from routing.schemes.limit_checks import breaking, budget, collapse, discharge, submergence, suction
from routing.schemes.matter import Matter
from routing.schemes.trust_checks import barrier, ground_error, high_points, lift_share, outlet_air, surface
from routing.schemes.unmade import unmade_checks


def list_checks(matter: Matter) -> tuple[Check, ...]:
    """Make every check, the ones that can rule a scheme out first, and list those not made.

    Parameters
    ----------
    matter
        What is judged.
    """
    return (
        suction(matter),
        *discharge(matter),
        breaking(matter),
        collapse(matter),
        *budget(matter),
        lift_share(matter),
        ground_error(matter),
        surface(matter),
        barrier(matter),
        outlet_air(matter),
        high_points(matter),
        *submergence(matter),
        *unmade_checks(),
    )


def worst_of(grades: Iterator[Grade | None] | tuple[Grade | None, ...]) -> Grade:
    """Return the worst grade; a check not made counts as a caution.

    Parameters
    ----------
    grades
        Grades of checks, ``None`` for one not made.
    """
    return GRADES[max((GRADES.index(grade or "caution") for grade in grades), default=0)]


def judge(matter: Matter) -> Verdict:
    """Give the verdict on a scheme: as bad as its worst check, which is named as governing.

    Of several equally bad checks the first in the order of `list_checks` governs, which is suction where every check
    made is fit.

    Parameters
    ----------
    matter
        What is judged.
    """
    checks = list_checks(matter)
    made = tuple(check for check in checks if check.grade is not None)
    grade = worst_of(tuple(check.grade for check in checks))
    grade_of_made = worst_of(tuple(check.grade for check in made))
    governing = next(check for check in made if check.grade == grade_of_made)
    reason = governing.reason
    missing = len(checks) - len(made)
    if grade_of_made == "fit":
        reason = f"all {len(made)} checks made are fit; {missing} are not made. {reason}"
    return Verdict(grade, grade_of_made, governing, reason, checks)
