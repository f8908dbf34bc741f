"""Checks of ends left open: an intake anywhere along the shore, an outlet on lines, in polygons or anywhere low."""

from __future__ import annotations

from routing.site.draft import Draft
from routing.site.fields import number_text
from routing.site.ledger import Ledger

_POSITION = ("x", "y", "lon", "lat")
_SHAPES = {"line": "lines", "polygon": "polygons"}


def has_point(section: str, draft: Draft) -> bool:
    """Return whether an end must be given as a point; false too where its kind cannot be used, as is told already.

    Parameters
    ----------
    section
        ``"intake"`` or ``"outlet"``.
    draft
        The values that can be used.
    """
    return draft.text(f"{section}.kind") in ("point", "shore")


def check_choices(draft: Draft, ledger: Ledger) -> None:
    """Check the keys that go with an end left open.

    Parameters
    ----------
    draft, ledger
        The values that can be used; takes the problems.
    """
    if "intake" in draft.sections:
        _check_shore(draft, ledger)
    if "outlet" in draft.sections:
        _check_shapes(draft, ledger)
        _check_toe(draft, ledger)


def _check_shore(draft: Draft, ledger: Ledger) -> None:
    key, kind = "intake.underwater_length_m", draft.text("intake.kind")
    if kind is None or ledger.names(key):
        return
    length = draft.number(key)
    if kind == "point" and length is not None:
        ledger.add(
            key,
            "an underwater length is given, but the intake is a point: its pipe is measured from there",
            found=f"underwater_length_m = {number_text(length)}{_by_default('intake', draft)}",
            allowed='underwater_length_m together with kind = "shore"',
            remedy='set kind = "shore", or remove underwater_length_m',
        )
    elif kind == "shore" and length is None and draft.text("terrain.water_shown") == "surface":
        ledger.add(
            key,
            "the length of pipe from the mouth to the shore is not given, and cannot be measured: the DEM shows the "
            "water's surface, not its bed",
            found='kind = "shore", and terrain.water_shown = "surface"',
            allowed="a length in metres, 0 for a mouth at the shore",
            remedy=ledger.lift_comment(key, "...") + ', or set terrain.water_shown = "bed" if the DEM shows it',
        )


def _by_default(section: str, draft: Draft) -> str:
    return "" if draft.given(f"{section}.kind") else ", and no kind is given"


def _check_shapes(draft: Draft, ledger: Ledger) -> None:
    kind = draft.text("outlet.kind")
    if kind is None or has_point("outlet", draft):
        return
    points = [name for name in _POSITION if draft.given(f"outlet.{name}")]
    shapes = _SHAPES.get(kind)
    unwanted = points if shapes or not draft.given("outlet.file") else [*points, "file"]
    if unwanted:
        ledger.add(
            f"outlet.{unwanted[0]}",
            f'the outlet is given a place by {" and ".join(unwanted)}, and kind = "{kind}"',
            found=", ".join(unwanted),
            allowed=f"file, with the {shapes} that it may lie on" if shapes else "no place: every place is tried",
            remedy=f'remove {" and ".join(unwanted)}, or set kind = "point"',
        )
    if shapes and not draft.given("outlet.file") and not ledger.names("outlet.file"):
        ledger.add(
            "outlet.file",
            f"the {shapes} that the outlet may lie on are not given",
            found=f'kind = "{kind}" without file',
            allowed=f"a GeoJSON or GeoPackage file with {shapes}, in any CRS",
            remedy=ledger.lift_comment("outlet.file", '"..."'),
        )


def _check_toe(draft: Draft, ledger: Ledger) -> None:
    key, kind = "outlet.beyond_toe_m", draft.text("outlet.kind")
    if kind in (None, "anywhere") or not draft.given(key):
        return
    ledger.add(
        key,
        "a distance from the toe is given, but it is you who says where the outlet lies",
        found=f'kind = "{kind}"{_by_default("outlet", draft)}',
        allowed='beyond_toe_m together with kind = "anywhere"',
        remedy='set kind = "anywhere", or remove beyond_toe_m',
    )
