import pytest

from routing.outputs.field import Field, map_decimals, row


def number(decimals, value):
    return Field("level_m", "m", "number", decimals, "A level.", lambda told, item: value)


@pytest.mark.parametrize(
    ("decimals", "value", "expected"),
    [
        (2, 1.0, "1.00"),
        (2, 3, "3.00"),
        (0, 101_324.6, "101325"),
        (None, 0.1 + 0.2, "0.3"),
        (3, None, ""),
        (3, float("inf"), ""),
        (3, float("nan"), ""),
        (6, 1e-7, "0.000000"),
        (6, 123456789.5, "123456789.500000"),
    ],
)
def test_cells_have_fixed_places_and_no_exponent(plan, decimals, value, expected):
    assert number(decimals, value).cell(plan, None) == expected


def test_numbers_are_floats_even_where_whole(plan):
    assert type(number(2, 3).value(plan, None)) is float


def test_flags_are_words_of_one_case(plan):
    flag = Field("is_so", "", "flag", None, "Whether.", lambda told, item: item)
    assert (flag.cell(plan, True), flag.cell(plan, False), flag.cell(plan, None)) == ("true", "false", "")


def test_map_positions_take_their_places_from_the_unit(make):
    assert map_decimals(make.plan()) == 3
    assert map_decimals(make.plan(make.feet())) == 3
    assert map_decimals(make.plan(make.degrees())) == 8
    field = Field("x", "map unit", "number", "map", "Place.", lambda told, item: 9.123456789)
    assert field.cell(make.plan(make.degrees()), None) == "9.12345679"
    assert field.cell(make.plan(), None) == "9.123"


def test_row_keeps_order(plan):
    fields = [number(1, 2.04), Field("name", "", "text", None, "Name.", lambda told, item: "x")]
    assert row(fields, plan, None) == {"level_m": 2.0, "name": "x"}
