"""``rio overcrest``: the same commands among those of rasterio's own command line.

Rasterio's command ``rio`` finds this module through the entry point group ``rasterio.rio_plugins``. It imports all
plug-ins whenever it starts, ``rio --help`` included, so that this one loads nothing that ``rio`` has not loaded.
"""

from __future__ import annotations

from contextlib import nullcontext
from typing import Any

import click

from routing.commands.entry import main


class PassedOn(click.Command):
    """A command that leaves every word after its name, ``--help`` and ``--`` included, to Overcrest's own reader."""

    def parse_args(self, ctx: click.Context, args: list[str]) -> list[str]:
        """Keep the words as they are."""
        ctx.args = list(args)
        return []

    def invoke(self, ctx: click.Context) -> Any:
        """Run Overcrest inside rio's settings of GDAL, and end with its exit code."""
        settings = ctx.obj.get("env") if isinstance(ctx.obj, dict) else None
        with settings or nullcontext():
            code = main(ctx.args, program=ctx.command_path)
        ctx.exit(code)


overcrest = PassedOn("overcrest", short_help="Find siphon pipelines over dams and ridges.")
