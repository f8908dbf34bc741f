"""Cells and moves that meet a shape: against shapely, one by one, and by closed forms."""

import numpy as np
import pytest
import shapely
from shapely import LineString, Point, Polygon, box

from routing.terrain.clipping import blocked_by, lay_over, meets_interior

QUEEN = [(0, 1), (1, 1), (1, 0), (1, -1), (0, -1), (-1, -1), (-1, 0), (-1, 1)]
KNIGHT = [(r, c) for r in (-2, -1, 1, 2) for c in (-2, -1, 1, 2) if abs(r) != abs(c)]
LONG = [(r, c) for r in range(-3, 4) for c in range(-3, 4) if {abs(r), abs(c)} in ({1, 3}, {2, 3})]
SETS = {8: QUEEN, 16: QUEEN + KNIGHT, 32: QUEEN + KNIGHT + LONG}


def centre(terrain, row, col):
    a, _, c, _, e, f = terrain.transform
    return c + a * (col + 0.5), f + e * (row + 0.5)


def by_hand(terrain, shape, moves):
    """Every cell and every move of a window, one by one, by the plain (not prepared) intersection matrix."""
    rows, cols = terrain.shape
    barred, blocked = np.zeros((rows, cols), dtype=bool), np.zeros((rows, cols), dtype=np.uint32)
    for row, col in np.ndindex(rows, cols):
        barred[row, col] = shape.relate_pattern(Point(centre(terrain, row, col)), "T********")
        for bit, (down, right) in enumerate(moves):
            if 0 <= row + down < rows and 0 <= col + right < cols:
                line = LineString([centre(terrain, row, col), centre(terrain, row + down, col + right)])
                blocked[row, col] |= np.uint32(line.relate_pattern(shape, "T********")) << np.uint32(bit)
    return barred, blocked


def blob(rng, rows, cols, *, holes=True, on_grid=False):
    """A star-shaped polygon anywhere on or over the edge of a grid of 1 m cells, perhaps with a hole."""
    count = int(rng.integers(3, 12))
    angle = np.sort(rng.uniform(0.0, 2.0 * np.pi, count))
    radius = rng.uniform(0.2, 1.0, count) * rng.uniform(0.3, 0.7 * rows)
    middle = rng.uniform(-1.0, 1.0 + np.array([cols, rows]))
    ring = middle + np.column_stack([np.cos(angle), np.sin(angle)]) * radius[:, None]
    hole = middle + (ring - middle) * 0.5
    if on_grid:  # vertices on cell centres and grid lines: every way of touching
        ring, hole = np.round(2.0 * ring) / 2.0, np.round(2.0 * hole) / 2.0
    shape = shapely.make_valid(Polygon(ring, [hole] if holes and rng.random() < 0.4 else []))
    parts = [part for part in shapely.get_parts(shape) if part.geom_type == "Polygon"]
    return shapely.union_all(parts) if parts else None


@pytest.mark.parametrize("neighbours", [8, 16, 32])
@pytest.mark.parametrize("on_grid", [False, True])
def test_cells_and_moves_are_those_that_shapely_says_one_by_one(make_terrain, neighbours, on_grid):
    rng, moves = np.random.default_rng(neighbours), SETS[neighbours]
    terrain = make_terrain(np.zeros((9, 10)))
    reach = max(max(abs(r), abs(c)) for r, c in moves)
    for _ in range(12):
        shape = blob(rng, 9, 10, on_grid=on_grid)
        if shape is None:
            continue
        overlay = lay_over(terrain, shape, reach)
        barred, blocked = by_hand(terrain, shape, moves)
        np.testing.assert_array_equal(overlay.inside, barred)
        np.testing.assert_array_equal(blocked_by(terrain, overlay, moves), blocked)


def test_large_shapes_fill_their_inside_and_leave_their_holes(make_terrain):
    """Away from the outline cells are not tested one by one: an area is counted by its closed form."""
    terrain = make_terrain(np.zeros((300, 400)))
    ring = Point(200.0, 150.0).buffer(120.0, quad_segs=200) - Point(200.0, 150.0).buffer(60.0, quad_segs=200)
    overlay = lay_over(terrain, ring, 2)
    assert overlay.inside.sum() == pytest.approx(np.pi * (120.0**2 - 60.0**2), rel=2e-3)
    assert not overlay.inside[150, 200]
    assert not overlay.inside[0, 0]
    bits = blocked_by(terrain, overlay, SETS[16])
    assert bits[150, 290] == 2**16 - 1  # deep inside
    assert bits[150, 200] == 0  # deep in the hole
    assert overlay.near.sum() < 0.15 * overlay.near.size


def test_a_shape_smaller_than_the_gaps_between_centres_still_bars_moves(make_terrain):
    """A needle hole of a millimetre on the way between two centres: no centre is inside, the move over it is barred."""
    terrain = make_terrain(np.zeros((5, 5)))
    dot = box(1.9995, 2.4995, 2.0005, 2.5005)  # half way between the centres of (2, 1) and (2, 2)
    overlay = lay_over(terrain, dot, 1)
    assert not overlay.inside.any()
    bits = blocked_by(terrain, overlay, QUEEN)
    east, west = QUEEN.index((0, 1)), QUEEN.index((0, -1))
    assert {(int(r), int(c)): int(bits[r, c]) for r, c in np.argwhere(bits)} == {(2, 1): 1 << east, (2, 2): 1 << west}


def test_a_shape_wholly_off_the_window_bars_nothing(make_terrain):
    terrain = make_terrain(np.zeros((6, 7)))
    overlay = lay_over(terrain, box(50.0, 50.0, 60.0, 60.0), 2)
    assert not overlay.inside.any()
    assert not blocked_by(terrain, overlay, SETS[16]).any()


def test_a_shape_over_all_of_the_window_bars_all_of_it(make_terrain):
    terrain = make_terrain(np.zeros((6, 7)))
    overlay = lay_over(terrain, box(-50.0, -50.0, 60.0, 60.0), 2)
    assert overlay.inside.all()
    assert blocked_by(terrain, overlay, QUEEN)[3, 3] == 2**8 - 1


def test_a_line_along_the_outline_or_to_a_corner_does_not_meet_the_interior():
    square = box(0.0, 0.0, 1.0, 1.0)
    lines = np.array(
        [
            LineString([(0.0, 0.0), (1.0, 0.0)]),
            LineString([(-1.0, 1.0), (0.0, 1.0)]),
            LineString([(-1.0, 2.0), (1.0, 0.0)]),
            LineString([(-1.0, 2.0), (2.0, -1.0)]),
            LineString([(0.5, 0.5), (0.5, 0.6)]),
            LineString([(5.0, 5.0), (6.0, 5.0)]),
        ]
    )
    assert meets_interior(square, lines).tolist() == [False, False, True, True, True, False]
