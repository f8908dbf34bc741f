"""The cells that an intake along the shore may begin at."""

from dataclasses import replace

import numpy as np
import pytest

from routing.errors import SiteError
from routing.planning.intakes import deepest_bed_m, intake_places
from routing.planning.open_ends import Ground
from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Reporter
from routing.planning.scenes import survey
from routing.terrain import open_dem

SHORE = {"kind": "shore", "underwater_length_m": 12.0, "mouth_level_m": None}


@pytest.fixture
def look_at():
    """Return the scene of a job."""

    def scene_of(job):
        site = job.site
        with open_dem(site.terrain, site.lines, site.file) as dem:
            ends = place_ends(site, dem)
            return survey(site, dem, ends, first_window(site, dem, ends), Reporter())

    return scene_of


def ground_of(scene):
    return Ground(scene.terrain, scene.grid, scene.body, scene.zones, scene.present_m)


def test_a_point_needs_no_places(make_job, ground, look_at):
    job = make_job(ground.reservoir())
    assert intake_places(job.site, ground_of(look_at(job)), (20, 10)) is None


def test_barred_cells_are_no_places(make_job, ground, look_at):
    job = make_job(ground.reservoir(), intake=SHORE)
    scene = look_at(job)
    whole = intake_places(job.site, ground_of(scene), (20, 10))
    barred = np.zeros(scene.grid.shape, dtype=bool)
    barred[:20] = True
    zones = type("Zones", (), {"barred": barred})()
    part = intake_places(job.site, replace(ground_of(scene), zones=zones), (20, 10))
    assert {tuple(cell) for cell in part.cells} == {tuple(cell) for cell in whole.cells if cell[0] >= 20}
    assert 0 < len(part.cells) < len(whole.cells)
    zones.barred[:] = True
    with pytest.raises(SiteError, match="No shore was found"):
        intake_places(job.site, replace(ground_of(scene), zones=zones), (20, 10))


def test_the_rim_of_deep_water_is_what_one_move_may_leave_it_from(make_job, ground, look_at):
    """By trying every move of the search from every deep cell."""
    z = ground.reservoir()
    lake = z == 100.0
    z[lake] = 98.0 + np.random.default_rng(3).choice([0.0, 0.9], lake.sum(), p=[0.97, 0.03])
    z[20, 10] = 98.0
    deep_shore = {"kind": "shore", "mouth_level_m": None}
    job = make_job(z, terrain={"water_shown": "bed"}, intake=deep_shore)
    scene = look_at(job)
    deep = scene.body.cells & (z <= deepest_bed_m(job.site))
    moves = list(zip(scene.grid.moves.drow, scene.grid.moves.dcol, strict=True))
    leaves = {(r, c) for r, c in np.argwhere(deep) if any(not deep[r + a, c + b] for a, b in moves)}
    found = {tuple(cell) for cell in intake_places(job.site, ground_of(scene), (20, 10)).cells}
    assert leaves <= found
    assert found <= {tuple(cell) for cell in np.argwhere(deep)}
    assert len(found) < deep.sum()


@pytest.mark.parametrize(
    ("intake", "search", "expected"),
    [
        ({"mouth_level_m": 95.5}, {}, 95.5),
        ({"mouth_level_m": None}, {}, 99.0 - 0.3 - 0.32),
        ({"mouth_level_m": None}, {"bed_offset_m": 0.5}, 99.0 - 0.3 - 0.32 - 0.5),
        ({"mouth_level_m": None}, {"bed_offset_m": -1.0}, 99.0 - 0.3 - 0.32),
    ],
)
def test_the_bed_must_be_as_deep_as_the_largest_pipe_asks(make_job, ground, pipe, intake, search, expected):
    """Lowest level less 0.3 m of submergence, the outside diameter, and supports; a trench does not lift the mouth."""
    small = pipe | {"name": "S", "outside_diameter_mm": 200.0}
    bed = {"water_shown": "bed"}
    job = make_job(ground.reservoir(), terrain=bed, intake=intake, search=search, pipes=(small, pipe))
    assert deepest_bed_m(job.site) == pytest.approx(expected)
