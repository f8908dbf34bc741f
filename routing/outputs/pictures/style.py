"""Colours, lines and sizes of the pictures: told apart by the colour-blind, and in greyscale by line and hatch.

Colours are those that Okabe and Ito proposed (Color Universal Design, 2002), recalled.
"""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from typing import Any, Literal

import matplotlib as mpl

BLACK, ORANGE, SKY, GREEN = "#000000", "#E69F00", "#56B4E9", "#009E73"
YELLOW, BLUE, VERMILION, PURPLE = "#F0E442", "#0072B2", "#D55E00", "#CC79A7"
GREY, PALE, PAPER = "#555555", "#D9D9D9", "#FFFFFF"
EARTH = "#8C7B6B"

#: A4 landscape, in inches, and the dots of the PNG per inch.
PAGE_IN = (11.69, 8.27)
DPI = 150
#: The relief inside an SVG needs no more.
SVG_IMAGE_DPI = 130

SMALL, TEXT, LABEL, TITLE = 6.3, 7.0, 7.2, 12.5

#: Everything is set anew for each picture, so that nobody's own settings, nor chance, reach it.
_SETTINGS: dict[Any, Any] = {
    # The first comes with matplotlib: the same letters everywhere. The rest is for who opens an SVG without it.
    "font.family": ["sans-serif"],
    "font.sans-serif": ["DejaVu Sans", "Verdana", "Arial", "Helvetica"],
    "font.size": TEXT,
    "axes.linewidth": 0.6,
    "hatch.linewidth": 0.5,
    "svg.hashsalt": "overcrest",
    "svg.fonttype": "none",  # text stays text: it can be searched, read aloud and edited
    "svg.image_inline": True,
    "text.parse_math": False,  # a dollar sign in a title is a dollar sign
    "text.usetex": False,
    "text.hinting": "none",
    "axes.unicode_minus": True,
    "path.simplify": True,
    "figure.autolayout": False,
    "figure.constrained_layout.use": False,
    "savefig.bbox": None,
    "image.composite_image": True,
}


@dataclass(frozen=True, slots=True)
class LineLook:
    """How a line is drawn."""

    colour: str
    style: Literal["-", ":"] | tuple[float, tuple[float, ...]]
    width: float


#: Routes in the order of the ranking; what comes after these is drawn grey and thin.
ROUTE_LOOKS: tuple[LineLook, ...] = (
    LineLook(VERMILION, "-", 2.3),
    LineLook(BLACK, (0.0, (4.0, 1.5)), 1.5),
    LineLook(PURPLE, (0.0, (6.0, 1.2, 1.2, 1.2)), 1.6),
    LineLook(GREEN, (0.0, (1.2, 1.2)), 1.7),
    LineLook(ORANGE, (0.0, (2.5, 1.0)), 1.6),
    LineLook(BLUE, (0.0, (8.0, 1.5, 1.0, 1.5, 1.0, 1.5)), 1.5),
)
FURTHER_ROUTES = LineLook(GREY, "-", 0.9)

GROUND = LineLook(EARTH, "-", 1.1)
CROWN = LineLook(VERMILION, "-", 1.9)
CEILING = LineLook(BLACK, (0.0, (5.0, 1.8)), 1.2)
GRADE = LineLook(BLUE, (0.0, (7.0, 1.4, 1.2, 1.4)), 1.4)
PRESENT = LineLook(BLUE, "-", 0.9)
LOWEST = LineLook(BLUE, (0.0, (2.0, 1.2)), 1.1)


@contextmanager
def our_settings() -> Iterator[None]:
    """Draw with the settings above; whatever was set before is set again afterwards."""
    with mpl.rc_context():
        mpl.rcdefaults()
        mpl.rcParams.update(_SETTINGS)
        yield
