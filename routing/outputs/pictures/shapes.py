"""Shapely areas as paths to draw, cut to the frame and simplified to what the page can show."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
from matplotlib.patches import PathPatch
from matplotlib.path import Path

from routing.outputs.pictures.framing import Frame
from routing.records import FloatArray

if TYPE_CHECKING:
    from shapely import LineString, MultiPolygon, Polygon

#: Dots across the map; what is smaller than half of one is not drawn.
_DOTS = 1600.0


def area_patch(shape: Polygon | MultiPolygon, frame: Frame, **look: Any) -> PathPatch | None:
    """Return an area as a patch, holes left open; ``None`` where none of it lies in the frame."""
    from shapely import clip_by_rect  # noqa: PLC0415 - kept off the way of `import routing.outputs`

    edge_x, edge_y = 0.05 * (frame.east - frame.west), 0.05 * (frame.north - frame.south)
    part = clip_by_rect(shape, frame.west - edge_x, frame.south - edge_y, frame.east + edge_x, frame.north + edge_y)
    part = part.simplify(_tolerance(frame))
    rings: list[FloatArray] = []
    for piece in getattr(part, "geoms", [part]):
        if piece.geom_type == "Polygon" and not piece.is_empty:
            rings += [np.asarray(ring.coords, dtype=float)[:, :2] for ring in (piece.exterior, *piece.interiors)]
    if not rings:
        return None
    codes = [[Path.MOVETO, *[Path.LINETO] * (len(ring) - 2), Path.CLOSEPOLY] for ring in rings]
    return PathPatch(Path(np.concatenate(rings), np.concatenate(codes)), **look)


def line_points(line: LineString, frame: Frame) -> tuple[FloatArray, FloatArray]:
    """Return the points of a line, without those that make no difference on the page."""
    points = np.asarray(line.simplify(_tolerance(frame)).coords, dtype=float)
    return points[:, 0], points[:, 1]


def _tolerance(frame: Frame) -> float:
    return 0.5 * min(frame.east - frame.west, frame.north - frame.south) / _DOTS
