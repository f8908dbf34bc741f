"""Where a problem stands: the site file's key and line where there is one, else the DEM file."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path

from routing.errors import Problem, TerrainError


@dataclass(frozen=True, slots=True)
class Teller:
    """Makes the errors of one DEM, so that each names file, key and line.

    Attributes
    ----------
    dem_file
        The DEM, named where there is no site file.
    site_file, lines
        The site file and the line of each dotted key in it.
    """

    dem_file: Path
    site_file: Path | None = None
    lines: Mapping[str, int] = field(default_factory=dict)

    def error(self, key: str, what: str, *, found: str = "", allowed: str = "", remedy: str = "") -> TerrainError:
        """Return the error for one key of the site file (``terrain.file``).

        Parameters
        ----------
        key
            Dotted key of the site file.
        what, found, allowed, remedy
            As in ``Problem``.
        """
        in_site = self.site_file is not None
        table = key.split(".", maxsplit=1)[0]  # where the key would stand if it is not there
        return TerrainError(
            Problem(
                what,
                found=found,
                allowed=allowed,
                remedy=remedy,
                file=str(self.site_file if in_site else self.dem_file),
                key=key if in_site else None,
                line=self.lines.get(key, self.lines.get(table)) if in_site else None,
            )
        )
