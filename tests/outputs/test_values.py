import json
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest

from routing.outputs.values import clean, json_text, plain


@pytest.mark.parametrize(
    "value", [float("nan"), float("inf"), -float("inf"), np.float64("nan"), np.float32("inf"), None]
)
def test_what_json_cannot_hold_becomes_nothing(value):
    # RFC 7493 (I-JSON), section 2.2, after RFC 8259, section 6: numbers only, no NaN, no infinities
    assert clean(value) is None


@pytest.mark.parametrize(
    ("value", "expected", "kind"),
    [
        (np.int64(3), 3, int),
        (np.float32(0.5), 0.5, float),
        (np.bool_(True), True, bool),
        (True, True, bool),
        (Path("a/b"), "a/b", str),
        (-0.0, 0.0, float),
    ],
)
def test_plain_kinds(value, expected, kind):
    found = clean(value)
    assert found == expected
    assert type(found) is kind
    assert str(found) == str(expected)  # tells 0.0 from -0.0


def test_rounding_leaves_no_negative_zero():
    assert str(clean(-0.0004, 3)) == "0.0"


def test_file_name_that_is_no_utf8_can_be_written():
    name = b"d\xe9m.tif".decode("utf-8", "surrogateescape")
    assert "dce9" in clean(name)
    assert json_text({"file": clean(name)}).encode("utf-8")


def test_unknown_things_are_a_fault():
    with pytest.raises(TypeError, match="object is no plain value"):
        clean(object())


def test_records_become_dictionaries_without_arrays():
    @dataclass(frozen=True, slots=True)
    class Inner:
        levels: tuple[float, ...]
        grid: np.ndarray
        line: int

    @dataclass(frozen=True, slots=True)
    class Outer:
        file: Path
        inner: Inner
        table: dict[str, float]

    record = Outer(Path("x.tif"), Inner((1.0, float("inf")), np.zeros(3), 7), {"a": np.float64(2.0)})
    found = plain(record, without=frozenset({"line"}))
    assert found == {"file": "x.tif", "inner": {"levels": [1.0, None]}, "table": {"a": 2.0}}


def test_json_text_refuses_nan_and_keeps_letters():
    with pytest.raises(ValueError, match="JSON compliant"):
        json_text({"a": float("nan")})
    assert json.loads(json_text({"a": "Große Höhe"})) == {"a": "Große Höhe"}
    assert "Höhe" in json_text({"a": "Höhe"})
