"""Checks that a siphon needs and that this version does not make: listed, so that nobody takes them for made."""

from __future__ import annotations

from routing.records import Check

_PRACTICE = "common practice"

#: Name, title, and who asks for it.
NOT_MADE = (
    ("starting", "Starting: filling, vacuum needed, order of valves", 'ASDSO Dam Safety Toolbox, "Siphons"'),
    ("air_release", "Air coming out of the water at the crest, and its clearing", _PRACTICE),
    (
        "full_vacuum",
        "Collapse when the column parts (full vacuum)",
        "Western Dam Engineering Technical Note 1(1), Simple Steps to Siphoning, 2013",
    ),
    ("bursting", "Bursting pressure with the outlet valve shut", _PRACTICE),
    ("surge", "Surge when valves move", _PRACTICE),
    ("ends", "Vortex at the intake, scour at the outlet", "USBR Water Measurement Manual, chapter 14"),
    ("freezing", "Freezing of standing or slow water", _PRACTICE),
    ("holding", "Holding: anchors, bends, free spans", _PRACTICE),
    ("drawdown_rate", "Rate at which the water body may fall", _PRACTICE),
)


def unmade(name: str, title: str, source: str, reason: str = "not made by this version") -> Check:
    """Return a check that was not made.

    Parameters
    ----------
    name, title
        What it is called.
    source
        Who asks for it.
    reason
        Why it was not made.
    """
    return Check(name, title, None, None, None, "", None, reason, source)


def unmade_checks() -> tuple[Check, ...]:
    """Return every check that this version does not make."""
    return tuple(unmade(*row) for row in NOT_MADE)
