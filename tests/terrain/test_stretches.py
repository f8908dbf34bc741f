"""Metres of a long section in cost zones, by hand."""

import numpy as np
import pytest
from shapely import MultiPolygon, box

from routing.records import GroundLine, Zone
from routing.terrain import lengths_in_zones


def test_the_dearest_of_overlapping_cost_zones_is_paid_once():
    x = np.linspace(0.0, 100.0, 11)
    line = GroundLine(x, np.zeros(11), 1.25 * x, np.zeros(11))  # ground a quarter longer than the map
    zones = (
        Zone("track", "cost", 0.5, box(0.0, -5.0, 45.0, 5.0)),
        Zone("bog", "cost", 3.0, box(33.0, -5.0, 61.0, 5.0)),
        Zone("bank", "barred", 1.0, box(90.0, -5.0, 95.0, 5.0)),
        Zone("far", "cost", 2.0, box(0.0, 7.0, 90.0, 9.0)),
    )
    for order in (zones, zones[::-1]):
        found = {part.zone: part.length_m for part in lengths_in_zones(line, order)}
        assert found == pytest.approx({"bog": 1.25 * 28.0, "track": 1.25 * 33.0})


def test_each_piece_counts_by_its_own_slope():
    """A zone over the end of a steep piece and the start of a level one: shares on the map, lengths on the ground."""
    line = GroundLine(
        np.array([0.0, 40.0, 90.0]), np.zeros(3), np.array([0.0, 50.0, 100.0]), np.array([0.0, 30.0, 30.0])
    )
    zone = Zone("bog", "cost", 2.0, box(30.0, -1.0, 60.0, 1.0))
    (found,) = lengths_in_zones(line, (zone,))
    assert found.length_m == pytest.approx(50.0 * 0.25 + 50.0 * 0.4)
    assert (found.zone, found.cost_factor) == ("bog", 2.0)


def test_a_mouth_that_lies_at_the_shore_on_the_map_has_no_share_and_parts_add_up():
    """The first two samples share a place: 25 m of pipe under water, whose place is not known."""
    line = GroundLine(np.array([0.0, 0.0, 10.0]), np.zeros(3), np.array([0.0, 25.0, 35.0]), np.zeros(3))
    parts = MultiPolygon([box(-1.0, -1.0, 2.0, 1.0), box(7.0, -1.0, 8.0, 1.0)])
    (found,) = lengths_in_zones(line, (Zone("two", "cost", 2.0, parts),))
    assert found.length_m == pytest.approx(3.0)
    assert lengths_in_zones(line, ()) == ()
