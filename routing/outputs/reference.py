"""The reference page of output fields, made from the dictionary: ``python -m routing.outputs.reference PAGE``."""

from __future__ import annotations

import sys
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from routing.outputs.field import Field
from routing.outputs.fields import TABLES

#: Layers that have the fields of a table.
_LAYERS = {"schemes.csv": "routes.geojson", "samples.csv": "samples.geojson"}

_HEAD = """# Output fields

Made from `routing/outputs/fields.py` by `python -m routing.outputs.reference docs/reference/fields.md`.

A run is one folder. Levels are metres in the vertical datum of the DEM; chainages are distances along the ground
from the intake. Map positions (`x`, `y`) are in the CRS of the DEM, to 3 places, or 8 where it is in degrees.
What is unknown, infinite or does not apply is empty in tables and `null` in JSON.

| file | holds |
| --- | --- |
| `routes.geojson` | one line feature a scheme, with the fields of `schemes.csv` |
| `water.geojson` | the water body as polygons |
| `zones.geojson` | the zones as polygons, as they were mended and joined; no feature where there are none |
| `points.geojson` | intake, outlet, crest of each route, crossings, lowest possible crest, spill |
| `samples.geojson` | candidates by weights that no scheme runs on, with the fields of `samples.csv`; may be empty |
| `schemes.csv` | one row a scheme, best first |
| `sections.csv` | long section of each route, with levels and pressures of its best scheme |
| `checks.csv` | one row for every scheme and check, the checks not made included |
| `costs.csv` | one row for every scheme and cost line |
| `crossings.csv` | one row for every way over the divide that is a place of its own, with why it was used or not |
| `samples.csv` | one row for every candidate by weights, with what it lacks |
| `fields.csv` | this page as a table |
| `run.json` | everything but the coordinates: result, settings, versions, hashes of inputs and files, warnings |

GeoJSON is RFC 7946: WGS 84 longitude and latitude with 7 decimals, cut at the antimeridian, no height.
Lines are drawn so that no straight segment in longitude and latitude strays more than 0.01 m from the route; take
lengths from `length_m`, not from the drawn line, which knows no slopes.
CSV is UTF-8 with commas, a point as decimal sign, and CRLF line ends (RFC 4180).
"""


def fields_page() -> str:
    """Return the page as Markdown."""
    return "\n".join([_HEAD, *(_section(file, fields) for file, fields in TABLES.items())])


def _section(file: str, fields: Mapping[str, Field[Any]]) -> str:
    title = f"{file}, {_LAYERS[file]}" if file in _LAYERS else file
    rows = [
        f"| `{field.name}` | {field.unit} | {field.kind} | {'' if field.decimals is None else field.decimals} | "
        f"{field.sense} |"
        for field in fields.values()
    ]
    head = f"## {title}\n\n| field | unit | kind | decimals | sense |\n| --- | --- | --- | --- | --- |"
    return "\n".join([head, *rows, ""])


if __name__ == "__main__":
    Path(sys.argv[1]).write_text(fields_page(), encoding="utf-8")
