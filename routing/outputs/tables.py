"""CSV tables: schemes, long sections, checks, cost lines, crossings, samples, and the meaning of the columns.

UTF-8, comma between cells, point as decimal sign whatever the locale, first line the field names, CRLF line ends
(RFC 4180), no comment lines: every reader takes them as they are. What the columns mean stands in ``fields.csv``.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable, Sequence
from typing import TypeVar

import numpy as np

from routing.errors import OvercrestError
from routing.outputs.field import Field
from routing.outputs.fields import SCHEME_FIELDS, TABLES
from routing.outputs.geojson import routes_of
from routing.outputs.other_fields import (
    CHECK_FIELDS,
    COST_FIELDS,
    SECTION_FIELDS,
    CheckRow,
    CostRow,
    SectionRow,
)
from routing.outputs.values import clean
from routing.outputs.ways import crossing_rows, sample_rows
from routing.outputs.ways_fields import CROSSING_FIELDS, SAMPLE_FIELDS
from routing.records import FloatArray, Plan, Route, Scheme

Item = TypeVar("Item")


def schemes_table(plan: Plan) -> str:
    """Return ``schemes.csv``: one row a scheme, best first."""
    return _table(SCHEME_FIELDS, plan, plan.schemes)


def sections_table(plan: Plan) -> str:
    """Return ``sections.csv``: the long section of each route, with levels and pressures of its best scheme.

    Raises
    ------
    OvercrestError
        If a scheme's appraisal does not fit its route: a fault of ours.
    """
    rows = [row for route in routes_of(plan) for row in _section(plan, route)]
    return _table(SECTION_FIELDS, plan, rows)


def checks_table(plan: Plan) -> str:
    """Return ``checks.csv``: one row for every scheme and check, the checks not made included."""
    return _table(CHECK_FIELDS, plan, [CheckRow(s, check) for s in plan.schemes for check in s.verdict.checks])


def costs_table(plan: Plan) -> str:
    """Return ``costs.csv``: one row for every scheme and cost line."""
    return _table(COST_FIELDS, plan, [CostRow(s, line) for s in plan.schemes for line in s.cost.lines])


def crossings_table(plan: Plan) -> str:
    """Return ``crossings.csv``: one row for every crossing, best first, with what goes over it."""
    return _table(CROSSING_FIELDS, plan, crossing_rows(plan))


def samples_table(plan: Plan) -> str:
    """Return ``samples.csv``: one row for every candidate by weights, in the order of the sweep."""
    return _table(SAMPLE_FIELDS, plan, sample_rows(plan))


def fields_table() -> str:
    """Return ``fields.csv``: file, name, unit, kind, decimals and sense of every column of the other files."""
    rows = [
        (file, field.name, field.unit, field.kind, "" if field.decimals is None else field.decimals, field.sense)
        for file, fields in TABLES.items()
        for field in fields.values()
    ]
    return _csv(("file", "name", "unit", "kind", "decimals", "sense"), rows)


def ceiling_m(plan: Plan, scheme: Scheme) -> FloatArray:
    """Return the highest level that the crown may have along the route, at duty and lowest level.

    Pressure head and crown level add up to a sum that does not depend on where the crown is (the losses up to
    there are the same), so the crown may rise by the head that stands above vapour pressure and reserve.

    Parameters
    ----------
    plan
        Gives the liquid, the limits and the lowest level.
    scheme
        Gives crown levels and crown pressures.

    Returns
    -------
    (n,) array
        Levels in metres, along the chainage of the route.
    """
    water, limits = plan.setting.water, plan.setting.limits
    head = (scheme.appraisal.crown_pressure_pa - water.vapour_pressure_pa) / (water.density_kgm3 * limits.gravity_ms2)
    ceiling = scheme.appraisal.profile_crown_m + head - limits.reserve_m
    if limits.highest_lift_m is None:
        return ceiling
    return np.minimum(ceiling, plan.setting.lowest.water_m + limits.highest_lift_m)


def _section(plan: Plan, route: Route) -> list[SectionRow]:
    """Return the samples of a route; schemes are ranked, so the first one on it is its best."""
    best = next(scheme for scheme in plan.schemes if scheme.route.name == route.name)
    crown, pressure = best.appraisal.profile_crown_m, best.appraisal.crown_pressure_pa
    if not len(crown) == len(pressure) == len(route.chainage_m):
        raise OvercrestError(
            f"the appraisal of scheme {best.rank} does not fit route {route.name}: {len(crown)} crown levels, "
            f"{len(pressure)} pressures, {len(route.chainage_m)} chainages"
        )
    ceiling = ceiling_m(plan, best)
    return [
        SectionRow(route, k, best, float(crown[k]), float(ceiling[k]), float(pressure[k]))
        for k in range(len(route.chainage_m))
    ]


def _table(fields: Sequence[Field[Item]], plan: Plan, items: Iterable[Item]) -> str:
    return _csv([field.name for field in fields], ([field.cell(plan, item) for field in fields] for item in items))


def _csv(head: Sequence[str], rows: Iterable[Sequence[object]]) -> str:
    text = io.StringIO(newline="")
    writer = csv.writer(text)
    writer.writerow(head)
    writer.writerows([clean(cell) for cell in row] for row in rows)
    return text.getvalue()
