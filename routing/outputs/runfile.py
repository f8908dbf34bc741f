"""The one JSON document of a run: ``run.json`` in the folder, and what ``--json`` prints."""

from __future__ import annotations

from typing import Any

from routing.outputs.cautions import CAUTIONS, INVENTED_PRICES
from routing.outputs.field import row
from routing.outputs.fields import SCHEME_FIELDS
from routing.outputs.lonlat import LonLat
from routing.outputs.other_fields import CHECK_FIELDS, COST_FIELDS, WATER_FIELDS, CheckRow, CostRow
from routing.outputs.runfacts import RunFacts, document_head, inputs_document, run_document
from routing.outputs.values import Value, plain
from routing.outputs.ways import crossing_rows, sample_rows
from routing.outputs.ways_fields import CROSSING_FIELDS, SAMPLE_FIELDS
from routing.outputs.wording import headline, still_water_lift_m
from routing.records import Outlook, Plan, Scheme

#: Where a row stands is said by the scheme that holds it, and messages need line numbers, results do not.
_SAID_ABOVE = frozenset({"scheme", "route", "pipe", "count", "currency", "prices_invented"})
_NOT_TOLD = frozenset({"lines", "sha256", "key", "line"})


def plan_document(plan: Plan, run: RunFacts | None = None) -> dict[str, Any]:
    """Return everything about a plan but its coordinates.

    Parameters
    ----------
    plan
        What was planned.
    run
        Facts of the run; without them the document still names versions and inputs.

    Returns
    -------
    dict
        Plain values only: no NaN, no infinity, paths as text.

    Raises
    ------
    OutputError
        If the DEM's CRS cannot be placed in WGS 84.
    """
    run = run or RunFacts()
    return {
        **document_head("plan", plan.site.title),
        "feasible": plan.feasible,
        "headline": headline(plan),
        "schemes": [_scheme(plan, scheme) for scheme in plan.schemes],
        "shortfalls": plain(plan.shortfalls),
        "crossings": [row(CROSSING_FIELDS, plan, crossing) for crossing in crossing_rows(plan)],
        "crossings_note": plain(plan.crossings_note),
        "samples": [row(SAMPLE_FIELDS, plan, sample) for sample in sample_rows(plan)],
        "choice_notes": plain(plan.choice_notes),
        **_ground(plan),
        "assumptions": plain(plan.assumptions),
        "warnings": plain([*plan.warnings, *_price_warning(plan)]),
        "cautions": list(CAUTIONS),
        "timings_s": plain(plan.timings_s),
        "run": run_document(run),
        "inputs": inputs_document(plan, run),
    }


def look_document(outlook: Outlook, run: RunFacts | None = None) -> dict[str, Any]:
    """Return everything that was understood of a site, as plain values.

    Raises
    ------
    OutputError
        If the DEM's CRS cannot be placed in WGS 84.
    """
    run = run or RunFacts()
    crest, lowest = outlook.lowest_crest, outlook.setting.lowest
    return {
        **document_head("look", outlook.site.title),
        "nodata_share": plain(outlook.nodata_share),
        "elevation_range_m": plain(outlook.elevation_range_m),
        "flat_water_level_m": plain(outlook.flat_water_level_m),
        "lowest_lift_m": None if crest is None else plain(crest.level_m - lowest.water_m),
        "still_water_lift_limit_m": plain(still_water_lift_m(outlook.setting)),
        **_ground(outlook),
        "assumptions": plain(outlook.assumptions),
        "warnings": plain(outlook.warnings),
        "cautions": list(CAUTIONS),
        "run": run_document(run),
        "inputs": inputs_document(outlook, run),
    }


def _scheme(plan: Plan, scheme: Scheme) -> dict[str, Any]:
    checks = [row(CHECK_FIELDS, plan, CheckRow(scheme, check)) for check in scheme.verdict.checks]
    costs = [row(COST_FIELDS, plan, CostRow(scheme, line)) for line in scheme.cost.lines]
    return {
        **row(SCHEME_FIELDS, plan, scheme),
        "high_point_chainages_m": plain(scheme.appraisal.high_points),
        "pipe_source": plain(scheme.pipe.source),
        "checks": [_rest(check) for check in checks],
        "cost_lines": [_rest(line) for line in costs],
    }


def _rest(values: dict[str, Value]) -> dict[str, Value]:
    return {name: value for name, value in values.items() if name not in _SAID_ABOVE}


def _ground(told: Plan | Outlook) -> dict[str, Any]:
    intake = told.setting.intake
    return {
        "terrain": {**plain(told.terrain.facts), "window": plain(told.terrain.window)},
        "water_body": row(WATER_FIELDS, told, told.water_body),
        "lowest_crest": plain(told.lowest_crest),
        "site": plain(told.site, without=_NOT_TOLD),
        "setting": plain(told.setting),
        "to_wgs84": LonLat(told.terrain.facts.crs_wkt).operation(intake.x, intake.y),
    }


def _price_warning(plan: Plan) -> list[str]:
    return [INVENTED_PRICES] if prices_invented(plan) else []


def prices_invented(plan: Plan) -> bool:
    """Return whether any price of the plan is an invented example."""
    return plan.site.prices.invented or any(scheme.cost.invented for scheme in plan.schemes)
