"""The command line, one module a command.

Importing this room loads click and nothing else of other people's; each command loads what it needs
when it runs, so that ``overcrest --help`` answers at once.
"""

from routing.commands.entry import main, main_inner

__all__ = ["main", "main_inner"]
