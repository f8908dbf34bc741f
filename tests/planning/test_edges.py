"""Where the ground ends for good: laws on random windows, and gaps that run out of them."""

from __future__ import annotations

from types import SimpleNamespace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from routing.planning.edges import gap_runs_out, outer_edge
from routing.records import GridWindow

WHOLE = (0, 0, 5, 6, 5, 6)


def terrain(valid, window=WHOLE):
    """What the two functions look at of a terrain."""
    return SimpleNamespace(valid=valid, shape=valid.shape, window=GridWindow(*window))


def drained(valid, window):
    """Cells with ground from which one step, of eight, leads off the DEM or into nodata that reaches the window's rim."""
    rows, cols = valid.shape
    outside = {
        cell
        for cell in np.ndindex(rows, cols)
        if not valid[cell] and (cell[0] in (0, rows - 1) or cell[1] in (0, cols - 1))
    }
    while True:
        more = {
            cell
            for cell in np.ndindex(rows, cols)
            if not valid[cell] and any((cell[0] + r, cell[1] + c) in outside for r in (-1, 0, 1) for c in (-1, 0, 1))
        }
        if more <= outside:
            break
        outside |= more
    edge = np.zeros(valid.shape, dtype=bool)
    north, south, west, east = window.open_sides
    for row, col in np.ndindex(rows, cols):
        off = (row == 0 and not north) or (row == rows - 1 and not south)
        off = off or (col == 0 and not west) or (col == cols - 1 and not east)
        near = any((row + r, col + c) in outside for r in (-1, 0, 1) for c in (-1, 0, 1))
        edge[row, col] = valid[row, col] and (off or near)
    return edge


@given(st.integers(0, 2**32 - 1), st.sampled_from([WHOLE, (1, 0, 5, 6, 6, 6), (2, 3, 5, 6, 9, 12), (0, 0, 5, 6, 5, 9)]))
def test_the_edge_is_what_walking_cell_by_cell_finds(seed, window):
    valid = np.random.default_rng(seed).random((5, 6)) > 0.35
    np.testing.assert_array_equal(outer_edge(terrain(valid, window)), drained(valid, GridWindow(*window)))


def test_a_gap_inside_is_no_edge_until_it_touches_the_rim_at_a_corner():
    valid = np.ones((5, 6), dtype=bool)
    valid[2, 2] = False
    inside = (1, 1, 5, 6, 9, 12)
    assert not outer_edge(terrain(valid, inside)).any()
    valid[1, 3] = valid[0, 4] = False
    edge = outer_edge(terrain(valid, inside))
    assert edge[3, 1]
    assert not edge[4, 0]


@pytest.mark.parametrize(
    ("gap", "window", "runs_out"),
    [
        ([(2, 2)], (1, 1, 5, 6, 9, 12), False),
        ([(2, 2), (1, 1), (0, 0)], (1, 1, 5, 6, 9, 12), True),
        ([(2, 2), (1, 1), (0, 0)], WHOLE, False),  # there is no more DEM to read
        ([(2, 2), (3, 3), (4, 4)], (1, 1, 5, 6, 6, 12), False),  # the DEM ends at that side
        ([(2, 2), (0, 4)], (1, 1, 5, 6, 9, 12), False),  # another gap runs out
    ],
)
def test_a_gap_is_followed_to_where_more_can_be_read(gap, window, runs_out):
    valid = np.ones((5, 6), dtype=bool)
    valid[tuple(zip(*gap, strict=True))] = False
    assert gap_runs_out(terrain(valid, window), (2, 2)) == runs_out


def test_a_cell_with_ground_lies_in_no_gap():
    valid = np.zeros((5, 6), dtype=bool)
    valid[2, 2] = True
    assert not gap_runs_out(terrain(valid, (1, 1, 5, 6, 9, 12)), (2, 2))
