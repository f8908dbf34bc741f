"""What a key of the site file carries besides its value: meaning, unit, range.

Messages, reference page, schema and starter are made from it.
"""

from __future__ import annotations

from typing import Any, Literal, get_args, get_origin

from pydantic import BaseModel, ConfigDict, Field
from pydantic.fields import FieldInfo
from pydantic_core import PydanticUndefined

_TYPE_WORDS = {float: "a number", int: "a whole number", bool: "true or false", str: 'text in quotes, "..."'}
_BOUNDS = {"ge": "at least", "gt": "above", "le": "at most", "lt": "below"}


#: A value is told up to this many characters.
_LONGEST = 160


class Section(BaseModel):
    """A table of the site file: unknown keys refused, nothing converted, no NaN and no infinity."""

    model_config = ConfigDict(extra="forbid", strict=True, allow_inf_nan=False, frozen=True)


def key(meaning: str, default: Any = ..., *, unit: str = "", otherwise: str = "", **bounds: Any) -> Any:
    """Describe a key of the site file.

    Parameters
    ----------
    meaning
        What the key says, for the reference page, the schema and the starter file.
    default
        Value where the key is left out; ``...`` makes the key required.
    unit
        Unit as a person would write it.
    otherwise
        What happens where the key is left out and the default is ``None``.
    **bounds
        ``ge``, ``gt``, ``le``, ``lt``, as pydantic names them.

    Returns
    -------
    FieldInfo
        For use as the default of a model field.
    """
    extra: dict[str, Any] = {"unit": unit, "otherwise": otherwise}
    shown = {name: text for name, text in extra.items() if text}
    return Field(default, description=meaning, json_schema_extra=shown, **bounds)


def unit_of(info: FieldInfo) -> str:
    """Return the unit of a key, empty where it has none."""
    return _extra(info, "unit")


def otherwise_of(info: FieldInfo) -> str:
    """Return what happens where the key is left out, empty where that is its plain default."""
    return _extra(info, "otherwise")


def _extra(info: FieldInfo, name: str) -> str:
    extra = info.json_schema_extra
    return str(extra.get(name, "")) if isinstance(extra, dict) else ""


def bounds_of(info: FieldInfo) -> dict[str, float]:
    """Return the bounds of a key by pydantic's names (``ge``, ``gt``, ``le``, ``lt``)."""
    found: dict[str, float] = {}
    for mark in info.metadata:
        found.update({name: getattr(mark, name) for name in _BOUNDS if getattr(mark, name, None) is not None})
    return found


def choices_of(info: FieldInfo) -> tuple[Any, ...]:
    """Return the choices of a key, nothing where it is not a choice."""
    for kind in (info.annotation, *get_args(info.annotation)):
        if get_origin(kind) is Literal:
            return get_args(kind)
    return ()


def value_text(value: Any) -> str:
    """Return a value as it would stand in the site file, cut where it is long."""
    text = _value_text(value)
    return text if len(text) <= _LONGEST else f"{text[:_LONGEST]}..."


def _value_text(value: Any) -> str:
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return f'"{value}"'
    if isinstance(value, float):
        return number_text(value)
    if isinstance(value, dict):
        return "{ " + ", ".join(f"{name} = {value_text(item)}" for name, item in value.items()) + " }"
    if isinstance(value, list | tuple):
        return "[" + ", ".join(value_text(item) for item in value) + "]"
    return str(value)


def number_text(value: float) -> str:
    """Return a number without an exponent where a person would write it so."""
    return f"{value:.12g}" if abs(value) < 1e12 else repr(value)


def range_text(info: FieldInfo) -> str:
    """Return the range of a key with its unit, empty where it has neither."""
    bounds, unit = bounds_of(info), unit_of(info)
    if bounds.keys() == {"ge", "le"}:
        text = f"from {number_text(bounds['ge'])} to {number_text(bounds['le'])}"
    else:
        text = ", ".join(f"{word} {number_text(bounds[name])}" for name, word in _BOUNDS.items() if name in bounds)
    return f"{text} {unit}".strip() if unit else text


def allowed_text(info: FieldInfo) -> str:
    """Return what a key allows: choices, or kind of value with range and unit."""
    choices = choices_of(info)
    if choices:
        return " or ".join(value_text(choice) for choice in choices)
    kinds = get_args(info.annotation) or (info.annotation,)
    kind = next((_TYPE_WORDS[k] for k in kinds if k in _TYPE_WORDS), "a table")
    limits = range_text(info)
    return f"{kind}, {limits}" if limits else kind


def is_required(info: FieldInfo) -> bool:
    """Return whether the key has no default."""
    return info.is_required()


def default_of(info: FieldInfo) -> Any:
    """Return the default of a key; ``None`` where it has none."""
    value = info.get_default(call_default_factory=True, validated_data={})
    return None if value is PydanticUndefined else value
