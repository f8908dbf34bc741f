"""Routes: what is read off the long section."""

from __future__ import annotations

import numpy as np
from shapely import LineString

from routing.records import Proof, Route


def test_length_and_crest_are_those_of_the_long_section():
    """Not of the map line: that has map lengths and no heights."""
    chainage, ground = np.array([0.0, 10.5, 22.0, 30.25]), np.array([99.0, 104.5, 104.5, 90.0])
    proof = Proof(30.0, 29.0, 1.03, True, 0.1, 0.11, "proven")
    line = LineString([(0.0, 0.0), (3.0, 4.0)])
    route = Route("R1", np.zeros((2, 2), int), line, chainage, chainage, chainage, ground, proof)
    assert route.length_m == 30.25
    assert route.line.length == 5.0
    assert (route.crest_index, route.crest_m) == (1, 104.5)
    assert isinstance(route.length_m, float)
    assert isinstance(route.crest_m, float)
