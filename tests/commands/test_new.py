"""``overcrest new``, apart from the starter itself."""

from __future__ import annotations

import json

import pytest

from routing.commands import main
from routing.commands.new import write_whole
from routing.errors import OutputError


def test_writes_the_starter_and_says_what_is_next(behind, capsys, tmp_path):
    assert main(["new", "dem.tif"]) == 0
    text = (tmp_path / "site.toml").read_text(encoding="utf-8")
    assert text.splitlines()[:2] == ["# facts of dem.tif", "file = 'dem.tif'"]
    assert str(tmp_path) in text
    assert "overcrest look site.toml" in capsys.readouterr().out
    assert [path.name for path in tmp_path.iterdir()] == ["site.toml"]


def test_a_dash_prints_it(behind, capsys, tmp_path):
    assert main(["new", "dem.tif", "-o", "-"]) == 0
    assert capsys.readouterr().out.startswith("# facts of dem.tif")
    assert list(tmp_path.iterdir()) == []


def test_an_existing_file_is_refused_and_kept(behind, capsys, tmp_path):
    (tmp_path / "site.toml").write_text("mine", encoding="utf-8")
    assert main(["new", "dem.tif"]) == 2
    assert "site.toml" in capsys.readouterr().err
    assert (tmp_path / "site.toml").read_text(encoding="utf-8") == "mine"


def test_replace_replaces(behind, tmp_path):
    (tmp_path / "site.toml").write_text("mine", encoding="utf-8")
    assert main(["new", "dem.tif", "--replace"]) == 0
    assert "facts of" in (tmp_path / "site.toml").read_text(encoding="utf-8")


def test_a_missing_folder_is_told(behind, capsys):
    assert main(["new", "dem.tif", "-o", "no/such/site.toml"]) == 2
    assert "make the folder" in capsys.readouterr().err


def test_schema_needs_no_dem(behind, capsys):
    assert main(["new", "--schema"]) == 0
    assert json.loads(capsys.readouterr().out) == {"type": "object"}


def test_a_file_that_came_meanwhile_is_kept(tmp_path):
    path = tmp_path / "site.toml"
    path.write_text("mine", encoding="utf-8")
    with pytest.raises(OutputError, match="taken"):
        write_whole("other", path, replace=False)
    assert [entry.name for entry in tmp_path.iterdir()] == ["site.toml"]
