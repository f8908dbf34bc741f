"""Room: planning. The one place that joins the rooms: site in, plan out."""

from __future__ import annotations

from pathlib import Path

from routing.planning.plans import inspect_dem, look, plan
from routing.planning.reports import Progress

__all__ = ["Progress", "cache_folder", "inspect_dem", "kernels_ready", "look", "plan"]


def kernels_ready() -> bool:
    """Whether the search kernels have been compiled by an earlier run."""
    from routing.search.compiling import kernels_ready as ready  # noqa: PLC0415

    return ready()


def cache_folder() -> Path:
    """Return the folder that compiled kernels are kept in."""
    from routing.search.compiling import cache_folder as folder  # noqa: PLC0415

    return folder()
