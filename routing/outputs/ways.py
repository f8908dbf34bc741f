"""What stands beside the ranking: the best scheme over each crossing, candidates by weights, what a route lacks."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from routing.outputs.wording import fixed, litres
from routing.records import Appraisal, Crossing, Plan, Sample, Scheme

#: Less than this is rounding of the appraisal, in metres and as a share of a discharge.
_ROUNDING = 1e-6
#: Checks that a route passes once the pipe lies low enough under the water, and the duty can be driven.
_OF_THE_ROUTE = frozenset({"suction", "discharge", "breaking"})


@dataclass(frozen=True, slots=True)
class CrossingRow:
    """A crossing, the best scheme over it if there is one, and how many there are."""

    crossing: Crossing
    best: Scheme | None
    schemes: int


@dataclass(frozen=True, slots=True)
class SampleRow:
    """A candidate by weights: its place in the sweep, the route of the schemes that it is, and what it lacks."""

    number: int
    sample: Sample
    same_as: str
    missing_m: float
    reason: str


@dataclass(frozen=True, slots=True)
class Need:
    """What a route that does not work would need.

    Attributes
    ----------
    route, crossing
        Names; the crossing is empty for a candidate by weights.
    length_m, lift_m
        Of the route.
    pipes
        Pipe and number of pipes that it misses by least with.
    missing_m
        Metres missing to the suction limit; 0 where that is kept.
    driven
        Whether the fall can drive the duty.
    text
        What would make it work.
    """

    route: str
    crossing: str
    length_m: float
    lift_m: float
    pipes: str
    missing_m: float
    driven: bool
    text: str


def crossing_rows(plan: Plan) -> list[CrossingRow]:
    """Return the crossings of a plan, each with what goes over it."""
    rows = []
    for crossing in plan.crossings:
        over = [scheme for scheme in plan.schemes if scheme.route.crossing == crossing.name]
        rows.append(CrossingRow(crossing, over[0] if over else None, len(over)))
    return rows


def sample_rows(plan: Plan) -> list[SampleRow]:
    """Return the candidates by weights, in the order of the sweep."""
    names = {scheme.route.name for scheme in plan.schemes}
    rows = []
    for number, sample in enumerate(plan.samples, start=1):
        # A path that became a route of the schemes after the sweep is known by its name alone.
        same = next((name for name in (sample.same_as, sample.route.name) if name in names), "")
        missing = missing_m(sample.appraisal)
        rows.append(SampleRow(number, sample, same, missing, finding(plan, sample.appraisal)))
    return rows


def own_samples(plan: Plan) -> list[SampleRow]:
    """Return the candidates by weights that no scheme runs on."""
    return [row for row in sample_rows(plan) if not row.same_as]


def missing_m(appraisal: Appraisal) -> float:
    """Return how many metres are missing to the suction limit at duty; 0 where it is kept."""
    missing = -appraisal.reserve_left_m
    return missing if missing > _ROUNDING else 0.0


def is_driven(appraisal: Appraisal) -> bool:
    """Return whether the fall drives the duty through the pipe, whatever suction says."""
    most = appraisal.largest.energy_discharge_m3s
    return appraisal.duty_m3s is None or most >= appraisal.duty_m3s * (1.0 - _ROUNDING)


def finding(plan: Plan, appraisal: Appraisal) -> str:
    """Say whether a route works at duty and lowest level, and if not what it lacks, where, and what would mend it."""
    duty, missing = appraisal.duty, missing_m(appraisal)
    parts = []
    if not is_driven(appraisal):
        parts.append(_not_driven(appraisal))
    if missing > 0.0:
        where = f"at chainage {fixed(duty.governing_chainage_m, 0)} m"
        parts.append(f"{told_m(missing)} m too high {where}: needs {remedies(plan, appraisal)}")
    elif not parts:
        parts.append(f"keeps the limit of suction with {fixed(appraisal.reserve_left_m, 2)} m to spare")
    return "; ".join(parts)


def remedies(plan: Plan, appraisal: Appraisal) -> str:
    """Return what would give a route the metres that it lacks: ``0.66 m of trench, level or reserve``.

    A trench always would, dug where the ground is too high. A higher lowest level would up to the present level,
    a smaller reserve as far as there is one; neither the reserve nor the highest lift helps alone where both miss.
    """
    setting, missing = plan.setting, missing_m(appraisal)
    water, limits = setting.water, setting.limits
    gamma = water.density_kgm3 * limits.gravity_ms2
    suction = float(appraisal.duty.crown_pressure_pa.min() - water.vapour_pressure_pa) / gamma - limits.reserve_m
    lift = math.inf if limits.highest_lift_m is None else limits.highest_lift_m - appraisal.duty.lift_m
    ways = ["trench"]
    if missing <= setting.present.water_m - setting.lowest.water_m:
        ways.append("level")
    if lift >= -_ROUNDING and missing <= limits.reserve_m:
        ways.append("reserve")
    elif lift < -_ROUNDING <= suction:
        ways.append("highest lift")
    return f"{told_m(missing)} m of {either(ways)}"


def told_m(missing: float) -> str:
    """Return metres rounded up to whole centimetres: what is said to help must help."""
    return fixed(math.ceil(missing * 100.0 - _ROUNDING * 100.0) / 100.0, 2)


def either(words: Sequence[str]) -> str:
    """Return words as a choice: ``a``, ``a or b``, ``a, b or c``."""
    *others, last = words
    return f"{', '.join(others)} or {last}" if others else last


def least_bad(plan: Plan) -> list[Need]:
    """Return the routes of a plan without a feasible one, and what each would need, from the least on.

    Left out is what is neither shorter nor nearer to working than another: what stays is the choice there is
    between length and digging.
    """
    needs: dict[str, Need] = {}
    for scheme in sorted(plan.schemes, key=_badness):
        needs.setdefault(scheme.route.name, _need_of_scheme(plan, scheme))
    for row in own_samples(plan):
        needs.setdefault(row.sample.route.name, _need_of_sample(plan, row))
    kept: list[Need] = []
    for need in sorted(needs.values(), key=lambda need: (not need.driven, need.missing_m, need.length_m)):
        if all(round(need.length_m) < round(better.length_m) for better in kept):
            kept.append(need)
    return kept


def _not_driven(appraisal: Appraisal) -> str:
    most, asked = litres(appraisal.largest.energy_discharge_m3s), litres(appraisal.duty_m3s)
    return f"the fall drives {most} of the {asked} asked of one pipe"


def _others_broken(scheme: Scheme) -> list[str]:
    """Return the checks that break a limit which no change of levels mends."""
    checks = scheme.verdict.checks
    return [
        check.name.replace("_", " ") for check in checks if check.grade == "unfit" and check.name not in _OF_THE_ROUTE
    ]


def _badness(scheme: Scheme) -> tuple[float, ...]:
    driven = is_driven(scheme.appraisal)
    return (not driven, len(_others_broken(scheme)), missing_m(scheme.appraisal), scheme.rank)


def _needed(plan: Plan, appraisal: Appraisal) -> str:
    """Return what would make a route carry its duty; empty where nothing is missing."""
    needed = []
    if missing_m(appraisal) > 0.0:
        needed.append(remedies(plan, appraisal))
    if not is_driven(appraisal):
        most, asked = litres(appraisal.largest.energy_discharge_m3s), litres(appraisal.duty_m3s)
        needed.append(f"a wider pipe or more fall (for {asked}, not {most})")
    return f"needs {', and '.join(needed)}" if needed else ""


def _need_of_scheme(plan: Plan, scheme: Scheme) -> Need:
    route, appraisal, others = scheme.route, scheme.appraisal, _others_broken(scheme)
    text = _needed(plan, appraisal)
    if not text:
        text = scheme.verdict.reason.rstrip(".")
    elif others:
        text = f"{text}; also unfit: {', '.join(others)}"
    return Need(
        route.name,
        route.crossing,
        route.length_m,
        appraisal.lift_m,
        f"{scheme.count} x {scheme.pipe.name}",
        missing_m(appraisal),
        is_driven(appraisal),
        text,
    )


def _need_of_sample(plan: Plan, row: SampleRow) -> Need:
    sample, appraisal, required = row.sample, row.sample.appraisal, plan.site.demand.discharge_m3s
    count = round(required / appraisal.duty_m3s) if required and appraisal.duty_m3s else 1
    return Need(
        sample.route.name,
        "",
        sample.route.length_m,
        appraisal.lift_m,
        f"{count} x {sample.pipe}",
        row.missing_m,
        is_driven(appraisal),
        _needed(plan, appraisal) or row.reason,
    )
