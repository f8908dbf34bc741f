"""The family of errors: kinship, exit codes, and how a problem is said."""

from __future__ import annotations

import inspect
import json
import re

import pytest

from routing import errors
from routing.errors import (
    InputError,
    Interrupted,
    OutputError,
    OvercrestError,
    Problem,
    SiteError,
    TerrainError,
)

WHOLE = Problem("the outlet is too high", "104.2", "below 100 m", "lower it", "site.toml", "outlet.level_m", 14)


def test_the_tree_is_the_one_at_the_head_of_the_module():
    """Each line of the drawing: indent, name, perhaps a further parent in brackets, perhaps an exit code."""
    rows = re.findall(
        r"^    ([|+\- ]*)(\w+)(?: \((\w+)\))?  .*?(?:exit code (\d+))?[^\d\n]*$", errors.__doc__, re.MULTILINE
    )
    assert len(rows) == 6
    above = []
    for indent, name, further, code in rows:
        kind, depth = getattr(errors, name), len(indent) // 4
        parent = above[depth - 1] if depth else Exception
        assert parent in kind.__bases__, name
        assert not further or issubclass(kind, {"ValueError": ValueError}[further])
        assert kind.exit_code == int(code or parent.exit_code)
        above[depth:] = [kind]
    drawn = {name for _, name, _, _ in rows}
    assert drawn == {
        name for name, kind in vars(errors).items() if inspect.isclass(kind) and issubclass(kind, Exception)
    }


@pytest.mark.parametrize(
    ("kind", "code"),
    [(OvercrestError, 1), (InputError, 2), (SiteError, 2), (TerrainError, 2), (OutputError, 2), (Interrupted, 130)],
)
def test_exit_codes(kind, code):
    """130 is 128 and the number of SIGINT, as shells have it (common practice)."""
    assert kind("x").exit_code == code


def test_what_the_user_can_put_right_is_a_value_error_and_a_stop_is_none():
    assert issubclass(InputError, ValueError)
    for kind in (OvercrestError, Interrupted):
        assert not issubclass(kind, ValueError)


@pytest.mark.parametrize(
    ("place", "where"),
    [
        ({}, ""),
        ({"file": "a.toml"}, "a.toml"),
        ({"file": "a.toml", "line": 3}, "a.toml:3"),
        ({"file": "a.toml", "key": "air.altitude_m"}, "a.toml [air.altitude_m]"),
        ({"file": "a.toml", "line": 3, "key": "air"}, "a.toml:3 [air]"),
        ({"key": "sources"}, "[sources]"),
    ],
)
def test_the_place_of_a_problem(place, where):
    problem = Problem("it is wrong", **place)
    assert problem.where == where
    assert str(problem) == (f"{where}: it is wrong" if where else "it is wrong")


def test_as_text_every_field_is_said_once_and_empty_ones_not_at_all():
    assert str(WHOLE).splitlines() == [
        "site.toml:14 [outlet.level_m]: the outlet is too high",
        "    found   104.2",
        "    allowed below 100 m",
        "    do      lower it",
    ]
    assert str(Problem("a", remedy="b")) == "a\n    do      b"


def test_as_json_every_field_has_its_name():
    found = json.loads(json.dumps(WHOLE.as_dict()))
    assert found == {
        "what": "the outlet is too high",
        "found": "104.2",
        "allowed": "below 100 m",
        "remedy": "lower it",
        "file": "site.toml",
        "key": "outlet.level_m",
        "line": 14,
    }
    assert Problem(**found) == WHOLE


def test_an_error_holds_all_problems_and_takes_plain_words():
    error = SiteError(WHOLE, "a second thing")
    assert error.problems == (WHOLE, Problem("a second thing"))
    assert str(error) == f"{WHOLE}\na second thing"
    assert OvercrestError().problems == ()
    assert str(OvercrestError()) == ""


def test_a_problem_cannot_be_changed_under_the_hand_that_shows_it():
    with pytest.raises(AttributeError):
        WHOLE.what = "another"
    assert len({WHOLE, Problem(**WHOLE.as_dict())}) == 1
