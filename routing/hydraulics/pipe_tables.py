"""Sizes and stiffness of pipes by open standards: plain data and the rules that make it.

What was read in copies of the standards, what follows from a rule, and what is recalled from memory is said beside
each table.
"""

from __future__ import annotations

import bisect
import math

#: Outside diameters of PE pipe in mm, ISO 4427-2, from 32 mm (smaller ones carry walls that the rule does not give).
#: 90 to 560 read in a copy of the identical national standard MS 1058-2; the others recalled from memory.
PE_DIAMETERS_MM: tuple[float, ...] = (
    *(32.0, 40.0, 50.0, 63.0, 75.0, 90.0, 110.0, 125.0, 140.0, 160.0, 180.0, 200.0, 225.0, 250.0, 280.0, 315.0),
    *(355.0, 400.0, 450.0, 500.0, 560.0, 630.0, 710.0, 800.0, 900.0, 1000.0, 1200.0),
)

#: SDR by name against the series exponent n of ISO 4065: pipe series S = 10^(n/10), nominally (SDR - 1)/2.
PE_SERIES: dict[float, int] = {
    6.0: 4,
    7.4: 5,
    9.0: 6,
    11.0: 7,
    13.6: 8,
    17.0: 9,
    21.0: 10,
    26.0: 11,
    33.0: 12,
    41.0: 13,
}

#: Small sizes whose computed wall the standard rounds up further, to 2.0 or 3.0 mm (read in copies of ISO 4427-2:2007
#: and MS 1058-2).
_PE_ROUNDED_UP_MM: dict[tuple[float, float], float] = {(32.0, 11.0): 3.0, (32.0, 17.0): 2.0, (40.0, 21.0): 2.0}
#: Thinnest wall in mm that ISO 4427-2 lists; a thinner one that the rule would give is not made.
_PE_THINNEST_MM = 2.0
#: Thickest wall in mm taken into the table: the standard leaves the thicker ones out (limit recalled from memory).
_PE_THICKEST_MM = 75.0


def pe_least_wall_mm(outside_diameter_mm: float, sdr: float) -> float | None:
    """Return the minimum wall of ISO 4427-2 in mm, or ``None`` where that size is not made.

    By the rule of ISO 4065: ``e = d / (2 S + 1)`` with S = 10^(n/10), rounded up to 0.1 mm (after rounding to
    0.01 mm). It gives 88 of the 89 walls of MS 1058-2 for SDR 6 to 17; 200 mm SDR 6 is 33.3 mm there and 33.2 mm in
    a copy of ISO 4427-2:2007 and by the rule (the thinner is kept: the safe side for collapse). Three small sizes
    are rounded up further. The nominal SDR does not give the wall: 110/17 is 6.5, the table 6.6.

    Parameters
    ----------
    outside_diameter_mm
        Nominal outside diameter.
    sdr
        Standard dimension ratio by its name (13.6, not 13.62).
    """
    if outside_diameter_mm not in PE_DIAMETERS_MM or sdr not in PE_SERIES:
        return None
    if (outside_diameter_mm, sdr) in _PE_ROUNDED_UP_MM:
        return _PE_ROUNDED_UP_MM[outside_diameter_mm, sdr]
    exact = outside_diameter_mm / (2.0 * 10.0 ** (PE_SERIES[sdr] / 10.0) + 1.0)
    hundredths = round(exact * 100.0)
    wall = math.ceil(hundredths / 10.0) / 10.0
    return wall if _PE_THINNEST_MM <= wall <= _PE_THICKEST_MM else None


def pe_wall_tolerance_mm(least_wall_mm: float) -> float:
    """Return how much thicker than the minimum a PE wall may be, in mm: ISO 11922-1, grade V.

    ``0.1 e + 0.1`` rounded up to 0.1 mm: recalled from memory, and found to give 86 of 88 maximum walls
    of MS 1058-2; the other two are 0.1 mm larger there.
    """
    tenths = round(least_wall_mm * 10.0)
    return (-(-tenths // 10) + 1) / 10.0


#: Load durations in hours of the modulus table: PPI Handbook of PE Pipe, chapter 3, appendix B, table B.1.1 (23 °C).
PE_DURATIONS_H: tuple[float, ...] = (0.5, 2.0, 12.0, 100.0, 8766.0, 438_300.0)
#: Apparent modulus in psi at those durations. PE100 is taken as PE4xxx and PE80 as PE3xxx: by density class, near
#: enough for both, and common practice.
PE_MODULUS_PSI: dict[str, tuple[float, ...]] = {
    "PE100": (82_000.0, 74_000.0, 63_000.0, 55_000.0, 40_000.0, 29_000.0),
    "PE80": (78_000.0, 71_000.0, 60_000.0, 52_000.0, 38_000.0, 28_000.0),
}
PSI_PA = 6894.757293168

#: Temperatures in °C and modulus factors: PPI Handbook, table B.1.2, recalled from memory (80 to 140 °F). Cold pipe
#: is stiffer; no credit is taken for it.
PE_TEMPERATURES_C: tuple[float, ...] = (23.0, 26.67, 32.22, 37.78, 43.33, 48.89, 54.44, 60.0)
PE_TEMPERATURE_FACTORS: tuple[float, ...] = (1.0, 0.93, 0.82, 0.73, 0.64, 0.58, 0.50, 0.43)


def interpolate(x: float, xs: tuple[float, ...], ys: tuple[float, ...]) -> float:
    """Return y at x on straight lines between table points; beyond the ends the end value.

    Parameters
    ----------
    x
        Where to read.
    xs, ys
        The table; xs rising.
    """
    if x <= xs[0]:
        return ys[0]
    if x >= xs[-1]:
        return ys[-1]
    at = bisect.bisect_right(xs, x)
    share = (x - xs[at - 1]) / (xs[at] - xs[at - 1])
    return ys[at - 1] + share * (ys[at] - ys[at - 1])


#: Common outside diameters of EN 10220 (series 1) with the walls usually stocked, in mm: recalled from memory. The
#: diameters are those of ISO 4200, within 0.5 mm of ASME B36.10.
STEEL_WALLS_MM: dict[float, tuple[float, ...]] = {
    48.3: (2.3, 2.6, 2.9, 3.2, 3.6, 4.0, 5.0),
    60.3: (2.3, 2.6, 2.9, 3.2, 3.6, 4.0, 4.5, 5.0, 5.6),
    76.1: (2.6, 2.9, 3.2, 3.6, 4.0, 4.5, 5.0, 5.6, 7.1),
    88.9: (2.9, 3.2, 3.6, 4.0, 4.5, 5.0, 5.6, 6.3, 8.0),
    114.3: (3.2, 3.6, 4.0, 4.5, 5.0, 5.6, 6.3, 7.1, 8.8),
    139.7: (3.6, 4.0, 4.5, 5.0, 5.6, 6.3, 7.1, 8.0, 10.0),
    168.3: (4.0, 4.5, 5.0, 5.6, 6.3, 7.1, 8.0, 8.8, 10.0, 11.0),
    219.1: (4.5, 5.0, 5.6, 6.3, 7.1, 8.0, 8.8, 10.0, 12.5),
    273.0: (5.0, 5.6, 6.3, 7.1, 8.0, 8.8, 10.0, 12.5),
    323.9: (5.6, 6.3, 7.1, 8.0, 8.8, 10.0, 12.5),
    355.6: (5.6, 6.3, 7.1, 8.0, 8.8, 10.0, 12.5),
    406.4: (6.3, 7.1, 8.0, 8.8, 10.0, 12.5),
    457.0: (6.3, 7.1, 8.0, 8.8, 10.0, 12.5),
    508.0: (6.3, 7.1, 8.0, 8.8, 10.0, 12.5),
    610.0: (6.3, 7.1, 8.0, 8.8, 10.0, 12.5),
    711.0: (7.1, 8.0, 8.8, 10.0, 12.5),
    813.0: (8.0, 8.8, 10.0, 12.5),
    914.0: (8.0, 8.8, 10.0, 12.5),
    1016.0: (8.8, 10.0, 12.5),
}
#: Share of the nominal wall that may be missing: 12.5 % for seamless tube (EN 10216-1; 10 % or less for welded tube,
#: EN 10217-1). Recalled from memory; the larger one is taken for all.
STEEL_WALL_SHORT = 0.125
