"""What a scheme costs, by the user's price list: every total is the sum of its lines."""

from __future__ import annotations

import math
from collections.abc import Sequence

from routing.records import Cost, CostLine, Pipe, PriceList, ZoneLength


def price_scheme(
    pipe: Pipe, length_m: float, count: int, prices: PriceList, in_zones: Sequence[ZoneLength] = ()
) -> Cost:
    """Price a number of parallel pipes of one length.

    Each amount is rounded to a hundredth of the currency, so that the lines add up to the total as printed.

    Parameters
    ----------
    pipe
        The pipe, with its prices.
    length_m
        Length of one pipe, along the slope.
    count
        Number of parallel pipes.
    prices
        What the prices mean, and the fixed sum of a scheme.
    in_zones
        Metres of one pipe in each cost zone: there laying costs ``cost_factor`` times as much, and the difference
        (below zero for a factor below 1) is a line of its own. The price of the pipe itself is the same everywhere.
    """
    metres, laying = length_m * count, pipe.prices.laying_per_m
    rows = (
        ("pipe supplied", metres, "m", pipe.prices.supply_per_m),
        ("pipe laid", metres, "m", laying),
        *(
            (f"laying in zone {zone.zone}", zone.length_m * count, "m", laying * (zone.cost_factor - 1.0))
            for zone in in_zones
        ),
        ("fixed items of each pipe", float(count), "pipe", pipe.prices.fixed_each),
        ("fixed items of the scheme", 1.0, "scheme", prices.fixed_per_scheme),
    )
    lines = tuple(
        CostLine(text, quantity, unit, rate, round(quantity * rate, 2))
        for text, quantity, unit, rate in rows
        if rate != 0.0
    )
    total = round(math.fsum(line.amount for line in lines), 2)
    return Cost(lines, total, prices.currency, prices.date, prices.invented)
