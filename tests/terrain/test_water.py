"""Water bodies from a level."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from routing.errors import TerrainError
from routing.records import Cell, GridWindow
from routing.terrain import dry_cell, water_body, water_cells, with_voids_as_water

NAN = np.nan


def basin(size=9, depth=5.0):
    """Return a bowl: level 0 in the middle square, rim 10."""
    ground = np.full((size, size), 10.0)
    ground[2:-2, 2:-2] = -depth
    return ground


def plain_flood(wet, start):
    """Return the cells joined to a start, by a stack: slow and obvious."""
    found, stack = set(), [start]
    while stack:
        row, col = stack.pop()
        if (row, col) in found or not (0 <= row < wet.shape[0] and 0 <= col < wet.shape[1]) or not wet[row, col]:
            continue
        found.add((row, col))
        stack += [(row + i, col + j) for i in (-1, 0, 1) for j in (-1, 0, 1)]
    return found


@given(ground=arrays(np.int8, (8, 9), elements=st.integers(0, 9)), level=st.integers(0, 9))
def test_equals_a_plain_flood(ground, level):
    from routing.terrain.water import _flood

    terrain = _terrain(ground.astype(float))
    row, col = np.unravel_index(int(np.argmin(ground)), ground.shape)
    if ground[row, col] > level:
        return
    cells = _flood(terrain, Cell(int(row), int(col)), float(level)).cells
    assert {tuple(place) for place in np.argwhere(cells).tolist()} == plain_flood(ground <= level, (row, col))


def _terrain(ground, valid=None):
    """Return a bare terrain for property tests: 1 m cells, no facts."""
    from routing.records import Terrain

    rows, cols = ground.shape
    return Terrain(
        elevation_m=ground,
        valid=np.ones(ground.shape, dtype=bool) if valid is None else valid,
        step_x_m=np.ones(rows),
        step_y_m=np.ones(rows),
        transform=(1.0, 0.0, 0.0, 0.0, -1.0, float(rows)),
        window=GridWindow(0, 0, rows, cols, rows, cols),
        facts=None,
    )


def test_only_the_intakes_lake_is_returned(make_terrain):
    ground = np.full((7, 13), 10.0)
    ground[2:5, 2:5] = 1.0
    ground[2:5, 8:11] = 1.0
    terrain = make_terrain(ground)
    assert np.argwhere(water_cells(terrain, Cell(3, 3), 2.0))[:, 1].max() == 4
    assert np.argwhere(water_cells(terrain, Cell(3, 9), 2.0))[:, 1].min() == 8


def test_corners_join(make_terrain):
    terrain = make_terrain([[0.0, 9.0, 9.0], [9.0, 0.0, 9.0], [9.0, 9.0, 0.0]])
    body = water_body(terrain, Cell(0, 0), 1.0)
    assert body.cells.sum() == 3
    assert body.shoreline.geom_type == "MultiPolygon"
    assert body.shoreline.is_valid


def test_area_from_the_steps_of_the_rows(make_terrain):
    terrain = make_terrain(basin(), step_x=np.arange(1.0, 10.0), step_y=2.0)
    assert water_body(terrain, Cell(4, 4), 0.0).area_m2 == 5 * 2.0 * (3 + 4 + 5 + 6 + 7)


def test_a_closed_basin_touches_nothing(make_terrain):
    body = water_body(make_terrain(basin()), Cell(4, 4), 0.0)
    assert not body.touches_edge
    assert not body.touches_open_border
    assert body.spill is None
    assert (body.source, body.level_m, body.void_cells) == ("level", 0.0, 0)
    assert body.shoreline.area == 25.0


def test_a_lake_cut_by_the_edge_of_the_dem(make_terrain):
    ground = basin()
    ground[4, :3] = -1.0
    body = water_body(make_terrain(ground), Cell(4, 4), 0.0)
    assert body.touches_edge
    assert not body.touches_open_border


def test_a_lake_cut_by_the_border_of_the_window(make_terrain):
    ground = basin()
    ground[4, :3] = -1.0
    window = GridWindow(0, 5, 9, 9, 9, 30)
    body = water_body(make_terrain(ground, window=window), Cell(4, 4), 0.0)
    assert body.touches_open_border
    assert not body.touches_edge


def test_voids_over_water_are_water(make_terrain):
    ground = basin(11)
    ground[4:7, 4:6] = NAN
    body = water_body(make_terrain(ground), Cell(3, 3), 0.0)
    assert body.cells.sum() == 49
    assert body.void_cells == 6
    assert body.shoreline.area == 49.0


def test_the_intake_may_lie_in_such_a_void(make_terrain):
    ground = basin(11)
    ground[4:7, 4:6] = NAN
    terrain = make_terrain(ground)
    assert np.array_equal(water_cells(terrain, Cell(5, 5), 0.0), water_cells(terrain, Cell(3, 3), 0.0))


def test_a_void_that_joins_two_halves(make_terrain):
    ground = np.full((7, 9), 10.0)
    ground[1:6, 1:8] = -5.0
    ground[2:5, 4] = NAN
    ground[1, 4] = ground[5, 4] = -5.0
    body = water_body(make_terrain(ground), Cell(3, 2), 0.0)
    assert body.cells[3, 6]
    assert body.void_cells == 3


def test_a_void_at_the_bank_is_not_water(make_terrain):
    ground = basin(11)
    ground[4:7, 1:4] = NAN
    body = water_body(make_terrain(ground), Cell(5, 6), 0.0)
    assert body.void_cells == 0
    assert body.cells.sum() == 49 - 6
    assert not body.touches_edge


def test_a_void_that_leads_to_the_edge_leaves_the_area_open(make_terrain):
    ground = basin(11)
    ground[5, :3] = NAN
    body = water_body(make_terrain(ground), Cell(5, 6), 0.0)
    assert body.void_cells == 0
    assert body.touches_edge


def test_a_void_that_meets_dry_ground_at_a_corner_only_is_not_water(make_terrain):
    ground = basin(11)
    ground[2, 2] = NAN
    ground[1, 2:4] = ground[2:4, 1] = ground[1, 1] = -5.0
    assert water_body(make_terrain(ground), Cell(5, 6), 0.0).void_cells == 1
    ground[1, 1] = 10.0
    assert water_body(make_terrain(ground), Cell(5, 6), 0.0).void_cells == 0


def test_a_void_at_the_border_with_water_around_it_stays_open(make_terrain):
    ground = np.full((9, 9), -5.0)
    ground[:, 6:] = 10.0
    ground[3:6, 0] = NAN
    closed = water_body(make_terrain(ground), Cell(1, 1), 0.0)
    assert (closed.void_cells, closed.touches_edge) == (0, True)
    ground[:, 0] = NAN
    part = water_body(make_terrain(ground, window=GridWindow(0, 3, 9, 9, 9, 12)), Cell(4, 4), 0.0)
    assert (part.void_cells, part.touches_open_border) == (0, True)


def test_a_void_elsewhere_does_not(make_terrain):
    ground = basin(11)
    ground[0, :] = NAN
    assert not water_body(make_terrain(ground), Cell(5, 6), 0.0).touches_edge


def test_an_intake_in_a_void_at_the_bank_is_refused(make_terrain):
    ground = basin(11)
    ground[4:7, 1:4] = NAN
    with pytest.raises(TerrainError, match=r"holds no data[\s\S]*polygon"):
        water_cells(make_terrain(ground), Cell(5, 2), 0.0)


def test_a_dry_intake_is_refused_with_its_ground(make_terrain):
    terrain = make_terrain(basin())
    assert dry_cell(terrain, Cell(0, 0), 0.0)
    assert not dry_cell(terrain, Cell(4, 4), 0.0)
    with pytest.raises(TerrainError, match=r"ground 10\.000 m, 10\.000 m above"):
        water_body(terrain, Cell(0, 0), 0.0)


def test_a_level_stored_as_a_short_float_is_wet_at_that_level(make_terrain):
    # 388.3 as a 4-byte float is 388.29998779; 388.6 is 388.60000610, above the number it stands for.
    stored = float(np.float32(388.6))
    assert stored > 388.6
    ground = np.full((5, 5), 400.0)
    ground[1:4, 1:4] = stored
    assert water_cells(make_terrain(ground), Cell(2, 2), 388.6).sum() == 9


def test_an_island_is_a_hole(make_terrain):
    ground = basin(11)
    ground[5, 5] = 3.0
    body = water_body(make_terrain(ground), Cell(3, 3), 0.0)
    assert len(body.shoreline.interiors) == 1
    assert body.area_m2 == 48.0


def test_one_cell_of_water_in_a_grid_of_one_row(make_terrain):
    body = water_body(make_terrain([[5.0, 1.0, 5.0]]), Cell(0, 1), 2.0)
    assert body.cells.tolist() == [[False, True, False]]
    assert body.touches_edge


def test_voids_as_water_become_ground_at_the_level(make_terrain):
    ground = basin(11)
    ground[4:7, 4:6] = NAN
    terrain = make_terrain(ground)
    body = water_body(terrain, Cell(3, 3), -1.0)
    filled = with_voids_as_water(terrain, body)
    assert filled.valid.all()
    assert (filled.elevation_m[4:7, 4:6] == -1.0).all()
    assert not terrain.valid.all()
    assert "6 cells without data" in filled.facts.assumptions[-1]
    dry = make_terrain(basin(11))
    assert with_voids_as_water(dry, water_body(dry, Cell(3, 3), -1.0)) is dry


@given(arrays(np.bool_, (7, 7)), st.integers(1, 5))
def test_shorelines_are_valid_and_cover_the_cells(wet, row):
    from routing.terrain import shoreline_of

    wet[row, 3] = True
    outline = shoreline_of(_terrain(np.zeros((7, 7))), wet)
    assert outline.is_valid
    assert outline.area == pytest.approx(wet.sum())
