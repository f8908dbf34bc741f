"""Jobs on real lidar ground with bars laid across their best ways (origin of the ground: tests/data/README.md).

The bars are invented for the tests. Each is a strip right across the crest of the best route found without it, so that
the next route has to take another way.
"""

import json
from dataclasses import dataclass
from pathlib import Path

import geopandas
import numpy as np
import pytest
import shapely

import routing

DATA = Path(__file__).parent.parent / "data"
CASES = {case["id"]: case for case in json.loads((DATA / "cases.json").read_text(encoding="utf-8"))["cases"]}
CRS = "EPSG:26915"

SITE = """
[terrain]
file = "{dem}"
vertical_unit = "m"
surface = "ground"
water_shown = "bed"
vertical_error_90_m = 0.1
[air]
altitude_m = {water_level_m}
[water]
present_level_m = {water_level_m}
lowest_level_m = {water_level_m}
[intake]
x = {intake_xy[0]}
y = {intake_xy[1]}
[outlet]
x = {outlet_xy[0]}
y = {outlet_xy[1]}
[limits]
least_submergence_m = 0.0
[[pipes]]
table = "ISO 4427"
material = "PE100"
outside_diameter_mm = 315.0
sdr = 11.0
"""


@dataclass(frozen=True)
class Barred:
    """A job with 0, 1 and 2 bars: the plans, and the bars in the CRS of the DEM."""

    case: dict
    plans: tuple
    bars: tuple

    @property
    def best(self):
        return [plan.schemes[0] for plan in self.plans]


def strip_across(route, half_m, thick_m=4.0):
    """Return a strip right across a route at its crest."""
    at, samples = route.crest_index, len(route.x)
    before, after = max(at - 8, 0), min(at + 8, samples - 1)
    along = np.array([route.x[after] - route.x[before], route.y[after] - route.y[before]])
    aside = np.array([-along[1], along[0]]) / np.hypot(*along) * half_m
    crest = np.array([route.x[at], route.y[at]])
    return shapely.LineString([crest - aside, crest + aside]).buffer(thick_m / 2.0, cap_style="flat")


def plan_with_bars(case, bars, folder):
    """Plan a job with bars: the first as GeoJSON in lon/lat, the second as a GeoPackage in the CRS of the DEM."""
    folder.mkdir()
    text = SITE.format(**(case | {"dem": (DATA / case["dem"]).as_posix()}))
    for number, bar in enumerate(bars):
        layer = geopandas.GeoDataFrame({"name": ["bar"]}, geometry=[bar], crs=CRS)
        name = f"bar-{number}.geojson" if number == 0 else f"bar-{number}.gpkg"
        (layer.to_crs("EPSG:4326") if number == 0 else layer).to_file(folder / name)
        text += f'[[zones]]\nname = "bar {number}"\nfile = "{name}"\nkind = "barred"\n'
    file = folder / "site.toml"
    file.write_text(text, encoding="utf-8")
    return routing.plan(routing.load_site(file))


@pytest.fixture(scope="module", params=[("R01a", 30.0), ("R01c", 15.0)], ids=lambda param: param[0])
def barred(request, tmp_path_factory):
    """R01a: the fall governs. R01c: the suction governs, and the straight way is far too high from the beginning."""
    name, half_m = request.param
    folder = tmp_path_factory.mktemp(name)
    plans, bars = [], []
    for count in range(3):
        plans.append(plan_with_bars(CASES[name], bars, folder / str(count)))
        bars.append(strip_across(plans[-1].schemes[0].route, half_m))
    return Barred(CASES[name], tuple(plans), tuple(bars[:2]))


def inside(line, shape):
    """Whether any of a line lies in the interior of a shape (DE-9IM)."""
    return shapely.relate_pattern(shape, line, "T********")


def test_each_bar_would_be_hit_without_it(barred):
    for count, bar in enumerate(barred.bars):
        assert inside(barred.best[count].route.line, bar)


def test_every_route_stays_out_of_every_bar(barred):
    for count, plan in enumerate(barred.plans):
        for scheme in plan.schemes:
            for number, bar in enumerate(barred.bars[:count]):
                # A bar that came by lon/lat lies where its rounded corners are: a hundredth of a millimetre is left.
                shape = bar.buffer(-1e-5) if number == 0 else bar
                assert not inside(scheme.route.line, shape)
                assert scheme.route.line.distance(shapely.Point(bar.centroid)) > 2.0 - 1e-5


def test_the_plan_holds_the_bars_as_they_were_drawn(barred):
    for count, plan in enumerate(barred.plans):
        assert [zone.name for zone in plan.zones] == [f"bar {number}" for number in range(count)]
        for zone, bar in zip(plan.zones, barred.bars, strict=False):
            assert zone.kind == "barred"
            assert shapely.hausdorff_distance(zone.shape, bar) < 1e-3
            assert not any(inside(scheme.route.line, zone.shape) for scheme in plan.schemes)


def test_another_way_is_longer_and_still_works(barred):
    lengths = [scheme.route.length_m for scheme in barred.best]
    assert lengths[0] * 1.05 < lengths[1] <= lengths[2]
    for plan in barred.plans:
        best = plan.schemes[0]
        assert plan.feasible
        assert best.verdict.grade == "caution"
        assert best.appraisal.discharge_m3s > 0.0
        assert best.appraisal.reserve_left_m >= -1e-6
        assert best.route.proof.whole_dem
    assert len({scheme.route.line.wkt for scheme in barred.best}) == 3


def test_bars_never_give_a_better_route(barred):
    carried = [scheme.appraisal.discharge_m3s for scheme in barred.best]
    assert carried[0] >= carried[1] * (1 - 1e-3)
    assert carried[1] >= carried[2] * (1 - 1e-3)
    assert carried[2] < 0.95 * carried[0]


def test_no_crest_is_below_the_lowest_possible(barred):
    """The figure is from independent code, without bars: bars can only raise it."""
    least = barred.case["minimax_crest_bilinear_m"]
    for plan in barred.plans:
        assert all(scheme.route.crest_m >= least - 1e-6 for scheme in plan.schemes)
        assert plan.lowest_crest.level_m >= least - 0.05
