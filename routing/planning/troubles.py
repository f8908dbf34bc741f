"""Problems of the site that only the DEM brings to light, with key and line of the site file."""

from __future__ import annotations

from routing.errors import Problem
from routing.records import Site


def site_problem(site: Site, key: str, what: str, *, found: str, allowed: str, remedy: str) -> Problem:
    """Return a problem at a key of the site file (its line, or that of the table that would hold it)."""
    line = site.lines.get(key, site.lines.get(key.split(".", maxsplit=1)[0]))
    return Problem(what, found, allowed, remedy, str(site.file), key, line)
