"""What bars forbid: lines that meet one, and ends in one."""

from dataclasses import replace

import numpy as np
import pytest
import shapely
from shapely import LineString, Point, Polygon, box

from routing.errors import OvercrestError
from routing.planning.zoning import check_lines, names_met, route_line
from routing.records import GridWindow, Terrain, TerrainFacts, Zone, ZoneMap

WEST, NORTH, CELL = 500000.0, 5000000.0, 10.0
CRS = "EPSG:32631"


def at(row, col):
    """Map position of a place counted in cells of the made jobs, cell centres at whole numbers."""
    return WEST + CELL * (col + 0.5), NORTH - CELL * (row + 0.5)


def cells_box(row_0, col_0, row_1, col_1):
    """A box on the map by places counted in cells."""
    (x_0, y_0), (x_1, y_1) = at(row_0, col_0), at(row_1, col_1)
    return box(min(x_0, x_1), min(y_0, y_1), max(x_0, x_1), max(y_0, y_1))


def inside(line, shape):
    """Whether any of a line lies in the interior of a shape, by the plain intersection matrix."""
    return shapely.relate_pattern(line, shape, "T********")


def small_terrain(rows, cols, cell=1.0, west=0.0):
    transform = (cell, 0.0, west, 0.0, -cell, rows * cell)
    facts = TerrainFacts(
        "made.tif", "", "GTiff", "float32", rows, cols, transform, CRS, CRS, "metre", "m", "made", "not stated", 1.0, 0.0,
        None, None, "ground", "surface",
    )  # fmt: skip
    ones = np.ones(rows) * cell
    window = GridWindow(0, 0, rows, cols, rows, cols)
    return Terrain(np.zeros((rows, cols)), np.ones((rows, cols), dtype=bool), ones, ones, transform, window, facts)


def test_a_piece_that_rounding_pushes_into_a_bar_keeps_its_cells():
    """Ten moves of one direction on cells of 0.1 m, and a bar that touches a centre on the way from below."""
    terrain = small_terrain(12, 12, 0.1, 0.3)
    cells = np.column_stack([np.arange(11, 0, -1), np.arange(11)])
    whole = route_line(terrain, None, cells, cells[[0, -1]])
    single = route_line(terrain, None, cells, cells)
    off = [Point(xy) for xy in single.coords if not whole.covers(Point(xy))]
    assert off, "a made case: some centre lies off the long piece by rounding"
    x, y = off[0].x, off[0].y
    for bar in (
        Polygon([(x, y), (x + 1, y - 0.5), (x + 0.5, y - 1)]),
        Polygon([(x, y), (x - 1, y + 0.5), (x - 0.5, y + 1)]),
    ):
        zones = ZoneMap((Zone("a", "barred", 1.0, bar),), *[None] * 3)
        line = route_line(terrain, zones, cells, cells[[0, -1]])
        assert not inside(line, bar) or inside(single, bar)
        assert len(line.coords) == (11 if inside(whole, bar) else 2)


def test_a_line_in_a_bar_is_a_fault_of_ours(make_job, ground):
    route = make_job(ground.reservoir()).plan().schemes[0].route
    bank = Zone("bank", "barred", 1.0, cells_box(18, 40, 22, 41))
    with pytest.raises(OvercrestError) as caught:
        check_lines(ZoneMap((bank,), *[None] * 3), [route])
    assert caught.value.exit_code == 1
    assert "Route R1 runs through barred ground" in str(caught.value)
    assert "bank" in str(caught.value)
    check_lines(ZoneMap((replace(bank, kind="cost"),), *[None] * 3), [route])
    check_lines(None, [route])


def test_only_barred_zones_whose_interior_a_line_meets_are_named():
    line = LineString([(0.0, 0.0), (10.0, 0.0)])
    zones = (
        Zone("over", "barred", 1.0, box(2.0, -1.0, 3.0, 1.0)),
        Zone("beside", "barred", 1.0, box(4.0, 0.0, 5.0, 1.0)),
        Zone("dear", "cost", 3.0, box(6.0, -1.0, 7.0, 1.0)),
        Zone("far", "barred", 1.0, box(20.0, -1.0, 30.0, 1.0)),
    )
    assert names_met(zones, line) == ["over"]


def test_a_line_along_the_seam_of_two_bars_is_caught_though_it_meets_neither(make_job, ground):
    route = make_job(ground.reservoir()).plan().schemes[0].route
    _, y = at(20, 0)
    halves = tuple(
        Zone(name, "barred", 1.0, box(at(0, 40)[0], low, at(0, 44)[0], high))
        for name, low, high in (("south", y - 50.0, y), ("north", y, y + 50.0))
    )
    assert names_met(halves, route.line) == []
    with pytest.raises(OvercrestError, match="seam"):
        check_lines(ZoneMap(halves, *[None] * 3), [route])
