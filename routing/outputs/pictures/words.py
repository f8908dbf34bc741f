"""What a picture shows, in words: the text alternative of both files, and of ``pictures.txt``."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from routing.outputs.cautions import INVENTED_PRICES
from routing.outputs.pictures.subject import OVERVIEW, Subject
from routing.outputs.wording import counted, figures, fixed, headline, litres, scheme_text, sentence
from routing.records import Plan, Route, Scheme

_WINDS = ("east", "north-east", "north", "north-west", "west", "south-west", "south", "south-east")


def picture_title(subject: Subject) -> str:
    """Return the title of a picture."""
    title = subject.plan.site.title or "Siphon pipeline"
    return title if subject.name == OVERVIEW else f"{title}: route {subject.name}"


def picture_text(subject: Subject) -> str:
    """Return in words what a picture shows, for who cannot see it; paragraphs are lines."""
    return "\n".join(" ".join(part) for part in (_map(subject), _section(subject), _end(subject)) if part)


def pictures_text(subjects: list[Subject]) -> str:
    """Return the text of ``pictures.txt``: every picture by its file name, with what it shows."""
    return (
        "\n\n".join(
            f"{subject.name}.png, {subject.name}.svg - {picture_title(subject)}\n{picture_text(subject)}"
            for subject in subjects
        )
        + "\n"
    )


def _map(subject: Subject) -> list[str]:
    plan = subject.plan
    told = [f"Map of {counted(len(subject.routes), 'route')} from the intake to the outlet, north at the top."]
    told.append(f"The water body stands at {fixed(plan.setting.present.water_m, 2)} m now;")
    told.append(f"the siphon must work down to {fixed(plan.setting.lowest.water_m, 2)} m.")
    told += [_route(route, plan) for route in subject.routes]
    if plan.lowest_crest is not None:
        told.append(f"The lowest possible crest between water and outlet is {fixed(plan.lowest_crest.level_m, 2)} m.")
    for crossing in subject.crossings:
        used = "a route passes over it" if crossing.used else "no route passes over it"
        told.append(f"Crossing {crossing.name} lies at {fixed(crossing.level_m, 2)} m; {used}.")
    for zone in plan.zones:
        kind = "bars routes" if zone.kind == "barred" else f"multiplies the cost by {figures(zone.cost_factor)}"
        told.append(f"Zone {zone.name or 'without a name'} {kind}.")
    return told


def _route(route: Route, plan: Plan) -> str:
    a, e = plan.terrain.transform[0], plan.terrain.transform[4]
    east = (route.x[-1] - route.x[0]) / abs(a) * float(np.median(plan.terrain.step_x_m))
    north = (route.y[-1] - route.y[0]) / abs(e) * float(np.median(plan.terrain.step_y_m))
    wind = _WINDS[round(float(np.degrees(np.arctan2(north, east))) / 45.0) % 8]
    over = f" over crossing {route.crossing}" if route.crossing else ""
    crest, at = fixed(route.crest_m, 2), fixed(float(route.chainage_m[route.crest_index]), 0)
    return f"{route.name} runs {wind}{over}, {fixed(route.length_m, 0)} m long, highest ground {crest} m at {at} m."


def _section(subject: Subject) -> list[str]:
    scheme = subject.scheme
    if scheme is None:
        return [f"No long section: {headline(subject.plan)}"]
    return list(_section_parts(subject.plan, scheme))


def _section_parts(plan: Plan, scheme: Scheme) -> Iterator[str]:
    run, left = scheme.appraisal.duty, scheme.appraisal.reserve_left_m
    at = int(np.argmin(np.abs(scheme.route.chainage_m - run.governing_chainage_m)))
    pressure = figures(1e-3 * float(scheme.appraisal.crown_pressure_pa[at]))
    yield f"Long section of {scheme_text(scheme)} with ground, crown, suction ceiling and hydraulic grade line,"
    yield f"at {litres(run.discharge_m3s)} each pipe and the lowest level."
    yield f"The crown is highest, {fixed(run.lift_m, 2)} m above the lowest level, at chainage"
    yield f"{fixed(run.crest_chainage_m, 0)} m; the outlet lies {fixed(run.fall_m, 2)} m below that level."
    yield f"The crown pressure governs at chainage {fixed(run.governing_chainage_m, 0)} m: {pressure} kPa absolute,"
    reserve = f"the reserve of {fixed(plan.setting.limits.reserve_m, 2)} m"
    yield f"{fixed(left, 2)} m above {reserve}." if left >= 0.0 else f"{fixed(-left, 2)} m short of {reserve}."
    yield f"Verdict {scheme.verdict.grade}: {sentence(scheme.verdict.reason)}"


def _end(subject: Subject) -> list[str]:
    return [INVENTED_PRICES] if subject.plan.site.prices.invented else []
