"""Ends left open, once a scheme is the best: which were chosen, and what the second best would carry and cost."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from routing.planning.benches import Bench
from routing.planning.candidates import Candidate, offer_of
from routing.planning.open_ends import CellLike, place_text
from routing.planning.placing import centre_of
from routing.planning.scenes import Scene
from routing.records import BoolArray, Route, Scheme, Setting

#: A second best end is another place if it lies this share of the route's length away, and this many cells.
APART_SHARE = 0.1
APART_CELLS = 5

#: Turns candidates into ranked schemes.
Ranker = Callable[[Sequence[Candidate]], tuple[Scheme, ...]]


def settled(bench: Bench, route: Route) -> Setting:
    """Return the setting with the ends of a route in place of ends left open."""
    scene, setting = bench.scene, bench.setting
    if scene.intakes is None and scene.outlets is None:
        return setting
    conditions = bench.conditions_at(route.cells)
    first, last = _ends_of(route)
    dem, terrain = scene.dem, scene.terrain
    return replace(
        setting,
        intake=setting.intake if scene.intakes is None else centre_of(dem, terrain, first),
        outlet=setting.outlet if scene.outlets is None else centre_of(dem, terrain, last),
        intake_cell=first,
        outlet_cell=last,
        present=conditions.present,
        lowest=conditions.lowest,
    )


def _ends_of(route: Route) -> tuple[CellLike, CellLike]:
    (first_row, first_col), (last_row, last_col) = route.cells[0], route.cells[-1]
    return (int(first_row), int(first_col)), (int(last_row), int(last_col))


def choice_notes(bench: Bench, best: Scheme, ranked: Ranker) -> tuple[str, ...]:
    """Say which ends were chosen out of how many, and what the second best would carry and cost.

    The second best of an end is found by searching again, with the same pipe, without the places near the first.

    Parameters
    ----------
    bench
        The job.
    best
        The best scheme.
    ranked
        Turns candidates into ranked schemes.
    """
    scene, notes = bench.scene, []
    first, last = _ends_of(best.route)
    if scene.intakes is not None:
        left = scene.intakes.cells[_far(bench, scene.intakes.cells, first, best)]
        second = None
        if len(left):
            second = _second(bench, best, ranked, replace(scene, intakes=replace(scene.intakes, cells=left)))
        notes.append(_note(bench, "Intake", (len(scene.intakes.cells), first), best, second))
    if scene.outlets is not None:
        kept = _far(bench, scene.outlets.cells, last, best)
        second = None
        if kept.any():
            outlets = replace(scene.outlets, cells=scene.outlets.cells[kept], axis_m=scene.outlets.axis_m[kept])
            second = _second(bench, best, ranked, replace(scene, outlets=outlets))
        notes.append(_note(bench, "Outlet", (len(scene.outlets.cells), last), best, second))
    return tuple(notes)


def _apart_m(bench: Bench, best: Scheme) -> float:
    terrain = bench.scene.terrain
    step = max(float(terrain.step_x_m.max()), float(terrain.step_y_m.max()))
    return max(APART_SHARE * best.route.length_m, APART_CELLS * step)


def _far(bench: Bench, cells: NDArray[np.intp], first: CellLike, best: Scheme) -> BoolArray:
    """Return which places lie far enough from the first to be others."""
    terrain = bench.scene.terrain
    down = (cells[:, 0] - first[0]) * terrain.step_y_m[first[0]]
    across = (cells[:, 1] - first[1]) * terrain.step_x_m[first[0]]
    far: BoolArray = np.hypot(down, across) >= _apart_m(bench, best)
    return far


def _second(bench: Bench, best: Scheme, ranked: Ranker, scene: Scene) -> Scheme | None:
    """Return the best scheme with the same pipe on other places; ``None`` where nothing works there."""
    offer = offer_of(replace(bench, scene=scene, names={}), best.pipe)
    schemes = ranked(offer.candidates) if offer.candidates and offer.shortfall is None else ()
    return schemes[0] if schemes else None


def _figures(scheme: Scheme) -> str:
    pipes = f"{scheme.count} x " if scheme.count > 1 else ""
    cost = f", {scheme.cost.total:,.0f} {scheme.cost.currency}".rstrip() if scheme.cost.lines else ""
    carried = f"carries {scheme.total_discharge_m3s * 1e3:.1f} l/s"
    grade = f"{scheme.verdict.grade_of_made} by the checks made"
    return f"{pipes}{scheme.pipe.name}, {scheme.route.length_m:.0f} m, {carried}{cost}, {grade}"


def _at(bench: Bench, what: str, route: Route) -> str:
    cell = _ends_of(route)[0 if what == "Intake" else 1]
    text = place_text(bench.scene.terrain, cell)
    return f"{text}, axis {route.outlet_m:.2f} m" if what == "Outlet" and route.outlet_m is not None else text


def _note(bench: Bench, what: str, chosen: tuple[int, CellLike], best: Scheme, second: Scheme | None) -> str:
    """Say one end's choice."""
    apart, count = _apart_m(bench, best), chosen[0]
    told = f"{what} chosen out of {count} {'cells' if count > 1 else 'cell'}: {_at(bench, what, best.route)}"
    told += f" ({_figures(best)})."
    if second is None:
        return f"{told} No other place {apart:.0f} m or more away gives a route that works with this pipe."
    return f"{told} Second best, {apart:.0f} m or more away: {_at(bench, what, second.route)} ({_figures(second)})."
