"""What bars have to do with a shortfall: told only where it makes a difference."""

from dataclasses import replace

import geopandas
import numpy as np
import pytest
from shapely import box

from routing.planning.bars import with_bars_told
from routing.planning.benches import Bench
from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Reporter
from routing.planning.scenes import survey
from routing.planning.settings import resolve
from routing.records import Shortfall
from routing.terrain import open_dem

TOO_HIGH = Shortfall("P", 0.05, "suction", 4.0, "P: too high.")


@pytest.fixture
def bench_with(make_job, ground, tmp_path):
    """A job whose crest is 112 m with a saddle of 103 m at rows 18 to 22, and a bar by rows and columns."""

    def make(*bar, saddle=103.0):
        z = ground.reservoir(top=112.0, bank=120.0)
        z[18:23, 21:41] = ground.valley(rows=5, top=saddle)[:, 21:41]
        job = make_job(z)
        row_0, col_0, row_1, col_1 = bar
        shape = box(500000.0 + 10 * col_0, 5e6 - 10 * row_1, 500000.0 + 10 * col_1, 5e6 - 10 * row_0)
        geopandas.GeoDataFrame(geometry=[shape], crs="EPSG:32631").to_file(tmp_path / "gate.gpkg")
        job.file.write_text(job.file.read_text() + '\n[[zones]]\nname = "gate"\nfile = "gate.gpkg"\nkind = "barred"\n')
        site = job.site
        with open_dem(site.terrain, site.lines, site.file) as dem:
            ends = place_ends(site, dem)
            scene = survey(site, dem, ends, first_window(site, dem, ends), Reporter())
        return Bench(site, scene, resolve(site, scene), lambda _: None)

    return make


def test_through_the_bar_the_ground_would_be_low_enough(bench_with):
    bench = bench_with(17, 28, 24, 33)
    told = with_bars_told(bench, bench.site.pipes[0], TOO_HIGH)
    assert told.text == "P: too high. Through the barred zones (gate) the ground would be low enough."
    assert (told.raise_m, told.cause) == (4.0, "suction")


def test_or_less_too_high(bench_with):
    bench = bench_with(17, 28, 24, 33, saddle=107.0)
    duty = replace(TOO_HIGH, duty_m3s=0.05)
    told = with_bars_told(bench, bench.site.pipes[0], duty)
    (pipe,) = bench.site.pipes
    limit = bench.limit_at(pipe, 0.05)
    ground = bench.scene.terrain.elevation_m[20, 10:31]
    along = float(np.sum(np.hypot(bench.scene.terrain.step_x_m[20], np.diff(ground))))
    figure = float(told.text.partition("be only ")[2].split()[0])
    falling = limit.ceiling_level_m - limit.ceiling_gradient * along
    assert figure == pytest.approx(107.0 - falling, abs=0.01)  # straight on, by the crest at column 30
    assert told.text.endswith("m too high.")


def test_a_bar_that_is_not_in_the_way_is_not_told(bench_with):
    bench = bench_with(30, 50, 34, 54, saddle=107.0)
    limit = bench.limit_at(bench.site.pipes[0], 0.05)
    need = 107.0 - limit.ceiling_level_m
    missing = replace(TOO_HIGH, raise_m=need)
    assert with_bars_told(bench, bench.site.pipes[0], missing) is missing


def test_every_way_closed_names_the_bar_that_closes_the_best(bench_with):
    bench = bench_with(-1, 45, 41, 47)
    cut = Shortfall("P", None, "cut off", None, "P: no way.")
    told = with_bars_told(bench, bench.site.pipes[0], cut)
    assert "barred zones close every way between intake and outlet" in told.text
    assert "runs through gate." in told.text


def test_nothing_to_tell(bench_with):
    bench = bench_with(17, 28, 24, 33)
    (pipe,) = bench.site.pipes
    assert with_bars_told(bench, pipe, None) is None
    weak = replace(TOO_HIGH, cause="energy")
    assert with_bars_told(bench, pipe, weak) is weak
    free = replace(bench, scene=replace(bench.scene, zones=None))
    assert with_bars_told(free, pipe, TOO_HIGH) is TOO_HIGH
