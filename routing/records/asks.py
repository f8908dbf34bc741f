"""What the user asks: the site file, read and checked, in SI units."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path
from typing import Literal

from routing.records.ground import SurfaceKind, WaterShown, ZoneKind
from routing.records.hydraulic import Losses, Pipe, Water

GroundRule = Literal["bilinear", "cells"]
IntakeKind = Literal["point", "shore"]
OutletKind = Literal["point", "line", "polygon", "anywhere"]


@dataclass(frozen=True, slots=True)
class PointAsk:
    """A point as the user gave it: exactly one of (x, y), (lon, lat) or (file, layer) is set.

    ``key`` and ``line`` say where in the site file, so that a later check can name it.
    """

    x: float | None = None
    y: float | None = None
    lon: float | None = None
    lat: float | None = None
    file: Path | None = None
    layer: str | None = None
    key: str = ""
    line: int | None = None


@dataclass(frozen=True, slots=True)
class TerrainAsk:
    """The DEM and what its file does not say. ``None``: not stated."""

    file: Path
    band: int = 1
    vertical_unit: Literal["m", "ft", "us-ft"] | None = None
    vertical_datum: str | None = None
    datum_offset_m: float = 0.0
    vertical_error_m: float | None = None
    surface: SurfaceKind = "unknown"
    water_shown: WaterShown = "surface"


@dataclass(frozen=True, slots=True)
class AirAsk:
    """Air pressure: given outright, or from an altitude; ``None`` for both means the DEM's own levels serve."""

    pressure_pa: float | None = None
    altitude_m: float | None = None
    barometric_low_pa: float = 3000.0


@dataclass(frozen=True, slots=True)
class WaterAsk:
    """The water body. A present level of ``None`` is read off the DEM at the intake (flat surface)."""

    lowest_level_m: float
    present_level_m: float | None = None
    temperature_c: float = 10.0
    polygon_file: Path | None = None
    polygon_layer: str | None = None


@dataclass(frozen=True, slots=True)
class IntakeAsk:
    """The intake.

    ``mouth_level_m``: top of its mouth; ``None``: the DEM level there, where it shows the bed. ``kind`` "shore":
    anywhere along the shore at the lowest level, ``at`` being a point in the water; ``underwater_length_m`` is then
    the pipe from the mouth to the shore, ``None``: measured on the bed that the DEM shows.
    """

    at: PointAsk
    mouth_level_m: float | None = None
    kind: IntakeKind = "point"
    underwater_length_m: float | None = None


@dataclass(frozen=True, slots=True)
class OutletAsk:
    """The outlet.

    Its axis is at ``level_m``, or ``height_above_ground_m`` above the DEM where that is ``None``. ``kind`` "line" and
    "polygon": anywhere on the shapes of ``at.file``; "anywhere": wherever the ground is low enough, drains to the DEM's
    edge and lies at least ``beyond_toe_m`` from the barrier.
    """

    at: PointAsk
    level_m: float | None = None
    height_above_ground_m: float = 0.0
    tailwater_level_m: float | None = None
    kind: OutletKind = "point"
    beyond_toe_m: float = 0.0


@dataclass(frozen=True, slots=True)
class LimitsAsk:
    """Limits that the user may set; the defaults are stated in every output.

    ``pipe_load_hours``: how long suction acts on the pipe in all (the modulus of plastic pipe follows from it).
    """

    reserve_m: float = 2.5
    highest_lift_m: float | None = None
    least_submergence_m: float = 0.3
    collapse_safety: float = 2.0
    gravity_ms2: float = 9.80665
    pipe_load_hours: float = 8760.0


@dataclass(frozen=True, slots=True)
class ZoneAsk:
    """Polygons of the user's that bar a route, or multiply what a metre costs (``cost_factor``)."""

    name: str
    file: Path
    layer: str | None = None
    kind: ZoneKind = "barred"
    cost_factor: float = 1.0
    key: str = ""
    line: int | None = None


@dataclass(frozen=True, slots=True)
class DemandAsk:
    """What the siphon must do. ``None``: not asked."""

    discharge_m3s: float | None = None
    budget: float | None = None
    most_pipes: int = 4


@dataclass(frozen=True, slots=True)
class PriceList:
    """What prices mean. ``invented`` marks example prices; it is shown wherever a price is shown."""

    currency: str = ""
    date: str = ""
    invented: bool = False
    fixed_per_scheme: float = 0.0


@dataclass(frozen=True, slots=True)
class SearchAsk:
    """How the search is run."""

    neighbours: Literal[8, 16, 32] = 16
    ground_rule: GroundRule = "bilinear"
    bed_offset_m: float = 0.0
    tolerance: float = 1e-3
    largest_window_cells: int = 40_000_000


@dataclass(frozen=True, slots=True)
class Site:
    """One job, checked as far as it can be without opening the DEM.

    ``lines`` maps a dotted key of the file to its line number (for messages). ``sha256`` is the file's own.
    """

    file: Path
    title: str
    terrain: TerrainAsk
    water: WaterAsk
    intake: IntakeAsk
    outlet: OutletAsk
    pipes: tuple[Pipe, ...]
    air: AirAsk = field(default_factory=AirAsk)
    losses: Losses = field(default_factory=Losses)
    limits: LimitsAsk = field(default_factory=LimitsAsk)
    demand: DemandAsk = field(default_factory=DemandAsk)
    prices: PriceList = field(default_factory=PriceList)
    search: SearchAsk = field(default_factory=SearchAsk)
    liquid: Water | None = None
    lines: dict[str, int] = field(default_factory=dict)
    zones: tuple[ZoneAsk, ...] = ()
    sha256: str = ""
    assumptions: tuple[str, ...] = ()
