"""Telling the user why the first run is slow."""

from __future__ import annotations

from routing.commands.streams import note


def tell_if_compiling(*, quiet: bool) -> None:
    """Say on stderr that the search kernels must be compiled first, if that is so."""
    from routing.planning import kernels_ready

    if not quiet and not kernels_ready():
        note("The search kernels are being compiled, once after an install; this takes some ten seconds.")
