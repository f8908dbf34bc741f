"""`reach` against scipy on the same graph, and against a slow twin under every rule."""

import math
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.sparse import coo_array
from scipy.sparse.csgraph import dijkstra
from twins import grid_search as twin

from routing.errors import InputError
from routing.search import Limitation, move_list, prepare_grid, reach, reaching, search_grid

NEIGHBOURS = (8, 16, 32)


def rough(rows, cols, seed=1, height=3.0):
    return np.random.default_rng(seed).uniform(0.0, height, (rows, cols))


def scipy_lengths(ground, step_x, step_y, source, neighbours):
    """Shortest lengths on the same graph by scipy.sparse.csgraph.dijkstra (source: scipy)."""
    rows, cols = ground.shape
    index = np.arange(rows * cols).reshape(rows, cols)
    start, end, weight = [], [], []
    for dr, dc in twin.MOVES[neighbours]:
        r, c = np.mgrid[max(0, -dr) : rows - max(0, dr), max(0, -dc) : cols - max(0, dc)]
        across = dc * 0.5 * (step_x[r] + step_x[r + dr])
        down = dr * 0.5 * (step_y[r] + step_y[r + dr])
        rise = ground[r + dr, c + dc] - ground[r, c]
        start.append(index[r, c].ravel())
        end.append(index[r + dr, c + dc].ravel())
        weight.append(np.sqrt(across**2 + down**2 + rise**2).ravel())
    edges = (np.concatenate(weight), (np.concatenate(start), np.concatenate(end)))
    graph = coo_array(edges, shape=(rows * cols,) * 2).tocsr()
    return dijkstra(graph, indices=index[source]).reshape(rows, cols)


@pytest.mark.parametrize("neighbours", NEIGHBOURS)
@pytest.mark.parametrize("rule", ["cells", "bilinear"])
def test_equals_scipy_without_a_ceiling(neighbours, rule):
    ground = rough(70, 90, height=30.0)
    step_x, step_y = np.linspace(2.0, 2.6, 70), np.linspace(3.1, 3.0, 70)
    found = reach(ground, step_x, step_y, [(11, 17)], neighbours=neighbours, ground_rule=rule)
    expected = scipy_lengths(ground, step_x, step_y, (11, 17), neighbours)
    np.testing.assert_allclose(found.length_m, expected, rtol=1e-9)


@st.composite
def cases(draw):
    rows, cols = draw(st.integers(1, 7)), draw(st.integers(2, 8))
    rng = np.random.default_rng(draw(st.integers(0, 2**32 - 1)))
    ground = rng.uniform(0, 5, (rows, cols))
    if draw(st.booleans()):
        ground = np.round(ground)  # ties, as in whole-metre grids
    barred = rng.random((rows, cols)) < draw(st.sampled_from([0.0, 0.15, 0.35]))
    holes = rng.random((rows, cols)) < draw(st.sampled_from([0.0, 0.1]))
    neighbours = draw(st.sampled_from(NEIGHBOURS))
    moves = move_list(neighbours)
    blocked = rng.random((rows, cols, len(moves))) < draw(st.sampled_from([0.0, 0.2]))
    count = draw(st.integers(1, 3))
    cells = {(int(rng.integers(rows)), int(rng.integers(cols))) for _ in range(count)}
    sources = sorted(cell for cell in cells if not holes[cell])
    ground[holes] = np.nan
    return {
        "ground": ground,
        "steps": (rng.uniform(0.8, 3.0, rows), rng.uniform(0.8, 3.0, rows)),
        "sources": sources,
        "starts": list(rng.uniform(0, 9, len(sources)) * draw(st.sampled_from([0.0, 1.0]))),
        "barred": barred,
        "blocked": blocked,
        "moves": moves,
        "neighbours": neighbours,
        "rule": draw(st.sampled_from(["cells", "bilinear"])),
        "level": draw(st.sampled_from([math.inf, 2.5, 4.0, 5.0])),
        "gradient": draw(st.sampled_from([0.0, 0.02, 0.2])),
        "longest": draw(st.sampled_from([math.inf, 8.0])),
    }


def both(case):
    rows, cols = case["ground"].shape
    if not case["sources"]:
        return None, None
    found = reach(
        case["ground"],
        *case["steps"],
        case["sources"],
        start_length_m=case["starts"],
        barred=case["barred"],
        blocked_moves=case["blocked"],
        ceiling_level_m=case["level"],
        ceiling_gradient=case["gradient"],
        neighbours=case["neighbours"],
        ground_rule=case["rule"],
        max_length_m=case["longest"],
    )
    blocked = {
        ((r, c), move)
        for r in range(rows)
        for c in range(cols)
        for i, move in enumerate(case["moves"])
        if case["blocked"][r, c, i]
    }
    labels = twin.shortest(
        case["ground"],
        *case["steps"],
        case["sources"],
        starts=case["starts"],
        barred=case["barred"],
        neighbours=case["neighbours"],
        rule=case["rule"],
        level=case["level"],
        gradient=case["gradient"],
        longest=case["longest"],
        blocked=blocked,
    )
    expected = np.full((rows, cols), np.inf)
    for cell, length in labels.items():
        expected[cell] = length
    return found, expected


@pytest.mark.plain
@settings(max_examples=150, deadline=None)
@given(cases())
def test_equals_a_slow_twin_under_every_rule(case):
    found, expected = both(case)
    if found is None:
        return
    np.testing.assert_allclose(found.length_m, expected, rtol=1e-9)


@pytest.mark.plain
@settings(max_examples=60, deadline=None)
@given(cases())
def test_paths_have_the_lengths_told(case):
    found, expected = both(case)
    if found is None:
        return
    for row, col in np.argwhere(np.isfinite(expected)):
        path = found.path_to(row, col)
        start = tuple(int(v) for v in path[0])
        length = min(s for s, cell in zip(case["starts"], case["sources"], strict=True) if cell == start)
        for one, other in pairwise(path):
            move = (int(other[0] - one[0]), int(other[1] - one[1]))
            length += twin.edge(
                case["ground"], case["steps"], tuple(int(v) for v in one), move, case["barred"], case["rule"]
            )[0]
        assert length == pytest.approx(found.length_m[row, col], rel=1e-9)


def test_a_diagonal_wall_is_not_slipped_through():
    barred = np.eye(9, dtype=bool)
    for neighbours in NEIGHBOURS:
        found = reach(np.zeros((9, 9)), 1.0, 1.0, [(0, 5)], barred=barred, neighbours=neighbours)
        assert np.isinf(found.length_m[np.tril_indices(9)]).all()


def test_bilinear_ground_is_not_passed_under():
    """Two opposite corners of a patch are low, the others high: its saddle stands between the low ones."""
    ground = np.array([[0.0, 10.0], [10.0, 0.0]])
    assert np.isinf(reach(ground, 1.0, 1.0, [(0, 0)], ceiling_level_m=4.99).length_m[1, 1])
    assert np.isfinite(reach(ground, 1.0, 1.0, [(0, 0)], ceiling_level_m=5.01).length_m[1, 1])
    assert np.isfinite(reach(ground, 1.0, 1.0, [(0, 0)], ceiling_level_m=4.99, ground_rule="cells").length_m[1, 1])


def test_the_ceiling_is_taken_at_the_far_end():
    ground = np.array([[0.0, 0.0, 5.0]])
    length = 1.0 + math.sqrt(26.0)
    for ceiling, met in ((5.0 + 0.1 * length + 1e-9, True), (5.0 + 0.1 * length - 1e-9, False)):
        found = reach(ground, 1.0, 1.0, [(0, 0)], ceiling_level_m=ceiling, ceiling_gradient=0.1)
        assert np.isfinite(found.length_m[0, 2]) == met


def test_a_source_above_the_ceiling_is_not_reached():
    found = reach(np.full((3, 3), 2.0), 1.0, 1.0, [(1, 1)], ceiling_level_m=1.0)
    assert np.isinf(found.length_m).all()


@settings(max_examples=40, deadline=None)
@given(st.integers(0, 2**32 - 1))
def test_more_neighbours_never_lengthen_and_more_room_neither(seed):
    ground = rough(12, 13, seed)
    lengths = [reach(ground, 1.0, 1.3, [(0, 0)], ceiling_level_m=2.9, neighbours=n).length_m for n in NEIGHBOURS]
    assert np.all(lengths[1] <= lengths[0] * (1 + 1e-12))
    assert np.all(lengths[2] <= lengths[1] * (1 + 1e-12))
    higher = reach(ground, 1.0, 1.3, [(0, 0)], ceiling_level_m=2.95, neighbours=16).length_m
    assert np.all(higher <= lengths[1])


def test_length_is_the_same_from_either_end():
    ground = rough(40, 50, 3)
    there = reach(ground, 2.0, 3.0, [(3, 4)]).length_m[30, 41]
    back = reach(ground, 2.0, 3.0, [(30, 41)]).length_m[3, 4]
    assert there == pytest.approx(back, rel=1e-12)


@pytest.mark.parametrize(("neighbours", "ratio"), [(8, 1.0824), (16, 1.0275), (32, 1.0131)])
def test_worst_elongation_on_a_level_plane(neighbours, ratio):
    """1/cos(half the largest angle between moves): closed form; see Goodchild 1977 (from memory)."""
    size = 401
    length = reach(np.zeros((size, size)), 1.0, 1.0, [(200, 200)], neighbours=neighbours).length_m
    rows, cols = np.mgrid[-200:201, -200:201]
    straight = np.hypot(rows, cols)
    with np.errstate(invalid="ignore"):
        found = np.nanmax(np.where(straight > 150, length / straight, np.nan))
    assert found == pytest.approx(ratio, abs=2e-4)
    assert found <= ratio + 1e-4


def test_eight_neighbour_length_has_its_closed_form():
    length = reach(np.zeros((30, 30)), 1.0, 1.0, [(0, 0)], neighbours=8).length_m
    a, b = np.maximum(*np.mgrid[:30, :30]), np.minimum(*np.mgrid[:30, :30])
    np.testing.assert_allclose(length, a + (math.sqrt(2) - 1) * b, rtol=1e-12)


def test_slices_and_pool_growth_change_nothing(monkeypatch):
    ground = rough(120, 130, 5)
    whole = reach(ground, 1.0, 1.0, [(60, 60)], ceiling_level_m=2.9, ceiling_gradient=1e-3)
    monkeypatch.setattr(reaching, "_SLICE_CELLS", 37)
    monkeypatch.setattr(reaching, "_FIRST_POOL", 40)
    ticks = []
    grid = prepare_grid(ground, 1.0, 1.0)
    sliced = search_grid(grid, [(60, 60)], Limitation(2.9, 1e-3), tick=ticks.append)
    np.testing.assert_array_equal(whole.length_m, sliced.length_m)
    assert len(ticks) > 50
    assert ticks == sorted(ticks)


def test_a_tick_stops_the_search(monkeypatch):
    monkeypatch.setattr(reaching, "_SLICE_CELLS", 100)

    def stop(settled):
        if settled > 500:
            raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        search_grid(prepare_grid(rough(100, 100), 1.0, 1.0), [(0, 0)], Limitation(), tick=stop)


def test_the_goal_is_exact_and_hopeless_cells_are_left_out():
    ground = rough(80, 80, 8)
    grid = prepare_grid(ground, 1.0, 1.0)
    free = search_grid(grid, [(5, 5)], Limitation())
    best = free.length_m[70, 60]
    aimed = search_grid(grid, [(5, 5)], Limitation(goal=(70, 60), longest_m=best))
    assert aimed.length_m[70, 60] == best
    assert aimed.settled < 0.6 * free.settled
    assert np.isinf(search_grid(grid, [(5, 5)], Limitation(goal=(70, 60), longest_m=best - 1e-6)).length_m[70, 60])


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"ground_m": np.full((3, 3), np.inf)}, "infin"),
        ({"ground_m": np.zeros(3)}, "2-D"),
        ({"step_x_m": 0.0}, "step"),
        ({"step_y_m": np.ones(2)}, "step"),
        ({"sources": [(9, 9)]}, "outside the grid"),
        ({"sources": []}, "sources"),
        ({"start_length_m": [-1.0]}, "start lengths"),
        ({"barred": np.zeros((2, 2), bool)}, "mask"),
        ({"blocked_moves": np.zeros((3, 3, 5), bool)}, "blocked"),
        ({"ceiling_gradient": -0.1}, "fall"),
        ({"ceiling_level_m": math.nan}, "not a number"),
        ({"neighbours": 12}, "move set"),
        ({"ground_rule": "corners"}, "rule"),
    ],
)
def test_bad_arguments_are_named(change, words):
    arguments = {"ground_m": np.zeros((3, 3)), "step_x_m": 1.0, "step_y_m": 1.0, "sources": [(0, 0)]} | change
    ground, step_x, step_y, sources = (arguments.pop(k) for k in ("ground_m", "step_x_m", "step_y_m", "sources"))
    with pytest.raises(InputError, match=words):
        reach(ground, step_x, step_y, sources, **arguments)


def test_no_way_back_from_a_cell_that_was_not_reached():
    found = reach(np.array([[0.0, np.nan, 0.0]]), 1.0, 1.0, [(0, 0)])
    with pytest.raises(InputError, match="not reached"):
        found.path_to(0, 2)
    with pytest.raises(InputError, match="outside"):
        found.path_to(0, 3)


@pytest.mark.parametrize("shape", [(1, 50), (50, 1), (1, 1), (2, 2)])
def test_thin_grids(shape):
    found = reach(np.zeros(shape), 1.0, 1.0, [(0, 0)], neighbours=32)
    assert found.length_m[-1, -1] == pytest.approx(math.hypot(shape[0] - 1, shape[1] - 1))


def test_all_nodata_reaches_nothing():
    assert np.isinf(reach(np.full((4, 4), np.nan), 1.0, 1.0, [(1, 1)]).length_m).all()
