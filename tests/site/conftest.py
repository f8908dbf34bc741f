"""A sound site file, ways to spoil it, and what a refusal must carry."""

from __future__ import annotations

import pytest

from routing.errors import SiteError
from routing.site import load_site

SOUND = """\
title = "Test site"

[terrain]
file = "dem.tif"

[water]
present_level_m = 101.2
lowest_level_m = 98.8

[intake]
x = 480300.0
y = 6149750.0
mouth_level_m = 98.0

[outlet]
x = 480411.0
y = 6149761.0
level_m = 93.3

[air]
altitude_m = 105.0

[limits]
reserve_m = 2.5

[demand]
discharge_m3s = 0.3

[[pipes]]
table = "ISO 4427"
outside_diameter_mm = 315.0
sdr = 17.0

[[pipes]]
table = "EN 10220"
outside_diameter_mm = 273.0
wall_mm = 6.3

[[pipes]]
name = "old steel"
outside_diameter_mm = 300.0
wall_mm = 5.0
roughness_mm = 0.5
"""


@pytest.fixture
def make(tmp_path):
    """Write the sound site file with parts replaced (each must be there), beside a file named dem.tif."""

    def write(*replacements, text=SOUND):
        for old, new in replacements:
            if old not in text:
                raise ValueError(f"not in the site file: {old!r}")
            text = text.replace(old, new, 1)
        (tmp_path / "dem.tif").write_bytes(b"stands in for a DEM, which is not opened here")
        path = tmp_path / "site.toml"
        path.write_text(text, encoding="utf-8")
        return path

    return write


@pytest.fixture
def refuse(make):
    """Load a spoilt site file and return its problems by key; each must say where, and what to do."""

    def load(*replacements, text=SOUND):
        path = make(*replacements, text=text)
        with pytest.raises(SiteError) as caught:
            load_site(path)
        problems = caught.value.problems
        for problem in problems:
            assert problem.file == str(path)
            assert problem.key
            assert problem.what
            assert problem.allowed
            assert problem.remedy
        assert len({(p.key, p.what) for p in problems}) == len(problems), "a problem is told twice"
        return {problem.key: problem for problem in problems}

    return load


@pytest.fixture
def one(refuse):
    """Load a site file with one fault, and return the one problem and the text of the line that it names."""

    def load(*replacements, text=SOUND):
        problems = refuse(*replacements, text=text)
        assert len(problems) == 1, "\n".join(map(str, problems.values()))
        (problem,) = problems.values()
        for old, new in replacements:
            text = text.replace(old, new, 1)
        return problem, text.split("\n")[problem.line - 1] if problem.line else None

    return load
