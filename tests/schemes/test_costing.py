"""Costs by hand, and sums that add up."""

from decimal import ROUND_HALF_UP, Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from routing.records import Pipe, PipePrices, PriceList, ZoneLength
from routing.schemes import price_scheme


def priced(supply=0.0, laying=0.0, each=0.0):
    return Pipe("PE", "PE100", 0.315, 0.02, 0.019, 1e-5, prices=PipePrices(supply, laying, each))


def test_by_hand_to_the_cent():
    # 3 pipes of 115.37 m: 346.11 m. 38.45 a metre: 13 307.9295. 14.20 a metre laid: 4 914.762. 3 x 2 100.50. 6 000.
    prices = PriceList("EUR", "2026-01-01", invented=True, fixed_per_scheme=6000.0)
    cost = price_scheme(priced(38.45, 14.20, 2100.50), 115.37, 3, prices)
    assert [line.amount for line in cost.lines] == [13_307.93, 4_914.76, 6_301.50, 6_000.00]
    assert cost.total == 30_524.19
    assert (cost.currency, cost.date, cost.invented) == ("EUR", "2026-01-01", True)
    assert [(line.quantity, line.unit) for line in cost.lines] == [
        (pytest.approx(346.11), "m"),
        (pytest.approx(346.11), "m"),
        (3.0, "pipe"),
        (1.0, "scheme"),
    ]


def test_what_has_no_price_has_no_line():
    assert price_scheme(priced(), 100.0, 2, PriceList()).lines == ()
    assert price_scheme(priced(), 100.0, 2, PriceList()).total == 0.0
    (line,) = price_scheme(priced(laying=10.0), 100.0, 2, PriceList()).lines
    assert (line.text, line.amount) == ("pipe laid", 2000.0)


def test_zones_by_hand_to_the_cent():
    """3 pipes, 14.20 a metre laid, all of it: 4 914.76. The zones add their difference, and nothing to the supply.

    Bog: 31.07 m x 3 = 93.21 m at 14.20 x 1.6 = 22.72: 2 117.7312. Track: 12.50 m x 3 = 37.5 m at 14.20 x -0.25 =
    -3.55: -133.125. Field of factor 1: no line.
    """
    zones = (ZoneLength("bog", 2.6, 31.07), ZoneLength("field", 1.0, 20.0), ZoneLength("track", 0.75, 12.50))
    cost = price_scheme(priced(38.45, 14.20, 2100.50), 115.37, 3, PriceList("EUR"), zones)
    assert [(line.text, line.amount) for line in cost.lines] == [
        ("pipe supplied", 13_307.93),
        ("pipe laid", 4_914.76),
        ("laying in zone bog", 2_117.73),
        ("laying in zone track", -133.12),  # half a cent, to the even one
        ("fixed items of each pipe", 6_301.50),
    ]
    assert cost.lines[2].quantity == pytest.approx(93.21)
    assert cost.lines[2].rate == pytest.approx(22.72)
    assert cost.total == 26_508.80


def test_zones_cost_nothing_where_laying_has_no_price():
    zones = (ZoneLength("bog", 2.6, 31.07),)
    assert price_scheme(priced(30.0), 100.0, 1, PriceList(), zones) == price_scheme(priced(30.0), 100.0, 1, PriceList())


money = st.integers(0, 1_000_000).map(lambda cents: cents / 100)


@given(rates=st.tuples(money, money, money), scheme=money, length=st.integers(1, 10_000_000), count=st.integers(1, 20))
def test_printed_lines_add_up_to_the_printed_total(rates, scheme, length, count):
    cost = price_scheme(priced(*rates), length / 1000, count, PriceList(fixed_per_scheme=scheme))
    assert sum((Decimal(f"{line.amount:.2f}") for line in cost.lines), Decimal(0)) == Decimal(f"{cost.total:.2f}")
    # Exact arithmetic agrees to half a cent a line.
    supply, laying, each = (Decimal(str(rate)) for rate in rates)
    exact = (supply + laying) * length * count / 1000 + each * count + Decimal(str(scheme))
    assert abs(exact - Decimal(f"{cost.total:.2f}")) <= Decimal("0.011")
    assert Decimal(f"{cost.total:.2f}").quantize(Decimal("0.01"), ROUND_HALF_UP) >= 0


@given(length=st.floats(1.0, 1e4), count=st.integers(1, 9))
def test_one_more_pipe_costs_the_same_again_but_for_what_is_fixed(length, count):
    pipe, prices = priced(30.0, 10.0, 500.0), PriceList(fixed_per_scheme=1000.0)
    totals = [price_scheme(pipe, length, number, prices).total for number in (count, count + 1)]
    assert totals[1] - totals[0] == pytest.approx(40.0 * length + 500.0, abs=0.05)
