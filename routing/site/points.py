"""Checks of the two ends of the pipe: one way of giving each point, nothing swapped, not both at one place."""

from __future__ import annotations

from dataclasses import replace

from routing.site.draft import Draft
from routing.site.fields import number_text
from routing.site.ledger import Ledger

_WAYS = (("x", "y"), ("lon", "lat"), ("file",))
_ALLOWED = "x and y, or lon and lat, or file: one of the three ways"
#: Ends further apart than this (in degrees of arc) are one site only by a slip.
_FAR_DEGREES = 2.0


def check_point(section: str, draft: Draft, ledger: Ledger) -> None:
    """Check that a point is given in exactly one way, and whole.

    Parameters
    ----------
    section
        ``"intake"`` or ``"outlet"``.
    draft, ledger
        The values that can be used; takes the problems.
    """
    names = [name for way in _WAYS for name in way]
    given = [name for name in names if draft.given(f"{section}.{name}")]
    refused = [name for name in names if ledger.names(f"{section}.{name}")]
    _hint_slips(section, ledger)
    if refused:
        return  # what is wrong with them has been said; the way cannot be judged
    touched = [way for way in _WAYS if any(name in given for name in way)]
    if not touched:
        remedy = _lift_remedy(section, ledger)
        key = section if remedy is None else f"{section}.x"
        ledger.add(key, f"the {section} has no place", allowed=_ALLOWED, remedy=remedy or _add_remedy(section))
    elif len(touched) > 1:
        ledger.add(
            section,
            f"the place of the {section} is given in more than one way",
            found=", ".join(given),
            allowed=_ALLOWED,
            remedy=f"keep {' and '.join(touched[0])}, or another one, and remove the rest",
        )
    else:
        _check_whole(section, touched[0], given, ledger)


def _lift_remedy(section: str, ledger: Ledger) -> str | None:
    lines = [ledger.lines.commented.get(f"{section}.{name}") for name in ("x", "y")]
    if None in lines:
        return None
    return f"take away the '#' in lines {lines[0]} and {lines[1]} and write the coordinates of your {section}"


def _add_remedy(section: str) -> str:
    return f"add 'x = ...' and 'y = ...' in the CRS of the DEM under [{section}]"


def _check_whole(section: str, way: tuple[str, ...], given: list[str], ledger: Ledger) -> None:
    missing = [name for name in way if name not in given]
    for name in missing:
        key, other = f"{section}.{name}", next(n for n in way if n != name)
        ledger.add(
            key,
            f"{other} is given without {name}",
            found=f"{other} alone",
            allowed=_ALLOWED,
            remedy=ledger.lift_comment(key, "..."),
        )


def _hint_slips(section: str, ledger: Ledger) -> None:
    """Reword the remedy where a longitude or latitude out of range tells what slipped."""
    for index, problem in enumerate(ledger.problems):
        if problem.key not in {f"{section}.lon", f"{section}.lat"}:
            continue
        hint = _slip_hint(problem.found, problem.key.rpartition(".")[2])
        if hint:
            ledger.problems[index] = replace(problem, remedy=hint)


def _slip_hint(found: str, name: str) -> str:
    try:
        value = abs(float(found))
    except ValueError:
        return ""
    if value > 360.0:
        return "this looks like a coordinate of a projected CRS: give it as x and y in the CRS of the DEM"
    if name == "lat" and 90.0 < value <= 180.0:
        return "lon and lat look swapped: lon is east, lat is north"
    return ""


def check_ends(draft: Draft, ledger: Ledger) -> None:
    """Check the two ends against each other: not at one place, not swapped, not far apart.

    Parameters
    ----------
    draft, ledger
        The values that can be used; takes the problems.
    """
    for way in _WAYS[:2]:
        values = [draft.number(f"{section}.{name}") for section in ("intake", "outlet") for name in way]
        if None in values:
            continue
        x_in, y_in, x_out, y_out = (value for value in values if value is not None)
        if (x_in, y_in) == (x_out, y_out):
            ledger.add(
                f"outlet.{way[0]}",
                "intake and outlet are at the same place",
                found=f"{way[0]} = {number_text(x_out)}, {way[1]} = {number_text(y_out)} for both",
                allowed="two places, one on either side of the barrier",
                remedy="correct one of the two",
            )
        elif way == ("lon", "lat"):
            _check_apart((x_in, y_in), (x_out, y_out), ledger)


def _check_apart(intake: tuple[float, float], outlet: tuple[float, float], ledger: Ledger) -> None:
    apart = max(_arc(a - b) for a, b in zip(intake, outlet, strict=True))
    if apart <= _FAR_DEGREES:
        return
    swapped = max(_arc(a - b) for a, b in zip(intake, reversed(outlet), strict=True)) <= _FAR_DEGREES
    remedy = (
        "lon and lat look swapped in one of the two: lon is east, lat is north"
        if swapped
        else "check both pairs of coordinates"
    )
    ledger.add(
        "outlet.lon",
        "intake and outlet are far apart",
        found=f"{number_text(apart)}° apart",
        allowed=f"at most {number_text(_FAR_DEGREES)}° apart in longitude and in latitude",
        remedy=remedy,
    )


def _arc(degrees: float) -> float:
    """Return a difference of angles without its full turns: both sides of the 180th meridian are near."""
    return abs((degrees + 180.0) % 360.0 - 180.0)
