"""What a siphon is made of and how it runs: plain numbers in SI units, no maps."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import Literal

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]

STANDARD_GRAVITY_MS2 = 9.80665


@dataclass(frozen=True, slots=True)
class Water:
    """The liquid at one temperature."""

    density_kgm3: float
    kinematic_viscosity_m2s: float
    vapour_pressure_pa: float
    temperature_c: float


@dataclass(frozen=True, slots=True)
class PipePrices:
    """Prices of one pipe size, in the currency of the price list."""

    supply_per_m: float = 0.0
    laying_per_m: float = 0.0
    fixed_each: float = 0.0


@dataclass(frozen=True, slots=True)
class Pipe:
    """One pipe size.

    Attributes
    ----------
    outside_diameter_m, wall_m
        Outside diameter, and the mean wall that gives the bore.
    least_wall_m
        The thinnest wall that the standard allows; collapse is judged on it.
    roughness_m
        Colebrook-White roughness.
    darcy_factor
        A fixed Darcy friction factor instead of roughness, or ``None``.
    modulus_pa, poisson_ratio, ovality_pct
        For collapse: modulus for the temperature and load duration of the job; ``None`` where unknown
        (collapse is then a check not made).
    source
        Where the dimensions and the modulus come from.
    """

    name: str
    material: str
    outside_diameter_m: float
    wall_m: float
    least_wall_m: float
    roughness_m: float
    darcy_factor: float | None = None
    modulus_pa: float | None = None
    poisson_ratio: float = 0.3
    ovality_pct: float = 0.0
    prices: PipePrices = field(default_factory=PipePrices)
    source: str = "given in plain numbers"

    @property
    def bore_m(self) -> float:
        """Inside diameter from the mean wall."""
        return self.outside_diameter_m - 2.0 * self.wall_m

    @property
    def area_m2(self) -> float:
        """Cross-section of the bore."""
        return 0.25 * np.pi * self.bore_m**2

    @classmethod
    def of_bore(cls, bore_m: float, *, roughness_m: float = 0.0, darcy_factor: float | None = None) -> Pipe:
        """Return a pipe known by its bore alone (no wall, so no collapse check)."""
        return cls(f"bore {bore_m * 1000:g} mm", "unknown", bore_m, 0.0, 0.0, roughness_m, darcy_factor)


@dataclass(frozen=True, slots=True)
class Profile:
    """Long section that a pipe follows.

    Attributes
    ----------
    chainage_m : (n,) array
        Distance along the pipe from the intake, strictly rising, first value 0.
    crown_m : (n,) array
        Crown level at each chainage.
    """

    chainage_m: FloatArray
    crown_m: FloatArray

    @property
    def length_m(self) -> float:
        """Length of the pipe."""
        return float(self.chainage_m[-1])

    @property
    def crest_index(self) -> int:
        """Position of the highest crown (the first one, if several are equal)."""
        return int(np.argmax(self.crown_m))


@dataclass(frozen=True, slots=True)
class Levels:
    """Levels of one state of the siphon, all in the same datum.

    Attributes
    ----------
    water_m
        Surface of the water body.
    outlet_m
        Axis of the outlet.
    tailwater_m
        Water surface at the outlet; ``None`` for a free outlet.
    intake_mouth_m
        Level of the intake mouth (its highest point); ``None`` where unknown.
    """

    water_m: float
    outlet_m: float
    tailwater_m: float | None = None
    intake_mouth_m: float | None = None

    @property
    def receiving_m(self) -> float:
        """The larger of outlet axis and tailwater."""
        return self.outlet_m if self.tailwater_m is None else max(self.outlet_m, self.tailwater_m)

    @property
    def fall_m(self) -> float:
        """Water surface minus receiving level."""
        return self.water_m - self.receiving_m

    def at_water(self, water_m: float) -> Levels:
        """Return the same levels with another water surface."""
        return replace(self, water_m=water_m)


@dataclass(frozen=True, slots=True)
class Losses:
    """Local losses, each as K in K V^2/2g.

    Attributes
    ----------
    entrance, exit, valve_open
        At the intake, at the outlet, and the outlet valve when fully open.
    bends_per_m
        Allowance for bends per metre of pipe.
    fittings
        Single losses as (chainage in m, K).
    """

    entrance: float = 0.5
    exit: float = 1.0
    valve_open: float = 0.0
    bends_per_m: float = 0.0
    fittings: tuple[tuple[float, float], ...] = ()


@dataclass(frozen=True, slots=True)
class Limits:
    """What the air and the user allow.

    Attributes
    ----------
    air_pressure_pa
        Absolute air pressure at the site, less the allowance for a barometric low.
    reserve_m
        Metres of water to keep between crown pressure and boiling.
    highest_lift_m
        Highest crown above the water surface that the user allows whatever the pressure; ``None``: no such limit.
    least_submergence_m
        Least depth of water over the intake mouth.
    collapse_safety
        Factor of safety against collapse of the pipe wall.
    gravity_ms2
        Acceleration of gravity.
    """

    air_pressure_pa: float
    reserve_m: float = 2.5
    highest_lift_m: float | None = None
    least_submergence_m: float = 0.0
    collapse_safety: float = 2.0
    gravity_ms2: float = STANDARD_GRAVITY_MS2


@dataclass(frozen=True, slots=True)
class Ceiling:
    """Suction ceiling of one discharge: a line falling with chainage, under a flat cap.

    The crown at chainage s may be at most ``min(level_m - gradient * s, cap_m)``, and the pipe at most
    ``longest_m`` long (energy limit; negative where the fall cannot carry the discharge at any length).
    """

    discharge_m3s: float
    level_m: float
    gradient: float
    cap_m: float
    longest_m: float


Governs = Literal["suction", "energy"]


@dataclass(frozen=True, slots=True)
class SiphonRun:
    """A steady running state, as ``run_siphon`` finds it.

    Attributes
    ----------
    discharge_m3s, velocity_ms, reynolds, friction_factor
        Of one pipe; all 0 where nothing can flow.
    governs
        ``"energy"``: the whole fall is used up; ``"suction"``: the crown pressure is at its limit.
    energy_discharge_m3s, suction_discharge_m3s
        The two limits by themselves (the suction limit is ``inf`` where no discharge reaches it).
    valve_loss
        K of the outlet valve that holds this state, its open loss included.
    lift_m, fall_m
        Crown at the crest above the water surface; water surface above the receiving level.
    crest_chainage_m, governing_chainage_m
        Where the crown is highest; where the reserve left is least.
    crown_pressure_pa : (n,) array
        Absolute pressure at the crown along the profile.
    reserve_left_m
        Least of: (crown pressure minus vapour pressure) as head, minus the reserve; highest lift minus lift.
        Negative where even still water breaks the limit: then it is what is missing.
    breaking_level_m, breaking_cause
        Level of the water body at which the siphon stops, and why.
    """

    discharge_m3s: float
    velocity_ms: float
    reynolds: float
    friction_factor: float
    governs: Governs
    energy_discharge_m3s: float
    suction_discharge_m3s: float
    valve_loss: float
    lift_m: float
    fall_m: float
    crest_chainage_m: float
    governing_chainage_m: float
    crown_pressure_pa: FloatArray
    reserve_left_m: float
    breaking_level_m: float
    breaking_cause: str

    @property
    def runs(self) -> bool:
        """Whether water can flow at all."""
        return self.discharge_m3s > 0.0
