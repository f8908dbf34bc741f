"""Windows and the borders beyond which the DEM goes on."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from routing.records import GridWindow


@st.composite
def windows(draw):
    dem = draw(st.integers(1, 9)), draw(st.integers(1, 9))
    start = [draw(st.integers(0, size - 1)) for size in dem]
    size = [draw(st.integers(1, whole - first)) for whole, first in zip(dem, start, strict=True)]
    return GridWindow(*start, *size, *dem)


@given(windows())
def test_the_open_border_is_where_a_neighbour_lies_outside_the_window_but_on_the_dem(window):
    """Cell by cell: a side neighbour that the window lacks and the DEM has."""
    expected = np.zeros((window.rows, window.cols), dtype=bool)
    for row, col in np.ndindex(window.rows, window.cols):
        for drow, dcol in ((-1, 0), (1, 0), (0, -1), (0, 1)):
            inside = 0 <= row + drow < window.rows and 0 <= col + dcol < window.cols
            on_dem = 0 <= window.row_start + row + drow < window.dem_rows
            on_dem = on_dem and 0 <= window.col_start + col + dcol < window.dem_cols
            expected[row, col] |= on_dem and not inside
    np.testing.assert_array_equal(window.open_border(), expected)


@given(windows())
def test_a_window_is_whole_exactly_if_no_side_is_open(window):
    assert window.whole == (not any(window.open_sides))
    assert window.open_border().any() == (not window.whole)


@pytest.mark.parametrize(
    ("window", "sides"),
    [
        ((1, 0, 3, 9, 4, 9), (True, False, False, False)),
        ((0, 0, 3, 9, 4, 9), (False, True, False, False)),
        ((0, 1, 4, 8, 4, 9), (False, False, True, False)),
        ((0, 0, 4, 8, 4, 9), (False, False, False, True)),
    ],
)
def test_sides_are_north_south_west_east(window, sides):
    assert GridWindow(*window).open_sides == sides


def test_the_shape_of_a_terrain_is_that_of_its_levels():
    from routing.records import Terrain

    terrain = Terrain(np.zeros((3, 5)), np.ones((3, 5), bool), np.ones(3), np.ones(3), (1, 0, 0, 0, -1, 0), None, None)
    assert terrain.shape == (3, 5)
