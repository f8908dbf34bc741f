import tracemalloc
from dataclasses import replace

import numpy as np
import pytest

from routing.outputs.pictures.framing import Frame, cut_of, frame_of
from routing.outputs.pictures.subject import overview


def test_the_frame_holds_the_routes_with_a_margin_and_no_more(plan):
    frame = frame_of(overview(plan), 2.0)
    x = np.concatenate([scheme.route.x for scheme in plan.schemes])
    y = np.concatenate([scheme.route.y for scheme in plan.schemes])
    assert frame.west < x.min() - 10.0
    assert frame.east > x.max() + 10.0
    assert frame.south < y.min() - 10.0
    assert frame.north > y.max() + 10.0
    assert frame.width_m / frame.height_m == pytest.approx(2.0)
    assert frame.width_m < 1.4 * np.ptp(x)


def test_the_frame_stays_on_the_dem_where_it_fits(plan):
    moved = replace(plan.schemes[0].route, y=plan.schemes[0].route.y + 140.0)
    subject = replace(overview(plan), routes=(moved,))
    frame = frame_of(subject, 2.0)
    assert frame.north <= plan.terrain.transform[5] + 1e-9


def test_the_frame_knows_the_ground_length_of_a_map_unit(make):
    feet = make.plan(make.feet())
    frame = frame_of(overview(feet), 2.0)
    assert frame.metres_per_x == pytest.approx(0.3048006096)  # metres in a US survey foot: 1200/3937
    assert frame.width_m == pytest.approx(frame_of(overview(make.plan()), 2.0).width_m)


def test_no_route_frames_the_ends_and_the_lowest_crest(plan):
    bare = replace(plan, schemes=())
    frame = frame_of(overview(bare), 2.0)
    for point in (plan.setting.intake, plan.setting.outlet, plan.lowest_crest):
        assert frame.west < point.x < frame.east
        assert frame.south < point.y < frame.north


def test_a_cut_is_made_of_block_means(plan):
    frame = frame_of(overview(plan), 2.0)
    terrain = plan.terrain
    fine = cut_of(terrain, plan.water_body.cells, frame, 1000)
    coarse = cut_of(terrain, plan.water_body.cells, frame, 20)
    assert max(coarse.level_m.shape) <= 20
    k = round(coarse.step_x_m[0] / fine.step_x_m[0])
    np.testing.assert_allclose(coarse.level_m[0, 0], fine.level_m[:k, :k].mean())
    assert coarse.x[0] == pytest.approx(fine.x[:k].mean())
    assert coarse.y[0] == pytest.approx(fine.y[:k].mean())
    west, east, south, north = coarse.extent
    assert (east - west) / coarse.level_m.shape[1] == pytest.approx(5.0 * k)
    assert west < frame.west < frame.east
    assert south <= coarse.y[-1] < coarse.y[0] <= north


def test_a_cut_puts_north_first_whatever_the_order_of_rows(plan):
    frame = frame_of(overview(plan), 2.0)
    terrain, cells = plan.terrain, plan.water_body.cells
    slope = replace(terrain, elevation_m=np.tile(np.arange(60.0)[:, None], (1, 80)))
    a, b, c, d, e, f = terrain.transform
    upside_down = replace(
        slope,
        elevation_m=slope.elevation_m[::-1, ::-1],
        valid=slope.valid[::-1, ::-1],
        transform=(-a, b, c + 80 * a, d, -e, f + 60 * e),
    )
    one, other = cut_of(slope, cells, frame, 300), cut_of(upside_down, cells[::-1, ::-1], frame, 300)
    np.testing.assert_allclose(one.level_m, other.level_m)
    np.testing.assert_allclose(one.x, other.x)
    np.testing.assert_allclose(one.y, other.y)
    np.testing.assert_allclose(one.extent, other.extent)


def test_voids_are_nan_and_count_for_nothing(plan):
    valid = plan.terrain.valid.copy()
    valid[::2, :] = False
    terrain = replace(plan.terrain, valid=valid, elevation_m=np.where(valid, plan.terrain.elevation_m, -9999.0))
    frame = frame_of(overview(plan), 2.0)
    assert np.isnan(cut_of(terrain, plan.water_body.cells, frame, 1000).level_m).mean() == pytest.approx(0.5, abs=0.02)
    coarse = cut_of(terrain, plan.water_body.cells, frame, 20).level_m
    assert np.isfinite(coarse).all()
    assert coarse.min() > 80.0


def test_a_frame_off_the_dem_has_no_cut(plan):
    frame = frame_of(overview(plan), 2.0)
    away = replace(frame, west=frame.west + 1e5, east=frame.east + 1e5)
    assert cut_of(plan.terrain, plan.water_body.cells, away, 300) is None


def test_a_huge_window_is_looked_at_in_steps(plan):
    """A plane 3,000 by 4,000 cells wide: thinned, it is the same plane, and little memory is used."""
    rows, cols = np.indices((3000, 4000), dtype=np.float32)
    level = (0.01 * cols + 0.02 * rows).astype(np.float64)
    a, _, c, _, e, f = plan.terrain.transform
    ones = np.ones(3000)
    terrain = replace(
        plan.terrain, elevation_m=level, valid=np.ones(level.shape, bool), step_x_m=5 * ones, step_y_m=5 * ones
    )
    frame = Frame(c, c + 4000 * a, f + 3000 * e, f, 1.0, 1.0)
    tracemalloc.start()
    cut = cut_of(terrain, np.zeros(level.shape, bool), frame, 260)
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    assert max(cut.level_m.shape) <= 260
    assert peak < 8 * level.size / 2
    col, row = (cut.x - c) / a - 0.5, (cut.y - f) / e - 0.5
    expected = 0.01 * col[None, :] + 0.02 * row[:, None]
    np.testing.assert_allclose(cut.level_m[:-1, :-1], expected[:-1, :-1], atol=0.03)
