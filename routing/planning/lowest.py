"""The water at the lowest level, where the DEM shows the bed that it then lies on."""

from __future__ import annotations

from routing.planning.scenes import Scene
from routing.records import Cell, Setting, Site, WaterBody
from routing.terrain import dry_cell, water_body


def water_at_lowest(site: Site, scene: Scene, setting: Setting) -> WaterBody | None:
    """Return the water body at the lowest level, or ``None`` where the DEM does not show the ground under the water."""
    level = setting.lowest.water_m
    cell = Cell(*scene.intake_cell)
    if site.terrain.water_shown != "bed" or site.water.polygon_file is not None or level >= scene.body.level_m:
        return None
    if dry_cell(scene.terrain, cell, level):
        return None
    return water_body(scene.terrain, cell, level)
