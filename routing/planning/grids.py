"""The ground of a window made ready for the search, with the user's zones on it."""

from __future__ import annotations

from routing.records import Site, Terrain, ZoneMap
from routing.search import Grid, move_list, moves_over_gaps, prepare_grid
from routing.terrain import zone_map


def lay_zones(site: Site, terrain: Terrain) -> ZoneMap | None:
    """Lay the zones of a site over a window; ``None`` where it has none.

    Raises
    ------
    TerrainError
        If a zone cannot be used.
    """
    if not site.zones:
        return None
    return zone_map(terrain, site.zones, move_list(site.search.neighbours), site.file)


def make_grid(site: Site, terrain: Terrain, zones: ZoneMap | None = None) -> Grid:
    """Make the ground ready for the search.

    Where only cells are looked at, moves over gaps in the data are blocked, so that long sections can be drawn. Zones
    are barred by their moves alone, those inside them included: to bar cells would also close moves that pass through
    the corner of a barred cell without meeting the zone.
    """
    ask = site.search
    blocked = None if zones is None or not zones.blocked_moves.any() else zones.blocked_moves
    if ask.ground_rule == "cells" and not terrain.valid.all():
        gaps = moves_over_gaps(terrain.valid, ask.neighbours)
        blocked = gaps if blocked is None else blocked | gaps
    return prepare_grid(
        terrain.elevation_m,
        terrain.step_x_m,
        terrain.step_y_m,
        valid=terrain.valid,
        blocked_moves=blocked,
        neighbours=ask.neighbours,
    )
