"""What leaves the program: GeoJSON, tables, the run document, the terminal.

Every name below is loaded when it is first used (PEP 562), so that ``import routing.outputs`` is cheap and rich
is loaded only where something is shown.
"""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from routing.outputs.cautions import CAUTIONS, INVENTED_PRICES
    from routing.outputs.field import Field
    from routing.outputs.fields import SCHEME_FIELDS, TABLES
    from routing.outputs.folder import check_folder, write_run
    from routing.outputs.geojson import layer_text, points_layer, routes_layer, samples_layer, water_layer, zones_layer
    from routing.outputs.messages import error_document, error_text
    from routing.outputs.outlook_screen import outlook_summary
    from routing.outputs.reference import fields_page
    from routing.outputs.runfacts import RunFacts
    from routing.outputs.runfile import look_document, plan_document
    from routing.outputs.screen import summary
    from routing.outputs.tables import (
        checks_table,
        costs_table,
        crossings_table,
        fields_table,
        samples_table,
        schemes_table,
        sections_table,
    )
    from routing.outputs.values import json_text
    from routing.outputs.wording import headline

_HOMES = {
    "CAUTIONS": "cautions",
    "Field": "field",
    "INVENTED_PRICES": "cautions",
    "RunFacts": "runfacts",
    "SCHEME_FIELDS": "fields",
    "TABLES": "fields",
    "check_folder": "folder",
    "checks_table": "tables",
    "costs_table": "tables",
    "crossings_table": "tables",
    "error_document": "messages",
    "error_text": "messages",
    "fields_page": "reference",
    "fields_table": "tables",
    "headline": "wording",
    "json_text": "values",
    "layer_text": "geojson",
    "look_document": "runfile",
    "outlook_summary": "outlook_screen",
    "plan_document": "runfile",
    "points_layer": "geojson",
    "routes_layer": "geojson",
    "samples_layer": "geojson",
    "samples_table": "tables",
    "schemes_table": "tables",
    "sections_table": "tables",
    "summary": "screen",
    "water_layer": "geojson",
    "write_run": "folder",
    "zones_layer": "geojson",
}

__all__ = [
    "CAUTIONS",
    "INVENTED_PRICES",
    "SCHEME_FIELDS",
    "TABLES",
    "Field",
    "RunFacts",
    "check_folder",
    "checks_table",
    "costs_table",
    "crossings_table",
    "error_document",
    "error_text",
    "fields_page",
    "fields_table",
    "headline",
    "json_text",
    "layer_text",
    "look_document",
    "outlook_summary",
    "plan_document",
    "points_layer",
    "routes_layer",
    "samples_layer",
    "samples_table",
    "schemes_table",
    "sections_table",
    "summary",
    "water_layer",
    "write_run",
    "zones_layer",
]


def __getattr__(name: str) -> Any:
    """Load a public name on first use."""
    home = _HOMES.get(name)
    if home is None:
        raise AttributeError(f"module 'routing.outputs' has no attribute {name!r}; public names: {', '.join(__all__)}")
    return getattr(importlib.import_module(f"routing.outputs.{home}"), name)


def __dir__() -> list[str]:
    return sorted(__all__)
