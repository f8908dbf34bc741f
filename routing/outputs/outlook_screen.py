"""What the terminal shows of a site before anything is planned."""

from __future__ import annotations

from rich.console import Group, RenderableType
from rich.text import Text

from routing.outputs.field import map_decimals
from routing.outputs.pieces import bullets, heading, pairs
from routing.outputs.wording import figures, fixed, still_water_lift_m
from routing.records import Outlook, Saddle

_SURFACES = {"ground": "bare ground", "canopy": "canopy: trees and roofs are in it", "unknown": "not said"}
_SHOWN = {"surface": "its flat surface", "bed": "its bed"}


def outlook_summary(outlook: Outlook) -> RenderableType:
    """Return what was understood of a site, every assumption included, made to fit 100 columns.

    Parameters
    ----------
    outlook
        What was understood.

    Returns
    -------
    rich renderable
        Print it with ``rich.console.Console.print``.
    """
    parts: list[RenderableType] = [heading(outlook.site.title)] if outlook.site.title else []
    for title, rows in (
        ("Elevation model", _terrain_rows(outlook)),
        ("Water", _water_rows(outlook)),
        ("Barrier", _barrier_rows(outlook)),
    ):
        parts += [heading(title), pairs(rows), ""]
    if outlook.warnings:
        parts += [heading("Warnings"), bullets(outlook.warnings), ""]
    parts.append(heading("Assumptions"))
    parts.append(bullets(outlook.assumptions) if outlook.assumptions else Text("none"))
    return Group(*parts)


def _terrain_rows(outlook: Outlook) -> list[tuple[str, str]]:
    terrain, facts = outlook.terrain, outlook.terrain.facts
    window = terrain.window
    read = "all of it" if window.whole else f"{window.cols:,} x {window.rows:,} of them"
    low, high = outlook.elevation_range_m
    # The middle row stands for the window: ground steps change little from row to row.
    middle = len(terrain.step_x_m) // 2
    step_x, step_y = float(terrain.step_x_m[middle]), float(terrain.step_y_m[middle])
    error = "not said" if facts.vertical_error_m is None else f"{fixed(facts.vertical_error_m, 2)} m (90 %)"
    shift = f", {facts.datum_offset_m:+.3f} m added" if facts.datum_offset_m else ""
    return [
        ("file", f"{facts.file} ({facts.driver}, {facts.dtype})"),
        ("size", f"{facts.cols:,} x {facts.rows:,} cells; read: {read}"),
        ("cell on the ground", f"{figures(step_x)} x {figures(step_y)} m"),
        ("map CRS", f"{facts.crs_name} (unit: {facts.horizontal_unit})"),
        ("heights", f"unit: {facts.vertical_unit} ({facts.vertical_unit_source})"),
        ("datum", f"{facts.vertical_datum or 'not said'}{shift}"),
        ("vertical error", error),
        ("surface", _SURFACES[facts.surface]),
        ("without data", f"{figures(100.0 * outlook.nodata_share, 2)} % of the cells read"),
        ("elevations", f"{fixed(low, 2)} to {fixed(high, 2)} m"),
    ]


def _water_rows(outlook: Outlook) -> list[tuple[str, str]]:
    body, setting = outlook.water_body, outlook.setting
    flat = outlook.flat_water_level_m
    spill = (
        "not known: the water reaches the end of the ground read" if body.spill is None else _place(outlook, body.spill)
    )
    area = f"{figures(body.area_m2)} m2" if body.area_m2 < 1e5 else f"{figures(body.area_m2 / 1e4)} ha"
    cut = ", a part only: the DEM ends in the water" if body.touches_edge else ""
    if body.touches_open_border:
        cut += ", a part only: the window read ends in the water"
    voids = f"; {body.void_cells:,} enclosed cells without data counted as water" if body.void_cells else ""
    source = (
        "given as a polygon" if body.source == "polygon" else f"flooded from the intake at {fixed(body.level_m, 2)} m"
    )
    where = "" if outlook.site.outlet.kind == "point" else " at the place that the lowest crest leads to"
    fall = fixed(setting.lowest.fall_m, 2)
    return [
        ("the DEM shows", _SHOWN[outlook.terrain.facts.water_shown]),
        ("flat water found", "none at the intake" if flat is None else f"at {fixed(flat, 2)} m"),
        ("present level", f"{fixed(setting.present.water_m, 2)} m"),
        ("lowest level", f"{fixed(setting.lowest.water_m, 2)} m"),
        ("outlet level", f"{fixed(setting.lowest.receiving_m, 2)} m{where}, fall {fall} m at the lowest level"),
        ("water body", f"{area}{cut}; {source}{voids}"),
        ("spills at", spill),
    ]


def _barrier_rows(outlook: Outlook) -> list[tuple[str, str]]:
    crest, setting = outlook.lowest_crest, outlook.setting
    allowed = still_water_lift_m(setting)
    air = fixed(setting.limits.air_pressure_pa / 1e3, 1)
    if setting.limits.highest_lift_m is not None and allowed >= setting.limits.highest_lift_m:
        why = "the highest lift set in the site file"
    else:
        why = f"air {air} kPa ({setting.air_pressure_source}), reserve {fixed(setting.limits.reserve_m, 2)} m"
    rows = [("lift allowed", f"{fixed(allowed, 2)} m in still water, less when it flows: {why}")]
    if crest is None:
        return [("lowest crest", "none: no ground with data joins water and outlet"), *rows]
    lift = crest.level_m - setting.lowest.water_m
    left = allowed - lift
    finding = f"{fixed(left, 2)} m to spare" if left >= 0.0 else f"{fixed(-left, 2)} m too high"
    return [
        ("lowest crest", _place(outlook, crest)),
        ("lift there", f"{fixed(lift, 2)} m from the lowest level to the ground; the pipe's own height comes on top"),
        *rows,
        ("so", f"{finding}, before losses and the pipe's own height"),
    ]


def _place(outlook: Outlook, saddle: Saddle) -> str:
    places = map_decimals(outlook)
    # Whole map units are enough to find a saddle; degrees need five places for a metre.
    shown = 0 if places < 5 else 5
    proof = "" if saddle.proven else "; a lower way outside the ground read is not ruled out"
    return f"{fixed(saddle.level_m, 2)} m at x {saddle.x:.{shown}f}, y {saddle.y:.{shown}f}{proof}"
