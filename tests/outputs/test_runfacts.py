import hashlib
import sys
import types
from dataclasses import replace
from datetime import UTC, datetime, timedelta, timezone
from importlib.metadata import version

import pytest

from routing.outputs import runfacts
from routing.outputs.runfacts import (
    LIBRARIES,
    RunFacts,
    carried_versions,
    file_sha256,
    inputs_document,
    overcrest_version,
    run_document,
    utc_text,
)
from routing.outputs.runfile import plan_document
from routing.records import ZoneAsk


def test_versions_are_those_installed():
    found = run_document(RunFacts())
    assert found["overcrest"] == overcrest_version() == version("overcrest")
    assert found["python"] == ".".join(map(str, sys.version_info[:3]))
    assert found["libraries"] == {name: version(name) for name in LIBRARIES}


def test_a_library_that_is_not_installed_is_told(monkeypatch):
    monkeypatch.setattr(runfacts, "LIBRARIES", ("no-such-library-at-all",))
    assert run_document(RunFacts())["libraries"] == {"no-such-library-at-all": None}


def test_carried_versions_come_from_loaded_modules_only(monkeypatch):
    monkeypatch.setitem(sys.modules, "rasterio", types.SimpleNamespace(__gdal_version__="9.9.9"))
    monkeypatch.delitem(sys.modules, "pyogrio", raising=False)
    found = carried_versions()
    assert found["gdal_of_rasterio"] == "9.9.9"
    assert "gdal_of_pyogrio" not in found
    assert "pyogrio" not in sys.modules
    assert run_document(RunFacts(carried={"gdal_of_rasterio": "told"}))["carried"]["gdal_of_rasterio"] == "told"


def test_times_are_utc():
    east = datetime(2026, 3, 1, 1, 30, 0, 999, tzinfo=timezone(timedelta(hours=2)))
    assert utc_text(east) == "2026-02-28T23:30:00Z"
    assert utc_text(None) is None
    with pytest.raises(ValueError, match="no time zone"):
        utc_text(datetime(2026, 3, 1))  # noqa: DTZ001


def test_command_and_times():
    run = RunFacts(
        ("overcrest", "plan", "site.toml"), datetime(2026, 3, 1, tzinfo=UTC), datetime(2026, 3, 2, tzinfo=UTC)
    )
    found = run_document(run)
    assert found["command"] == ["overcrest", "plan", "site.toml"]
    assert (found["started_utc"], found["finished_utc"]) == ("2026-03-01T00:00:00Z", "2026-03-02T00:00:00Z")


def test_inputs_and_their_hashes(plan, tmp_path):
    shore = tmp_path / "shore.gpkg"
    shore.write_bytes(b"abc")
    site = replace(plan.site, water=replace(plan.site.water, polygon_file=shore))
    found = inputs_document(replace(plan, site=site), RunFacts(inputs=(("zones", tmp_path / "gone.gpkg"),)))
    assert [row["role"] for row in found] == ["site", "dem", "water polygon", "zones"]
    assert [row["sha256"][:1] for row in found[:2]] == ["a", "b"]
    # FIPS 180-4 example: SHA-256 of "abc"
    assert found[2]["sha256"] == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    assert found[3]["sha256"] is None


def test_the_files_of_zones_are_inputs(plan, tmp_path):
    bank = tmp_path / "bank.geojson"
    bank.write_bytes(b"abc")
    site = replace(plan.site, zones=(ZoneAsk("bank", bank), ZoneAsk("bog", bank, kind="cost", cost_factor=2.0)))
    found = inputs_document(replace(plan, site=site), RunFacts())[2:]
    assert [row["role"] for row in found] == ["zone bank", "zone bog"]
    assert all(row["sha256"].startswith("ba7816bf") for row in found)
    told = plan_document(replace(plan, site=site))["site"]["zones"]
    assert told[1] == {"name": "bog", "file": str(bank), "layer": None, "kind": "cost", "cost_factor": 2.0}


def test_a_site_without_a_hash_is_hashed(plan):
    found = inputs_document(replace(plan, site=replace(plan.site, sha256="")), RunFacts())
    assert found[0]["sha256"] == hashlib.sha256(plan.site.file.read_bytes()).hexdigest() == file_sha256(plan.site.file)
