"""What the tests of this room share: random cases, and a slow plain twin of the running state."""

import math
from dataclasses import dataclass

import numpy as np
import pytest
from hypothesis import strategies as st

from routing.records import Levels, Limits, Losses, Pipe, Profile, Water


@dataclass(frozen=True)
class Job:
    """Everything that ``run_siphon`` takes."""

    pipe: Pipe
    profile: Profile
    levels: Levels
    losses: Losses
    water: Water
    limits: Limits

    @property
    def case(self):
        return self.levels, self.losses, self.water, self.limits


@st.composite
def jobs(draw, fittings=True, turbulent=False):
    """A siphon of any size: 20 mm to 1 m, mild to steep, feasible or not."""
    bore = draw(st.floats(0.1 if turbulent else 0.02, 1.0))
    steps = draw(st.lists(st.floats(0.5, 200.0), min_size=2, max_size=12))
    chainage = np.concatenate([[0.0], np.cumsum(steps)])
    length = chainage[-1]
    inner = draw(st.lists(st.floats(-6.0, 7.0), min_size=len(steps) - 1, max_size=len(steps) - 1))
    fall = draw(st.floats(0.5 if turbulent else 0.001, 25.0))
    water_m = draw(st.sampled_from([0.0, 100.0, 2500.0]))
    crown = water_m + np.array([-1.0, *inner, -fall])
    places = st.tuples(st.floats(0.0, 1.0), st.floats(0.0, 5.0))
    single = draw(st.lists(places, max_size=3)) if fittings else []
    losses = Losses(
        entrance=draw(st.floats(0.0, 1.0)),
        exit=draw(st.floats(0.5, 1.0)),
        valve_open=draw(st.floats(0.0, 0.5)),
        bends_per_m=draw(st.floats(0.0, 0.02)),
        fittings=tuple((share * length, k) for share, k in single),
    )
    return Job(
        Pipe.of_bore(bore, roughness_m=draw(st.floats(0.0, 0.002)) * bore),
        Profile(chainage, crown),
        Levels(water_m, water_m - fall),
        losses,
        Water(999.7, 1.3063e-6, 1228.2, 10.0),
        Limits(draw(st.floats(5e4, 1.01e5)), reserve_m=draw(st.floats(0.0, 3.0))),
    )


class SlowTwin:
    """The formulas of the method page worked with the simplest tools: plain loops, bisection on the discharge."""

    def __init__(self, job):
        self.job = job
        self.g = job.limits.gravity_ms2
        self.bore = job.pipe.bore_m
        self.area = math.pi / 4 * self.bore**2

    def factor(self, velocity):
        if self.job.pipe.darcy_factor is not None:
            return self.job.pipe.darcy_factor
        reynolds = velocity * self.bore / self.job.water.kinematic_viscosity_m2s
        if reynolds <= 2040:
            return 64 / reynolds
        low, high = 1e-4, 10.0
        for _ in range(200):
            f = math.sqrt(low * high)
            x = 1 / math.sqrt(f)
            if x + 2 * math.log10(self.job.pipe.roughness_m / self.bore / 3.7 + 2.51 * x / reynolds) > 0:
                low = f
            else:
                high = f
        return f

    def crown_heads(self, discharge):
        """Pressure head above the broken limit at the points of the profile and at the fittings."""
        job, velocity = self.job, discharge / self.area
        head = velocity**2 / (2 * self.g)
        f = self.factor(velocity) if velocity > 0 else 0.0
        weight = job.water.density_kgm3 * self.g
        points = list(zip(job.profile.chainage_m, job.profile.crown_m, strict=True))
        points += [(s, np.interp(s, *zip(*points, strict=True))) for s, _ in job.losses.fittings]
        heads = []
        for s, z in points:
            k = 1 + job.losses.entrance + job.losses.bends_per_m * s
            k += sum(loss for at, loss in job.losses.fittings if at <= s)
            usable = (job.limits.air_pressure_pa - job.water.vapour_pressure_pa) / weight - job.limits.reserve_m
            heads.append(job.levels.water_m - z + usable - (k + f * s / self.bore) * head)
        return heads

    def lost(self, discharge):
        """Head lost over the whole line with the valve open."""
        losses, velocity, length = self.job.losses, discharge / self.area, self.job.profile.length_m
        k = losses.entrance + losses.exit + losses.valve_open + losses.bends_per_m * length
        k += sum(loss for _, loss in losses.fittings)
        return (k + self.factor(velocity) * length / self.bore) * velocity**2 / (2 * self.g)

    def largest(self, holds):
        """The largest discharge for which a monotone condition holds."""
        low, high = 0.0, 1.0
        while holds(high):
            high *= 2
        for _ in range(80):
            middle = 0.5 * (low + high)
            low, high = (middle, high) if holds(middle) else (low, middle)
        return low

    def energy_discharge(self):
        return self.largest(lambda q: self.lost(q) <= self.job.levels.fall_m)

    def suction_discharge(self):
        if min(self.crown_heads(0.0)) <= 0:
            return 0.0
        return self.largest(lambda q: min(self.crown_heads(q)) >= 0)


@pytest.fixture(scope="session")
def slow_twin():
    return SlowTwin


@pytest.fixture(scope="session")
def any_job():
    return jobs
