"""Plans to draw, made by hand; all invented."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.text import Text
from shapely import box

from routing.outputs.pictures.page import draw_page
from routing.outputs.pictures.style import our_settings
from routing.records import Crossing, Zone

LONG = "a name so long that nobody would ever fit it into a table, a legend or the title of a drawing, " * 3


def with_everything(plan, place):
    """Add a barred zone, a zone with a hole that costs more, three crossings, tailwater, and the lowest water."""

    def rectangle(west, south, east, north):
        return box(*place.at(west, north), *place.at(east, south))

    zones = (
        Zone(f"quarry, {LONG}", "barred", 1.0, rectangle(180.0, 100.0, 240.0, 140.0)),
        Zone("bog", "cost", 2.5, rectangle(250.0, 60.0, 330.0, 200.0) - rectangle(270.0, 100.0, 290.0, 120.0)),
        Zone("elsewhere", "barred", 1.0, rectangle(9000.0, 60.0, 9100.0, 200.0)),
    )
    crossings = tuple(
        Crossing(f"C{k + 1}", *place.at(155.0, 150.0 - 45.0 * k), 103.2 + 0.1 * k, 290.0, 3.3, k < 2, "invented")
        for k in range(3)
    )
    over = {"R1": "C1", "R2": "C2"}
    schemes = tuple(
        replace(scheme, route=replace(scheme.route, crossing=over[scheme.route.name])) for scheme in plan.schemes
    )
    left = plan.water_body.shoreline.intersection(rectangle(0.0, 0.0, 55.0, 300.0))
    lowest = replace(plan.water_body, level_m=100.0, shoreline=left)
    setting = replace(plan.setting, lowest=replace(plan.setting.lowest, tailwater_m=93.1))
    return replace(plan, zones=zones, crossings=crossings, schemes=schemes, lowest_water=lowest, setting=setting)


def with_long_names(plan):
    facts = replace(plan.terrain.facts, crs_name=LONG, vertical_datum=LONG, horizontal_unit="US survey foot")
    return replace(
        plan,
        site=replace(plan.site, title=f"$x^2$ {LONG}"),
        terrain=replace(plan.terrain, facts=facts),
        schemes=tuple(
            replace(s, pipe=replace(s.pipe, name=LONG), verdict=replace(s.verdict, reason=LONG * 3))
            for s in plan.schemes
        ),
    )


def with_many_routes(make, plan):
    place = make.place()
    schemes = []
    for k in range(9):
        route = make.route(f"R{k + 1}", place, 12.0 * k - 40.0)
        schemes.append(make.scheme(k + 1, route, plan.site.pipes[0], 1))
    return replace(plan, schemes=tuple(schemes))


def with_a_steep_route(plan):
    """Levels forty times as far apart, so that the section must not be drawn flatter than it is."""
    scheme = plan.schemes[0]
    route = scheme.route
    ground = 92.0 + 40.0 * (route.ground_m - 92.0)
    crown = ground + 0.3
    appraisal = replace(scheme.appraisal, profile_crown_m=crown)
    steep = replace(scheme, route=replace(route, ground_m=ground), appraisal=appraisal)
    return replace(plan, schemes=(steep,))


def with_a_tiny_dem(plan):
    terrain = plan.terrain
    rows, cols = slice(29, 31), slice(8, 66)
    a, b, c, d, e, f = terrain.transform
    small = replace(
        terrain,
        elevation_m=terrain.elevation_m[rows, cols],
        valid=terrain.valid[rows, cols],
        step_x_m=terrain.step_x_m[rows],
        step_y_m=terrain.step_y_m[rows],
        transform=(a, b, c + a * cols.start, d, e, f + e * rows.start),
    )
    body = replace(plan.water_body, cells=plan.water_body.cells[rows, cols])
    return replace(plan, terrain=small, water_body=body)


def without_height(plan):
    """All ground at one level, so that there is no contour and nothing to shade."""
    terrain = replace(plan.terrain, elevation_m=np.full(plan.terrain.shape, 103.0))
    return replace(plan, terrain=terrain)


MADE = {
    "plain": lambda make: make.plan(),
    "one scheme": lambda make: replace(make.plan(), schemes=make.plan().schemes[:1]),
    "everything": lambda make: with_everything(make.plan(), make.place()),
    "degrees": lambda make: make.plan(make.degrees()),
    "feet": lambda make: make.plan(make.feet()),
    "long names": lambda make: with_long_names(make.plan()),
    "many routes": lambda make: with_many_routes(make, make.plan()),
    "unfit": lambda make: make.no_route(),
    "no scheme": lambda make: replace(make.no_route(), schemes=()),
    "nothing said": lambda make: replace(make.no_route(), schemes=(), shortfalls=()),
    "steep": lambda make: with_a_steep_route(make.plan()),
    "tiny": lambda make: with_a_tiny_dem(make.plan()),
    "level": lambda make: without_height(make.plan()),
    "void": lambda make: replace(make.plan(), terrain=_voided(make.plan().terrain)),
}


def _voided(terrain):
    valid = terrain.valid.copy()
    valid[10:40, 30:50] = False
    return replace(terrain, valid=valid, elevation_m=np.where(valid, terrain.elevation_m, -9999.0))


@pytest.fixture(params=MADE)
def made(request, make):
    """Return each plan in turn, with its name."""
    return request.param, MADE[request.param](make)


@pytest.fixture
def everything(make):
    return MADE["everything"](make)


@pytest.fixture
def drawn():
    """Draw a subject; return the figure and its renderer."""

    def draw(subject):
        with our_settings():
            figure = draw_page(subject)
            renderer = figure.canvas.get_renderer() if hasattr(figure.canvas, "get_renderer") else None
            renderer = renderer or FigureCanvasAgg(figure).get_renderer()
            figure.draw(renderer)
        return figure, renderer

    return draw


@pytest.fixture
def texts():
    """Return every text of a figure that is seen, with its box in pixels."""

    def find(figure, renderer):
        seen = [text for text in figure.findobj(Text) if text.get_visible() and text.get_text().strip()]
        return [(text.get_text(), Text.get_window_extent(text, renderer)) for text in seen]

    return find
