"""Room: terrain. The ground: opening a DEM, true lengths on it, sampling it, and the water body.

The only room besides ``site`` and ``outputs`` that opens files. It knows nothing of hydraulics.
"""

from routing.terrain.clipping import meets_interior
from routing.terrain.flats import FlatWater, flat_water, nearest_valid
from routing.terrain.frames import local_utm
from routing.terrain.placing import place_point
from routing.terrain.reading import Dem, inspect, open_dem
from routing.terrain.sampling import SampleState, cell_at, rowcol_of, sample, sample_rowcol, xy_of
from routing.terrain.sections import ground_along, long_section
from routing.terrain.shores import (
    cells_area_m2,
    level_slack_m,
    share_above_level,
    shoreline_of,
    water_body_from_polygon,
)
from routing.terrain.stretches import lengths_in_zones
from routing.terrain.vectors import LayerAsk, read_geometries
from routing.terrain.water import dry_cell, water_body, water_cells, with_voids_as_water
from routing.terrain.zones import barred_shapes, zone_map

__all__ = [
    "Dem",
    "FlatWater",
    "LayerAsk",
    "SampleState",
    "barred_shapes",
    "cell_at",
    "cells_area_m2",
    "dry_cell",
    "flat_water",
    "ground_along",
    "inspect",
    "lengths_in_zones",
    "level_slack_m",
    "local_utm",
    "long_section",
    "meets_interior",
    "nearest_valid",
    "open_dem",
    "place_point",
    "read_geometries",
    "rowcol_of",
    "sample",
    "sample_rowcol",
    "share_above_level",
    "shoreline_of",
    "water_body",
    "water_body_from_polygon",
    "water_cells",
    "with_voids_as_water",
    "xy_of",
    "zone_map",
]
