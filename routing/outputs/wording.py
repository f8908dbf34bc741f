"""Numbers and findings in the words of the trade, shared by the screen and the JSON document."""

from __future__ import annotations

import math

from routing.records import Plan, Scheme, Setting, Shortfall

_GROUPED_FROM = 10_000.0
_BREAKING: dict[str, str] = {
    "suction": "from there the crown pressure allows no flow",
    "outlet": "it then stands level with the outlet",
    "intake": "the intake mouth may then draw air",
}


def figures(value: float | None, digits: int = 3) -> str:
    """Return a number to so many significant figures, never in powers of ten: 0.0182, 1.82, 182, 84,300.

    ``None`` and numbers that are not finite become a dash.
    """
    if value is None or not math.isfinite(value):
        return "-"
    if value == 0.0:
        return "0"
    places = digits - 1 - math.floor(math.log10(abs(value)))
    rounded = round(value, places)
    if abs(rounded) >= _GROUPED_FROM:
        return f"{rounded:,.0f}"
    # Rounding may have added a digit before the point (9.999 is 10.0, not 10.00).
    places = digits - 1 - math.floor(math.log10(abs(rounded)))
    return f"{rounded:.{max(places, 0)}f}"


def fixed(value: float | None, places: int) -> str:
    """Return a number with fixed places, a dash for ``None`` and for what is not finite."""
    if value is None or not math.isfinite(value):
        return "-"
    return f"{round(value, places) + 0.0:,.{places}f}"


def litres(discharge_m3s: float | None) -> str:
    """Return a discharge in litres per second to three figures."""
    return figures(None if discharge_m3s is None else 1e3 * discharge_m3s) + " l/s"


def counted(number: int, noun: str) -> str:
    """Return a count with its noun: ``1 pipe``, ``3 pipes``."""
    return f"{number} {noun}" if number == 1 else f"{number} {noun}s"


def still_water_lift_m(setting: Setting) -> float:
    """Return the highest lift that still water allows: (air - vapour) / (rho g) - reserve, or the user's own limit.

    Parameters
    ----------
    setting
        Air pressure, liquid, reserve and limits.

    Returns
    -------
    float
        Metres. Flow takes away from it.
    """
    water, limits = setting.water, setting.limits
    head = (limits.air_pressure_pa - water.vapour_pressure_pa) / (water.density_kgm3 * limits.gravity_ms2)
    allowed = head - limits.reserve_m
    return allowed if limits.highest_lift_m is None else min(allowed, limits.highest_lift_m)


def headline(plan: Plan) -> str:
    """Return the result of a plan in a sentence or two: the best scheme, or why there is none and what is missing."""
    best = best_scheme(plan)
    if best is not None:
        return _best_text(plan, best)
    shortfall = least_shortfall(plan)
    if shortfall is not None:
        return f"No route works. {sentence(shortfall.text)}"
    if plan.schemes:
        nearest = plan.schemes[0]
        return f"No route works. Nearest is {scheme_text(nearest)}: {nearest.verdict.reason.rstrip('.')}."
    return "No route works."


def best_scheme(plan: Plan) -> Scheme | None:
    """Return the first scheme in the ranking that breaks no limit, or ``None``."""
    return next((scheme for scheme in plan.schemes if scheme.verdict.grade != "unfit"), None)


def scheme_text(scheme: Scheme) -> str:
    """Return a scheme in a few words: ``2 x PE 315 on route R1``."""
    return f"{scheme.count} x {scheme.pipe.name} on route {scheme.route.name}"


def _best_text(plan: Plan, best: Scheme) -> str:
    asked = plan.site.demand.discharge_m3s
    asked_text = "" if asked is None else f" ({litres(asked)} asked)"
    together = "" if best.count == 1 else " together"
    standing = sum(scheme.verdict.grade != "unfit" for scheme in plan.schemes)
    length, lift = fixed(best.route.length_m, 0), fixed(best.appraisal.lift_m, 2)
    return (
        f"Best of {counted(standing, 'scheme')} within all limits: {scheme_text(best)}, {length} m long, "
        f"lift {lift} m, up to {litres(best.total_discharge_m3s)}{together} at the lowest level{asked_text}. "
        f"Verdict {best.verdict.grade}: {best.verdict.reason.rstrip('.')}."
    )


def sentence(text: str) -> str:
    """Return text with a capital at its head and a stop at its end."""
    text = text.strip()
    ended = text if text.endswith((".", "!", "?")) else f"{text}."
    return ended[:1].upper() + ended[1:]


def least_shortfall(plan: Plan) -> Shortfall | None:
    """Return the shortfall that misses by least; one without a figure only where no other is left."""
    if not plan.shortfalls:
        return None
    return min(plan.shortfalls, key=lambda s: math.inf if s.raise_m is None else s.raise_m)


def breaking_text(level_m: float, cause: str) -> str:
    """Return where and why a siphon stops, as a sentence."""
    why = _BREAKING.get(cause, cause)
    return f"Stops when the water is down to {fixed(level_m, 2)} m: {why}."
