"""The demo sites side by side, and Vennaquil: thin air, no straight way, several low places of which some will do."""

from __future__ import annotations

import importlib.util
import math
import re
import shutil
from pathlib import Path

import numpy as np
import pytest
import rasterio
from scipy import ndimage

import routing
from routing.hydraulics import SUCTION, run_siphon
from routing.records import Profile
from routing.terrain import ground_along

FOLDER = Path(__file__).resolve().parent.parent / "sample_dem"
DEMOS = sorted(path.parent for path in FOLDER.glob("*/site.toml"))
VENNAQUIL = FOLDER / "vennaquil"
README = (FOLDER / "README.md").read_text(encoding="utf-8")

#: The low places of the slide mass: metres south of the DEM's northern edge, and the lowest way over each, as the
#: site file's own remark says.
LOW_PLACES = {"north": (395, 3604.5), "middle": (560, 3605.0), "near": (702, 3606.9), "south": (985, 3604.8)}


def test_every_demo_is_in_the_table_and_said_to_be_invented():
    assert [demo.name for demo in DEMOS] == ["brackenmere", "vennaquil"]
    for demo in DEMOS:
        assert f"| `{demo.name}/` |" in README
        assert f"python sample_dem/{demo.name}/make_dem.py" in README
        assert routing.load_site(demo / "site.toml").prices.invented
        assert "invented" in (demo / "site.toml").read_text(encoding="utf-8").splitlines()[0]
    files = [f for f in FOLDER.rglob("*") if f.is_file() and f.suffix in {".tif", ".toml", ".py", ".md", ".geojson"}]
    assert sum(f.stat().st_size for f in files) < 1_000_000


@pytest.mark.parametrize("demo", DEMOS, ids=lambda demo: demo.name)
def test_the_script_makes_the_committed_file(demo, tmp_path):
    spec = importlib.util.spec_from_file_location(f"make_{demo.name}", demo / "make_dem.py")
    maker = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(maker)
    maker.write(tmp_path / "again.tif")
    with rasterio.open(tmp_path / "again.tif") as again, rasterio.open(demo / "dem.tif") as kept:
        np.testing.assert_array_equal(again.read(1), kept.read(1))
        assert again.profile == kept.profile
        assert again.units == kept.units == ("m",)
        assert again.descriptions == kept.descriptions


@pytest.fixture(scope="module")
def ground():
    with rasterio.open(VENNAQUIL / "dem.tif") as source:
        assert "EGM96 height" in source.crs.to_wkt()
        assert source.res == (5.0, 5.0)
        return source.read(1).astype(float)


@pytest.fixture(scope="module")
def vennaquil():
    """The plan of the demo as it stands."""
    return routing.plan(routing.load_site(VENNAQUIL / "site.toml"))


@pytest.fixture
def plan_with(tmp_path):
    """Return a function that plans the demo with keys changed."""

    def plan(**changes):
        text = (VENNAQUIL / "site.toml").read_text(encoding="utf-8")
        for key, value in changes.items():
            text, found = re.subn(rf"^{key} = \S+", f"{key} = {value}", text, flags=re.MULTILINE)
            assert found == 1, key
        shutil.copy(VENNAQUIL / "dem.tif", tmp_path)
        file = tmp_path / "site.toml"
        file.write_text(text, encoding="utf-8")
        return routing.plan(routing.load_site(file))

    return plan


def cell(x, y):
    return int((8_450_000.0 - y) / 5.0), int((x - 280_000.0) / 5.0)


def place_of(route):
    """Name the low place nearest to where a route's crest lies."""
    south = 8_450_000.0 - route.y[route.crest_index]
    return min(LOW_PLACES, key=lambda name: abs(LOW_PLACES[name][0] - south))


def still_lift_m(altitude_m, low_pa, celsius, reserve_m):
    """The largest lift of still water, by hand.

    Standard atmosphere: ICAO Doc 7488, p = 101325 (1 - 2.25577e-5 h)^5.25588. Vapour pressure of water: Magnus
    formula with the constants of WMO No. 8, 611.2 exp(17.62 t / (243.12 + t)). Both written from memory.
    """
    air = 101325.0 * (1.0 - 2.25577e-5 * altitude_m) ** 5.25588 - low_pa
    vapour = 611.2 * math.exp(17.62 * celsius / (243.12 + celsius))
    return (air - vapour) / (999.8 * 9.80665) - reserve_m


def test_one_flat_lake_inside_the_dem_holds_the_intake(ground, vennaquil):
    water, _ = ndimage.label(ground == vennaquil.site.water.present_level_m)
    lake = water == water[cell(vennaquil.setting.intake.x, vennaquil.setting.intake.y)]
    assert ground[lake][0] == 3604.0
    assert 25.0 * lake.sum() > 500_000.0
    assert not any(edge.any() for edge in (lake[0], lake[-1], lake[:, 0], lake[:, -1]))


@pytest.mark.parametrize("name", LOW_PLACES)
def test_the_low_places_are_as_low_as_the_site_file_says(ground, vennaquil, name):
    """Cells joined over one place alone: the slide mass is walled off everywhere else."""
    south, level = LOW_PLACES[name]
    walled = ground.copy()
    rows = np.abs((np.arange(ground.shape[0]) + 0.5) * 5.0 - south) > 60.0
    walled[np.ix_(rows, np.arange(180, 196))] += 100.0
    ends = [cell(end.x, end.y) for end in (vennaquil.setting.intake, vennaquil.setting.outlet)]

    def joined(top):
        pools = ndimage.label(walled <= top + 1e-6, np.ones((3, 3)))[0]
        return pools[ends[0]] == pools[ends[1]] != 0

    assert not joined(level - 0.2)
    assert joined(level + 0.1)
    assert f"#   {level:.1f} m" in (VENNAQUIL / "site.toml").read_text(encoding="utf-8")


def test_the_air_follows_from_the_levels_of_the_dem(vennaquil):
    assert vennaquil.terrain.facts.vertical_datum == "EGM96 height"
    assert vennaquil.setting.altitude_m == pytest.approx(3604.0)
    limits = vennaquil.setting.limits
    still = (limits.air_pressure_pa - vennaquil.setting.water.vapour_pressure_pa) / (999.8 * 9.80665) - 2.5
    assert still == pytest.approx(still_lift_m(3604.0, 1500.0, 8.0, 2.5), abs=0.01)


def test_the_near_place_is_too_high_at_the_lowest_level_only(vennaquil):
    """By hand, for the thinnest pipe, in still water: what remains is what a flow may lose."""
    crown = min(pipe.outside_diameter_m - pipe.wall_m for pipe in vennaquil.site.pipes)
    still = still_lift_m(3604.0, 1500.0, 8.0, 2.5)
    for name, (_, level) in LOW_PLACES.items():
        to_spare = still - (level + crown - vennaquil.site.water.lowest_level_m)
        assert (to_spare > 0.8) is (name != "near"), name
    assert still - (LOW_PLACES["near"][1] + crown - 3604.0) > 0.5


def test_straight_from_end_to_end_no_siphon_runs(vennaquil):
    setting = vennaquil.setting
    line = ground_along(vennaquil.terrain, [setting.intake.x, setting.outlet.x], [setting.intake.y, setting.outlet.y])
    assert line.ground_m.max() - setting.lowest.water_m > 10.0
    rest = (setting.lowest, setting.losses, setting.water, setting.limits)
    for pipe in vennaquil.site.pipes:
        crown = line.ground_m + pipe.outside_diameter_m - pipe.wall_m
        run = run_siphon(pipe, Profile(line.chainage_m, crown), *rest)
        assert run.discharge_m3s == 0.0
        assert run.governs == SUCTION
        assert run.reserve_left_m < -5.0
        # It would, if only the ground were low: the fall is no hindrance.
        flat = run_siphon(pipe, Profile(line.chainage_m, np.minimum(crown, setting.lowest.water_m)), *rest)
        assert flat.discharge_m3s > 0.05


def test_the_planned_route_goes_round_and_keeps_the_limit(vennaquil):
    best = vennaquil.schemes[0]
    setting = vennaquil.setting
    assert vennaquil.feasible
    assert best.verdict.grade == "caution"
    assert best.verdict.grade_of_made != "unfit"
    straight = math.hypot(setting.outlet.x - setting.intake.x, setting.outlet.y - setting.intake.y)
    assert best.route.length_m > 1.3 * straight
    assert place_of(best.route) == "south"
    assert best.appraisal.governs == SUCTION
    assert best.appraisal.reserve_left_m >= 0.0
    least = setting.water.vapour_pressure_pa + 2.5 * setting.water.density_kgm3 * setting.limits.gravity_ms2
    assert best.appraisal.crown_pressure_pa.min() >= least - 1.0
    # The same again, apart from planning: the long section anew, and the siphon on it at the lowest level.
    line = ground_along(vennaquil.terrain, *best.route.line.xy)
    crown = line.ground_m + best.pipe.outside_diameter_m - best.pipe.wall_m
    rest = (setting.lowest, setting.losses, setting.water, setting.limits)
    run = run_siphon(best.pipe, Profile(line.chainage_m, crown), *rest)
    assert run.discharge_m3s == pytest.approx(best.appraisal.discharge_m3s, rel=1e-3)
    assert best.count * run.discharge_m3s >= vennaquil.site.demand.discharge_m3s


def test_there_is_something_to_decide(vennaquil):
    """Several pipes side by side, some walls too thin, some bores too small."""
    working = [scheme for scheme in vennaquil.schemes if scheme.verdict.grade != "unfit"]
    assert all(2 <= scheme.count <= 6 for scheme in working)
    assert len({scheme.pipe.name for scheme in working}) >= 3
    assert any(scheme.pipe.material == "steel" for scheme in working)
    thin = [scheme for scheme in vennaquil.schemes if "SDR 26" in scheme.pipe.name]
    assert {scheme.pipe.name for scheme in thin} == {"PE100 315 SDR 26", "PE100 400 SDR 26"}
    assert {scheme.verdict.governing.name for scheme in thin} == {"collapse"}
    assert vennaquil.shortfalls[0].pipe == "PE100 250 SDR 17"


def test_the_reserve_of_the_best_scheme_is_told_as_it_is(vennaquil):
    best = vennaquil.schemes[0]
    reserve = {check.name: check for check in best.verdict.checks}["suction"]
    assert reserve.figure - reserve.limit == pytest.approx(best.appraisal.reserve_left_m, abs=1e-6)
    assert (reserve.grade == "fit") is (best.appraisal.reserve_left_m >= 0.5)


def variant(level):
    """What the README tells to try."""
    assert f"`lowest_level_m = {level}`" in README
    return {"lowest_level_m": level}


def test_lowered_much_further_there_is_no_route(plan_with):
    plan = plan_with(**variant(3600.5))
    assert not plan.feasible
    assert {scheme.verdict.grade for scheme in plan.schemes} == {"unfit"}
    causes = {shortfall.cause for shortfall in plan.shortfalls}
    assert causes == {SUCTION}
    assert 0.2 < min(shortfall.raise_m for shortfall in plan.shortfalls) < 2.0


def test_lowered_a_little_further_only_the_lowest_place_is_left(plan_with, vennaquil):
    plan = plan_with(**variant(3601.5))
    working = [scheme for scheme in plan.schemes if scheme.verdict.grade != "unfit"]
    assert {place_of(scheme.route) for scheme in working} == {"north"}
    assert working[0].count > vennaquil.schemes[0].count
    assert working[0].route.length_m > 1.5 * vennaquil.schemes[0].route.length_m


def test_with_high_water_the_near_place_will_do(plan_with, vennaquil):
    plan = plan_with(**variant(3603.9))
    near = [s for s in plan.schemes if s.verdict.grade != "unfit" and place_of(s.route) == "near"]
    assert near
    assert near[0].route.length_m < 0.85 * vennaquil.schemes[0].route.length_m


def test_with_the_air_of_the_sea_the_near_place_will_do(plan_with):
    """Nothing but the air keeps the pipes from the near place."""
    assert "`pressure_pa = 101325.0`" in README
    plan = plan_with(barometric_low_pa="1500.0\npressure_pa = 101325.0")
    assert plan.feasible
    assert place_of(plan.schemes[0].route) == "near"


def test_the_three_places_that_will_do_are_three_crossings(vennaquil):
    """In the order of their lengths; the near one is none at the lowest level."""
    used = [crossing for crossing in vennaquil.crossings if crossing.used]
    for crossing, name in zip(used, ("south", "middle", "north"), strict=True):
        south, level = LOW_PLACES[name]
        assert 8_450_000.0 - crossing.y == pytest.approx(south, abs=40.0)
        assert crossing.level_m == pytest.approx(level, abs=0.25)
    assert [crossing.length_m for crossing in used] == sorted(crossing.length_m for crossing in used)
    working = [scheme for scheme in vennaquil.schemes if scheme.verdict.grade != "unfit"]
    assert {scheme.route.crossing for scheme in working} == {crossing.name for crossing in used}
    assert {place_of(scheme.route) for scheme in working} == {"south", "middle", "north"}
