import runpy
import sys
from pathlib import Path

import pytest

from routing.outputs.fields import TABLES
from routing.outputs.folder import RUN_FILE, WRITERS
from routing.outputs.reference import fields_page

PAGE = Path(__file__).parents[2] / "docs" / "reference" / "fields.md"


def test_the_page_is_the_one_that_the_dictionary_makes():
    remedy = "run: python -m routing.outputs.reference docs/reference/fields.md"
    assert PAGE.read_text(encoding="utf-8") == fields_page(), remedy


def test_every_field_and_file_is_on_the_page():
    page = fields_page()
    for fields in TABLES.values():
        assert all(f"| `{name}` |" in page for name in fields)
    assert all(f"| `{name}` |" in page for name in (*WRITERS, RUN_FILE))


def test_tables_are_whole():
    for line in fields_page().splitlines():
        if line.startswith("|"):
            assert line.count("|") in (3, 6), line


@pytest.mark.filterwarnings("ignore:.*found in sys.modules:RuntimeWarning")
def test_the_module_writes_the_page(tmp_path, monkeypatch):
    monkeypatch.setattr(sys, "argv", ["reference", str(tmp_path / "page.md")])
    runpy.run_module("routing.outputs.reference", run_name="__main__")
    assert (tmp_path / "page.md").read_text(encoding="utf-8") == fields_page()
