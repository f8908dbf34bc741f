"""Reference page and schema: generated, complete, and in step with what is committed."""

from __future__ import annotations

import json
from pathlib import Path

from routing.site import reference_page, schema
from routing.site.models import REPEATED, SECTIONS

ROOT = Path(__file__).resolve().parents[2]
PAGE = ROOT / "docs" / "reference" / "site-file.md"


def test_the_committed_page_is_the_generated_one():
    assert PAGE.read_text(encoding="utf-8") == reference_page(), (
        "write routing.site.reference_page() to docs/reference/site-file.md"
    )


def test_every_key_has_a_full_row():
    page = reference_page()
    for section, model in SECTIONS.items():
        head = f"## `[[{section}]]`" if section in REPEATED else f"## `[{section}]`"
        body = page.split(head)[1].split("\n## ")[0]
        rows = [line for line in body.split("\n") if line.startswith("| `")]
        assert [row.split("`")[1] for row in rows] == list(model.model_fields)
        for row in rows:
            _, _, meaning, _, default, allowed, _ = (cell.strip() for cell in row.replace("\\|", "/").split("|"))
            assert meaning
            assert default
            assert allowed


def test_rows_say_unit_default_and_range():
    page = reference_page()
    assert (
        "| `reserve_m` | head kept between the lowest pressure in the pipe and boiling | m of water | `2.5` | from 0 to 9 |"
        in page
    )
    assert "| **required** | from -500 to 9000 |" in page
    assert "``" not in page


def test_the_schema_holds_every_key_with_its_range():
    found = schema()
    assert found["$schema"].endswith("2020-12/schema")
    assert found["additionalProperties"] is False
    assert set(found["required"]) == {"terrain", "water", "intake", "outlet", "pipes"}
    json.dumps(found, allow_nan=False)
    for section, model in SECTIONS.items():
        table = found["$defs"][model.__name__]
        assert set(table["properties"]) == set(model.model_fields), section
        assert table["additionalProperties"] is False
    reserve = found["$defs"]["LimitsModel"]["properties"]["reserve_m"]
    assert (reserve["minimum"], reserve["maximum"], reserve["default"], reserve["unit"]) == (0, 9, 2.5, "m of water")
    assert found["$defs"]["SearchModel"]["properties"]["neighbours"]["enum"] == [8, 16, 32]
    assert found["properties"]["pipes"]["type"] == "array"


def test_the_schema_knows_no_null_since_toml_has_none():
    text = json.dumps(schema())
    assert "null" not in text
    lift = schema()["$defs"]["LimitsModel"]["properties"]["highest_lift_m"]
    assert (lift["type"], lift["exclusiveMinimum"], lift["maximum"]) == ("number", 0, 10.5)
    assert "default" not in lift
