"""Where the ground of a window ends for good: at the DEM's own edge, or at nodata that reaches it.

DEMs are often cut to a map sheet, a catchment or a flight strip, with nodata all round: water runs off there as it
does at the edge of the file.
"""

from __future__ import annotations

import numpy as np

from routing.records import BoolArray, Terrain

_EIGHT = np.ones((3, 3), dtype=np.bool_)


def outer_edge(terrain: Terrain) -> BoolArray:
    """Return the cells with ground that lie at the DEM's edge, or beside nodata that runs to it.

    Nodata that runs to a border of the window beyond which the DEM goes on counts too: what lies there is not known
    to hold water back.
    """
    from scipy import ndimage  # noqa: PLC0415 - slow to import

    north, south, west, east = terrain.window.open_sides
    mask = np.zeros(terrain.shape, dtype=np.bool_)
    mask[0, :] |= not north
    mask[-1, :] |= not south
    mask[:, 0] |= not west
    mask[:, -1] |= not east
    void = ~terrain.valid
    if void.any():
        names, count = ndimage.label(void, structure=_EIGHT)
        outer = np.zeros(count + 1, dtype=np.bool_)
        for line in (names[0], names[-1], names[:, 0], names[:, -1]):
            outer[line] = True
        outer[0] = False
        mask |= ndimage.binary_dilation(outer[names], structure=_EIGHT)
    edge: BoolArray = mask & terrain.valid
    return edge


def gap_runs_out(terrain: Terrain, cell: tuple[int, int]) -> bool:
    """Return whether a cell lies in nodata that runs to a border of the window beyond which the DEM goes on."""
    from scipy import ndimage  # noqa: PLC0415 - slow to import

    if terrain.valid[cell]:
        return False
    names, _ = ndimage.label(~terrain.valid, structure=_EIGHT)
    return bool(np.any((names == names[cell]) & terrain.window.open_border()))
