"""Units of height: what the band, the CRS and the site file say, and whether they agree."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from routing.terrain.telling import Teller

# International yard and pound agreement of 1959; US survey foot: 39.37 inches to the metre (NIST SP 811, app. B.6).
METRES_PER_UNIT: dict[str, float] = {
    "m": 1.0,
    "ft": 0.3048,
    "us-ft": 1200.0 / 3937.0,
    "dm": 0.1,
    "cm": 0.01,
    "mm": 0.001,
}

_WORDS: dict[str, tuple[str, ...]] = {
    "m": ("m", "metre", "metres", "meter", "meters"),
    "ft": ("ft", "foot", "feet", "international foot", "international feet", "foot international", "intl foot"),
    "us-ft": (
        "us ft",
        "usft",
        "ftus",
        "ft us",
        "us foot",
        "us feet",
        "foot us",
        "feet us",
        "survey foot",
        "survey feet",
        "us survey foot",
        "us survey feet",
        "foot us survey",
        "feet us survey",
        "sft",
    ),
    "dm": ("dm", "decimetre", "decimetres", "decimeter", "decimeters"),
    "cm": ("cm", "centimetre", "centimetres", "centimeter", "centimeters"),
    "mm": ("mm", "millimetre", "millimetres", "millimeter", "millimeters"),
}
_BY_WORD = {word: unit for unit, words in _WORDS.items() for word in words}
_LOOSE_FEET = frozenset({"ft", "foot", "feet"})
_TWO_FEET_DIFFER = 1e-5  # the two feet differ by 2 parts in a million; anything larger is another unit
_KEY = "terrain.vertical_unit"


@dataclass(frozen=True, slots=True)
class UnitSaid:
    """A unit of height and who said so.

    ``exact`` is false for a bare "feet", which does not say which of the two feet is meant.
    """

    unit: str
    metres: float
    source: str
    exact: bool = True


@dataclass(frozen=True, slots=True)
class VerticalUnit:
    """The unit settled on: name, size, who said so, and what had to be assumed. Unknown: NaN metres."""

    unit: str
    metres: float
    source: str
    assumptions: tuple[str, ...] = ()


UNKNOWN_UNIT = VerticalUnit("unknown", math.nan, "stated by neither the band, the CRS nor the site file")


def read_unit_text(text: str | None, source: str) -> UnitSaid | None:
    """Understand a unit written in words.

    Parameters
    ----------
    text
        As found in the file (``"US survey foot"``); ``None`` or empty: nothing said.
    source
        Who said it, for messages.

    Returns
    -------
    UnitSaid or None
        ``None`` where nothing is said or the word is not a unit of height.
    """
    kept = "".join(letter if letter.isalnum() else " " for letter in (text or "").lower().replace("u.s.", "us"))
    words = " ".join(kept.split())
    unit = _BY_WORD.get(words)
    if unit is None:
        return None
    return UnitSaid(unit, METRES_PER_UNIT[unit], f"{source} ({text!r})", exact=words not in _LOOSE_FEET)


def unit_of_size(metres: float, name: str, source: str) -> UnitSaid:
    """Name the unit of a known size (a CRS axis gives its size in metres).

    Parameters
    ----------
    metres
        Size of the unit in metres.
    name
        Its name in the CRS, kept where the size is none of the usual ones.
    source
        Who said it, for messages.
    """
    for unit, size in METRES_PER_UNIT.items():
        if math.isclose(metres, size, rel_tol=1e-9):
            return UnitSaid(unit, size, f"{source} ({name!r})")
    return UnitSaid(name, metres, f"{source} ({name!r})")


def _contradict(one: UnitSaid, other: UnitSaid) -> bool:
    slack = 1e-9 if one.exact and other.exact else _TWO_FEET_DIFFER
    return not math.isclose(one.metres, other.metres, rel_tol=slack)


def settle_unit(said: Sequence[UnitSaid], teller: Teller, *, needed: bool = True) -> VerticalUnit:
    """Settle the unit of height from everything that was said about it.

    Parameters
    ----------
    said
        What band, CRS and site file say, in that order; those that say nothing are left out.
    teller
        Where the problem would stand.
    needed
        Whether an unknown unit is an error (else ``UNKNOWN_UNIT`` is returned).

    Raises
    ------
    TerrainError
        If two statements contradict each other, or none is there and one is needed.
    """
    if not said:
        if not needed:
            return UNKNOWN_UNIT
        raise teller.error(
            _KEY,
            f"The unit of height of {teller.dem_file} is not known: neither its band nor its CRS says it.",
            found="no unit",
            allowed='"m", "ft" (international) or "us-ft" (US survey)',
            remedy="look it up in the DEM's own description and set terrain.vertical_unit",
        )
    for place, one in enumerate(said):
        for other in said[place + 1 :]:
            if _contradict(one, other):
                raise teller.error(
                    _KEY,
                    f"Two units of height are stated for {teller.dem_file}, and they differ.",
                    found=f"{one.source} says {one.unit}, {other.source} says {other.unit}",
                    allowed="one unit, the same wherever it is stated",
                    remedy="find out which is right, correct the other (gdal_edit.py -units, -a_srs) or the site file",
                )
    best = next((one for one in said if one.exact), said[0])
    loose = f"{best.source} does not say which foot: taken as 0.3048 m (the US survey foot is 2 ppm longer)."
    assumed = () if best.exact else (loose,)
    return VerticalUnit(best.unit, best.metres, " and ".join(one.source for one in said), assumed)
