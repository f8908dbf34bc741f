"""Lambert's law on planes, by hand: light from azimuth 315 degrees, 45 degrees up."""

import numpy as np
import pytest

from routing.outputs.pictures.framing import Cut
from routing.outputs.pictures.relief import shade


def plane(east, north, step_x=2.0, step_y=3.0, shape=(9, 11)):
    """Ground that rises by so much per metre to the east and to the north; rows run southwards."""
    rows, cols = np.indices(shape, dtype=float)
    level = east * cols * step_x - north * rows * step_y
    ones = np.ones(shape[0])
    return Cut(
        level,
        np.ones(shape, bool),
        np.arange(shape[1]),
        -np.arange(shape[0]),
        step_x * ones,
        step_y * ones,
        (0, 1, 0, 1),
    )


def test_flat_ground_is_as_bright_as_the_light_is_high():
    assert shade(plane(0.0, 0.0)) == pytest.approx(np.sin(np.pi / 4))


def test_ground_square_to_the_light_is_brightest():
    tilt = np.sqrt(0.5)  # falls to the north-west at 45 degrees
    assert shade(plane(tilt, -tilt)) == pytest.approx(1.0)
    assert shade(plane(-tilt, tilt)) == pytest.approx(0.0, abs=1e-12)


@pytest.mark.parametrize("steps", [(1.0, 1.0), (2.0, 5.0)])
def test_true_steps_count(steps):
    """East-facing 1:1 ground, by hand: (sin 45 + cos 45 sin 315) / sqrt 2 = 0.7071 - 0.5 over sqrt 2."""
    assert shade(plane(-1.0, 0.0, *steps)) == pytest.approx((np.sqrt(0.5) - 0.5) / np.sqrt(2))


def test_gentle_ground_is_lifted_but_never_more_than_six_times():
    """A fall of 0.01 to the north-west, six times as steep: (sin 45 + 0.06 cos 45) / sqrt(1 + 0.06 ** 2)."""
    tilt = 0.01 * np.sqrt(0.5)
    assert shade(plane(tilt, -tilt)) == pytest.approx(np.sqrt(0.5) * 1.06 / np.hypot(1.0, 0.06))


def test_voids_stay_voids_and_do_not_eat_their_neighbours():
    cut = plane(0.5, 0.0)
    cut.level_m[4, 5] = np.nan
    bright = shade(cut)
    assert np.isnan(bright).sum() == 1
    assert np.isnan(bright[4, 5])


@pytest.mark.parametrize("shape", [(1, 5), (5, 1), (1, 1)])
def test_a_single_row_or_column(shape):
    assert np.isfinite(shade(plane(0.3, 0.2, shape=shape))).all()
