"""Places for ends left open: which cells they are, what is told of them, and what is said where there is none."""

from __future__ import annotations

import math

import numpy as np
import pyogrio.raw
import pytest
import shapely
from pyproj import Transformer

from routing.errors import SiteError
from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Reporter
from routing.planning.scenes import survey
from routing.terrain import open_dem

WEST, NORTH, CELL = 500000.0, 5000000.0, 10.0
#: UTM shrinks lengths to 0.9996 at its central meridian, where the made jobs lie.
STEP = CELL / 0.9996
NO_PLACE = {"x": None, "y": None}
GROUND = {"level_m": None, "height_above_ground_m": 0.3}
ANYWHERE = NO_PLACE | GROUND | {"kind": "anywhere"}


@pytest.fixture
def look_at():
    """Return the scene of a job."""

    def scene_of(job):
        site = job.site
        with open_dem(site.terrain, site.lines, site.file) as dem:
            ends = place_ends(site, dem)
            return survey(site, dem, ends, first_window(site, dem, ends), Reporter())

    return scene_of


@pytest.fixture
def draw(tmp_path):
    """Write shapes given in cells (column, row; centres at halves) as a GeoPackage in some CRS."""

    def write(*shapes, crs="EPSG:32631", name="shapes.gpkg"):
        turn = Transformer.from_crs("EPSG:32631", crs, always_xy=True)
        placed = [
            shapely.transform(
                shape, lambda xy: np.column_stack(turn.transform(WEST + CELL * xy[:, 0], NORTH - CELL * xy[:, 1]))
            )
            for shape in shapes
        ]
        kind = placed[0].geom_type
        pyogrio.raw.write(
            tmp_path / name, shapely.to_wkb(np.array(placed, dtype=object)), [], [], crs=crs, geometry_type=kind,
            driver="GPKG", layer="shapes",
        )  # fmt: skip
        return name

    return write


def cells_of(places):
    return {(int(row), int(col)) for row, col in places.cells}


def open_valley(ground):
    """The valley behind a dam, its floor falling to the east edge, high banks along the north and south."""
    z = ground.reservoir()
    col = np.arange(80)
    z = np.where((z <= 90.0) & (col > 30), 90.0 - 0.05 * (col - 42), z)
    z[:3, 32:] = z[-3:, 32:] = 120.0
    return z


def only_problem(caught):
    (problem,) = caught.value.problems
    assert problem.file
    assert problem.found
    assert problem.allowed
    assert problem.remedy
    return problem


# ---------------------------------------------------------------- anywhere


def test_anywhere_is_low_ground_outside_the_water(make_job, ground, look_at):
    z = open_valley(ground)
    scene = look_at(make_job(z, outlet=ANYWHERE))
    expected = {(r, c) for r, c in np.argwhere(z.astype(np.float64) + 0.3 < 99.0) if c > 30}
    assert cells_of(scene.outlets) == expected
    assert not scene.outlets.more_outside
    assert "may lie in" in scene.outlets.note
    assert "hollow" not in scene.outlets.note
    assert "toe" not in scene.outlets.note
    assert (scene.outlet_cell[0], scene.outlet_cell[1]) in expected


def test_the_axis_counts_from_the_ground_of_each_cell(make_job, ground, look_at):
    z = open_valley(ground)
    places = look_at(make_job(z, outlet=ANYWHERE)).outlets
    assert places.axis_m == pytest.approx([z[r, c] + 0.3 for r, c in places.cells])
    assert z[places.lowest] == z[:, 31:].min()


def test_with_a_level_the_ground_must_not_be_above_it(make_job, ground, look_at):
    z = open_valley(ground)
    places = look_at(make_job(z, outlet=NO_PLACE | {"kind": "anywhere", "level_m": 89.5})).outlets
    assert cells_of(places) == {(r, c) for r, c in np.argwhere(z <= 89.5)}
    assert set(places.axis_m) == {89.5}


def test_hollows_are_left_out_and_told(make_job, ground, look_at):
    z = open_valley(ground)
    z[18:23, 55:60] -= 2.0  # a pit: water would have to rise by 2 m less the fall of the floor
    z[10, 60] -= 0.2  # a dent within the tolerance
    scene = look_at(make_job(z, outlet=ANYWHERE))
    found = cells_of(scene.outlets)
    assert not found & {(r, c) for r in range(18, 23) for c in range(55, 60)}
    assert (10, 60) in found
    assert "25 of them lie in closed hollows" in scene.outlets.note
    assert "0.25 m" in scene.outlets.note


def test_ground_drains_to_nodata_that_reaches_the_edge_but_not_to_a_gap_inside(make_job, ground, look_at):
    z = open_valley(ground)
    z[:, 70:] = 120.0  # the valley is closed
    z[20, 66:] = -9999.0  # but a strip of nodata runs from the edge into it
    job = make_job(z, outlet=ANYWHERE, dem={"nodata": -9999.0})
    assert len(look_at(job).outlets.cells) > 100
    z[20, 75:] = 120.0  # now it ends inside
    job = make_job(z, outlet=ANYWHERE, dem={"nodata": -9999.0})
    with pytest.raises(SiteError) as caught:
        look_at(job)
    problem = only_problem(caught)
    assert problem.key == "outlet.kind"
    assert "closed hollows" in problem.what
    assert problem.line == job.line_of('kind = "anywhere"')


def test_no_place_low_enough_names_the_lowest(make_job, ground, look_at):
    z = np.maximum(open_valley(ground), 98.9)
    z[25, 70] = 98.8
    job = make_job(z, outlet=ANYWHERE)
    with pytest.raises(SiteError) as caught:
        look_at(job)
    problem = only_problem(caught)
    assert problem.key == "outlet.height_above_ground_m"
    assert "98.80 m, at x 500705.0, y 4999745.0" in problem.found
    assert "99.10 m" in problem.found
    assert "99.00 m" in problem.allowed


# ---------------------------------------------------------------- the toe


def test_the_toe_does_not_follow_the_hillsides_down_the_valley(make_job, ground, look_at):
    """Cells at the foot of the side of the valley, far from the dam, keep their distance."""
    scene = look_at(make_job(open_valley(ground), outlet=ANYWHERE | {"beyond_toe_m": 150.0}))
    found = cells_of(scene.outlets)
    assert (4, 60) in found
    assert (20, 60) in found
    assert min(col for _, col in found) == 33 + math.ceil(150.0 / STEP)
    assert "nearer than 150 m to the toe" in scene.outlets.note


def test_nothing_beyond_the_toe_names_the_farthest(make_job, ground, look_at):
    job = make_job(open_valley(ground), outlet=ANYWHERE | {"beyond_toe_m": 5000.0})
    with pytest.raises(SiteError) as caught:
        look_at(job)
    problem = only_problem(caught)
    assert problem.key == "outlet.beyond_toe_m"
    assert problem.line == job.line_of("beyond_toe_m")
    far = float(problem.allowed.split()[-2])
    assert far == pytest.approx(46 * STEP, abs=0.4 * STEP)


# ---------------------------------------------------------------- lines and polygons


@pytest.mark.parametrize("crs", ["EPSG:32631", "EPSG:4326", "EPSG:3857"])
def test_a_line_in_any_crs_gives_the_cells_that_it_crosses(make_job, ground, look_at, draw, crs):
    line = shapely.LineString([(38.3, 10.2), (61.7, 22.4), (75.2, 22.6)])
    shape = {"kind": "line", "file": draw(line, crs=crs)}
    scene = look_at(make_job(open_valley(ground), outlet=NO_PLACE | GROUND | shape))
    crossed = {
        (r, c) for r in range(40) for c in range(80) if line.intersection(shapely.box(c, r, c + 1, r + 1)).length > 1e-3
    }
    assert cells_of(scene.outlets) == crossed
    assert "that the lines cross" in scene.outlets.note


@pytest.mark.parametrize("crs", ["EPSG:32631", "EPSG:4326", "EPSG:3857"])
def test_a_polygon_with_a_hole_gives_the_cells_whose_centres_it_holds(make_job, ground, look_at, draw, crs):
    shell = [(40.2, 8.3), (70.6, 12.1), (66.1, 30.7), (43.4, 26.2)]
    polygon = shapely.Polygon(shell, [[(50.1, 14.2), (50.3, 18.9), (55.2, 18.7), (55.4, 14.1)]])
    shape = {"kind": "polygon", "file": draw(polygon, crs=crs)}
    scene = look_at(make_job(open_valley(ground), outlet=NO_PLACE | GROUND | shape))
    held = {(r, c) for r in range(40) for c in range(80) if polygon.contains(shapely.Point(c + 0.5, r + 0.5))}
    assert cells_of(scene.outlets) == held


def test_cells_of_the_water_and_high_ones_are_no_places(make_job, ground, look_at, draw):
    line = shapely.LineString([(5.5, 20.5), (60.5, 20.5)])  # from the lake over the dam
    shape = {"kind": "line", "file": draw(line)}
    z = open_valley(ground)
    scene = look_at(make_job(z, outlet=NO_PLACE | GROUND | shape))
    assert cells_of(scene.outlets) == {(20, c) for c in range(31, 61) if z[20, c] + 0.3 < 99.0}


def test_shapes_may_lie_in_a_hollow_which_is_then_told(make_job, ground, draw):
    z = open_valley(ground)
    z[18:23, 55:60] -= 2.0
    shape = {"kind": "polygon", "file": draw(shapely.box(55.1, 18.1, 59.9, 22.9))}
    plan = make_job(z, outlet=NO_PLACE | GROUND | shape).plan()
    assert any("closed hollow" in text for text in plan.warnings)


@pytest.mark.parametrize(
    ("kind", "shape", "what"),
    [
        ("line", shapely.LineString([(200, 10), (220, 10)]), "outside the DEM"),
        ("polygon", shapely.box(200, 10, 220, 20), "outside the DEM"),
        ("line", shapely.box(40, 10, 50, 20), "must hold lines"),
        ("polygon", shapely.LineString([(40, 10), (50, 10)]), "must hold polygons"),
        ("polygon", shapely.box(50.6, 10.6, 50.9, 10.9), "No cell of the polygons"),
        ("line", shapely.LineString([(8.5, 10.5), (15.5, 10.5)]), "No cell of the lines"),
        ("line", shapely.LineString([(34.5, 0.5), (60.5, 0.5)]), "low enough"),
    ],
)
def test_shapes_that_cannot_serve(make_job, ground, look_at, draw, kind, shape, what):
    job = make_job(open_valley(ground), outlet=NO_PLACE | GROUND | {"kind": kind, "file": draw(shape)})
    with pytest.raises(SiteError) as caught:
        look_at(job)
    problem = only_problem(caught)
    assert what in problem.what
    assert problem.key == ("outlet.height_above_ground_m" if what == "low enough" else "outlet.file")
    assert problem.line == job.line_of("height_above" if what == "low enough" else 'file = "shapes')


def test_low_cells_that_a_polygon_of_the_water_leaves_out_are_no_places(make_job, ground, look_at, draw):
    """The drawn shore ends at column 15, the lake of the DEM at column 22: nothing parts the cells between from it."""
    water = draw(shapely.box(2.2, 6.2, 15.0, 33.8), name="water.gpkg")
    shape = {"kind": "polygon", "file": draw(shapely.box(5.1, 10.1, 60.9, 20.9))}
    z = basin(ground)
    job = make_job(z, terrain={"water_shown": "bed"}, water={"polygon_file": water}, outlet=NO_PLACE | GROUND | shape)
    found = cells_of(look_at(job).outlets)
    assert min(col for _, col in found) > 30
    assert (15, 50) in found


# ---------------------------------------------------------------- shores


def test_the_shore_is_the_water_beside_dry_ground(make_job, ground, look_at):
    z = ground.reservoir()
    scene = look_at(make_job(z, intake={"kind": "shore", "underwater_length_m": 12.0, "mouth_level_m": None}))
    water = scene.body.cells
    expected = set()
    for r, c in np.argwhere(water):
        around = water[max(r - 1, 0) : r + 2, max(c - 1, 0) : c + 2]
        if not around.all():
            expected.add((int(r), int(c)))
    assert cells_of(scene.intakes) == expected
    assert scene.intakes.start_m == 12.0
    assert not scene.intakes.measured


def basin(ground):
    """A lake on a bed that rises from 90 m at column 4 by 0.5 m a cell up to the dam."""
    z = ground.reservoir()
    col = np.arange(80)
    lake = z == 100.0
    z[lake] = np.broadcast_to(90.0 + 0.5 * (col - 4), z.shape)[lake]
    return z


def test_on_a_bed_the_shore_is_that_of_the_lowest_level(make_job, ground, look_at):
    z = basin(ground)
    shore = {"kind": "shore", "underwater_length_m": 12.0, "mouth_level_m": None}
    scene = look_at(make_job(z, terrain={"water_shown": "bed"}, intake=shore))
    found = cells_of(scene.intakes)
    east = {(r, c) for r, c in found if 7 < r < 32 and c > 5}
    assert {c for _, c in east} == {22}  # 90 + 0.5 * 18 = 99 m, the lowest level


def test_deep_water_for_a_pipe_on_the_bed(make_job, ground, look_at):
    """99 m less 0.3 m of submergence less a pipe of 0.32 m: a bed at or below 98.38 m, 98 m at column 20."""
    scene = look_at(
        make_job(basin(ground), terrain={"water_shown": "bed"}, intake={"kind": "shore", "mouth_level_m": None})
    )
    assert max(col for _, col in cells_of(scene.intakes)) == 20
    assert scene.intakes.measured
    assert scene.intakes.start_m == 0.0


def test_a_mouth_level_says_how_deep(make_job, ground, look_at):
    job = make_job(basin(ground), terrain={"water_shown": "bed"}, intake={"kind": "shore", "mouth_level_m": 95.2})
    assert max(col for _, col in cells_of(look_at(job).intakes)) == 14  # bed at 95 m


def test_nowhere_deep_enough_names_the_deepest(make_job, ground, look_at):
    z = np.maximum(basin(ground), 98.6)
    job = make_job(z, terrain={"water_shown": "bed"}, intake={"kind": "shore", "mouth_level_m": None})
    with pytest.raises(SiteError) as caught:
        look_at(job)
    problem = only_problem(caught)
    assert problem.key == "intake.kind"
    assert "98.60 m" in problem.found
    assert "98.38 m" in problem.allowed


def test_a_point_that_falls_dry_does_not_say_which_water(make_job, ground, look_at):
    job = make_job(
        basin(ground), ends=((20, 23), (20, 60)), terrain={"water_shown": "bed"},
        intake={"kind": "shore", "mouth_level_m": None},
    )  # fmt: skip
    with pytest.raises(SiteError) as caught:
        look_at(job)
    problem = only_problem(caught)
    assert problem.key == "intake.x"
    assert "dry at the lowest level" in problem.what


# ---------------------------------------------------------------- plans


def test_a_stated_underwater_length_is_part_of_pipe_loss_and_cost(make_job, ground, hand, pipe):
    """From the shore at column 27 straight over the dam; energy governs, by the closed form with 25 m more."""
    z = ground.reservoir(top=101.0)
    shore = {"kind": "shore", "underwater_length_m": 25.0, "mouth_level_m": 97.0}
    priced = pipe | {"supply_per_m": 10.0, "laying_per_m": 0.0}
    plan = make_job(z, intake=shore, pipes=[priced], outlet={"level_m": 97.0}).plan()
    best = plan.schemes[0]
    start = int(best.route.cells[0, 1])
    length = 25.0 + ground.length(z[20, start:61])
    assert tuple(best.route.cells[0]) == (20, start)
    assert best.route.length_m == pytest.approx(length, rel=1e-4)
    assert best.route.underwater_length_m == 25.0
    assert best.appraisal.governs == "energy"
    assert best.appraisal.discharge_m3s == pytest.approx(hand.energy_m3s(2.0, length), rel=1e-4)
    assert best.cost.total == pytest.approx(10.0 * length, rel=1e-4)
    assert best.route.chainage_m[:2].tolist() == [0.0, 25.0]
    assert best.appraisal.profile_crown_m[0] == pytest.approx(97.0)  # the crown at the mouth is the mouth's level
    assert best.appraisal.profile_crown_m[1] == pytest.approx(100.0 + hand.crown_m)
    assert best.route.x[0] == best.route.x[1]


def test_a_mouth_of_unknown_level_lies_one_diameter_below_the_lowest_level(make_job, ground):
    shore = {"kind": "shore", "underwater_length_m": 25.0, "mouth_level_m": None}
    plan = make_job(ground.reservoir(), intake=shore).plan()
    best = plan.schemes[0]
    assert best.appraisal.profile_crown_m[0] == pytest.approx(99.0 - 0.32)
    assert best.route.mouth_m is None
    assert "submergence" in {check.name for check in best.verdict.not_made}


def test_a_longer_underwater_length_lowers_what_suction_allows(make_job, ground, hand):
    """The crest at column 30 is then 25 m further along: by the closed form of the crown pressure."""
    z = ground.reservoir(top=105.5)
    found = []
    for length in (0.0, 25.0):
        shore = {"kind": "shore", "underwater_length_m": length, "mouth_level_m": 95.0}
        best = make_job(z, intake=shore).plan().schemes[0]
        at = length + ground.length(z[20, int(best.route.cells[0, 1]) : 31])
        assert best.appraisal.governs == "suction"
        assert best.appraisal.discharge_m3s == pytest.approx(hand.suction_m3s(99.0, 105.5, at), rel=2e-3)
        found.append(best.appraisal.discharge_m3s)
    assert found[1] < found[0]


def test_a_measured_underwater_length_is_the_way_along_the_bed(make_job, ground):
    """From column 20 (bed at 98 m) up a slope of 0.5 m a cell to 99 m at column 22."""
    job = make_job(basin(ground), terrain={"water_shown": "bed"}, intake={"kind": "shore", "mouth_level_m": None})
    best = job.plan().schemes[0]
    assert best.route.cells[0, 1] == 20
    assert best.route.underwater_length_m == pytest.approx(2.0 * math.hypot(STEP, 0.5), rel=1e-4)
    assert best.route.mouth_m == pytest.approx(98.0 + 0.32)
    assert best.route.chainage_m[0] == 0.0


def test_the_plan_tells_the_ends_chosen_and_the_second_best(make_job, ground):
    z = open_valley(ground)
    z[:, 60] -= 0.4  # a trench across the floor, on the way to nowhere
    asked = {"discharge_m3s": 0.1, "most_pipes": 1}
    plan = make_job(z, outlet=ANYWHERE | {"beyond_toe_m": 60.0}, demand=asked).plan()
    best = plan.schemes[0]
    row, col = (int(v) for v in best.route.cells[-1])
    assert plan.setting.outlet_cell == (row, col)
    assert (plan.setting.outlet.x, plan.setting.outlet.y) == (WEST + CELL * (col + 0.5), NORTH - CELL * (row + 0.5))
    assert plan.setting.lowest.outlet_m == pytest.approx(z[row, col] + 0.3)
    assert best.route.outlet_m == pytest.approx(z[row, col] + 0.3)
    assert best.appraisal.fall_m == pytest.approx(99.0 - z[row, col] - 0.3)
    (note,) = plan.choice_notes
    assert note.startswith("Outlet chosen out of ")
    assert f"x {plan.setting.outlet.x:.1f}, y {plan.setting.outlet.y:.1f}" in note
    assert "Second best, 50 m or more away" in note
    assert f"{best.route.length_m:.0f} m, carries {1e3 * best.total_discharge_m3s:.1f} l/s" in note


def test_without_a_second_place_that_is_said(make_job, ground, draw):
    shape = {"kind": "polygon", "file": draw(shapely.box(50.1, 20.1, 52.9, 22.9))}
    plan = make_job(open_valley(ground), outlet=NO_PLACE | GROUND | shape).plan()
    (note,) = plan.choice_notes
    assert "Outlet chosen out of 9 cells" in note
    assert "No other place 50 m or more away" in note


def test_points_need_no_choice(make_job, ground):
    assert make_job(ground.reservoir()).plan().choice_notes == ()


def test_look_shows_the_outlet_beyond_the_lowest_crest(make_job, ground):
    z = open_valley(ground)
    z[12, 25:36] = np.minimum(z[12, 25:36], 101.0)
    outlook = make_job(z, outlet=ANYWHERE).look()
    assert outlook.lowest_crest.level_m == pytest.approx(101.0)
    assert outlook.setting.outlet_cell[0] == pytest.approx(12, abs=3)


def test_barred_ground_is_no_place(make_job, ground, look_at, draw, tmp_path):
    draw(shapely.box(45.0, 5.0, 70.0, 35.0), name="barred.gpkg")
    job = make_job(open_valley(ground), outlet=ANYWHERE)
    file = job.file
    file.write_text(file.read_text() + '\n[[zones]]\nname = "reserve"\nfile = "barred.gpkg"\n')
    found = cells_of(look_at(job).outlets)
    assert not {(r, c) for r, c in found if 45 <= c < 70 and 5 <= r < 35}
    assert (20, 72) in found


def test_a_window_that_cannot_hold_all_places_proves_nothing(make_job, ground):
    z = np.full((40, 400), 80.0)
    z[:, :80] = open_valley(ground)
    z[:, 80:] = 87.9 - 0.01 * np.arange(320)
    job = make_job(z, outlet=ANYWHERE, search={"largest_window_cells": 10_000})
    plan = job.plan()
    assert not plan.terrain.window.whole
    assert any("border of what was read" in text for text in plan.assumptions)
    assert not plan.schemes[0].route.proof.whole_dem
    assert any("proven only inside" in text for text in plan.warnings)
