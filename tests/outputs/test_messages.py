import json

import pytest

from routing.errors import Interrupted, OutputError, OvercrestError, Problem, SiteError
from routing.outputs.messages import MOST_PROBLEMS, WIDTH, error_document, error_text
from routing.outputs.values import json_text

LONG = Problem(
    "the outlet lies above the lowest level, " + "so that nothing can flow " * 6,
    found="104.2",
    allowed="below 100.00 m",
    remedy="give a lower outlet, " * 12,
    file="site.toml",
    key="outlet.level_m",
    line=14,
)


def test_a_problem_says_where_what_found_allowed_and_what_to_do():
    text = error_text(SiteError(LONG))
    lines = text.splitlines()
    assert lines[0] == "site.toml:14 [outlet.level_m]"
    assert lines[1].startswith("the outlet lies above")
    assert "  found    104.2" in lines
    assert "  allowed  below 100.00 m" in lines
    assert any(line.startswith("  do       give a lower outlet") for line in lines)
    assert all(len(line) <= WIDTH for line in lines)


def test_a_bare_message_is_one_line():
    assert error_text(Interrupted("stopped by the user")) == "stopped by the user"
    assert error_text(OvercrestError()) == "OvercrestError"


@pytest.mark.parametrize("number", [2, 40])
def test_many_problems_fit_one_screen(number):
    problem = Problem("unknown key", "pip", "pipe", "mend the name", "site.toml", "pip", 3)
    text = error_text(SiteError(*[problem] * number))
    assert text.startswith(f"{number} things to put right:")
    assert text.count("unknown key") == min(number, MOST_PROBLEMS)
    assert ("34 more" in text) == (number == 40)
    assert len(text.splitlines()) <= 45


def test_document_has_every_problem():
    found = error_document(OutputError(*[LONG] * 9))
    assert json.loads(json_text(found)) == found
    assert found["document"] == "error"
    assert found["error"]["kind"] == "OutputError"
    assert found["error"]["exit_code"] == 2
    assert len(found["error"]["problems"]) == 9
    assert found["error"]["problems"][0]["line"] == 14
    assert found["error"]["problems"][0]["key"] == "outlet.level_m"
