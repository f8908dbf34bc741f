"""What the tests of this room share: one siphon over an embankment, and schemes made of it. All invented."""

from dataclasses import dataclass, field, replace

import numpy as np
import pytest
from shapely import LineString

from routing.hydraulics import pe_pipe, water_at
from routing.records import Cost, CostLine, Levels, Limits, Losses, Pipe, Profile, Proof, Route, Scheme, Water
from routing.schemes import Conditions, Matter, appraise, judge

FT = 0.3048


@dataclass(frozen=True)
class Job:
    """Everything that ``appraise`` takes; the crest lies 6 m above the lowest level."""

    pipe: Pipe = field(default_factory=lambda: pe_pipe(315.0, 11.0, temperature_c=12.0, load_hours=2190.0))
    chainage_m: tuple = (0.0, 30.0, 60.0, 115.0)
    crown_m: tuple = (98.0, 104.8, 102.0, 93.0)
    lowest: Levels = field(default_factory=lambda: Levels(98.8, 93.0, None, 98.0))
    present_m: float = 101.2
    losses: Losses = field(default_factory=lambda: Losses(valve_open=0.2))
    water: Water = field(default_factory=lambda: water_at(12.0))
    limits: Limits = field(default_factory=lambda: Limits(97_070.0, least_submergence_m=0.3))

    @property
    def profile(self):
        return Profile(np.array(self.chainage_m), np.array(self.crown_m))

    @property
    def conditions(self):
        return Conditions(self.lowest.at_water(self.present_m), self.lowest, self.losses, self.water, self.limits)

    def appraise(self, duty=None):
        return appraise(self.pipe, self.profile, self.conditions, duty)

    def matter(self, duty=None, **changes):
        """What is judged, with everything well within its limits if not told otherwise."""
        line = CostLine("all", 1.0, "scheme", 30_000.0, 30_000.0)
        plain = {
            "pipe": self.pipe,
            "count": 1,
            "cost": Cost((line,), 30_000.0, "EUR", "2026-01-01", invented=True),
            "conditions": self.conditions,
            "required_m3s": duty,
            "budget": 48_000.0,
            "vertical_error_m": 0.15,
            "surface": "ground",
            "barrier_cells": 12.0,
        }
        if "appraisal" not in changes:
            changes["appraisal"] = self.appraise(duty)
        return Matter(**(plain | changes))


@pytest.fixture(scope="session")
def job_of():
    """Return a function that makes a job."""
    return Job


@pytest.fixture(scope="session")
def changed():
    """Return a function that puts other figures into the appraisal of a matter."""

    def change(matter, *, duty=None, largest=None, **figures):
        appraisal = matter.appraisal
        runs = {
            "duty": replace(appraisal.duty, **(duty or {})),
            "largest": replace(appraisal.largest, **(largest or {})),
        }
        return replace(matter, appraisal=replace(appraisal, **runs, **figures))

    return change


def textbook_job(bore, length, fall, leg, summit, darcy, air_ft, floor_ft):
    """A siphon of an American textbook, in feet: two straight legs, 1.5 velocity heads lost at the ends."""
    limits = Limits(air_ft * FT * 1000.0 * 9.81, reserve_m=floor_ft * FT, gravity_ms2=9.81)
    return Job(
        pipe=Pipe.of_bore(bore * FT, darcy_factor=darcy),
        chainage_m=(0.0, leg * FT, length * FT),
        crown_m=(99.0, 100.0 + summit * FT, 100.0 - fall * FT),
        lowest=Levels(100.0, 100.0 - fall * FT),
        present_m=100.0,
        losses=Losses(),
        water=Water(1000.0, 1e-6, 0.0, 20.0),
        limits=limits,
    )


@pytest.fixture(scope="session")
def parting():
    """A "siphon spillway" of an exam, whose answer is not printed; worked by hand.

    2 ft pipe of 200 ft, 50 ft of fall, summit 5 ft up at 60 ft, Darcy factor 0.02. Full bore asks for 95.3 ft3/s
    and then for -35.0 ft at the summit where 33.9 ft is all that the air gives.
    """
    return textbook_job(2.0, 200.0, 50.0, 60.0, 5.0, 0.02, 33.9, 0.0)


@pytest.fixture(scope="session")
def throttling():
    """R. S. Dighe, Hydraulics Made Easy, ex. 6.17 p. 198 (readers' transcription of 2017; Fanning 0.008).

    18 in pipe of 9500 ft under 140 ft, summit 8 ft up at 2000 ft, at least 4 ft absolute: the inlet leg gives
    10.0 ft3/s, the line would take 11.74.
    """
    return textbook_job(1.5, 9500.0, 140.0, 2000.0, 8.0, 0.032, 34.0, 4.0)


@pytest.fixture(scope="session")
def scheme_of():
    """Return a function that makes a scheme of a matter."""

    def make(matter, length_m=115.0, rank=0):
        x = np.array([0.0, length_m])
        route = Route(
            "R1",
            np.array([[0, 0], [0, 1]]),
            LineString([(0.0, 0.0), (length_m, 0.0)]),
            x,
            0.0 * x,
            x,
            0.0 * x,
            Proof(length_m, length_m, 1.0, True, 0.1, 0.1, "made up"),
        )
        return Scheme(rank, route, matter.pipe, matter.count, matter.appraisal, matter.cost, judge(matter))

    return make
