"""Problems under way: lines, order, and what to do about missing keys."""

from __future__ import annotations

import pytest

from routing.errors import SiteError
from routing.site.ledger import Ledger
from routing.site.lines import map_lines

TEXT = "[intake]\n# x = 1\n[[pipes]]\nsdr = 11\n"


def test_an_empty_ledger_closes_in_silence():
    Ledger("site.toml", map_lines(TEXT)).close()


def test_all_problems_are_raised_in_the_order_of_the_file():
    ledger = Ledger("site.toml", map_lines(TEXT))
    ledger.add("water", "no table")
    ledger.add("pipes[1].sdr", "odd", found="11")
    ledger.add("intake.x", "missing")
    with pytest.raises(SiteError) as caught:
        ledger.close()
    assert [(p.key, p.line) for p in caught.value.problems] == [("intake.x", 2), ("pipes[1].sdr", 4), ("water", None)]
    assert "site.toml:4 [pipes[1].sdr]: odd" in str(caught.value)
    assert caught.value.exit_code == 2


def test_names_and_remedies():
    ledger = Ledger("site.toml", map_lines(TEXT))
    ledger.add("intake.y", "missing")
    assert ledger.names("intake.y")
    assert not ledger.names("intake")
    assert "line 2" in ledger.lift_comment("intake.x", "...")
    assert ledger.lift_comment("intake.y", "1.0") == "add 'y = 1.0' under [intake]"
    assert ledger.lift_comment("pipes[1].name", '"a"') == "add 'name = \"a\"' in [[pipes]]"
