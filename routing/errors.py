"""The family of errors.

::

    OvercrestError                exit code 1: a fault of ours
    +-- InputError (ValueError)   exit code 2: something the user can put right
    |   +-- SiteError             the site file or what it names
    |   +-- TerrainError          the DEM
    |   +-- OutputError           where results should go
    +-- Interrupted               exit code 130: the user stopped the run

"No feasible route" is a result, not an error: a plan is written all the same, and the command
line ends with exit code 3.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing that is wrong, said so that the user can put it right.

    Attributes
    ----------
    what
        One sentence: what is wrong.
    found
        What was found, as the user wrote it (empty where nothing was).
    allowed
        What is allowed (range, list of choices, unit).
    remedy
        What to do.
    file, key, line
        Where: file name, dotted key (``outlet.x_m``), line number from 1. ``None`` where it does not apply.
    """

    what: str
    found: str = ""
    allowed: str = ""
    remedy: str = ""
    file: str | None = None
    key: str | None = None
    line: int | None = None

    @property
    def where(self) -> str:
        """Place of the problem, as ``file:line [key]``."""
        place = self.file or ""
        if self.line is not None:
            place += f":{self.line}"
        return f"{place} [{self.key}]".strip() if self.key else place

    def __str__(self) -> str:
        head = f"{self.where}: {self.what}" if self.where else self.what
        rows = [("found", self.found), ("allowed", self.allowed), ("do", self.remedy)]
        return "\n".join([head, *(f"    {name:8s}{text}" for name, text in rows if text)])

    def as_dict(self) -> dict[str, str | int | None]:
        """Return the fields by name, for JSON output."""
        return {name: getattr(self, name) for name in self.__slots__}


class OvercrestError(Exception):
    """Root of the family. Shown to the user; carries the exit code of the command line."""

    exit_code: ClassVar[int] = 1

    def __init__(self, *problems: Problem | str) -> None:
        self.problems = tuple(p if isinstance(p, Problem) else Problem(p) for p in problems)
        super().__init__("\n".join(str(p) for p in self.problems))


class InputError(OvercrestError, ValueError):
    """Something the user gave cannot be used."""

    exit_code = 2


class SiteError(InputError):
    """The site file, or something that it names, cannot be used. Holds every problem found."""


class TerrainError(InputError):
    """The elevation model cannot be used."""


class OutputError(InputError):
    """Results cannot be written where the user asked for them."""


class Interrupted(OvercrestError):  # noqa: N818 - a stop asked for is not an error
    """The user stopped the run."""

    exit_code = 130
