"""Zones in whole plans, and in a thousand random searches: no line in a bar, no gain by a bar, no change by a factor of 1."""

import json

import geopandas
import numpy as np
import pytest
import shapely
from shapely import LineString, Polygon, box

from routing.errors import SiteError
from routing.planning.zoning import route_line
from routing.records import GridWindow, Terrain, TerrainFacts, Zone, ZoneAsk, ZoneMap
from routing.search import move_list, reach
from routing.terrain import zone_map
from routing.terrain.clipping import blocked_by, lay_over

WEST, NORTH, CELL = 500000.0, 5000000.0, 10.0
CRS = "EPSG:32631"


def at(row, col):
    """Map position of a place counted in cells of the made jobs, cell centres at whole numbers."""
    return WEST + CELL * (col + 0.5), NORTH - CELL * (row + 0.5)


def cells_box(row_0, col_0, row_1, col_1):
    """A box on the map by places counted in cells."""
    (x_0, y_0), (x_1, y_1) = at(row_0, col_0), at(row_1, col_1)
    return box(min(x_0, x_1), min(y_0, y_1), max(x_0, x_1), max(y_0, y_1))


@pytest.fixture
def with_zones():
    """Write zones beside a job's site file and enter them in it; ``zones`` are (name, shape, cost factor or None)."""

    def write(job, *zones):
        text = job.file.read_text(encoding="utf-8")
        for name, shape, factor in zones:
            geopandas.GeoDataFrame(geometry=[shape], crs=CRS).to_file(job.file.parent / f"{name}.gpkg")
            kind = 'kind = "barred"' if factor is None else f'kind = "cost"\ncost_factor = {factor}'
            text += f'\n[[zones]]\nname = "{name}"\nfile = "{name}.gpkg"\n{kind}\n'
        job.file.write_text(text, encoding="utf-8")
        return job

    return write


def inside(line, shape):
    """Whether any of a line lies in the interior of a shape, by the plain intersection matrix."""
    return shapely.relate_pattern(line, shape, "T********")


# ---------------------------------------------------------------- a thousand random cases


def small_terrain(rows, cols, cell=1.0, west=0.0):
    transform = (cell, 0.0, west, 0.0, -cell, rows * cell)
    facts = TerrainFacts(
        "made.tif", "", "GTiff", "float32", rows, cols, transform, CRS, CRS, "metre", "m", "made", "not stated", 1.0, 0.0,
        None, None, "ground", "surface",
    )  # fmt: skip
    ones = np.ones(rows) * cell
    window = GridWindow(0, 0, rows, cols, rows, cols)
    return Terrain(np.zeros((rows, cols)), np.ones((rows, cols), dtype=bool), ones, ones, transform, window, facts)


def random_bar(rng, size):
    """A thin strip, a star or a box on cell centres, anywhere."""
    middle = rng.uniform(0.0, size, 2)
    kind = rng.integers(3)
    if kind == 0:
        away = rng.normal(0.0, 0.3 * size, 2)
        return LineString([middle - away, middle + away]).buffer(rng.uniform(0.01, 0.8), cap_style="flat")
    if kind == 1:
        angle = np.sort(rng.uniform(0.0, 2.0 * np.pi, 8))
        radius = rng.uniform(0.5, 0.35 * size, (8, 1))
        return shapely.make_valid(
            Polygon(middle + radius * np.column_stack([np.cos(angle), np.sin(angle)])), method="structure"
        )
    low = np.round(middle) - 0.5
    return box(*low, *(low + rng.integers(1, 5, 2)))


@pytest.mark.parametrize("seed", range(10))
def test_no_line_meets_a_bar_and_more_bars_never_shorten_a_route(seed):
    """100 cases each. Ground is rough, cells of odd size and place, so that nothing is a round number."""
    rng = np.random.default_rng(seed)
    found = 0
    for case in range(100):
        size, cell = int(rng.integers(8, 16)), 1.0 if case % 2 else float(rng.uniform(0.3, 3.0))
        neighbours = (8, 16, 32)[case % 3]
        terrain = small_terrain(size, size, cell, 0.0 if case % 2 else float(rng.uniform(-1e6, 1e6)))
        ground = rng.uniform(0.0, 0.4 * cell, (size, size))
        ends = rng.integers(0, size, (2, 2))
        blocked, bars, last = np.zeros((size, size), dtype=np.uint32), [], 0.0
        for _ in range(4):
            way = reach(ground, cell, cell, [tuple(ends[0])], blocked_moves=blocked, neighbours=neighbours)
            length = way.length_m[tuple(ends[1])]
            assert length >= last
            last = length
            if np.isinf(length):
                break
            cells = way.path_to(*ends[1])
            steps = np.diff(cells, axis=0)
            corners = (
                cells[np.concatenate([[True], np.any(steps[1:] != steps[:-1], axis=1), [True]])]
                if len(steps)
                else cells
            )
            if len(cells) > 1:
                zones = ZoneMap(tuple(Zone(str(k), "barred", 1.0, bar) for k, bar in enumerate(bars)), *[None] * 3)
                line = route_line(terrain, zones, cells, corners)
                assert not any(inside(line, bar) for bar in bars)
                found += 1
            bar = shapely.transform(random_bar(rng, size), lambda xy: xy * cell + [terrain.transform[2], 0.0])  # noqa: B023
            bars.append(bar)
            overlay = lay_over(terrain, bar, 3)
            blocked |= blocked_by(terrain, overlay, move_list(neighbours))
    assert found > 150  # most of the cases do have a way


# ---------------------------------------------------------------- whole plans


def test_a_bar_across_the_straight_way_is_gone_round(make_job, ground, with_zones):
    free = make_job(ground.reservoir()).plan().schemes[0]
    bar = cells_box(10, 40, 25, 44)
    assert inside(free.route.line, bar)
    plan = with_zones(make_job(ground.reservoir()), ("bank", bar, None)).plan()
    best = plan.schemes[0]
    assert not inside(best.route.line, bar)
    # No way round is shorter than the tight string past the nearer corners; the grid adds at most 2.75 %.
    corners = [at(20, 10), at(25, 40), at(25, 44), at(20, 60)]
    string = LineString(corners).length / 0.9996
    flat = np.hypot(*np.diff(np.array(best.route.line.coords), axis=0).T).sum() / 0.9996
    assert string * (1.0 - 1e-9) <= flat <= string * 1.0275
    assert best.route.length_m > free.route.length_m
    assert best.appraisal.discharge_m3s <= free.appraisal.discharge_m3s
    assert "clear of the barred zones" in best.route.proof.text
    assert [(zone.name, zone.kind) for zone in plan.zones] == [("bank", "barred")]


@pytest.mark.parametrize("rule", ["bilinear", "cells"])
def test_gaps_in_the_dem_and_bars_hold_together(make_job, ground, with_zones, rule):
    level = ground.reservoir()
    level[8:20, 45] = np.nan
    bar = cells_box(19, 44.5, 30, 46)
    job = make_job(level.astype("float32"), search={"ground_rule": rule}, dem={"nodata": float("nan")})
    best = with_zones(job, ("bank", bar, None)).plan().schemes[0]
    assert not inside(best.route.line, bar)
    assert not inside(best.route.line, cells_box(7.001, 44.001, 19.999, 45.999))


def test_a_cost_zone_of_factor_1_changes_nothing(make_job, ground, with_zones, pipe):
    prices = {"supply_per_m": 40.0, "laying_per_m": 15.0, "fixed_each": 100.0}
    plain = make_job(ground.reservoir(), pipes=(pipe | prices,)).plan().schemes[0]
    zoned = with_zones(make_job(ground.reservoir(), pipes=(pipe | prices,)), ("field", cells_box(10, 35, 30, 50), 1.0))
    best = zoned.plan().schemes[0]
    assert best.route.line.equals(plain.route.line)
    assert best.cost == plain.cost
    assert best.appraisal.discharge_m3s == plain.appraisal.discharge_m3s


def test_a_cost_zone_by_hand(make_job, ground, with_zones, pipe):
    """Ten flat cells in the zone, 100 / 0.9996 = 100.040 m; laying 15.00, factor 2.5: 22.50 a metre more, 2250.90."""
    prices = {"supply_per_m": 40.0, "laying_per_m": 15.0, "fixed_each": 100.0}
    job = make_job(ground.reservoir(), pipes=(pipe | prices,))
    plan = with_zones(job, ("bog", cells_box(5, 45, 35, 55), 2.5)).plan()
    lines = {line.text: line for line in plan.schemes[0].cost.lines}
    bog = lines["laying in zone bog"]
    assert (bog.unit, bog.rate) == ("m", 22.5)
    assert bog.quantity == pytest.approx(100.0 / 0.9996, rel=1e-6)
    assert bog.amount == 2250.90
    assert lines["pipe laid"].rate == 15.0


def refused(job, act="plan"):
    with pytest.raises(SiteError) as caught:
        getattr(job, act)()
    (problem,) = caught.value.problems
    assert problem.file == str(job.file)
    assert problem.allowed
    assert problem.remedy
    return problem


@pytest.mark.parametrize(("end", "cell"), [("intake", (20, 10)), ("outlet", (20, 60))])
@pytest.mark.parametrize("act", ["plan", "look"])
def test_an_end_in_a_bar_is_refused_by_name(make_job, ground, with_zones, end, cell, act):
    row, col = cell
    job = with_zones(make_job(ground.reservoir()), ("reed bed", cells_box(row - 2, col - 2, row + 2, col + 2), None))
    problem = refused(job, act)
    assert problem.what == f"The {end} lies in the barred zone reed bed."
    assert problem.key == f"{end}.x"
    assert job.file.read_text(encoding="utf-8").splitlines()[problem.line - 1].startswith("x = ")
    assert f"zones[1] (reed bed.gpkg, line {job.line_of('[[zones]]')})" in problem.found


def test_an_end_whose_cell_has_its_centre_in_a_bar_is_refused(make_job, ground, with_zones):
    x, y = at(20, 10)
    job = make_job(ground.reservoir(), intake={"x": x - 4.0, "y": y})
    problem = refused(with_zones(job, ("pier", box(x - 3.0, y - 20.0, x + 20.0, y + 20.0), None)))
    assert problem.what == "The intake has its cell's centre in the barred zone pier."


def test_an_end_in_a_hole_of_a_bar_or_on_its_edge_is_free(make_job, ground, with_zones):
    x, y = at(20, 10)
    hole = cells_box(15, 5, 25, 15) - cells_box(18, 8, 22, 12)
    job = make_job(ground.reservoir())
    edge = box(x - 20.0, y - 20.0, x, y + 20.0)
    assert with_zones(job, ("edge", edge, None)).plan().schemes
    (missing,) = with_zones(make_job(ground.reservoir()), ("ring", hole, None)).plan().shortfalls
    assert missing.cause == "cut off"


def test_bars_that_close_every_way_are_named(make_job, ground, with_zones):
    job = make_job(ground.reservoir())
    bars = (("north bank", cells_box(-5, 40, 20.5, 41), None), ("south bank", cells_box(20.5, 39, 50, 42), None))
    plan = with_zones(job, *bars, ("field", cells_box(0, 50, 10, 55), 2.0)).plan()
    assert not plan.feasible
    (missing,) = plan.shortfalls
    assert missing.cause == "cut off"
    assert "barred zones close every way between intake and outlet" in missing.text
    assert "runs through north bank" in missing.text
    assert "field" not in missing.text


def test_a_bar_over_the_low_place_is_told_in_the_shortfall(make_job, ground, with_zones):
    """A crest 12 m above the water with a saddle in it: barred, there is no siphon; open, there is one."""
    level = ground.reservoir(top=112.0, bank=120.0)
    level[18:23, :] = np.minimum(level[18:23, :], np.where(np.arange(80) < 30, 100.0, 90.0))
    level[18:23, 22:38] = np.maximum(level[18:23, 22:38], 103.0)
    assert make_job(level).plan().feasible
    plan = with_zones(make_job(level), ("gate", cells_box(17, 28, 24, 32), None)).plan()
    assert not plan.feasible
    (missing,) = plan.shortfalls
    assert missing.cause == "suction"
    assert missing.text.endswith("Through the barred zones (gate) the ground would be low enough.")


def test_what_was_mended_is_among_the_warnings(make_job, ground, with_zones):
    tie = Polygon([at(8, 40), at(12, 44), at(8, 44), at(12, 40)])
    plan = with_zones(make_job(ground.reservoir()), ("tie", tie, None), ("far", cells_box(900, 0, 910, 9), 2.0)).plan()
    assert any("Zone tie: 1 of its 1 polygons had an outline that crosses" in note for note in plan.warnings)
    assert any("Zone far lies wholly outside the DEM" in note for note in plan.warnings)


def test_zones_in_degrees_bar_the_same_ground(make_job, ground, tmp_path):
    """The same box as GeoJSON in longitude and latitude: the same cells, and the same route."""
    job = make_job(ground.reservoir())
    shape = cells_box(10.3, 40.3, 25.3, 44.3)
    frame = geopandas.GeoDataFrame(geometry=[shape], crs=CRS)
    frame.to_file(tmp_path / "own.gpkg")
    lonlat = json.loads(frame.to_crs(4326).to_json())
    (tmp_path / "park.geojson").write_text(json.dumps({"type": "FeatureCollection", "features": lonlat["features"]}))
    terrain = job.plan().terrain
    maps = [
        zone_map(terrain, (ZoneAsk("park", tmp_path / name),), move_list(16)) for name in ("own.gpkg", "park.geojson")
    ]
    np.testing.assert_array_equal(maps[0].barred, maps[1].barred)
    np.testing.assert_array_equal(maps[0].blocked_moves, maps[1].blocked_moves)
