"""Levels, air, water and limits of a job, resolved from the site file and the ground."""

from __future__ import annotations

import re
from dataclasses import dataclass

from routing.errors import InputError, Problem, SiteError
from routing.hydraulics import standard_pressure_pa, water_at
from routing.planning.intakes import deepest_bed_m
from routing.planning.scenes import Scene
from routing.planning.troubles import site_problem
from routing.records import Levels, Limits, Setting, Site

# Writers of GeoTIFF name a vertical datum "unknown" where they were told of none; DEMs on a works datum say "local".
_LOCAL_DATUM = re.compile(r"\b(local|assumed|arbitrary|invented|unknown|not stated)\b", re.IGNORECASE)


@dataclass(frozen=True, slots=True)
class _Air:
    pressure_pa: float
    altitude_m: float | None
    source: str
    notes: tuple[str, ...] = ()


def _altitude_of_datum(site: Site, scene: Scene) -> float | Problem:
    """Take the present level for the altitude, if the datum says that it is one."""
    datum = scene.terrain.facts.vertical_datum
    if _LOCAL_DATUM.search(datum):
        return site_problem(
            site,
            "air.altitude_m",
            "The altitude is not known: the levels count from a local or unknown datum.",
            found=f"vertical datum: {datum}",
            allowed="metres above the sea, to within some tens of metres",
            remedy="set air.altitude_m or air.pressure_pa (or terrain.vertical_datum, if levels are heights above sea)",
        )
    return scene.present_m


def _air(site: Site, scene: Scene) -> _Air | Problem:
    low = site.air.barometric_low_pa
    if site.air.pressure_pa is not None:
        return _Air(site.air.pressure_pa - low, None, f"air.pressure_pa less {low:g} Pa for a barometric low")
    altitude = site.air.altitude_m
    where = "air.altitude_m"
    if altitude is None:
        found = _altitude_of_datum(site, scene)
        if isinstance(found, Problem):
            return found
        altitude, where = found, "the present water level, taken as height above the sea"
    try:
        standard = standard_pressure_pa(altitude)
    except InputError as error:
        first = error.problems[0]
        return site_problem(
            site, "air.altitude_m", first.what, found=first.found, allowed=first.allowed, remedy=first.remedy
        )
    source = f"standard atmosphere at {altitude:.0f} m ({where}) less {low:g} Pa for a barometric low"
    return _Air(standard - low, altitude, source)


def _outlet_m(site: Site, scene: Scene) -> tuple[float, str]:
    ground = float(scene.terrain.elevation_m[scene.outlet_cell])
    if site.outlet.kind != "point":
        return _open_outlet_m(site, ground)
    if site.outlet.level_m is not None:
        return (
            site.outlet.level_m,
            f"The outlet's axis is at {site.outlet.level_m:g} m; the DEM there is {ground:.2f} m.",
        )
    level = ground + site.outlet.height_above_ground_m
    return level, f"The outlet's axis is at {level:.2f} m: {site.outlet.height_above_ground_m:g} m above the DEM there."


def _open_outlet_m(site: Site, ground_m: float) -> tuple[float, str]:
    """Return the level of the axis at one of the places for the outlet, and how it follows at each of them."""
    if site.outlet.level_m is not None:
        return site.outlet.level_m, f"The outlet's axis is at {site.outlet.level_m:g} m, wherever it lies."
    height = site.outlet.height_above_ground_m
    return ground_m + height, f"The outlet's axis is {height:g} m above the DEM, wherever it lies."


def _shore_mouth_m(site: Site) -> tuple[float | None, tuple[str, ...]]:
    """Return the level of the mouth where it is stated; without, it follows from the bed at the place chosen."""
    mouth = site.intake.mouth_level_m
    if site.intake.underwater_length_m is not None:
        return mouth, ()
    deepest = f"{deepest_bed_m(site):.2f} m"
    return mouth, (
        f"The pipe lies on the bed from its mouth to the shore; its mouth lies where the bed is at or below {deepest}.",
    )


def _mouth_m(site: Site, scene: Scene) -> tuple[float | None, tuple[str, ...]]:
    if site.intake.kind == "shore":
        return _shore_mouth_m(site)
    ground = float(scene.terrain.elevation_m[scene.intake_cell])
    if site.intake.mouth_level_m is not None:
        mouth = site.intake.mouth_level_m
        if site.terrain.water_shown == "bed" and mouth < ground:
            return mouth, (f"The intake mouth, at {mouth:g} m, lies below the bed that the DEM shows: {ground:.2f} m.",)
        return mouth, ()
    if site.terrain.water_shown == "bed":
        return ground, (f"The top of the intake mouth is taken to lie on the bed, at {ground:.2f} m.",)
    return None, ()


def _level_problems(site: Site, levels: Levels) -> list[Problem]:
    problems = []
    if levels.receiving_m >= levels.water_m:
        key = "outlet.level_m" if site.outlet.level_m is not None else "outlet.height_above_ground_m"
        if levels.receiving_m > levels.outlet_m:
            key = "outlet.tailwater_level_m"
        problems.append(
            site_problem(
                site,
                key,
                "The outlet is not below the lowest level of the water: nothing would flow.",
                found=f"{levels.receiving_m:.2f} m, lowest level {levels.water_m:.2f} m",
                allowed=f"below {levels.water_m:.2f} m",
                remedy="move the outlet to lower ground, or raise water.lowest_level_m",
            )
        )
    mouth, cover = levels.intake_mouth_m, site.limits.least_submergence_m
    if mouth is not None and mouth + cover > levels.water_m:
        problems.append(
            site_problem(
                site,
                "intake.mouth_level_m",
                "The intake falls dry (or draws air) before the lowest level is reached.",
                found=f"mouth at {mouth:.2f} m, least submergence {cover:g} m, lowest level {levels.water_m:.2f} m",
                allowed=f"a mouth at or below {levels.water_m - cover:.2f} m",
                remedy="put the intake deeper (move it, or set intake.mouth_level_m), or raise water.lowest_level_m",
            )
        )
    return problems


def _lowest_problem(site: Site, scene: Scene) -> list[Problem]:
    if site.water.lowest_level_m <= scene.present_m:
        return []
    return [
        site_problem(
            site,
            "water.lowest_level_m",
            "The lowest level is above the present one.",
            found=f"{site.water.lowest_level_m:g} m, present level {scene.present_m:.2f} m",
            allowed=f"at most {scene.present_m:.2f} m",
            remedy="set the level down to which the siphon must work",
        )
    ]


def _moved(scene: Scene) -> list[str]:
    """Say how far the ends that are points were moved to the centres of their cells."""
    terrain, notes = scene.terrain, []
    a, _, c, _, e, f = terrain.transform
    for what, point, (row, col) in (
        ("intake", scene.ends.intake, scene.intake_cell),
        ("outlet", scene.ends.outlet, scene.outlet_cell),
    ):
        if (scene.intakes if what == "intake" else scene.outlets) is not None:
            continue
        across = (point.x - (c + a * (col + 0.5))) / a * terrain.step_x_m[row]
        down = (point.y - (f + e * (row + 0.5))) / e * terrain.step_y_m[row]
        far = float((across**2 + down**2) ** 0.5)
        if far > 0.01:
            notes.append(f"The route's end at the {what} is the centre of its cell, {far:.2f} m from the point given.")
    return notes


def resolve(site: Site, scene: Scene) -> Setting:
    """Resolve what planning needs, and say every assumption.

    Raises
    ------
    SiteError
        If the levels allow no siphon, or the air pressure is not known; all problems at once.
    """
    air = _air(site, scene)
    outlet_m, outlet_note = _outlet_m(site, scene)
    mouth_m, mouth_notes = _mouth_m(site, scene)
    present = Levels(scene.present_m, outlet_m, site.outlet.tailwater_level_m, mouth_m)
    lowest = present.at_water(site.water.lowest_level_m)
    problems = [*_lowest_problem(site, scene), *_level_problems(site, lowest)]
    if isinstance(air, Problem):
        raise SiteError(*problems, air)
    if problems:
        raise SiteError(*problems)
    limits = Limits(
        air_pressure_pa=air.pressure_pa,
        reserve_m=site.limits.reserve_m,
        highest_lift_m=site.limits.highest_lift_m,
        least_submergence_m=site.limits.least_submergence_m,
        collapse_safety=site.limits.collapse_safety,
        gravity_ms2=site.limits.gravity_ms2,
    )
    notes = [f"Air pressure {air.pressure_pa / 1e3:.2f} kPa: {air.source}.", outlet_note, *mouth_notes, *_moved(scene)]
    if scene.intakes is not None:
        notes.append(f"Water may be taken at {len(scene.intakes.cells)} cells of the water.")
    if scene.outlets is not None:
        notes.append(scene.outlets.note)
    if site.water.present_level_m is None:
        notes.append(f"The present water level is {scene.present_m:.2f} m, read off the DEM.")
    return Setting(
        intake=scene.ends.intake,
        outlet=scene.ends.outlet,
        intake_cell=scene.intake_cell,
        outlet_cell=scene.outlet_cell,
        present=present,
        lowest=lowest,
        water=site.liquid or water_at(site.water.temperature_c),
        limits=limits,
        losses=site.losses,
        altitude_m=air.altitude_m,
        air_pressure_source=air.source,
        assumptions=tuple(notes),
    )
