import numpy as np
import pytest
from matplotlib.figure import Figure

from routing.outputs.pictures.contours import draw_contours
from routing.outputs.pictures.framing import Cut, Frame

FRAME = Frame(0.0, 40.0, 0.0, 20.0, 1.0, 1.0)


def cut(level, dry=None):
    rows, cols = level.shape
    x, y = np.arange(cols) + 0.5, rows - np.arange(rows) - 0.5
    ones = np.ones(rows)
    return Cut(level, np.ones(level.shape, bool) if dry is None else dry, x, y, ones, ones, (0, cols, 0, rows))


def test_contours_of_a_plane_lie_where_they_must():
    level = np.tile(100.0 + 0.3 * (np.arange(40) + 0.5), (20, 1))
    found = draw_contours(Figure().add_subplot(), cut(level), FRAME)
    assert found.interval_m == 1.0
    assert sorted(found.lines) == [float(at) for at in range(101, 112)]
    for at, lines in found.lines.items():
        for line in lines:
            np.testing.assert_allclose(line[:, 0], (at - 100.0) / 0.3)


def test_none_on_the_water_and_none_on_flat_ground():
    level = np.tile(100.0 + 0.3 * (np.arange(40) + 0.5), (20, 1))
    dry = np.tile(np.arange(40) > 20, (20, 1))
    lines = draw_contours(Figure().add_subplot(), cut(level, dry), FRAME).lines
    assert min(line[:, 0].min() for found in lines.values() for line in found) > 20.0
    assert draw_contours(Figure().add_subplot(), cut(np.full((20, 40), 7.0)), FRAME) is None
    assert draw_contours(Figure().add_subplot(), cut(level, np.zeros_like(dry)), FRAME) is None


@pytest.mark.parametrize(("rise", "interval"), [(1.0, 0.1), (40.0, 5.0), (900.0, 100.0)])
def test_the_interval_follows_the_relief(rise, interval):
    level = np.tile(np.linspace(0.0, rise, 40), (20, 1))
    assert draw_contours(Figure().add_subplot(), cut(level), FRAME).interval_m == pytest.approx(interval)
