from itertools import combinations

import numpy as np
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from matplotlib.text import Text

from routing.outputs.pictures.placing import Labels


def board(size=4.0):
    figure = Figure(figsize=(size, size), dpi=100)
    renderer = FigureCanvasAgg(figure).get_renderer()
    axes = figure.add_axes((0, 0, 1, 1))
    axes.set_xlim(0, 1)
    axes.set_ylim(0, 1)
    return Labels(axes, renderer)


def box(note, labels):
    note.update_positions(labels.renderer)
    return Text.get_window_extent(note, labels.renderer)


def test_labels_at_one_point_do_not_overlap():
    labels = board()
    notes = [labels.place(f"label {k}", 0.5, 0.5) for k in range(12)]
    placed = [box(note, labels) for note in notes if note is not None]
    assert len(placed) >= 8
    assert not any(a.overlaps(b) for a, b in combinations(placed, 2))
    assert len(labels.left_out) == 12 - len(placed)


def test_labels_stay_inside():
    labels = board()
    for x, y in ((0, 0), (0, 1), (1, 0), (1, 1), (0.5, 1.0)):
        found = box(labels.place("a label at the edge", x, y), labels)
        assert found.x0 >= 0
        assert found.y0 >= 0
        assert found.x1 <= 400
        assert found.y1 <= 400


def test_a_label_keeps_off_a_line_and_off_marks():
    labels = board()
    labels.avoid(np.array([0.0, 1.0]), np.array([0.53, 0.53]))
    labels.avoid_mark(0.5, 0.5)
    found = box(labels.place("below the line", 0.5, 0.5), labels)
    assert found.y1 < 0.53 * 400
    assert not found.overlaps(labels.taken[0])


def test_what_finds_no_place_is_told():
    labels = board(0.4)
    assert labels.place("much too long for so small a board", 0.5, 0.5) is None
    assert labels.left_out == ["much too long for so small a board"]


def test_a_claim_is_refused_where_something_is():
    labels = board()
    text = labels.axes.text(0.5, 0.5, "here")
    assert labels.claim(text, 2.0)
    assert not labels.claim(text, 2.0)
