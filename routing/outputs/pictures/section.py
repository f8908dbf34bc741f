"""The long section as numbers: lines thinned to what a page can hold, and the places marked on them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from routing.errors import OvercrestError
from routing.outputs.pictures.subject import Subject, grade_line_m
from routing.outputs.tables import ceiling_m
from routing.records import BoolArray, FloatArray, Plan, Route, Scheme, WaterBody

#: Bins along the chainage; in each of them the lowest and the highest ground are kept.
_BINS = 700
#: Ground above a water level by less than this is its shore, not dry land.
_SHORE_M = 0.02


@dataclass(frozen=True, slots=True)
class Spot:
    """A marked place on the pipe."""

    chainage_m: float
    level_m: float


@dataclass(frozen=True, slots=True)
class Section:
    """A long section ready to be drawn; all arrays go along ``chainage_m``.

    Attributes
    ----------
    crest, lowest_pressure
        Highest crown; crown where the reserve left is least.
    wet_present, wet_lowest
        Which samples lie in the water body, at either level.
    crossing_m
        Chainage at which the route passes its crossing, ``None`` where none is known.
    outlet_m, receiving_m, mouth_m
        Level of the route's outlet axis; of that or the tailwater, if higher; of its intake mouth, where known.
    """

    chainage_m: FloatArray
    ground_m: FloatArray
    crown_m: FloatArray
    ceiling_m: FloatArray
    grade_m: FloatArray
    crest: Spot
    lowest_pressure: Spot
    wet_present: BoolArray
    wet_lowest: BoolArray
    crossing_m: float | None
    outlet_m: float
    receiving_m: float
    mouth_m: float | None

    @property
    def range_m(self) -> tuple[float, float]:
        """Lowest and highest level of the lines."""
        lines = (self.ground_m, self.crown_m, self.ceiling_m, self.grade_m)
        return min(float(line.min()) for line in lines), max(float(line.max()) for line in lines)


def section_of(subject: Subject, scheme: Scheme) -> Section:
    """Return the long section of a scheme at duty and lowest level.

    Raises
    ------
    OvercrestError
        If the scheme's appraisal does not fit its route: a fault of ours.
    """
    plan, route, run = subject.plan, scheme.route, scheme.appraisal.duty
    chainage, crown = route.chainage_m, scheme.appraisal.profile_crown_m
    if not len(crown) == len(scheme.appraisal.crown_pressure_pa) == len(chainage):
        raise OvercrestError(f"the appraisal of scheme {scheme.rank} does not fit route {route.name}")
    crest, worst = (int(np.argmin(np.abs(chainage - at))) for at in (run.crest_chainage_m, run.governing_chainage_m))
    lowest = plan.setting.lowest
    outlet = lowest.outlet_m if route.outlet_m is None else route.outlet_m
    kept = thinned(chainage, route.ground_m, (crest, worst))
    return Section(
        chainage[kept],
        route.ground_m[kept],
        crown[kept],
        ceiling_m(plan, scheme)[kept],
        grade_line_m(plan, scheme)[kept],
        Spot(float(chainage[crest]), float(crown[crest])),
        Spot(float(chainage[worst]), float(crown[worst])),
        _wet(plan, route, plan.setting.present.water_m, plan.water_body)[kept],
        _wet(plan, route, plan.setting.lowest.water_m, plan.lowest_water)[kept],
        _crossing_m(plan, scheme),
        outlet,
        max(outlet, outlet if lowest.tailwater_m is None else lowest.tailwater_m),
        lowest.intake_mouth_m if route.mouth_m is None else route.mouth_m,
    )


def thinned(chainage: FloatArray, level: FloatArray, keep: tuple[int, ...]) -> NDArray[np.intp]:
    """Return the places of the samples to draw: ends, ``keep``, and lowest and highest level of each bin.

    Parameters
    ----------
    chainage, level : (n,) arrays
        Samples.
    keep
        Places that must be kept.
    """
    if len(chainage) <= 2 * _BINS:
        return np.arange(len(chainage))
    share = (chainage - chainage[0]) / (chainage[-1] - chainage[0])
    bins = np.minimum((share * _BINS).astype(np.intp), _BINS - 1)
    starts = np.flatnonzero(np.r_[True, np.diff(bins) > 0])
    ends = np.r_[starts[1:], len(chainage)]
    found = {0, len(chainage) - 1, *keep}
    for first, last in zip(starts, ends, strict=True):
        part = level[first:last]
        found |= {int(first + part.argmin()), int(first + part.argmax())}
    return np.array(sorted(found), dtype=np.intp)


def _wet(plan: Plan, route: Route, level_m: float, body: WaterBody | None) -> BoolArray:
    """Return which samples lie in the water: under a level, and in a cell of the water body."""
    a, _, c, _, e, f = plan.terrain.transform
    rows, cols = plan.terrain.shape
    row = np.clip(np.floor((route.y - f) / e).astype(np.intp), 0, rows - 1)
    col = np.clip(np.floor((route.x - c) / a).astype(np.intp), 0, cols - 1)
    cells = (plan.water_body if body is None else body).cells
    return np.asarray(cells[row, col] & (route.ground_m <= level_m + _SHORE_M))


def _crossing_m(plan: Plan, scheme: Scheme) -> float | None:
    crossing = next((found for found in plan.crossings if found.name == scheme.route.crossing), None)
    if crossing is None:
        return None
    apart = np.hypot(scheme.route.x - crossing.x, scheme.route.y - crossing.y)
    return float(scheme.route.chainage_m[int(np.argmin(apart))])
