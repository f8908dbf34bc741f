"""What is said where an outlet left open finds no place: the figures are those of the ground."""

import numpy as np
import pytest

from routing.planning.no_outlets import none_drained, none_dry, none_far, none_low
from routing.planning.open_ends import Ground
from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Reporter
from routing.planning.scenes import survey
from routing.terrain import open_dem

ANYWHERE = {"x": None, "y": None, "level_m": None, "height_above_ground_m": 0.3, "kind": "anywhere"}


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
def case(make_job, ground, look_at):
    """A site with an outlet anywhere, its scene, and the centre of cell (20, 70) as text."""
    z = ground.reservoir()
    z[20, 70] = 88.5
    job = make_job(z, outlet=ANYWHERE)
    return job, look_at(job), "x 500705.0, y 4999795.0"


def only(scene, *cells):
    mask = np.zeros(scene.grid.shape, dtype=bool)
    mask[tuple(np.transpose(cells))] = True
    return mask


def test_of_the_ground_too_high_the_lowest_is_named(case):
    job, scene, place = case
    problem = none_low(job.site, scene.terrain, only(scene, (10, 50), (20, 70), (3, 3)))
    assert problem.found == f"the lowest ground is at 88.50 m, at {place}; the axis there would be at 88.80 m"
    assert problem.allowed == "an axis below the lowest level, 99.00 m"
    assert (problem.key, problem.line) == ("outlet.height_above_ground_m", job.line_of("height_above"))


def test_with_a_level_of_its_own_that_is_what_has_to_give(make_job, ground, look_at):
    job = make_job(ground.reservoir(), outlet=ANYWHERE | {"level_m": 90.5, "height_above_ground_m": None})
    scene = look_at(job)
    problem = none_low(job.site, scene.terrain, only(scene, (10, 50)))
    assert problem.key == "outlet.level_m"
    assert "90.5 m" in problem.allowed
    assert "axis" not in problem.found


def test_hollows_are_counted_and_the_lowest_is_named(case):
    job, scene, place = case
    problem = none_drained(job.site, scene.terrain, only(scene, (10, 50), (20, 70)), 0.25)
    assert problem.found == f"2 cells, the lowest at 88.50 m, at {place}"
    assert problem.allowed.endswith("rising by 0.25 m at most")
    assert problem.key == "outlet.kind"


def test_the_farthest_place_is_named(case):
    job, scene, place = case
    distance = np.full(scene.grid.shape, -1.0)
    distance[20, 70], distance[10, 50] = 371.24, 160.0
    problem = none_far(job.site, scene.terrain, distance)
    assert problem.found.endswith(f"the farthest place lies 371.2 m beyond the toe, at {place}")
    assert problem.allowed == "at most 371.2 m"
    assert problem.key == "outlet.beyond_toe_m"


@pytest.mark.parametrize(("zones", "said"), [(None, False), (object(), True)])
def test_barred_zones_are_named_only_where_there_are_some(case, zones, said):
    job, scene, _ = case
    problem = none_dry(job.site, Ground(scene.terrain, scene.grid, scene.body, zones, scene.present_m))
    assert ("barred zones" in problem.what) == said
    assert problem.what.startswith("No ground is left")
    assert problem.remedy
