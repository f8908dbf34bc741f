"""The list of problems under way: each is given its file, its line and its wording in one place."""

from __future__ import annotations

from routing.errors import Problem, SiteError
from routing.site.lines import LineMap
from routing.site.models import REPEATED, heading


class Ledger:
    """Collects problems of one site file, so that all of them are told at once.

    Parameters
    ----------
    file
        File name as the user gave it.
    lines
        Where the keys stand.
    """

    def __init__(self, file: str, lines: LineMap) -> None:
        self.file = file
        self.lines = lines
        self.problems: list[Problem] = []

    def add(self, key: str, what: str, *, found: str = "", allowed: str = "", remedy: str = "") -> None:
        """Note a problem with a key.

        Parameters
        ----------
        key
            Dotted key, ``pipes[2].wall_mm``.
        what, found, allowed, remedy
            As in :class:`routing.errors.Problem`.
        """
        line = self.lines.find(key)
        self.problems.append(Problem(what, found, allowed, remedy, self.file, key or None, line))

    def names(self, key: str) -> bool:
        """Return whether a problem with this very key has been noted."""
        return any(problem.key == key for problem in self.problems)

    def lift_comment(self, key: str, example: str) -> str:
        """Return what to do about a missing key: take the ``#`` away where it stands commented out, else add it."""
        line = self.lines.commented.get(key)
        name = key.rpartition(".")[2]
        if line is not None:
            return f"take away the '#' in line {line} and write your own value after '{name} ='"
        section = key.rpartition(".")[0].partition("[")[0]
        place = f"in {heading(section)}" if section in REPEATED else f"under {heading(section)}"
        return f"add '{name} = {example}' {place}"

    def close(self) -> None:
        """End the list.

        Raises
        ------
        SiteError
            With every problem noted, in the order of the file, if there is any.
        """
        if self.problems:
            last = 1 + max(problem.line or 0 for problem in self.problems)
            raise SiteError(*sorted(self.problems, key=lambda problem: problem.line or last))
