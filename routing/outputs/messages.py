"""Errors as text that fits one screen, and as the JSON document that takes the place of a result."""

from __future__ import annotations

import textwrap
from typing import Any

from routing.errors import OvercrestError, Problem
from routing.outputs.runfacts import document_head
from routing.outputs.values import plain

WIDTH = 100
#: Problems shown at once; at most five lines each, so that a screen holds them.
MOST_PROBLEMS = 6
_LABEL = 11


def error_text(error: OvercrestError) -> str:
    """Return the message for the terminal: each problem with place, what was found, what is allowed, what to do.

    Parameters
    ----------
    error
        Any error of the family.

    Returns
    -------
    str
        Plain text of at most 100 columns, no line end after the last line.
    """
    problems = error.problems or (Problem(str(error) or type(error).__name__),)
    blocks = [_block(problem) for problem in problems[:MOST_PROBLEMS]]
    if len(problems) > 1:
        blocks.insert(0, f"{len(problems)} things to put right:")
    if len(problems) > MOST_PROBLEMS:
        blocks.append(f"and {len(problems) - MOST_PROBLEMS} more, shown once these are put right (--json has them all)")
    return "\n\n".join(blocks)


def error_document(error: OvercrestError) -> dict[str, Any]:
    """Return an error as the document that ``--json`` prints in place of a result."""
    return {
        **document_head("error", ""),
        "error": {
            "kind": type(error).__name__,
            "exit_code": error.exit_code,
            "message": plain(str(error)),
            "problems": [plain(problem) for problem in error.problems],
        },
    }


def _block(problem: Problem) -> str:
    place = f"{problem.where}\n" if problem.where else ""
    head = textwrap.fill(problem.what, WIDTH, break_on_hyphens=False)
    rows = (("found", problem.found), ("allowed", problem.allowed), ("do", problem.remedy))
    return place + "\n".join([head, *(_row(name, text) for name, text in rows if text)])


def _row(name: str, text: str) -> str:
    return textwrap.fill(
        text,
        WIDTH,
        initial_indent=f"  {name:{_LABEL - 2}s}",
        subsequent_indent=" " * _LABEL,
        break_on_hyphens=False,
    )
