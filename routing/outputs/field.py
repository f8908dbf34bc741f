"""What an output field is, and how its value is taken from a record."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from typing import Generic, Literal, TypeVar

from routing.outputs.values import Value, clean
from routing.records import Outlook, Plan

Item = TypeVar("Item")
Kind = Literal["text", "integer", "number", "flag"]
#: What a value may be taken from besides its own record.
Told = Plan | Outlook

#: Places of a map position in length units and in degrees: a millimetre either way.
MAP_DECIMALS_LENGTH = 3
MAP_DECIMALS_ANGLE = 8


@dataclass(frozen=True, slots=True)
class Shown:
    """How a field stands in the table on the terminal: ``factor`` turns the field's unit into ``unit``."""

    head: str
    unit: str = ""
    factor: float = 1.0
    style: Literal["text", "count", "whole", "two", "three figures"] = "text"


@dataclass(frozen=True, slots=True)
class Field(Generic[Item]):
    """One output field.

    Attributes
    ----------
    name
        Its name in every file; the unit is part of it where a bare number could be misread.
    unit
        Unit, empty for text, counts and pure numbers.
    kind
        ``"text"``, ``"integer"``, ``"number"`` or ``"flag"``.
    decimals
        Places that a number is rounded to; ``"map"`` means 3, or 8 where the map is in degrees.
    sense
        What it means, in one sentence.
    get
        Takes the value from the plan and the record.
    shown
        How the terminal shows it; ``None`` where it does not.
    """

    name: str
    unit: str
    kind: Kind
    decimals: int | Literal["map"] | None
    sense: str
    get: Callable[[Told, Item], object]
    shown: Shown | None = None

    def value(self, told: Told, item: Item) -> Value:
        """Return the value, rounded, with ``None`` for what is not known, not finite or does not apply."""
        decimals = map_decimals(told) if self.decimals == "map" else self.decimals
        found = clean(self.get(told, item), decimals)
        if self.kind == "number" and isinstance(found, int):
            return float(found)  # so that a column is of one type in every file
        return found

    def cell(self, told: Told, item: Item) -> str:
        """Return the value as text of a table: fixed places, point as decimal sign, empty for ``None``."""
        found = self.value(told, item)
        if found is None:
            return ""
        if isinstance(found, bool):
            return "true" if found else "false"
        if isinstance(found, float):
            decimals = map_decimals(told) if self.decimals == "map" else self.decimals
            return format(found, ".10g") if decimals is None else f"{found:.{decimals}f}"
        return str(found)


def map_decimals(told: Told) -> int:
    """Return the places of a map position: 3 for metres and feet, 8 for degrees."""
    unit = told.terrain.facts.horizontal_unit.lower()
    angular = unit.startswith(("deg", "grad", "rad", "°"))
    return MAP_DECIMALS_ANGLE if angular else MAP_DECIMALS_LENGTH


def row(fields: Iterable[Field[Item]], told: Told, item: Item) -> dict[str, Value]:
    """Return the values of all ``fields`` by name."""
    return {field.name: field.value(told, item) for field in fields}
