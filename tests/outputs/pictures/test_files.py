"""The bytes of the pictures."""

import io
import subprocess
import sys
from dataclasses import replace
from xml.etree import ElementTree as ET

import matplotlib as mpl
import pytest
from PIL import Image

from routing.outputs.pictures import picture_files
from routing.outputs.pictures.files import picture
from routing.outputs.pictures.subject import overview

SVG = "{http://www.w3.org/2000/svg}"


def test_which_files_there_are(plan):
    assert list(picture_files(plan, "none")) == []
    assert [name for name, _ in picture_files(plan)] == ["overview.png", "overview.svg", "pictures.txt"]


def test_the_same_plan_gives_the_same_bytes_whatever_was_set_before(make, plan, monkeypatch):
    first = picture(overview(plan))
    monkeypatch.setitem(mpl.rcParams, "font.size", 20.0)
    monkeypatch.setitem(mpl.rcParams, "svg.hashsalt", "other")
    monkeypatch.setitem(mpl.rcParams, "axes.grid", True)
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "1700000000")
    assert picture(overview(make.plan())) == first
    assert mpl.rcParams["font.size"] == 20.0


def test_a_png_of_a4_with_its_text(plan):
    png, _ = picture(overview(plan))
    image = Image.open(io.BytesIO(png))
    assert image.size == (1753, 1240)  # 11.69 by 8.27 inches at 150 dots
    assert image.info["dpi"] == pytest.approx((150, 150), abs=0.1)
    assert "Long section of 1 x PE 315 SDR 17 on route R1" in image.info["Description"]
    assert image.info["Title"] == "Upper basin, blocked bottom outlet"
    assert "Creation Time" not in image.info
    assert len(png) < 1_000_000


def test_an_svg_with_its_text(plan):
    _, svg = picture(overview(plan))
    root = ET.fromstring(svg)
    title, described = root.find(f"{SVG}title"), root.find(f"{SVG}desc")
    assert title.text == "Upper basin, blocked bottom outlet"
    assert "lowest level" in described.text
    assert root.get("role") == "img"
    assert root.get("aria-labelledby").split() == [title.get("id"), described.get("id")]
    assert any("outlet" in (text.text or "") for text in root.iter(f"{SVG}text"))  # text stays text
    assert b"<dc:date>" not in svg
    assert len(svg) < 1_000_000


@pytest.mark.parametrize("title", ["湖 на $горе$ <&> \x00\x07 \udc80", "", "]]> -->"])
def test_any_title_can_be_drawn(plan, title):
    changed = replace(plan, site=replace(plan.site, title=title))
    png, svg = picture(overview(changed))
    assert ET.fromstring(svg).find(f"{SVG}title").text
    assert Image.open(io.BytesIO(png)).info["Title"]
    assert "\x00" not in svg.decode()
    text = dict(picture_files(changed))["pictures.txt"].decode("utf-8")
    assert "Map of 2 routes" in text


def test_neither_pyplot_nor_a_window_and_nothing_before_drawing():
    code = """
import sys
import routing.outputs, routing.outputs.folder, routing.outputs.pictures
assert "matplotlib" not in sys.modules and "contourpy" not in sys.modules
from routing.outputs.pictures import picture_files
assert "matplotlib" in sys.modules and "matplotlib.pyplot" not in sys.modules
"""
    subprocess.run([sys.executable, "-c", code], check=True, timeout=60)
