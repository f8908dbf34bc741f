"""Scale bar in true ground length, and north arrow; both stand outside the map."""

from __future__ import annotations

from matplotlib.figure import Figure
from matplotlib.patches import Polygon, Rectangle

from routing.outputs.pictures.framing import Frame
from routing.outputs.pictures.mapview import is_angular
from routing.outputs.pictures.steps import round_length
from routing.outputs.pictures.style import BLACK, PAGE_IN, PAPER, SMALL
from routing.outputs.wording import fixed
from routing.records import TerrainFacts

#: Longest bar in inches, and its height.
_LONGEST_IN, _HEIGHT_IN = 1.75, 0.055
_KILOMETRE_M = 1000.0


def draw_scale(
    figure: Figure, facts: TerrainFacts, frame: Frame, corner_in: tuple[float, float], map_width_in: float
) -> None:
    """Draw bar and arrow below a corner of the page.

    Parameters
    ----------
    figure
        The page.
    facts
        Say what up is on this map.
    frame
        Gives the true ground length across the map.
    corner_in
        Upper left corner, in inches from the page's lower left.
    map_width_in
        Width of the map on the page, in inches.
    """
    in_per_m = map_width_in / frame.width_m
    length_m = round_length(_LONGEST_IN / in_per_m)
    left, top = corner_in[0] + 0.66, corner_in[1] - 0.30
    for number, (start, share) in enumerate(((0.0, 0.25), (0.25, 0.25), (0.5, 0.5))):
        _add(
            figure,
            left + start * length_m * in_per_m,
            top,
            share * length_m * in_per_m,
            BLACK if number % 2 == 0 else PAPER,
        )
    unit, divisor = ("km", _KILOMETRE_M) if length_m >= 2.0 * _KILOMETRE_M else ("m", 1.0)
    for share, text in ((0.0, "0"), (0.5, _number(0.5 * length_m / divisor)), (1.0, _number(length_m / divisor))):
        label = f"{text} {unit}" if share == 1.0 else text
        _text(figure, label, left + share * length_m * in_per_m, top + 0.085)
    _text(figure, "true ground length", left + 0.5 * length_m * in_per_m, top - 0.125)
    _arrow(figure, corner_in[0] + 0.17, corner_in[1] - 0.03, "true north" if is_angular(facts) else "grid north")


def _number(value: float) -> str:
    return f"{value:,.6g}" if value < 1e4 else fixed(value, 0)


def _add(figure: Figure, left_in: float, bottom_in: float, width_in: float, colour: str) -> None:
    across, up = PAGE_IN
    figure.add_artist(
        Rectangle(
            (left_in / across, bottom_in / up),
            width_in / across,
            _HEIGHT_IN / up,
            facecolor=colour,
            edgecolor=BLACK,
            linewidth=0.6,
            transform=figure.transFigure,
        )
    )


def _text(figure: Figure, text: str, x_in: float, y_in: float) -> None:
    figure.text(x_in / PAGE_IN[0], y_in / PAGE_IN[1], text, fontsize=SMALL, ha="center", va="bottom")


def _arrow(figure: Figure, x_in: float, top_in: float, words: str) -> None:
    """Draw an arrow up with what kind of north it is below."""
    across, up = PAGE_IN
    for sign, colour in ((-1.0, BLACK), (1.0, PAPER)):
        points = [(x_in, top_in), (x_in + 0.085 * sign, top_in - 0.30), (x_in, top_in - 0.23)]
        corners = [(x / across, y / up) for x, y in points]
        figure.add_artist(
            Polygon(corners, facecolor=colour, edgecolor=BLACK, linewidth=0.7, transform=figure.transFigure)
        )
    _text(figure, words, x_in + 0.06, top_in - 0.425)
