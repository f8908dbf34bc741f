"""``overcrest about``."""

from __future__ import annotations

import json
import platform

import numpy as np
import pyproj
import pytest
import rasterio

from routing.commands import main


@pytest.fixture
def facts(behind, capsys):
    assert main(["about", "--json"]) == 0
    return json.loads(capsys.readouterr().out)


def test_versions_are_those_of_the_running_libraries(facts):
    assert facts["python"] == platform.python_version()
    assert facts["libraries"]["numpy"] == np.__version__
    assert facts["gdal"]["rasterio"] == rasterio.__gdal_version__
    assert facts["proj"]["pyproj"] == pyproj.proj_version_str
    assert facts["threads"] >= 1


def test_text_says_where_the_cache_is(behind, capsys, tmp_path):
    behind.ready = False
    assert main(["about"]) == 0
    shown = capsys.readouterr().out
    assert str(tmp_path / "cache") in shown
    assert "not compiled yet" in shown


def test_foreign_data_folders_are_warned_of(behind, capsys, monkeypatch):
    monkeypatch.setenv("PROJ_DATA", "/somewhere/proj")
    assert main(["about"]) == 0
    assert "warning: PROJ_DATA is set from outside (/somewhere/proj)" in capsys.readouterr().out


def test_no_warning_without_them(behind, capsys, monkeypatch):
    for name in ("GDAL_DATA", "GDAL_DRIVER_PATH", "PROJ_DATA", "PROJ_LIB"):
        monkeypatch.delenv(name, raising=False)
    assert main(["about"]) == 0
    assert "warning:" not in capsys.readouterr().out


def test_a_library_that_is_missing_is_said_to_be(monkeypatch):
    from routing.commands import about

    assert about._version("no-such-distribution-of-ours") == "not installed"
