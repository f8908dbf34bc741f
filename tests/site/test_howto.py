"""The how-to page: what it shows is what the program takes and says."""

from __future__ import annotations

import re
import tomllib
from pathlib import Path

import pytest

from routing.errors import SiteError
from routing.site import load_site
from routing.site.models import SECTIONS

PAGE = (Path(__file__).resolve().parents[2] / "docs" / "howto" / "site-file.md").read_text(encoding="utf-8")
TOML = re.findall(r"^```toml\n(.*?)^```", PAGE, flags=re.DOTALL | re.MULTILINE)
LEAST, POINTS, ANYWHERE, LINE, SHORE, PIPES, PRICES, ZONES = TOML


def test_the_least_file_loads(make):
    assert load_site(make(text=LEAST)).pipes[0].name == "PE100 315 SDR 17"


def test_the_parts_fit_into_it(make):
    ends = LEAST[LEAST.index("[intake]") : LEAST.index("[[pipes]]")]
    path = make((ends, POINTS + "\n" + PRICES + "\n"), (LEAST[LEAST.index("[[pipes]]") :], PIPES), text=LEAST)
    (path.parent / "points.gpkg").touch()
    site = load_site(path)
    assert len(site.pipes) == 3
    assert site.prices.date == "2026-01-31"


def test_the_ends_left_open_fit_into_it(make):
    intake = LEAST[LEAST.index("[intake]") : LEAST.index("[outlet]")]
    outlet = LEAST[LEAST.index("[outlet]") : LEAST.index("[[pipes]]")]
    site = load_site(make((intake, SHORE + "\n"), (outlet, ANYWHERE + "\n"), text=LEAST))
    assert (site.intake.kind, site.intake.underwater_length_m) == ("shore", 15.0)
    assert (site.outlet.kind, site.outlet.beyond_toe_m) == ("anywhere", 50.0)
    path = make((outlet, LINE + "\n"), text=LEAST)
    (path.parent / "stream.gpkg").touch()
    site = load_site(path)
    assert (site.outlet.kind, site.outlet.at.file) == ("line", path.parent.resolve() / "stream.gpkg")


def test_the_zones_fit_into_it(make):
    path = make(text=LEAST + "\n" + ZONES)
    for name in ("bank.geojson", "land.gpkg"):
        (path.parent / name).touch()
    bank, meadow = load_site(path).zones
    assert (bank.name, bank.kind, bank.file) == ("protected bank", "barred", path.parent.resolve() / "bank.geojson")
    assert (meadow.layer, meadow.kind, meadow.cost_factor) == ("meadows", "cost", 1.6)


def test_the_message_is_the_real_one(make):
    (shown,) = re.findall(r"^```text\n(.*?)^```", PAGE, flags=re.DOTALL | re.MULTILINE)
    path = make(("lowest_level_m = 98.8", "lowest_level_m = 98.8\ntemperature_c = 283"), text=LEAST)
    with pytest.raises(SiteError) as caught:
        load_site(path)
    assert str(caught.value).replace(str(path), "site.toml") == shown.strip()


def test_every_key_that_the_page_names_exists():
    keys = {f"{section}.{name}" for section, model in SECTIONS.items() for name in model.model_fields}
    names = {key.partition(".")[2] for key in keys}
    for dotted in re.findall(r"`([a-z]+\.[a-z][a-z0-9_]+)(?: = [^`]*)?`", PAGE):
        assert dotted in keys or dotted == "site.toml", dotted
    for bare in re.findall(r"`([a-z]+(?:_[a-z0-9]+)+)`", PAGE):
        assert bare in names, bare
    for block in TOML:
        assert set(tomllib.loads(block)) <= set(SECTIONS)
