"""Whatever stands in the file, the answer is a site or a list of problems that say where and what to do."""

from __future__ import annotations

import tempfile
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from routing.errors import SiteError
from routing.records import Site
from routing.site import load_site
from routing.site.models import SECTIONS

NAMES = {name for model in SECTIONS.values() for name in model.model_fields}
KEYS = st.sampled_from(sorted(NAMES)) | st.sampled_from(["odd", '"a b"', "'x.y'", "depth_m", "Sdr"])
VALUES = st.one_of(
    st.floats(allow_nan=False, allow_infinity=False).map(lambda v: f"{v:.6f}"),
    st.integers(-(10**20), 10**20).map(str),
    st.sampled_from(
        ["nan", "inf", "-inf", "1e308", "0", "-0.0", "true", "1979-05-27", "07:32:00", "1979-05-27T07:32:00Z"]
    ),
    st.sampled_from(
        ['""', '"m"', '"ISO 4427"', "'EN 10220'", '"PE80"', '"dem.tif"', '"ground"', '"\\u0000"', '"..\\\\a"']
    ),
    st.sampled_from(["[]", "[1, 'a']", "{}", "{ a = 1 }", "[[]]", "'''a\nb'''", "1" + "0" * 400]),
    st.sampled_from(["315.0", "17.0", "6.3", "273.0", "98.8", "2.7", "55.5", "0.5"]),
)
TABLES = st.lists(
    st.tuples(st.sampled_from([*SECTIONS, "odd"]), st.booleans(), st.dictionaries(KEYS, VALUES, max_size=6)), max_size=8
)


def written(tables):
    """Return TOML text for the tables; a name keeps the kind (table or list) that it had first, and no table twice."""
    kinds, lines = {}, []
    for name, asked_many, pairs in tables:
        many = asked_many or name == "pipes"
        if name in kinds and not (many and kinds[name]):
            continue
        kinds[name] = many
        lines.append(f"[[{name}]]" if many else f"[{name}]")
        lines.extend(f"{key} = {value}" for key, value in pairs.items())
    return "\n".join(lines)


@settings(deadline=None, max_examples=150)
@given(TABLES)
def test_any_tables_end_in_a_site_or_in_problems(tables):
    with tempfile.TemporaryDirectory() as folder:
        (Path(folder) / "dem.tif").touch()
        path = Path(folder) / "site.toml"
        path.write_text(written(tables), encoding="utf-8")
        try:
            assert isinstance(load_site(path), Site)
        except SiteError as error:
            for problem in error.problems:
                assert problem.file == str(path)
                assert problem.what
                assert problem.allowed
                assert problem.remedy
                assert len(problem.found) < 600
                section = (problem.key or "").partition(".")[0].partition("[")[0]
                assert problem.line or section not in {name for name, _, _ in tables}


@settings(deadline=None, max_examples=100)
@given(st.text(max_size=60) | st.binary(max_size=60))
def test_any_text_or_bytes_end_in_problems(data):
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "site.toml"
        path.write_bytes(data.encode("utf-8", "replace") if isinstance(data, str) else data)
        with pytest.raises(SiteError) as caught:
            load_site(path)
        assert all(problem.remedy and problem.file for problem in caught.value.problems)
