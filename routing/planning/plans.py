"""`plan` and `look`: site in, answer out. The one place that joins the rooms."""

from __future__ import annotations

from contextlib import ExitStack
from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np

from routing.planning.barriers import barrier_cells
from routing.planning.bars import with_bars_told
from routing.planning.benches import Bench
from routing.planning.candidates import Candidate, Offer, offer_of
from routing.planning.choices import choice_notes, settled
from routing.planning.extras import Extras, find_extras
from routing.planning.hollows import hollow_note
from routing.planning.lowest import water_at_lowest
from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Progress, Reporter, reporter
from routing.planning.scenes import Scene, grown_window, survey
from routing.planning.settings import resolve
from routing.planning.zoning import check_lines
from routing.records import FloatArray, Outlook, Plan, Scheme, Setting, Site, TerrainFacts
from routing.schemes import Matter, judge, price_scheme, rank
from routing.terrain import inspect, lengths_in_zones, open_dem


def inspect_dem(path: Path) -> TerrainFacts:
    """Return what a DEM says of itself, before there is a site file.

    Raises
    ------
    TerrainError
        If the file cannot be read as a DEM.
    """
    return inspect(path)


def _assumptions(site: Site, scene: Scene, setting: Setting) -> tuple[str, ...]:
    listed = (*site.assumptions, *scene.terrain.facts.assumptions, *setting.assumptions)
    return tuple(dict.fromkeys(listed))


def look(site: Site, progress: Progress | None = None) -> Outlook:
    """Say what is understood of a site before anything is planned.

    Parameters
    ----------
    site
        The checked site file.
    progress
        Called with stage and share; may raise to stop.

    Returns
    -------
    Outlook

    Raises
    ------
    SiteError
        If site file and DEM do not fit each other.
    TerrainError
        If the DEM cannot serve.
    """
    report = reporter(progress)
    with open_dem(site.terrain, site.lines, site.file) as dem:
        ends = place_ends(site, dem)
        scene = survey(site, dem, ends, first_window(site, dem, ends), report)
        setting = resolve(site, scene)
    terrain = scene.terrain
    levels = terrain.elevation_m[terrain.valid]
    return Outlook(
        site=site,
        terrain=terrain,
        water_body=scene.body,
        lowest_crest=scene.crest,
        setting=setting,
        nodata_share=1.0 - float(np.mean(terrain.valid)),
        elevation_range_m=(float(levels.min()), float(levels.max())),
        flat_water_level_m=None if scene.flat is None else scene.flat.level_m,
        assumptions=_assumptions(site, scene, setting),
        warnings=(*scene.warnings, *hollow_note(scene, setting)),
    )


@dataclass(frozen=True, slots=True)
class _Survey:
    scene: Scene
    setting: Setting
    offers: tuple[Offer, ...]
    names: dict[bytes, str]

    @property
    def proven(self) -> bool:
        outlets = self.scene.outlets
        more = outlets is not None and outlets.more_outside  # outlets not read may be lower than any that was
        return not more and all(offer.proven for offer in self.offers)


def _search(site: Site, scene: Scene, report: Reporter) -> _Survey:
    """Search one window for every pipe."""
    setting = resolve(site, scene)
    offers = []
    names: dict[bytes, str] = {}
    for number, pipe in enumerate(site.pipes, start=1):
        with ExitStack() as stack:
            name = f"routes for pipe {number} of {len(site.pipes)}"
            tick = stack.enter_context(report.stage(name, scene.terrain.elevation_m.size))
            bench = Bench(site, scene, setting, tick, names)
            offer = offer_of(bench, pipe)
            offers.append(replace(offer, shortfall=with_bars_told(bench, pipe, offer.shortfall)))
    return _Survey(scene, setting, tuple(offers), names)


def _surveyed(site: Site, report: Reporter) -> _Survey:
    """Search windows of growing size until every answer is proven for the whole DEM, or no more can be read."""
    with open_dem(site.terrain, site.lines, site.file) as dem:
        ends = place_ends(site, dem)
        window = first_window(site, dem, ends)
        while True:
            scene = survey(site, dem, ends, window, report)
            found = _search(site, scene, report)
            larger = None if found.proven else grown_window(site, dem, scene.terrain.window)
            if larger is None:
                return found
            window = larger


def _scheme(survey_: _Survey, bench: Bench, candidate: Candidate) -> Scheme:
    site, scene = bench.site, survey_.scene
    zones = () if scene.zones is None else lengths_in_zones(candidate.route, scene.zones.zones)
    cost = price_scheme(candidate.pipe, candidate.route.length_m, candidate.count, site.prices, zones)
    verdict = judge(
        Matter(
            pipe=candidate.pipe,
            count=candidate.count,
            appraisal=candidate.appraisal,
            cost=cost,
            conditions=bench.conditions_at(candidate.route.cells),
            required_m3s=site.demand.discharge_m3s,
            budget=site.demand.budget,
            vertical_error_m=scene.terrain.facts.vertical_error_m,
            surface=scene.terrain.facts.surface,
            barrier_cells=barrier_cells(scene, candidate.route),
        )
    )
    return Scheme(0, candidate.route, candidate.pipe, candidate.count, candidate.appraisal, cost, verdict)


def _ranked(survey_: _Survey, bench: Bench, candidates: tuple[Candidate, ...]) -> tuple[Scheme, ...]:
    asked = bench.site.demand.discharge_m3s is not None
    return rank([_scheme(survey_, bench, candidate) for candidate in candidates], asked=asked)


def _extras(
    survey_: _Survey, bench: Bench, candidates: tuple[Candidate, ...], report: Reporter
) -> tuple[Extras, tuple[Candidate, ...]]:
    """Look for other ways over, led by the best scheme so far."""
    if not candidates:
        return Extras((), (), "", ()), candidates
    best = _ranked(survey_, bench, candidates)[0]
    lead = next(
        one for one in candidates if one.pipe == best.pipe and one.count == best.count and one.route is best.route
    )
    with report.stage("other ways over", 6 * survey_.scene.terrain.elevation_m.size) as tick:
        return find_extras(replace(bench, tick=tick), lead, candidates, _cost_factor(survey_.scene))


def _cost_factor(scene: Scene) -> FloatArray | None:
    """Return what a metre costs in each cell, where zones make that differ."""
    if scene.zones is None or bool(np.all(scene.zones.cost_factor == 1.0)):
        return None
    return scene.zones.cost_factor


def _choices(survey_: _Survey, bench: Bench, schemes: tuple[Scheme, ...], report: Reporter) -> tuple[str, ...]:
    """Say how ends left open were chosen."""
    scene = survey_.scene
    if not schemes or (scene.intakes is None and scene.outlets is None):
        return ()
    with report.stage("second best ends", 4 * scene.terrain.elevation_m.size) as tick:
        return choice_notes(replace(bench, tick=tick), schemes[0], lambda found: _ranked(survey_, bench, tuple(found)))


def _proof_warnings(survey_: _Survey) -> tuple[str, ...]:
    if survey_.proven:
        return ()
    window = survey_.scene.terrain.window
    return (
        (
            f"The routes are proven only inside the {window.rows} x {window.cols} cells that were read; a better one "
            "might run outside. Raise search.largest_window_cells to look further."
        ),
    )


def plan(site: Site, progress: Progress | None = None) -> Plan:
    """Find, prove, appraise, price and rank the schemes of a site.

    Parameters
    ----------
    site
        The checked site file (`routing.load_site`).
    progress
        Called with stage and share; may raise to stop.

    Returns
    -------
    Plan
        With ranked schemes. Where no route is feasible, every scheme is ``unfit`` and ``shortfalls`` say what is
        missing.

    Raises
    ------
    SiteError
        If site file and DEM do not fit each other.
    TerrainError
        If the DEM cannot serve.
    """
    report = reporter(progress)
    survey_ = _surveyed(site, report)
    scene, setting = survey_.scene, survey_.setting
    bench = Bench(site, scene, setting, lambda _: None, survey_.names)
    candidates = tuple(candidate for offer in survey_.offers for candidate in offer.candidates)
    extras, candidates = _extras(survey_, bench, candidates, report)
    schemes = _ranked(survey_, bench, (*candidates, *extras.candidates))
    check_lines(scene.zones, (scheme.route for scheme in schemes))
    choices = _choices(survey_, bench, schemes, report)
    if schemes:
        setting = settled(bench, schemes[0].route)
        scene = replace(scene, intake_cell=setting.intake_cell, outlet_cell=setting.outlet_cell)
    return Plan(
        site=site,
        terrain=scene.terrain,
        water_body=scene.body,
        lowest_crest=scene.crest,
        setting=setting,
        schemes=schemes,
        shortfalls=tuple(offer.shortfall for offer in survey_.offers if offer.shortfall is not None),
        assumptions=_assumptions(site, scene, setting),
        warnings=(*scene.warnings, *hollow_note(scene, setting), *_proof_warnings(survey_)),
        timings_s=report.timings_s,
        zones=() if scene.zones is None else scene.zones.zones,
        crossings=extras.crossings,
        crossings_note=extras.crossings_note,
        samples=extras.samples,
        choice_notes=choices,
        lowest_water=water_at_lowest(site, scene, setting),
    )
