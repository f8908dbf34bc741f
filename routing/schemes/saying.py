"""Numbers inside sentences: no negative zero, no two figures that look equal and are called different."""

from __future__ import annotations

#: A sentence gives no more decimals than this, however close two numbers lie.
_MOST_DECIMALS = 6


def fixed(value: float, decimals: int) -> str:
    """Return a number with fixed decimals and thousands marked; what rounds to nothing has no sign.

    Parameters
    ----------
    value
        A finite number.
    decimals
        Digits after the point.
    """
    return f"{round(value, decimals) + 0.0:,.{decimals}f}"


def amount(value: float, decimals: int) -> str:
    """Return how much of something there is; what is more than nothing never reads as nothing (``under 0.01``).

    Parameters
    ----------
    value
        A finite number, 0 or more; a sign is left out.
    decimals
        Digits after the point.
    """
    size = abs(value)
    text = fixed(size, decimals)
    if size > 0.0 and text == fixed(0.0, decimals):
        return f"under {10.0**-decimals:.{decimals}f}"
    return text


def apart(figure: float, limit: float, decimals: int) -> tuple[str, str]:
    """Return figure and limit with as many decimals as it takes to see which is larger.

    Parameters
    ----------
    figure, limit
        Two finite numbers.
    decimals
        Digits after the point that are enough where the two lie well apart.
    """
    for places in range(decimals, _MOST_DECIMALS + 1):
        texts = fixed(figure, places), fixed(limit, places)
        if texts[0] != texts[1]:
            return texts
    return fixed(figure, decimals), fixed(limit, decimals)
