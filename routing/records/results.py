"""What a plan is made of: routes, appraisals, costs, verdicts, schemes."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal

from routing.records.asks import Site
from routing.records.ground import FloatArray, PlacedPoint, Saddle, Terrain, WaterBody, Zone
from routing.records.hydraulic import Governs, Levels, Limits, Losses, Pipe, SiphonRun, Water
from routing.records.routes import Crossing, Route

Grade = Literal["fit", "caution", "unfit"]
#: From good to bad; a verdict is as bad as its worst check.
GRADES: tuple[Grade, ...] = ("fit", "caution", "unfit")


@dataclass(frozen=True, slots=True)
class Check:
    """One check: figure against limit. ``grade`` is ``None`` for a check that was not made."""

    name: str
    title: str
    grade: Grade | None
    figure: float | None
    limit: float | None
    unit: str
    reserve: float | None
    reason: str
    source: str


@dataclass(frozen=True, slots=True)
class Verdict:
    """The verdict on a scheme, with everything it rests on; the governing check is named.

    ``grade_of_made`` leaves out the checks not made (each of which alone makes a ``caution``).
    """

    grade: Grade
    grade_of_made: Grade
    governing: Check
    reason: str
    checks: tuple[Check, ...]

    @property
    def not_made(self) -> tuple[Check, ...]:
        """The checks that were not made."""
        return tuple(check for check in self.checks if check.grade is None)

    def __str__(self) -> str:
        return self.grade


@dataclass(frozen=True, slots=True)
class Appraisal:
    """Everything computed for a route with a pipe at the site's levels.

    ``largest`` runs at the lowest level as hard as it may; ``duty`` runs at the lowest level throttled to the
    discharge asked of one pipe (it is ``largest`` where none is asked, or where the duty cannot be carried);
    ``present`` runs at the present level as hard as it may.
    The flat names below are those of ``largest``, but for the pressures and the reserve: those are at duty.
    """

    profile_crown_m: FloatArray
    largest: SiphonRun
    duty: SiphonRun
    present: SiphonRun
    duty_m3s: float | None
    collapse_pressure_pa: float | None
    least_inside_pressure_pa: float
    barometric_head_m: float
    high_points: tuple[float, ...] = ()

    @property
    def discharge_m3s(self) -> float:
        """Largest discharge of one pipe at the lowest level."""
        return self.largest.discharge_m3s

    @property
    def governs(self) -> Governs:
        """What limits the largest discharge."""
        return self.largest.governs

    @property
    def lift_m(self) -> float:
        """Crown at the crest above the lowest level."""
        return self.largest.lift_m

    @property
    def fall_m(self) -> float:
        """Lowest level above the receiving level."""
        return self.largest.fall_m

    @property
    def valve_loss(self) -> float:
        """K of the outlet valve at the largest discharge."""
        return self.largest.valve_loss

    @property
    def crown_pressure_pa(self) -> FloatArray:
        """Absolute crown pressure along the route's chainage, at duty."""
        return self.duty.crown_pressure_pa

    @property
    def reserve_left_m(self) -> float:
        """Metres of water left above the reserve (negative: missing), at duty."""
        return self.duty.reserve_left_m

    @property
    def breaking_level_m(self) -> float:
        """Water level at which the siphon stops."""
        return self.largest.breaking_level_m


@dataclass(frozen=True, slots=True)
class CostLine:
    """One line of a cost: ``quantity`` in ``unit`` at ``rate`` makes ``amount``."""

    text: str
    quantity: float
    unit: str
    rate: float
    amount: float


@dataclass(frozen=True, slots=True)
class Cost:
    """Cost of a scheme: the total is the sum of its lines."""

    lines: tuple[CostLine, ...]
    total: float
    currency: str
    date: str
    invented: bool


@dataclass(frozen=True, slots=True)
class Scheme:
    """A route, a pipe and a number of parallel pipes, with appraisal, cost and verdict."""

    rank: int
    route: Route
    pipe: Pipe
    count: int
    appraisal: Appraisal
    cost: Cost
    verdict: Verdict

    @property
    def total_discharge_m3s(self) -> float:
        """Largest discharge of all pipes together, at the lowest level."""
        return self.count * self.appraisal.discharge_m3s


@dataclass(frozen=True, slots=True)
class Sample:
    """A candidate found by a weighted search, appraised beside the exact answer.

    Attributes
    ----------
    pipe
        Name of the pipe.
    weight
        Metres of length that one metre of ground above the suction limit, over one metre of route, counts for.
    route, appraisal
        The route found, and its appraisal at the duty.
    missing_m
        What is missing to the suction limit, in metres of trench, level or reserve (0 or less: nothing).
    same_as
        Name of a route of the schemes that is the same path, or "".
    """

    pipe: str
    weight: float
    route: Route
    appraisal: Appraisal
    missing_m: float
    same_as: str


@dataclass(frozen=True, slots=True)
class Shortfall:
    """Why no route is feasible for a pipe, and what would make one.

    Attributes
    ----------
    cause
        ``"suction"``: the ground is too high; ``"energy"``: the fall is too small for the duty;
        ``"cut off"``: no ground that holds data joins the ends.
    raise_m
        Least uniform raise of the suction ceiling that makes a route (``None`` where none does): as trench
        depth below the ground, as a higher lowest level, or as a smaller reserve.
    text
        The headline.
    """

    pipe: str
    duty_m3s: float | None
    cause: Literal["suction", "energy", "cut off"]
    raise_m: float | None
    text: str


@dataclass(frozen=True, slots=True)
class Setting:
    """The job with everything resolved that planning needs, told in every output."""

    intake: PlacedPoint
    outlet: PlacedPoint
    intake_cell: tuple[int, int]
    outlet_cell: tuple[int, int]
    present: Levels
    lowest: Levels
    water: Water
    limits: Limits
    losses: Losses
    altitude_m: float | None
    air_pressure_source: str
    assumptions: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Plan:
    """What ``plan`` returns: ranked schemes and everything they rest on."""

    site: Site
    terrain: Terrain
    water_body: WaterBody
    lowest_crest: Saddle | None
    setting: Setting
    schemes: tuple[Scheme, ...]
    shortfalls: tuple[Shortfall, ...]
    assumptions: tuple[str, ...]
    warnings: tuple[str, ...]
    timings_s: dict[str, float] = field(default_factory=dict)
    zones: tuple[Zone, ...] = ()
    crossings: tuple[Crossing, ...] = ()
    crossings_note: str = ""
    samples: tuple[Sample, ...] = ()
    lowest_water: WaterBody | None = None
    choice_notes: tuple[str, ...] = ()

    @property
    def feasible(self) -> bool:
        """Whether any scheme breaks no limit."""
        return any(scheme.verdict.grade != "unfit" for scheme in self.schemes)


@dataclass(frozen=True, slots=True)
class Outlook:
    """What ``look`` returns: what was understood of a site before anything is planned."""

    site: Site
    terrain: Terrain
    water_body: WaterBody
    lowest_crest: Saddle | None
    setting: Setting
    nodata_share: float
    elevation_range_m: tuple[float, float]
    flat_water_level_m: float | None
    assumptions: tuple[str, ...]
    warnings: tuple[str, ...]
