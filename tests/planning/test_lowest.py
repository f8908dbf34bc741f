"""The water at the lowest level, on a bed that the DEM shows."""

import numpy as np
import pytest


def bowl(ground):
    """A bed that rises by half a metre a cell towards the dam: dry from column 22 at 99 m, from 24 at 100 m."""
    z = ground.reservoir()
    lake = z == 100.0
    z[lake] = np.broadcast_to(90.0 + 0.5 * (np.arange(80) - 4), z.shape)[lake]
    return z


def test_on_a_bed_the_water_draws_back(make_job, ground):
    plan = make_job(bowl(ground), terrain={"water_shown": "bed"}).plan()
    lowest = plan.lowest_water
    assert lowest.level_m == 99.0
    assert np.argwhere(lowest.cells)[:, 1].max() == 22
    assert np.argwhere(plan.water_body.cells)[:, 1].max() == 24
    assert not (lowest.cells & ~plan.water_body.cells).any()


@pytest.mark.parametrize(
    ("changes", "why"),
    [
        ({"terrain": {"water_shown": "surface"}}, "the ground under the surface is unknown"),
        ({"terrain": {"water_shown": "bed"}, "water": {"lowest_level_m": 100.0}}, "it does not fall"),
        ({"terrain": {"water_shown": "bed"}, "ends": ((20, 23), (20, 60))}, "the intake falls dry"),
    ],
)
def test_where_it_is_not_known_or_no_lower_none_is_told(make_job, ground, changes, why):
    z = ground.reservoir() if "unknown" in why else bowl(ground)
    assert make_job(z, **changes).plan().lowest_water is None, why
