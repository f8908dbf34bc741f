"""Refusals by single keys: what pydantic finds, said so that a surveyor can put it right."""

from __future__ import annotations

import difflib
from collections.abc import Callable, Iterator
from typing import Any

from pydantic import ValidationError
from pydantic.fields import FieldInfo

from routing.site.fields import Section, allowed_text, bounds_of, choices_of, number_text, unit_of, value_text
from routing.site.ledger import Ledger
from routing.site.models import REPEATED, SECTIONS, SiteModel, heading

_WRONG_KIND = {
    "float_type": "must be a number",
    "int_type": "must be a whole number",
    "int_from_float": "must be a whole number",
    "bool_type": "must be true or false",
    "string_type": "must be text",
    "finite_number": "must be a finite number",
    "literal_error": "is not one of the choices",
    "string_too_short": "must not be empty",
    "string_too_long": "is too long",
    "greater_than": "is out of range",
    "greater_than_equal": "is out of range",
    "less_than": "is out of range",
    "less_than_equal": "is out of range",
}
#: Slips of unit, by the unit asked for: name of the other unit, and how a value in it is turned.
_SLIPS: dict[str, tuple[tuple[str, Callable[[float], float]], ...]] = {
    "mm": (("metres", lambda v: v * 1000.0),),
    "Pa": (("hectopascals", lambda v: v * 100.0), ("kilopascals", lambda v: v * 1000.0)),
    "°C": (("kelvins", lambda v: v - 273.15), ("degrees Fahrenheit", lambda v: (v - 32.0) / 1.8)),
    "m³/s": (("litres a second", lambda v: v / 1000.0),),
    "MPa": (("pascals", lambda v: v / 1e6), ("gigapascals", lambda v: v * 1000.0)),
}

#: Whole numbers in TOML have no end; beyond this they do not go into a float.
_HUGE = 1e300

Loc = tuple[int | str, ...]


def dotted(loc: Loc) -> str:
    """Return a pydantic location as a dotted key; entries of lists count from 1."""
    key = ""
    for part in loc:
        key += f"[{part + 1}]" if isinstance(part, int) else f".{part}" if key else part
    return key


def note_refusals(error: ValidationError, ledger: Ledger) -> None:
    """Turn each finding of pydantic into a problem with file, key, line, found, allowed and remedy.

    Parameters
    ----------
    error
        What pydantic raised on the whole site file.
    ledger
        Takes the problems.
    """
    for item in error.errors(include_url=False, include_context=False):
        loc, kind, value = item["loc"], item["type"], item["input"]
        if kind == "missing":
            _note_missing(loc, ledger)
        elif kind == "extra_forbidden":
            _note_unknown(loc, value, ledger)
        elif loc and loc[0] in SECTIONS and (len(loc) == 1 or (loc[0] in REPEATED and len(loc) == 2)):
            _note_not_a_table(loc, value, ledger)
        else:
            _note_value(loc, kind, value, ledger)


def _model_at(loc: Loc) -> type[Section]:
    return SECTIONS[str(loc[0])] if len(loc) > 1 and loc[0] in SECTIONS else SiteModel


def _field_at(loc: Loc) -> FieldInfo:
    return _model_at(loc).model_fields[str(loc[-1])]


def example_of(info: FieldInfo) -> str:
    """Return a value to show how a key is written."""
    choices = choices_of(info)
    if choices:
        return value_text(choices[0])
    return '"..."' if allowed_text(info).startswith("text") else "..."


def _note_missing(loc: Loc, ledger: Ledger) -> None:
    key = dotted(loc)
    if len(loc) == 1 and loc[0] in SECTIONS:
        head = heading(key)
        commented = ledger.lines.commented.get(key)
        remedy = f"take away the '#' in line {commented} and below it" if commented else f"add a table {head}"
        ledger.add(key, f"the table {head} is missing", allowed=_table_keys(key), remedy=remedy)
        return
    info = _field_at(loc)
    remedy = ledger.lift_comment(key, example_of(info))
    ledger.add(key, f"{loc[-1]} is missing: {info.description}", allowed=allowed_text(info), remedy=remedy)


def _table_keys(section: str) -> str:
    required = [name for name, info in SECTIONS[section].model_fields.items() if info.is_required()]
    keys = f"; it must hold {', '.join(required)}" if required else ""
    return f"{'one table or more' if section == 'pipes' else 'one table'}{keys}"


def _note_not_a_table(loc: Loc, value: Any, ledger: Ledger) -> None:
    key, section = dotted(loc), str(loc[0])
    listed = section in REPEATED and isinstance(value, list | tuple)
    many = listed and len(value) > 0
    if section in REPEATED:
        thing, least = ("pipe size", 1) if section == "pipes" else ("zone", 0)
        allowed = f"{least} to 200 tables {heading(section)}"
        remedy = f"write each {thing} as a table of its own, headed {heading(section)}"
    else:
        allowed, remedy = f"one table [{section}]", f"write [{section}] on a line of its own and its keys below it"
    unlisted = f"too many {section} are listed" if many else "no pipe is listed"
    what = unlisted if listed and len(loc) == 1 and (many or section == "pipes") else f"{key} must be a table"
    found = f"{len(value)} entries" if many else value_text(value)
    ledger.add(key, what, found=found, allowed=allowed, remedy=remedy)


def _note_unknown(loc: Loc, value: Any, ledger: Ledger) -> None:
    key, name = dotted(loc), str(loc[-1])
    model = _model_at(loc)
    known = list(model.model_fields)
    near = difflib.get_close_matches(name, known, n=1, cutoff=0.6)
    homes = [section for section, other in SECTIONS.items() if name in other.model_fields]
    if near:
        remedy = f"did you mean '{near[0]}'?"
    elif homes:
        remedy = f"'{name}' belongs under {heading(homes[0])}: move it there"
    else:
        far = difflib.get_close_matches(name, known, n=1, cutoff=0.3)
        remedy = f"remove it, or put '#' before it (the nearest known key is '{far[0]}')" if far else "remove it"
    what = "unknown table" if isinstance(value, dict) else "unknown key"
    found = name if isinstance(value, dict | list) else f"{name} = {value_text(value)}"
    ledger.add(key, what, found=found, allowed=", ".join(known), remedy=remedy)


def _note_value(loc: Loc, kind: str, value: Any, ledger: Ledger) -> None:
    info = _field_at(loc)
    what = f"{loc[-1]} {_WRONG_KIND.get(kind, 'cannot be used')}"
    ledger.add(
        dotted(loc), what, found=value_text(value), allowed=allowed_text(info), remedy=_remedy(info, kind, value)
    )


def _remedy(info: FieldInfo, kind: str, value: Any) -> str:
    if kind == "literal_error":
        near = difflib.get_close_matches(str(value), [str(choice) for choice in choices_of(info)], n=1, cutoff=0.5)
        return f'did you mean "{near[0]}"?' if near and isinstance(value, str) else "write one of the choices"
    if kind in {"float_type", "int_type"} and isinstance(value, str):
        return _unquote_remedy(info, value)
    if kind == "string_type":
        return "put the text in quotes"
    if kind == "finite_number":
        return "write a finite number, or leave the key out"
    if kind == "bool_type":
        return "write true or false, without quotes and in small letters"
    slip = next(_slips(info, value), "")
    unit = f"correct the value; its unit is {unit_of(info)}" if unit_of(info) else "correct the value"
    return slip or unit


def _unquote_remedy(info: FieldInfo, value: str) -> str:
    try:
        number = float(value.strip().replace(",", "."))
    except ValueError:
        unit = f" in {unit_of(info)}, without the unit" if unit_of(info) else ""
        return f"write a number{unit}, without quotes"
    return f"write it without quotes and with a point: {number_text(number)}"


def _slips(info: FieldInfo, value: Any) -> Iterator[str]:
    """Yield guesses at a slip of unit: those that bring the value into its range."""
    if isinstance(value, bool) or not isinstance(value, int | float) or not 0 < abs(value) < _HUGE:
        return
    bounds = bounds_of(info)
    low = bounds.get("ge", bounds.get("gt", float("-inf")))
    high = bounds.get("le", bounds.get("lt", float("inf")))
    for other, turn in _SLIPS.get(unit_of(info), ()):
        turned = turn(float(value))
        if low <= turned <= high:
            yield f"is it in {other}? In {unit_of(info)} it would be {number_text(round(turned, 6))}"
