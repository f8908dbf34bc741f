"""Many sources and goals against separate searches between every pair of them."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from routing.errors import InputError
from routing.search import (
    Flow,
    Job,
    Limitation,
    OpenEnds,
    border_band,
    largest_discharge,
    least_raise,
    prepare_grid,
    shortest_path,
)

START, FLAT, FALL, LOCAL, FRICTION = 6.0, 4.0, 3.0, 1.5, 0.4


def longest(q, above=0.0):
    """Energy: FALL - above = q^2 (LOCAL + FRICTION L)."""
    return ((FALL - above) / q**2 - LOCAL) / FRICTION if q > 0 else np.inf


def flow(above_of=lambda cell: 0.0):
    def limit_at(q):
        return Limitation(START - FLAT * q**2, FRICTION * q**2, longest_m=longest(q), along=True)

    def carried_by(path):
        room = (START - path.at_level_m) / (FLAT + FRICTION * path.at_length_m)
        fall = FALL - above_of(tuple(int(v) for v in path.cells[-1]))
        return float(np.sqrt(max(min(room.min(), fall / (LOCAL + FRICTION * path.length_m)), 0.0)))

    return Flow(limit_at, carried_by, lambda length: float(np.sqrt(FALL / (LOCAL + FRICTION * length))))


def separate(job, ends, question):
    """Answer a question for every pair of ends by itself: yields (answer, goal's height)."""
    for source, start in zip(ends.sources, ends.start_length_m, strict=True):
        for goal, above in zip(ends.goals, ends.goal_above_m, strict=True):
            one = OpenEnds(source[None, :], np.array([start]), goal[None, :], np.zeros(1))
            yield question(Job(job.grid, (0, 0), (0, 0), job.band, open_ends=one), float(above))


@st.composite
def problems(draw):
    rng = np.random.default_rng(draw(st.integers(0, 2**32 - 1)))
    ground = rng.uniform(0.0, 7.0, (6, 7))
    cells = rng.permutation(42)[:6]
    ends = np.column_stack(np.divmod(cells, 7)).astype(np.intp)
    ground[ends[:, 0], ends[:, 1]] = 0.0
    above = np.sort(rng.uniform(0.0, 1.5, 3))
    above[0] = 0.0
    grid = prepare_grid(ground, 1.0, 1.0)
    many = OpenEnds(ends[:3], rng.uniform(0, 4, 3), ends[3:], above)
    return Job(grid, (0, 0), (0, 0), border_band(grid, (False,) * 4), open_ends=many)


def at_height(above):
    """The flow to one goal that receives higher: the fall is smaller, the ceiling the same."""

    def limit_at(q):
        return Limitation(START - FLAT * q**2, FRICTION * q**2, longest_m=longest(q, above), along=True)

    def carried_by(path):
        room = (START - path.at_level_m) / (FLAT + FRICTION * path.at_length_m)
        energy = (FALL - above) / (LOCAL + FRICTION * path.length_m)
        return float(np.sqrt(max(min(room.min(), energy), 0.0)))

    return Flow(limit_at, carried_by, lambda length: float(np.sqrt((FALL - above) / (LOCAL + FRICTION * length))))


@settings(max_examples=30, deadline=None)
@given(problems())
def test_the_shortest_for_a_duty_equals_the_best_of_separate_searches(job):
    for q in (0.3, 0.5, 0.7):
        best = min(
            separate(job, job.open_ends, lambda one, above, q=q: shortest_path(one, at_height(above).limit_at(q)).low)
        )
        found = shortest_path(job, flow().limit_at(q))
        assert found.low == pytest.approx(best, rel=1e-9)
        if found.path is not None:
            assert found.path.length_m == pytest.approx(best, rel=1e-9)
            first = [int(v) for v in found.path.cells[0]]
            assert first in job.open_ends.sources.tolist()
            assert found.path.start_length_m in job.open_ends.start_length_m


@settings(max_examples=30, deadline=None)
@given(problems())
def test_the_largest_discharge_equals_the_best_of_separate_searches(job):
    heights = {
        tuple(int(v) for v in g): a for g, a in zip(job.open_ends.goals, job.open_ends.goal_above_m, strict=True)
    }
    best = max(separate(job, job.open_ends, lambda one, above: largest_discharge(one, at_height(above)).low))
    found = largest_discharge(job, flow(heights.__getitem__))
    assert found.low == pytest.approx(best, rel=2.5e-3, abs=1e-5)
    assert found.high >= best * (1 - 1e-6)


@settings(max_examples=15, deadline=None)
@given(problems())
def test_the_least_raise_equals_the_best_of_separate_searches(job):
    q = 0.6
    low = Limitation(1.0 - FLAT * q**2, FRICTION * q**2, longest_m=longest(q), along=True)

    def alone(one, above):
        limit = Limitation(1.0 - FLAT * q**2, FRICTION * q**2, longest_m=longest(q, above), along=True)
        return least_raise(one, limit).high

    assert least_raise(job, low).high == pytest.approx(min(separate(job, job.open_ends, alone)), abs=0.005)


def test_goals_outside_the_window_leave_it_unproven():
    grid = prepare_grid(np.zeros((21, 21)), 1.0, 1.0)
    band = border_band(grid, (True,) * 4)
    for more, far, proven in ((False, 3, True), (True, 3, True), (True, 10, False)):
        ends = OpenEnds(np.array([[10, 10]]), np.zeros(1), np.array([[10, 10 + far]]), np.zeros(1), more)
        job = Job(grid, (0, 0), (0, 0), band, open_ends=ends)
        assert shortest_path(job, Limitation()).proven_outside == proven


@pytest.mark.parametrize(
    "change", [{"sources": np.zeros((0, 2), np.intp)}, {"goals": np.zeros(3, np.intp)}, {"goal_above_m": np.ones(1)}]
)
def test_tables_that_do_not_fit_are_refused(change):
    good = {
        "sources": np.array([[0, 0]]),
        "start_length_m": np.zeros(1),
        "goals": np.array([[1, 1]]),
        "goal_above_m": np.zeros(1),
    }
    with pytest.raises(InputError):
        OpenEnds(**(good | change))
