"""Told apart by the colour-blind and in greyscale."""

from itertools import combinations

import matplotlib as mpl

from routing.outputs.pictures import style

#: Okabe and Ito, Color Universal Design (2002), as matplotlib brings them by that name.
OKABE_ITO = {mpl.colors.to_hex(colour) for colour in mpl.color_sequences["okabe_ito"]}


def test_routes_have_the_palette_and_each_its_own_line():
    assert {look.colour.lower() for look in style.ROUTE_LOOKS} <= OKABE_ITO
    for one, other in combinations(style.ROUTE_LOOKS, 2):
        assert one.style != other.style
        assert one.colour != other.colour


def test_lines_of_the_long_section_differ_without_colour():
    looks = [style.GROUND, style.CROWN, style.CEILING, style.GRADE, style.PRESENT, style.LOWEST]
    for one, other in combinations(looks, 2):
        assert one.style != other.style or abs(one.width - other.width) >= 0.2


def test_settings_are_put_back():
    before = dict(mpl.rcParams)
    with style.our_settings():
        assert mpl.rcParams["svg.hashsalt"] == "overcrest"
    assert dict(mpl.rcParams) == before
