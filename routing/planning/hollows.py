"""Whether the outlet lies in a closed hollow, which would fill up and drown it."""

from __future__ import annotations

import numpy as np

from routing.planning.edges import outer_edge
from routing.planning.scenes import Scene
from routing.records import Cell, Setting
from routing.search import lowest_crest
from routing.terrain import water_cells

# Shallower hollows are within the noise of a DEM.
_LEAST_DEPTH_M = 0.25


def _rounded(volume_m3: float) -> str:
    """Three figures are more than a DEM knows."""
    return f"{float(f'{volume_m3:.2e}'):,.0f}"


def hollow_note(scene: Scene, setting: Setting) -> tuple[str, ...]:
    """Say how a hollow round the outlet fills, or return nothing where the ground drains on.

    Water drains on where it can reach the border of the window, or the edge of the ground that holds data, by ground
    that rises at most a little above the outlet.
    """
    grid = scene.grid
    goal = outer_edge(scene.terrain)
    goal[[0, -1], :] = goal[:, [0, -1]] = True
    outlet = np.zeros(grid.shape, dtype=np.bool_)
    outlet[scene.outlet_cell] = True
    ground = float(grid.level[scene.outlet_cell])
    way_out = lowest_crest(grid, outlet, goal)
    level = setting.lowest.water_m if way_out is None else min(way_out.level_m, setting.lowest.water_m)
    if level - max(ground, setting.lowest.outlet_m) < _LEAST_DEPTH_M:
        return ()
    filled = water_cells(scene.terrain, Cell(*scene.outlet_cell), level) & scene.terrain.valid
    area = np.outer(scene.terrain.step_x_m * scene.terrain.step_y_m, np.ones(grid.shape[1]))
    volume = float(np.sum(np.where(filled, (level - scene.terrain.elevation_m) * area, 0.0)))
    return (
        (
            f"The outlet lies in a closed hollow: it holds about {_rounded(volume)} m3 up to {level:.2f} m, and as it "
            "fills the water rises over the outlet and the fall shrinks. If more than that is to be let out, set "
            "outlet.tailwater_level_m or move the outlet to ground that drains."
        ),
    )
