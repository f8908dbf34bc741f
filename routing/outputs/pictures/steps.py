"""Round numbers for drawings: intervals, scale bars, exaggerations."""

from __future__ import annotations

import math

import numpy as np

from routing.records import FloatArray

_ROUND = (1.0, 2.0, 5.0, 10.0)
#: A hair, so that rounding does not lose the last step of a range.
_HAIR = 1e-9


def round_step(span: float, most: float) -> float:
    """Return the smallest of 1, 2, 5 times a power of ten of which at most ``most`` fit into ``span``.

    Parameters
    ----------
    span
        Length of the range, above 0.
    most
        Number of steps, above 0.

    Raises
    ------
    ValueError
        If either is not a number above 0.
    """
    if not (math.isfinite(span) and span > 0.0 and most > 0.0):
        raise ValueError(f"a range above 0 and a count above 0 are needed, found {span} and {most}")
    least = span / most
    power = 10.0 ** math.floor(math.log10(least))
    return next(step for step in (power * digit for digit in _ROUND) if step >= least * (1.0 - _HAIR))


def round_length(longest: float) -> float:
    """Return the largest of 1, 2, 5 times a power of ten that is at most ``longest`` (above 0)."""
    power = 10.0 ** math.floor(math.log10(longest))
    return max(step for step in (power * digit for digit in _ROUND) if step <= longest * (1.0 + _HAIR))


def multiples(low: float, high: float, step: float) -> FloatArray:
    """Return the whole multiples of ``step`` from ``low`` to ``high``, both included."""
    first, last = math.ceil(low / step - _HAIR), math.floor(high / step + _HAIR)
    return np.arange(first, last + 1, dtype=np.float64) * step


def places_of(step: float) -> int:
    """Return the decimal places that multiples of a round step need."""
    return max(0, -math.floor(math.log10(step) + _HAIR))


def exaggeration(most: float) -> float:
    """Return the largest round vertical exaggeration that is at most ``most``, and at least 1."""
    choices = [digit * 10.0**power for power in range(4) for digit in (1.0, 1.5, 2.0, 3.0, 4.0, 5.0, 6.0, 8.0)]
    return max([1.0, *(choice for choice in choices if choice <= most * (1.0 + _HAIR))])
