"""Whole pages: nothing overlaps, nothing is cut off, everything has its unit."""

import importlib.util
from dataclasses import replace
from itertools import combinations
from pathlib import Path

import pytest
from matplotlib.legend import Legend
from matplotlib.transforms import Bbox
from pyproj import Geod

from routing.errors import OvercrestError
from routing.outputs.pictures.page import MAP_IN, draw_page
from routing.outputs.pictures.style import PAGE_IN, our_settings
from routing.outputs.pictures.subject import overview, single_routes

TESTS = Path(__file__).resolve().parents[2]
#: A pixel and a half: neighbouring ticks may touch, letters may not.
TOUCH_PX = 1.5
UNITS = (", m", ", degrees", ", US survey feet")


def overlapping(boxes):
    found = []
    for (one, a), (other, b) in combinations(boxes, 2):
        common = Bbox.intersection(a, b)
        if common is not None and min(common.width, common.height) > TOUCH_PX:
            found.append((one, other))
    return found


def check_page(figure, renderer, boxes):
    assert overlapping(boxes) == []
    page = figure.bbox
    outside = [
        name for name, box in boxes if not (box.x0 >= 0 and box.y0 >= 0 and box.x1 <= page.x1 and box.y1 <= page.y1)
    ]
    assert outside == []
    for axes in figure.axes:
        for label in (axes.get_xlabel(), axes.get_ylabel()):
            assert any(unit in label for unit in UNITS), label
    for axes in figure.axes:
        own = axes.get_window_extent(renderer)
        for legend in figure.findobj(Legend):
            common = Bbox.intersection(own, legend.get_window_extent(renderer))
            assert common is None or min(common.width, common.height) < TOUCH_PX, "a legend over a drawing"


def test_every_made_plan(made, drawn, texts):
    """No two texts overlap, none leaves the page, and both scales are what is said of them."""
    plan = made[1]
    subject = overview(plan)
    figure, renderer = drawn(subject)
    boxes = texts(figure, renderer)
    check_page(figure, renderer, boxes)
    check_map_scale(figure.axes[0], plan.terrain)
    check_exaggeration(figure, renderer, [text for text, _ in boxes if "exaggeration" in text])


def check_map_scale(axes, terrain):
    """One inch is as many metres across as up."""
    west, east = axes.get_xlim()
    south, north = axes.get_ylim()
    a, e = terrain.transform[0], terrain.transform[4]
    across = (east - west) / a * terrain.step_x_m[0] / MAP_IN[2]
    up = (north - south) / -e * terrain.step_y_m[0] / MAP_IN[3]
    assert across == pytest.approx(up, rel=1e-6)


def check_exaggeration(figure, renderer, said):
    if len(figure.axes) == 1:
        assert said == []
        return
    box = figure.axes[1].get_window_extent(renderer)
    low, high = figure.axes[1].get_ylim()
    left, right = figure.axes[1].get_xlim()
    times = (box.height / (high - low)) / (box.width / (right - left))
    stated = 1.0 if said == ["no vertical exaggeration"] else float(said[0].rpartition(" ")[2])
    assert times == pytest.approx(stated, rel=1e-6)
    assert stated >= 1.0


def test_every_single_route_too(everything, drawn, texts):
    for subject in single_routes(everything):
        figure, renderer = drawn(subject)
        boxes = texts(figure, renderer)
        check_page(figure, renderer, boxes)
        shown = " ".join(text for text, _ in boxes)
        other = "R2" if subject.name == "R1" else "R1"
        assert f"route {subject.name}" in shown
        assert f"{other}:" not in shown


def test_an_overlap_would_be_seen():
    boxes = [
        ("a", Bbox.from_extents(0, 0, 10, 10)),
        ("b", Bbox.from_extents(8, 8, 20, 20)),
        ("c", Bbox.from_extents(30, 0, 40, 9)),
    ]
    assert overlapping(boxes) == [("a", "b")]


def test_what_the_picture_must_say(everything, drawn, texts):
    figure, renderer = drawn(overview(everything))
    shown = "\n".join(text for text, _ in texts(figure, renderer))
    for part in (
        "Upper basin, blocked bottom outlet",
        "grid north",
        "true ground length",
        "Easting, m (WGS 84 / UTM zone 32N)",
        "Northing, m",
        "datum: EVRF2007",
        "intake",
        "outlet",
        "crest 103.40 m",
        "C1",
        "C2",
        "C3",
        "present water, 102.00 m",
        "lowest water, 100.00 m",
        "barred: ",
        "cost x 2.50: “bog”",
        "contours every ",
        "suction ceiling",
        "hydraulic grade line",
        "pipe crown",
        "tailwater 93.10 m",
        "reserve left 2.32 m",
        "crossing C1",
        "1 x PE 315 SDR 17",
        "Prices are invented",
        "licensed engineer",
    ):
        assert part in shown, part
    assert "elsewhere" not in shown  # a zone outside the frame


def test_a_plan_without_a_scheme_says_why(make, drawn, texts):
    figure, renderer = drawn(overview(replace(make.no_route(), schemes=())))
    shown = "\n".join(text for text, _ in texts(figure, renderer))
    assert "there is no route to draw" in shown
    assert "too high by 0.92 m" in shown
    assert len(figure.axes) == 1


def test_a_missing_reserve_is_called_missing(make, drawn, texts):
    figure, renderer = drawn(overview(make.no_route()))
    shown = "\n".join(text for text, _ in texts(figure, renderer))
    assert "0.80 m of reserve missing" in shown
    assert "still water" in shown


def test_records_that_do_not_fit_are_a_fault_of_ours(plan):
    scheme = plan.schemes[0]
    short = replace(scheme.appraisal, profile_crown_m=scheme.appraisal.profile_crown_m[:-1])
    with our_settings(), pytest.raises(OvercrestError, match="does not fit"):
        draw_page(overview(replace(plan, schemes=(replace(scheme, appraisal=short),))))


@pytest.fixture(scope="module")
def jobs():
    """The real jobs, as they are posed for planning."""
    spec = importlib.util.spec_from_file_location("jobs", TESTS / "planning" / "test_jobs.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


@pytest.mark.parametrize("name", ["R01c", "R04a", "R05b"])
def test_real_ground(jobs, name, tmp_path, drawn, texts):
    import routing

    plan = routing.plan(jobs.site_of(jobs.BY_ID[name], tmp_path))
    figure, renderer = drawn(overview(plan))
    check_page(figure, renderer, texts(figure, renderer))
    if name == "R04a":  # in degrees: the frame's lengths against those on the ellipsoid
        west, east = figure.axes[0].get_xlim()
        south, north = figure.axes[0].get_ylim()
        geod, middle = Geod(ellps="WGS84"), 0.5 * (south + north)
        width = geod.inv(west, middle, east, middle)[2] / MAP_IN[2]
        height = geod.inv(west, south, west, north)[2] / MAP_IN[3]
        assert width == pytest.approx(height, rel=2e-3)


def test_the_page_is_a4_across():
    assert PAGE_IN[0] / PAGE_IN[1] == pytest.approx(297 / 210, rel=1e-3)  # ISO 216
    assert PAGE_IN[0] * 25.4 == pytest.approx(297, abs=0.1)
