"""What follows from the records of a case before any flow is known."""

import math

import numpy as np
import pytest

from routing.errors import InputError
from routing.hydraulics.case import Case
from routing.records import Levels, Limits, Losses, Pipe, Water

WATER = Water(1000.0, 1e-6, 2000.0, 17.5)


def case(losses=Losses(), limits=Limits(100_000.0, gravity_ms2=9.8), levels=Levels(50.0, 40.0)):  # noqa: B008
    return Case.of(Pipe.of_bore(0.1), levels, losses, WATER, limits)


def test_levels_of_still_water_by_hand():
    assert case().unit_weight_nm3 == 9800.0
    assert case().still_lift_m == pytest.approx(98_000 / 9800 - 2.5)
    assert case().still_ceiling_m == pytest.approx(57.5)
    assert case().cap_m == math.inf
    assert case(limits=Limits(100_000.0, highest_lift_m=4.0)).cap_m == 54.0


def test_local_losses_along_the_pipe():
    losses = Losses(0.5, 1.0, 0.2, 0.01, ((20.0, 3.0), (10.0, 2.0), (20.0, 4.0)))
    at = np.array([0.0, 9.999, 10.0, 19.0, 20.0, 100.0])
    expected = 1.5 + 0.01 * at + np.array([0, 0, 2, 2, 9, 9])
    np.testing.assert_allclose(case(losses).local_to_crown(at), expected)
    assert case(losses).fittings_total == 9.0
    assert case(losses).local_of_line(100.0) == pytest.approx(0.5 + 1.0 + 0.2 + 9.0 + 1.0)


def test_a_fitting_at_the_mouth_counts_at_once():
    assert case(Losses(fittings=((0.0, 0.7),))).local_to_crown(np.array([0.0]))[0] == pytest.approx(2.2)


def test_records_are_checked_on_the_way_in():
    with pytest.raises(InputError, match="reserve"):
        case(limits=Limits(100_000.0, reserve_m=-1.0))
