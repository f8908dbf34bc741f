"""Routes: polylines with their long sections and proofs, and the crossings they take."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from routing.records.ground import FloatArray

if TYPE_CHECKING:
    from shapely import LineString


@dataclass(frozen=True, slots=True)
class Proof:
    """How good a route is known to be.

    Attributes
    ----------
    graph_length_m
        Its length on the search graph.
    straight_m
        3-D straight distance between the ends: no route of any kind is shorter.
    free_ratio
        Largest ratio of shortest graph path to straight line on free ground, from the actual moves here.
    whole_dem
        Whether the answer is proven for the whole DEM, not only for the window.
    discharge_low_m3s, discharge_high_m3s
        Bracket of the search for the largest discharge over any route (per pipe).
    text
        The above in one or two sentences.
    """

    graph_length_m: float
    straight_m: float
    free_ratio: float
    whole_dem: bool
    discharge_low_m3s: float
    discharge_high_m3s: float
    text: str


@dataclass(frozen=True, slots=True)
class Route:
    """A polyline with its sampled long section.

    Attributes
    ----------
    name
        ``R1``, ``R2``, ... in the order found.
    cells : (n, 2) int array
        Rows and columns of the window that the route visits.
    line
        The route in the DEM's CRS.
    x, y, chainage_m, ground_m : (m,) arrays
        The sampled long section: map position, 3-D ground length from the intake, bilinear ground level.
    crest_index
        Position of the highest ground in the samples.
    crossing
        Name of the crossing that it takes, or "".
    outlet_m, mouth_m
        Level of its outlet's axis, and of the top of its intake mouth (``None``: unknown).
    underwater_length_m
        Length of pipe from the mouth to the shore at the lowest level, part of the chainage; ``None`` where the intake
        is a point.
    """

    name: str
    cells: NDArray[np.intp]
    line: LineString
    x: FloatArray
    y: FloatArray
    chainage_m: FloatArray
    ground_m: FloatArray
    proof: Proof
    crossing: str = ""
    outlet_m: float | None = None
    mouth_m: float | None = None
    underwater_length_m: float | None = None

    @property
    def length_m(self) -> float:
        """Length along the ground."""
        return float(self.chainage_m[-1])

    @property
    def crest_index(self) -> int:
        """Position of the highest ground."""
        return int(np.argmax(self.ground_m))

    @property
    def crest_m(self) -> float:
        """Highest ground on the route."""
        return float(self.ground_m[self.crest_index])


@dataclass(frozen=True, slots=True)
class Crossing:
    """A way over the divide between water body and outlet that is a place of its own.

    Attributes
    ----------
    name
        ``C1``, ``C2``, ... from the best on.
    x, y, level_m
        Where it is, and the ground there.
    length_m
        Shortest length from intake to outlet over it, on free ground.
    lift_m
        Ground there above the lowest level.
    used
        Whether a route over it was found and appraised.
    note
        Why it was used, or why not.
    """

    name: str
    x: float
    y: float
    level_m: float
    length_m: float
    lift_m: float
    used: bool
    note: str
