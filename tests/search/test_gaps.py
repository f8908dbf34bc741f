"""Moves over gaps, against the bilinear rule, which never takes one."""

import numpy as np
import pytest

from routing.search import moves_over_gaps, reach


@pytest.mark.plain
@pytest.mark.parametrize("neighbours", [8, 16, 32])
@pytest.mark.parametrize("shape", [(9, 11), (1, 7), (2, 2), (7, 3)])
def test_the_cells_rule_with_gaps_blocked_goes_where_the_bilinear_rule_goes(neighbours, shape):
    rng = np.random.default_rng(5)
    ground = rng.uniform(0.0, 3.0, shape)
    ground[rng.random(shape) < 0.15] = np.nan
    ground[0, 0] = 1.0
    ask = {"neighbours": neighbours}
    blocked = moves_over_gaps(~np.isnan(ground), neighbours)
    cells = reach(ground, 2.0, 3.0, [(0, 0)], ground_rule="cells", blocked_moves=blocked, **ask)
    bilinear = reach(ground, 2.0, 3.0, [(0, 0)], ground_rule="bilinear", **ask)
    assert np.array_equal(cells.length_m, bilinear.length_m)


def test_nothing_is_blocked_without_a_gap():
    assert not moves_over_gaps(np.ones((6, 6), dtype=bool), 32).any()
