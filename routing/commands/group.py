"""The program's commands, each loaded when it is called."""

from __future__ import annotations

import importlib

import click

#: In the order of use; the module of each has its name.
COMMANDS = ("new", "look", "plan", "about")


class LazyGroup(click.Group):
    """A group that imports a command's module when the command is asked for."""

    def list_commands(self, ctx: click.Context) -> list[str]:  # noqa: ARG002 - click's signature
        """Return the names, in the order of use."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:  # noqa: ARG002
        """Return a command by its name, or ``None``."""
        if cmd_name not in COMMANDS:
            return None
        command = getattr(importlib.import_module(f"routing.commands.{cmd_name}"), cmd_name)
        return command if isinstance(command, click.Command) else None


@click.group(
    cls=LazyGroup,
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100},
    epilog="Exit codes: 0 done; 2 bad input or usage; 3 no feasible route (results are written all the same); "
    "130 interrupted; 1 a fault of the program's.",
)
@click.version_option(package_name="overcrest", prog_name="overcrest")
def overcrest() -> None:
    """Find, prove and price siphon pipelines over dams and ridges.

    Start with `overcrest new DEM`, fill in the site file, check it with `overcrest look SITE`, then run
    `overcrest plan SITE`.
    """
