import pytest
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from routing.outputs.pictures.texts import Ruler, shown


@pytest.fixture
def ruler():
    return Ruler(FigureCanvasAgg(Figure(dpi=200)).get_renderer())


def test_what_cannot_be_shown_is_left_out():
    assert shown(" a\tb\x00c\ud800\n d ") == "a b c d"


def test_shortened_text_fits_and_short_text_is_kept(ruler):
    assert ruler.shortened("short", 8.0, 3.0) == "short"
    cut = ruler.shortened("long " * 60, 8.0, 2.0)
    assert cut.endswith("…")
    assert 1.7 < ruler.width_in(cut, 8.0) <= 2.0


def test_wrapped_text_loses_nothing_but_what_has_no_room(ruler):
    text = "some words that go on and on until there are too many of them for a single line"
    lines = ruler.wrapped(text, 8.0, 2.0, 9)
    assert " ".join(lines) == text
    assert all(ruler.width_in(line, 8.0) <= 2.0 for line in lines)
    cut = ruler.wrapped(text, 8.0, 2.0, 2)
    assert len(cut) == 2
    assert cut[-1].endswith("…")
    assert ruler.wrapped("", 8.0, 2.0, 2) == []


def test_a_word_longer_than_the_line_is_cut(ruler):
    assert ruler.width_in(ruler.wrapped("x" * 400, 8.0, 1.0, 3)[0], 8.0) <= 1.0


def test_bold_is_wider_and_size_counts(ruler):
    assert ruler.width_in("wide", 8.0, bold=True) > ruler.width_in("wide", 8.0)
    assert ruler.width_in("wide", 16.0) == pytest.approx(2 * ruler.width_in("wide", 8.0), rel=0.05)
