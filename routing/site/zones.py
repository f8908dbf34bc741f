"""Checks of the zones: a factor where there is one to give, names that tell them apart, a price that it can act on."""

from __future__ import annotations

from routing.site.draft import Draft
from routing.site.fields import allowed_text, number_text, value_text
from routing.site.ledger import Ledger
from routing.site.models import ZoneModel


def check_zones(draft: Draft, ledger: Ledger) -> None:
    """Check every zone by itself and against the others.

    Parameters
    ----------
    draft, ledger
        The values that can be used; takes the problems.
    """
    first: dict[str, str] = {}
    for prefix in draft.zones():
        _check_factor(prefix, draft, ledger)
        name = draft.text(f"{prefix}.name")
        if name is None:
            continue
        if name in first:
            ledger.add(
                f"{prefix}.name",
                "two zones have the same name",
                found=f"{value_text(name)}, also the name of {first[name]}",
                allowed="a name of its own for each zone",
                remedy="give one of them another 'name', or remove it if it is there twice",
            )
        first.setdefault(name, prefix)


def _check_factor(prefix: str, draft: Draft, ledger: Ledger) -> None:
    key, kind = f"{prefix}.cost_factor", draft.text(f"{prefix}.kind")
    if ledger.names(key) or kind is None:
        return
    factor = draft.number(key)
    if kind == "cost" and factor is None:
        ledger.add(
            key,
            "the zone changes what laying costs, but not by how much",
            found='kind = "cost" without cost_factor',
            allowed=allowed_text(ZoneModel.model_fields["cost_factor"]),
            remedy=ledger.lift_comment(key, "2.0") + ', or set kind = "barred"',
        )
    elif kind == "barred" and factor is not None:
        ledger.add(
            key,
            "the zone is barred, so nothing is laid in it that a factor could act on",
            found=f'cost_factor = {number_text(factor)}, and kind = "barred"' + _by_default(prefix, draft),
            allowed='cost_factor together with kind = "cost"',
            remedy='remove cost_factor, or set kind = "cost"',
        )


def _by_default(prefix: str, draft: Draft) -> str:
    return "" if draft.given(f"{prefix}.kind") else " since no kind is given"
