"""What the site file may hold, generated from its models: reference page and JSON Schema."""

from __future__ import annotations

from typing import Any

from pydantic.fields import FieldInfo

from routing.site.fields import (
    choices_of,
    default_of,
    otherwise_of,
    range_text,
    unit_of,
    value_text,
)
from routing.site.models import SECTIONS, SiteModel, heading

_TOP = """# Keys of the site file

<!-- Generated from the code by routing.site.reference_page(); do not edit by hand. -->

A site file is TOML text in UTF-8. Paths are relative to its folder. Every key names its unit; a key that is not
listed here is refused, and so are NaN, infinity, numbers in quotes and values out of range. All problems are told at
once, each with the line it stands in. Levels are in metres in the vertical datum of the DEM, after
`terrain.datum_offset_m` has been added to the DEM.

In messages, `pipes[2]` is the second `[[pipes]]` table of the file.
"""
_WAYS_OF_A_PIPE = """A pipe is given in one of three ways:

- `table = "ISO 4427"` with `outside_diameter_mm` and `sdr`: polyethylene; the table gives wall, roughness and modulus.
- `table = "EN 10220"` with `outside_diameter_mm` and `wall_mm`: steel; the table gives roughness and modulus.
- no `table`: `outside_diameter_mm`, `wall_mm`, and `roughness_mm` or `darcy_factor`.

`roughness_mm` (or `darcy_factor`), `modulus_mpa`, `poisson_ratio` and `ovality_pct` may be set with a table too, and
then stand in place of the table's. Prices: all pipes have `supply_per_m`, or none has a price.
"""
_ZONES = """A route never enters the interior of a barred zone, nor does the finished line; it may run along the edge.
The shape is taken as it is drawn: add what distance is wanted before. Zones may overlap: a bar holds whatever else lies
there, and of cost zones the dearest counts. A cost zone multiplies the price of laying (`laying_per_m`), not that of
the pipe.
"""
_NOTES = {
    "pipes": _WAYS_OF_A_PIPE,
    "zones": _ZONES,
    "air": "Where the datum of the DEM is a local or unknown one, one of `pressure_pa` and `altitude_m` is needed.\n",
    "limits": (
        "`pipe_load_hours` is a year unless set, an assumption: a plastic wall yields under lasting load, so a\n"
        "siphon that is to stay for ten years needs 87 600 h here, and one for a week in an emergency may have 170 h.\n"
    ),
}


def schema() -> dict[str, Any]:
    """Return the JSON Schema of the site file.

    Returns
    -------
    dict
        JSON Schema, draft 2020-12, made from the models that check the file. Rules between keys (exactly one way
        of giving a point, and the like) are beyond it; ``load_site`` checks those.
    """
    found = SiteModel.model_json_schema()
    tables = {name: _plain(table) for name, table in found.pop("$defs").items()}
    head = {"$schema": "https://json-schema.org/draft/2020-12/schema", "title": "Site file"}
    return head | _plain(found) | {"$defs": tables}


def _plain(table: dict[str, Any]) -> dict[str, Any]:
    """Return the schema of a table without what TOML does not have (null) and without titles made from names."""
    keys = {name: _plain_key(info) for name, info in table["properties"].items()}
    return {name: item for name, item in table.items() if name != "title"} | {"properties": keys}


def _plain_key(info: dict[str, Any]) -> dict[str, Any]:
    plain = {name: item for name, item in info.items() if name not in {"title", "anyOf"}}
    for choice in info.get("anyOf", ()):
        if choice != {"type": "null"}:
            plain |= choice
    if plain.get("default", "") is None:
        del plain["default"]
    return plain


def reference_page() -> str:
    """Return the reference page of the site file.

    Returns
    -------
    str
        Markdown: a table for each section with key, meaning, unit, default and range.
    """
    parts = [_TOP, _section_text("", {"title": SiteModel.model_fields["title"]}, "Top of the file")]
    for name, model in SECTIONS.items():
        head = f"`{heading(name)}`"
        meaning = " ".join((model.__doc__ or "").replace("``", "`").split())
        parts.append(_section_text(f"{meaning}\n", model.model_fields, head))
        if name in _NOTES:
            parts.append(_NOTES[name])
    return "\n".join(parts)


def _section_text(meaning: str, fields: dict[str, FieldInfo], head: str) -> str:
    rows = ["| key | meaning | unit | default | allowed |", "| --- | --- | --- | --- | --- |"]
    for name, info in fields.items():
        cells = (f"`{name}`", info.description or "", unit_of(info), _default_text(info), _allowed(info))
        rows.append("| " + " | ".join(cell.replace("|", "\\|") for cell in cells) + " |")
    opening = f"{meaning}\n" if meaning else ""
    return f"## {head}\n\n{opening}" + "\n".join(rows) + "\n"


def _default_text(info: FieldInfo) -> str:
    if info.is_required():
        return "**required**"
    default = default_of(info)
    if default is None or default == "":
        return otherwise_of(info) or "none"
    return f"`{value_text(default)}`"


def _allowed(info: FieldInfo) -> str:
    choices = choices_of(info)
    if choices:
        return ", ".join(f"`{value_text(choice)}`" for choice in choices)
    words = range_text(info).removesuffix(unit_of(info)).strip()
    kind = str(info.annotation)
    if words:
        return words
    return "`true`, `false`" if "bool" in kind else "text" if "str" in kind else "any number"
