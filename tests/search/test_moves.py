"""Move tables against the slow twin's way of cutting segments."""

import numpy as np
import pytest
from twins import grid_search as twin

from routing.search import move_list
from routing.search.moves import move_table


@pytest.mark.parametrize("neighbours", [8, 16, 32])
def test_tables_equal_the_twin(neighbours):
    table = move_table(neighbours)
    moves = move_list(neighbours)
    assert sorted(moves) == sorted(twin.MOVES[neighbours])
    for i, move in enumerate(moves):
        crossed = {tuple(c) for c in table.crossed[table.crossed_start[i] : table.crossed_start[i + 1]].tolist()}
        assert crossed == set(twin.crossed_cells(move)) - {(0, 0), move}
        corners = table.corner[table.corner_start[i] : table.corner_start[i + 1]].tolist()
        assert {frozenset([(a, b), (c, d)]) for a, b, c, d in corners} == {frozenset(p) for p in twin.corners(move)}
        pieces = table.piece_cell[table.piece_start[i] : table.piece_start[i + 1]].tolist()
        assert [tuple(p) for p in pieces] == twin.patches(move)


def test_pieces_join_end_to_end():
    table = move_table(32)
    for i in range(table.drow.size):
        span = slice(table.piece_start[i], table.piece_start[i + 1])
        starts = table.piece_ends[span, :2] + table.piece_cell[span]
        ends = table.piece_ends[span, 2:] + table.piece_cell[span]
        if len(starts):
            np.testing.assert_allclose(starts[0], 0.0)
            np.testing.assert_allclose(ends[-1], [table.drow[i], table.dcol[i]])
            np.testing.assert_allclose(starts[1:], ends[:-1])


def test_an_unknown_move_set_is_refused():
    with pytest.raises(ValueError, match="12"):
        move_list(12)
