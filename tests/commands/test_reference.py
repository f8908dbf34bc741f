"""The reference page is the program's own."""

from __future__ import annotations

from routing.commands.group import COMMANDS
from routing.commands.reference import commands_page


def test_the_page_in_docs_is_what_the_program_says(project):
    page = (project / "docs" / "reference" / "commands.md").read_text(encoding="utf-8")
    assert page == commands_page().rstrip("\n") + "\n", "the page is stale: run python docs/refresh.py"


def test_the_page_has_every_command_and_option():
    page = commands_page()
    assert all(f"\n## {name}\n" in page for name in COMMANDS)
    assert all(option in page for option in ("`--out` PATH", "`--top` N", "`--schema`", "`--json`", "`--replace`"))
    assert "| `--pictures` `overview`, `all`, `none` |" in page
