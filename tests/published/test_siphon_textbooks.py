"""Siphons worked in textbooks, exams and by hand.

The figures of the textbook rows come from readers' transcriptions of the worked examples (the FOSSEE "Python Textbook
Companions" notebooks, edition of August 2017), not from the printed pages; every one was recomputed by hand. Book,
example and page are those that the transcription gives. Friction factors are Darcy's; where a book prints Fanning's
(a quarter of it), the row says so. "1.5" stands for entrance 0.5 and exit 1.0 velocity heads.
"""

from dataclasses import dataclass, field

import numpy as np
import pytest

from routing.hydraulics import energy_discharge_m3s, run_at, run_siphon, suction_ceiling
from routing.records import Levels, Limits, Losses, Pipe, Profile, Water

FT = 0.3048
INCH = 0.0254
IMPERIAL_GALLON_M3 = 4.54609e-3
NO_LOSS = Losses(entrance=0.0, exit=0.0)
BOTH = Losses(entrance=0.5, exit=1.0)
SURFACE_M = 100.0


@dataclass(frozen=True)
class Siphon:
    """A textbook siphon: two straight legs. Heads are metres of its own liquid; the limit is an absolute head."""

    bore_m: float
    length_m: float
    fall_m: float
    leg_m: float
    summit_m: float
    darcy: float | None = None
    roughness_m: float = 0.0
    losses: Losses = NO_LOSS
    air_m: float | None = 10.3
    air_pa: float | None = None
    floor_m: float = 0.0
    gravity: float = 9.81
    density: float = 1000.0
    viscosity: float = 1e-6
    vapour_pa: float = 0.0
    pipe: Pipe = field(init=False)

    def __post_init__(self):
        pipe = Pipe.of_bore(self.bore_m, roughness_m=self.roughness_m, darcy_factor=self.darcy)
        object.__setattr__(self, "pipe", pipe)

    @property
    def weight(self):
        return self.density * self.gravity

    @property
    def case(self):
        air = self.air_pa if self.air_pa is not None else self.air_m * self.weight
        levels = Levels(SURFACE_M, SURFACE_M - self.fall_m)
        water = Water(self.density, self.viscosity, self.vapour_pa, 20.0)
        return levels, self.losses, water, Limits(air, reserve_m=self.floor_m, gravity_ms2=self.gravity)

    @property
    def profile(self):
        # The intake lies a metre below the surface or, where the summit itself lies below it, a metre below that.
        start = min(0.0, self.summit_m) - 1.0
        crown = SURFACE_M + np.array([start, self.summit_m, -self.fall_m])
        return Profile(np.array([0.0, self.leg_m, self.length_m]), crown)

    @property
    def discharge(self):
        return energy_discharge_m3s(self.pipe, self.length_m, *self.case)

    def full(self):
        """The state with the valve wide open, whether the limits allow it or not (what the books compute)."""
        return run_at(self.pipe, self.profile, *self.case, self.discharge)

    def run(self):
        return run_siphon(self.pipe, self.profile, *self.case)

    def summit_head_m(self):
        """Absolute pressure head at the summit in the full state."""
        return self.full().crown_pressure_pa[1] / self.weight


GATE = Siphon(0.10, 5000.0, 5.0, 2000.0, 5.0, darcy=0.02, floor_m=2.5)
SUBRAMANYA = Siphon(0.15, 1000.0, 16.0, 600.0, -2.0, darcy=0.02, density=9790 / 9.81)
PARADISE = Siphon(14 * INCH, 3200 * FT, 42 * FT, 1800 * FT, 0.0, darcy=0.04, losses=BOTH, air_m=34 * FT, floor_m=8 * FT)
DIGHE_15 = Siphon(
    12 * INCH, 2000 * FT, 25 * FT, 933 * FT, 18 * FT, darcy=0.03, losses=BOTH, air_m=34 * FT, floor_m=4 * FT
)
DIGHE_17 = Siphon(
    18 * INCH, 9500 * FT, 140 * FT, 2000 * FT, 8 * FT, darcy=0.032, losses=BOTH, air_m=34 * FT, floor_m=4 * FT
)

# source, siphon, V in m/s (None: not given), Q in l/s (None), absolute head at the summit in m (None), tolerance
STEADY = [
    ("GATE Civil 2019 shift 1, question 60 (limit and key recalled)", GATE, 0.3132, 2.460, None, 0.005),
    (
        "R. K. Bansal, chapter 11, standard problem (answer recalled; Fanning 0.005)",
        Siphon(0.2, 500.0, 20.0, 100.0, 3.0, darcy=0.02),
        2.801,
        88.0,
        10.3 - 7.40,
        0.005,
    ),
    (
        "same with entrance and exit losses, by hand",
        Siphon(0.2, 500.0, 20.0, 100.0, 3.0, darcy=0.02, losses=BOTH),
        2.760,
        86.72,
        10.3 - 7.466,
        0.001,
    ),
    (
        "Choudhary & Om Prakash, Fluid Mechanics, ex. 7.21 p. 258 (Fanning 0.02)",
        Siphon(0.1, 700.0, 10.0, 300.0, 1.4, darcy=0.08),
        None,
        4.65,
        4.596,
        0.002,
    ),
    (
        "Subramanya, 1000 Solved Problems in Fluid Mechanics, ex. 11.17(a) p. 248",
        SUBRAMANYA,
        1.534,
        27.1,
        25.26 / 9.79,
        0.003,
    ),
    (
        "Douglas et al., Fluid Mechanics, ex. 14.1 p. 468 (Fanning 0.08; -28.6 kPa gauge)",
        Siphon(0.1, 15.0, 4.0, 5.0, 1.5, darcy=0.32, losses=BOTH),
        1.26,
        None,
        10.3 - 28.6 / 9.81,
        0.003,
    ),
    (
        "Dighe, Hydraulics Made Easy, ex. 6.16 p. 197 (Fanning 0.002; feet, g 32.2)",
        Siphon(
            6 * INCH,
            1000 * FT,
            40 * FT,
            300 * FT,
            15 * FT,
            darcy=0.008,
            losses=BOTH,
            air_m=34 * FT,
            gravity=32.2 * FT,
        ),
        12.13 * FT,
        67.46,
        4.6 * FT,
        0.003,
    ),
    (
        "Fox & McDonald, Introduction to Fluid Mechanics, ex. 6.4 p. 244 (no friction)",
        Siphon(0.05, 20.0, 7.0, 8.0, 1.0, darcy=0.0, losses=Losses(0.0, 1.0), air_m=None, air_pa=101e3, density=999.0),
        11.72,
        None,
        22.6e3 / (999.0 * 9.81),
        0.002,
    ),
    (
        "Cengel & Cimbala, Fluid Mechanics, ex. 5-7 p. 207 (gasoline; 4 l in 53.1 s)",
        Siphon(
            0.005, 6.0, 0.75, 3.0, 2.0, darcy=0.0, losses=Losses(0.0, 1.0), air_m=None, air_pa=101.3e3, density=750.0
        ),
        None,
        4.0 / 53.1,
        81.1e3 / (750.0 * 9.81),
        0.002,
    ),
    (
        "Brodkey & Hershey, Transport Phenomena, ex. 7.10 p. 298 (3.13 kg/s at g 9.784)",
        Siphon(0.03, 4.0, 1.0, 2.0, 0.0, darcy=0.0, losses=Losses(0.0, 1.0), gravity=9.784),
        None,
        3.13,
        None,
        0.002,
    ),
    (
        "UC Davis Physics 9B, practice final 2008 (4 m up, 8 m down, g 9.8)",
        Siphon(0.03, 12.0, 4.0, 4.0, 4.0, darcy=0.0, losses=Losses(0.0, 1.0), air_m=None, air_pa=1e5, gravity=9.8),
        8.85,
        None,
        None,
        0.002,
    ),
    (
        "laminar branch by hand (quadratic): 16 mm, 200 m, 0.5 m head, water of 0 °C, 1.5",
        Siphon(0.016, 200.0, 0.5, 100.0, 0.2, losses=BOTH, density=999.84, viscosity=1.7914e-6, gravity=9.80665),
        0.10929,
        21.97e-3,
        None,
        0.001,
    ),
]


@pytest.mark.parametrize(("source", "siphon", "velocity", "litres", "summit", "tolerance"), STEADY)
def test_full_bore_flow(source, siphon, velocity, litres, summit, tolerance):
    state = siphon.full()
    if velocity is not None:
        assert state.velocity_ms == pytest.approx(velocity, rel=tolerance)
    if litres is not None:
        assert state.discharge_m3s * 1000 == pytest.approx(litres, rel=tolerance)
    if summit is not None:
        # The tolerance is on the pressure as the books print it, which is mostly the suction head.
        air = siphon.air_m or siphon.air_pa / siphon.weight
        assert siphon.summit_head_m() == pytest.approx(summit, abs=tolerance * max(air - summit, summit))


def test_laminar_row_is_laminar():
    assert STEADY[-1][1].full().reynolds == pytest.approx(976, rel=1e-3)  # by hand


def highest_summit_m(siphon, chainage_m):
    """Highest crown above the surface at a chainage, by the suction ceiling at full discharge."""
    ceiling = suction_ceiling(siphon.pipe, *siphon.case, siphon.discharge)
    return ceiling.level_m - ceiling.gradient * chainage_m - SURFACE_M


def test_highest_summit_of_the_exam_question():
    # GATE Civil 2019 shift 1, question 60: at least 2.5 m absolute; key 5.8 m (recalled), by hand 5.795 m.
    assert highest_summit_m(GATE, 2000.0) == pytest.approx(5.795, rel=0.005)


def test_highest_summit_with_entrance_loss():
    # Paradise, Problems in Hydraulics, ex. 6.2 p. 96 (Fanning 0.01): 2.13 ft; 1974 imperial gallons a minute.
    assert highest_summit_m(PARADISE, 1800 * FT) == pytest.approx(2.13 * FT, abs=0.003 * 26 * FT)
    assert PARADISE.discharge * 60 / IMPERIAL_GALLON_M3 == pytest.approx(1974, rel=0.003)


def test_least_trench_depth_at_a_ridge():
    # Lal, Hydraulics, ex. 5.11 p. 148 (Fanning 0.008): allowed suction 24 ft, ridge 25 ft above the surface, cut
    # 18.0 ft deep; 37 100 imperial gallons an hour (the transcription labels them "gpm", which the sum contradicts).
    siphon = Siphon(8 * INCH, 6000 * FT, 100 * FT, 1000 * FT, 7 * FT, darcy=0.032, air_m=34 * FT, floor_m=10 * FT)
    assert siphon.full().velocity_ms == pytest.approx(4.729 * FT, rel=0.005)
    assert 25 * FT - highest_summit_m(siphon, 1000 * FT) == pytest.approx(18.0 * FT, rel=0.005)
    assert siphon.discharge * 3600 / IMPERIAL_GALLON_M3 == pytest.approx(37_100, rel=0.005)


def longest_leg_m(siphon):
    ceiling = suction_ceiling(siphon.pipe, *siphon.case, siphon.discharge)
    return (ceiling.level_m - SURFACE_M - siphon.summit_m) / ceiling.gradient


def test_longest_inlet_leg():
    # Dighe, Hydraulics Made Easy, ex. 6.15 p. 195 (Fanning 0.0075): 933 ft with entrance and exit losses.
    assert DIGHE_15.full().velocity_ms == pytest.approx(5.12 * FT, rel=0.003)
    assert longest_leg_m(DIGHE_15) == pytest.approx(933 * FT, rel=0.003)


def test_longest_inlet_leg_down_to_no_pressure():
    # Lal, Hydraulics, ex. 5.12 p. 151 (Fanning 0.005): 4.9 ft3/s. The book's 1440 ft leaves the local losses out of
    # the second step; with them it is 1419 ft (by hand).
    siphon = Siphon(12 * INCH, 2000 * FT, 25 * FT, 1000 * FT, 16 * FT, darcy=0.02, losses=BOTH, air_m=34 * FT)
    assert siphon.discharge / FT**3 == pytest.approx(4.9, rel=0.005)
    assert longest_leg_m(siphon) == pytest.approx(1419 * FT, rel=0.001)


def test_largest_flow_that_keeps_the_summit_pressure():
    # Subramanya ex. 11.17(b) p. 248, at least 20 kPa absolute. The transcription prints 25.1 l/s, less than the
    # 27.1 l/s of part (a) at a higher pressure: 2g was dropped from one term. By hand 1.576 m/s and 27.85 l/s.
    siphon = Siphon(0.15, 1000.0, 16.0, 600.0, -2.0, darcy=0.02, density=9790 / 9.81, floor_m=20 / 9.79)
    run = siphon.run()
    assert run.suction_discharge_m3s * 1000 == pytest.approx(27.85, rel=0.003)
    assert run.governs == "energy"


def test_inlet_leg_that_delivers_less_than_the_line_wants():
    # Dighe ex. 6.17 p. 198 (Fanning 0.008; the meaning of the two flows follows from the transcription): the inlet
    # leg gives 10.0 ft3/s, the line would take 11.74: to be throttled at the outlet.
    run = DIGHE_17.run()
    assert run.governs == "suction"
    assert run.discharge_m3s / FT**3 == pytest.approx(10.009, rel=0.003)
    assert run.energy_discharge_m3s / FT**3 == pytest.approx(11.74, rel=0.003)
    assert run.reserve_left_m == 0.0
    # The same by hand: V^2/2g = 22 ft / 44.17; the valve takes 140 ft less 204.17 velocity heads.
    head = 22 / (1.5 + 0.032 * 2000 / 1.5)
    assert run.valve_loss == pytest.approx(140 / head - (1.5 + 0.032 * 9500 / 1.5), rel=1e-6)


def test_column_that_would_part_is_refused():
    # Exam question ("siphon spillway", 200 ft of 2 ft pipe; answer not printed, by hand): full bore would need
    # -35.0 ft gauge at the summit, below absolute zero.
    siphon = Siphon(
        2 * FT,
        200 * FT,
        50 * FT,
        60 * FT,
        5 * FT,
        darcy=0.02,
        losses=BOTH,
        air_m=33.9 * FT,
        density=998.2,
        vapour_pa=2339.0,
    )
    full = siphon.full()
    assert full.velocity_ms == pytest.approx(30.33 * FT, rel=0.001)
    assert full.discharge_m3s / FT**3 == pytest.approx(95.3, rel=0.001)
    assert siphon.summit_head_m() - siphon.air_m == pytest.approx(-35.0 * FT, rel=0.001)
    assert full.crown_pressure_pa.min() < 0.0
    assert full.reserve_left_m < 0.0
    run = siphon.run()
    assert run.governs == "suction"
    assert run.discharge_m3s < full.discharge_m3s
    assert run.crown_pressure_pa.min() == pytest.approx(2339.0, abs=1.0)


# Composite cases computed outside the project (fluids 1.3 for friction, scipy for the root, by hand for the heads).
COOL = {
    "bore_m": 0.2046,
    "length_m": 400.0,
    "fall_m": 12.0,
    "leg_m": 120.0,
    "summit_m": 3.5,
    "roughness_m": 1e-5,
    "losses": Losses(entrance=0.5, exit=1.0, fittings=((60.0, 0.3), (200.0, 0.3))),
    "air_m": None,
    "gravity": 9.80665,
    "density": 999.702,
    "viscosity": 1.3063e-6,
}


@pytest.mark.parametrize(
    ("air_pa", "vapour_pa", "floor_m", "summit_kpa", "highest_m"),
    [
        (79_495.2, 1228.2, 0.0, 5.243, 3.909),  # 2000 m
        (79_495.2, 0.0, 2.5, 5.243, 1.535),  # 2000 m, at least 2.5 m absolute
        (101_325.0, 1228.2, 0.0, 27.07, None),  # sea level
        (61_640.2, 1228.2, 0.0, -12.6, 2.088),  # 4000 m: not feasible
    ],
)
def test_composite_case_at_three_altitudes(air_pa, vapour_pa, floor_m, summit_kpa, highest_m):
    siphon = Siphon(**COOL, air_pa=air_pa, vapour_pa=vapour_pa, floor_m=floor_m)
    full = siphon.full()
    assert full.friction_factor == pytest.approx(0.014080, rel=1e-3)
    assert full.velocity_ms == pytest.approx(2.8185, rel=1e-3)
    assert full.discharge_m3s * 1000 == pytest.approx(92.667, rel=1e-3)
    assert full.crown_pressure_pa[1] / 1000 == pytest.approx(summit_kpa, abs=0.03)
    if highest_m is not None:
        assert siphon.summit_m + full.reserve_left_m == pytest.approx(highest_m, abs=0.003)
        assert siphon.run().governs == ("suction" if highest_m < 3.5 else "energy")


def test_composite_case_in_steel():
    siphon = Siphon(
        0.15408,
        150.0,
        5.0,
        40.0,
        4.0,
        roughness_m=4.5e-5,
        losses=Losses(0.5, 1.0, fittings=((20.0, 0.3), (80.0, 0.6))),
        air_m=None,
        air_pa=101_325.0,
        gravity=9.80665,
        density=998.207,
        viscosity=1.0034e-6,
        vapour_pa=2339.3,
    )
    full = siphon.full()
    assert full.friction_factor == pytest.approx(0.016671, rel=1e-3)
    assert full.velocity_ms == pytest.approx(2.2944, rel=1e-3)
    assert full.discharge_m3s * 1000 == pytest.approx(42.781, rel=1e-3)
    assert full.crown_pressure_pa[1] / 1000 == pytest.approx(46.07, rel=1e-3)
    assert siphon.run().governs == "energy"
