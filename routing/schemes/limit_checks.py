"""Checks against limits: what breaks one is unfit."""

from __future__ import annotations

from collections.abc import Iterator

from routing.hydraulics import INTAKE, SUCTION
from routing.records import Check, Grade
from routing.schemes.matter import PRACTICE, ROUNDING, ROUNDING_M, Matter
from routing.schemes.saying import amount, apart, fixed
from routing.schemes.unmade import unmade

#: Reserve left below which a scheme is a caution, m of water.
SLIM_RESERVE_M = 0.5
#: Half of the smallest coin.
_HALF_CENT = 0.005

_RULE = "the crown pressure must stay above boiling by the reserve, everywhere on the line"
_STOPS = "highest of: suction limit in still water, outlet or tailwater, intake mouth plus its least submergence"
_USER = "set in the site file"


def _by_limit(*, broken: bool, slim: bool) -> Grade:
    if broken:
        return "unfit"
    return "caution" if slim else "fit"


def _is_capped(matter: Matter) -> bool:
    """Whether the user's highest lift, and not the pressure, leaves the least reserve."""
    highest = matter.conditions.limits.highest_lift_m
    if highest is None:
        return False
    return highest - matter.appraisal.duty.lift_m <= matter.appraisal.reserve_left_m + ROUNDING_M


def suction(matter: Matter) -> Check:
    """Hold the least reserve left, at duty, against nothing; under half a metre is a caution."""
    left = matter.appraisal.reserve_left_m
    limits = matter.conditions.limits
    at = f"at chainage {matter.appraisal.duty.governing_chainage_m:,.0f} m"
    broken, slim = left < -ROUNDING_M, left < SLIM_RESERVE_M
    size = amount(left, 2) if broken or left > 0.0 else "0.00"
    if slim and not broken and left > 0.5 * SLIM_RESERVE_M:
        size = apart(left, SLIM_RESERVE_M, 2)[0]
    wanted = f" ({SLIM_RESERVE_M:g} m are wanted)" if slim and not broken else ""
    source = _RULE
    if _is_capped(matter):
        source = _USER
        relation = "above" if broken else "below"
        reason = f"the crest lies {size} m {relation} the highest lift of {limits.highest_lift_m:g} m{wanted}, {at}"
    elif broken:
        reason = f"the crown lies {size} m too high {at} to keep the reserve of {limits.reserve_m:g} m of water"
    elif matter.appraisal.duty_m3s is None and left <= ROUNDING_M:
        reason = (
            f"it runs as hard as the reserve of {limits.reserve_m:g} m allows, with nothing left above it {at}: "
            "the outlet valve must hold it there, or less be asked"
        )
    else:
        reason = f"{size} m of water are left above the reserve of {limits.reserve_m:g} m{wanted}, least {at}"
    grade = _by_limit(broken=broken, slim=slim)
    return Check("suction", "Suction at the crown", grade, left, 0.0, "m", left, reason, source)


def discharge(matter: Matter) -> Iterator[Check]:
    """Hold what all pipes carry together against what is asked, if anything is."""
    if matter.required_m3s is None:
        return
    run = matter.appraisal.duty
    # A duty that only rounding puts beyond the suction limit is carried: `suction` says the same.
    held = run.discharge_m3s if run.reserve_left_m >= -ROUNDING_M else 0.0
    total = matter.count * max(matter.appraisal.discharge_m3s, held)
    left = total - matter.required_m3s
    broken = left < -ROUNDING * matter.required_m3s
    have, asked = apart(total, matter.required_m3s, 3)
    carries = f"{matter.count} x {matter.pipe.name} carry" if matter.count > 1 else f"{matter.pipe.name} carries"
    relation = "less than" if broken else "enough for"
    bound = "suction" if matter.appraisal.governs == "suction" else "the fall"
    reason = f"{carries} {have} m3/s at most, bounded by {bound}: {relation} the {asked} m3/s asked"
    yield Check(
        "discharge",
        "Discharge at the lowest level",
        _by_limit(broken=broken, slim=False),
        total,
        matter.required_m3s,
        "m3/s",
        left,
        reason,
        "energy balance with Colebrook-White friction, and the suction limit",
    )


def collapse(matter: Matter) -> Check:
    """Hold the suction at duty against what the wall may bear."""
    title, unit = "Collapse of the pipe wall while running", "Pa"
    # No pressure inside is lower than that of boiling, whatever a full bore would need beyond the suction limit.
    inside = max(matter.appraisal.least_inside_pressure_pa, matter.conditions.water.vapour_pressure_pa)
    under = max(matter.conditions.limits.air_pressure_pa - inside, 0.0)
    source = "thin-ring buckling, 2E/(1 - nu^2) (t/D)^3, with ovality and the factor of safety"
    if matter.appraisal.collapse_pressure_pa is None:
        reason = "the pipe's modulus or wall is not known"
        return Check("collapse", title, None, under, None, unit, None, reason, source)
    safety = matter.conditions.limits.collapse_safety
    allowed = matter.appraisal.collapse_pressure_pa / safety
    broken = under > allowed * (1.0 + ROUNDING)
    relation = "is more than" if broken else "keeps within"
    figure, limit = apart(under / 1e3, allowed / 1e3, 0)
    reason = f"the suction of {figure} kPa {relation} the {limit} kPa that the wall may bear (factor {safety:g})"
    grade = _by_limit(broken=broken, slim=False)
    return Check("collapse", title, grade, under, allowed, unit, allowed - under, reason, source)


def _stop_cause(matter: Matter) -> str:
    """Say what stops the siphon at its breaking level."""
    cause, levels, limits = matter.appraisal.largest.breaking_cause, matter.conditions.lowest, matter.conditions.limits
    if cause == INTAKE:
        return f"the intake mouth then lacks its least submergence of {limits.least_submergence_m:g} m"
    if cause == SUCTION:
        highest = limits.highest_lift_m
        crest = levels.water_m + matter.appraisal.lift_m
        capped = highest is not None and abs(crest - highest - matter.appraisal.breaking_level_m) <= ROUNDING_M
        return "the lift is then the highest allowed" if capped else "the suction limit then leaves no flow"
    receiving = "tailwater" if levels.receiving_m > levels.outlet_m else "outlet"
    return f"the water is then level with the {receiving}"


def breaking(matter: Matter) -> Check:
    """Hold the breaking level against the lowest level."""
    lowest = matter.conditions.lowest.water_m
    breaks = matter.appraisal.breaking_level_m
    left = lowest - breaks
    broken = left < -ROUNDING_M or not matter.appraisal.largest.runs
    relation = "above" if left < 0.0 else "below"
    place = f"{amount(left, 2)} m {relation} the lowest level" if abs(left) > ROUNDING_M else "the lowest level itself"
    reason = f"the siphon stops at level {fixed(breaks, 2)} m, {place}: {_stop_cause(matter)}"
    grade = _by_limit(broken=broken, slim=False)
    title = "Works down to the lowest level"
    return Check("breaking", title, grade, breaks, lowest, "m", left, reason, _STOPS)


def submergence(matter: Matter) -> Iterator[Check]:
    """List the cover of the intake as not made where its mouth is not known; else `breaking` covers it."""
    if matter.conditions.lowest.intake_mouth_m is None:
        reason = "the level of the intake mouth is not stated"
        yield unmade("submergence", "Water over the intake mouth at the lowest level", PRACTICE, reason)


def budget(matter: Matter) -> Iterator[Check]:
    """Hold the cost against the budget, if there is one."""
    if matter.budget is None:
        return
    title, source = "Cost against budget", "the user's price list"
    currency = matter.cost.currency
    if not matter.cost.lines:
        yield unmade("budget", title, source, "the price list gives no price for this scheme")
        return
    left = matter.budget - matter.cost.total
    over = left < -_HALF_CENT
    decimals = 0 if abs(left) >= 1.0 else 2
    total, budget = (f"{fixed(sum_, decimals)} {currency}".strip() for sum_ in (matter.cost.total, matter.budget))
    relation = f"{fixed(abs(left), decimals)} {'over' if over else 'under'}" if abs(left) >= _HALF_CENT else "just"
    invented = " (invented prices)" if matter.cost.invented else ""
    reason = f"the cost of {total} is {relation} the budget of {budget}{invented}"
    grade = _by_limit(broken=over, slim=False)
    yield Check("budget", title, grade, matter.cost.total, matter.budget, currency, left, reason, source)
