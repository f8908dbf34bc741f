"""The way in and out: arguments to exit code, every error told in one manner."""

from __future__ import annotations

import gc
import sys
import traceback
from collections.abc import Sequence

import click

from routing.commands.call import Call, listening_for_stops
from routing.commands.group import COMMANDS, overcrest
from routing.commands.options import EXIT_DONE
from routing.commands.streams import emit_json, library_warnings, never_fail_on_characters, note, silence
from routing.errors import InputError, Interrupted, OvercrestError, Problem

#: New objects between two collections (Python's own: 700).
_COLLECT_AFTER = 50_000


def main(argv: Sequence[str] | None = None, *, program: str = "overcrest") -> int:
    """Run the program and tell what went wrong, if anything did.

    Parameters
    ----------
    argv
        Arguments without the program's name; those of the process where left out.
    program
        What was typed before them, for help and messages.

    Returns
    -------
    int
        Exit code: 0 done, 2 bad input or usage, 3 no feasible route, 130 interrupted, 1 a fault of ours.
    """
    # Start-up makes many objects that live to the end: looking through them for garbage again and again is in vain.
    gc.set_threshold(_COLLECT_AFTER, 20, 20)
    call = Call(tuple(sys.argv[1:] if argv is None else argv), program=program)
    never_fail_on_characters()
    with listening_for_stops(call.stop), library_warnings(shown=call.asks("-v", "--verbose")):
        try:
            return main_inner(call.arguments, call)
        except KeyboardInterrupt:
            return _stopped(call)
        except OvercrestError as error:
            return _stopped(call) if call.stop.asked else _tell(error, call)
        except BrokenPipeError:
            # Only click's own help pages come this way (see streams.emit): their reader has seen enough.
            silence(sys.stdout)
            return EXIT_DONE
        except MemoryError as error:
            return _tell(_out_of_memory(error), call)
        except Exception as error:  # noqa: BLE001 - the one place where any fault ends
            details = traceback.format_exc()
            return _stopped(call, details) if call.stop.asked else _tell(_fault(error), call, details)


def main_inner(argv: Sequence[str], call: Call | None = None) -> int:
    """Run the program; errors are raised, not told.

    Parameters
    ----------
    argv
        Arguments without the program's name.
    call
        The call that the arguments belong to; made from them where left out.

    Returns
    -------
    int
        0 done, or 3 no feasible route.

    Raises
    ------
    InputError
        If the arguments are wrong, or anything that they name.
    KeyboardInterrupt
        If the user stopped the run.
    """
    call = Call(tuple(argv)) if call is None else call
    try:
        with overcrest.make_context(call.program, list(argv) or ["--help"], obj=call) as context:
            code = overcrest.invoke(context)
    except click.exceptions.Exit as end:
        return end.exit_code
    except click.Abort as error:
        raise KeyboardInterrupt from error
    except click.ClickException as error:
        raise _usage_error(error, call.program) from error
    return int(code or EXIT_DONE)


def _tell(error: OvercrestError, call: Call, details: str = "") -> int:
    """Show an error, as JSON where that was asked for, and return its exit code."""
    from routing.outputs import error_document, error_text

    if call.asks("--json"):
        emit_json(error_document(error))
    else:
        note(error_text(error))
    if details and call.asks("-v", "--verbose"):
        note(details)
    return error.exit_code


def _stopped(call: Call, details: str = "") -> int:
    """Tell that the run was stopped.

    A library that swallowed the stop, or was torn apart by it, fails in its own way afterwards: that is no fault.
    """
    return _tell(Interrupted("stopped as asked; nothing half-written is left behind"), call, details)


def _usage_error(error: click.ClickException, program: str) -> InputError:
    context = getattr(error, "ctx", None)
    parameter = getattr(error, "param", None)
    remedy = f"{program} --help shows the commands"
    allowed = f"{program} {'|'.join(COMMANDS)} ..."
    if context is not None and context.parent is not None:
        remedy = f"{context.command_path} --help shows what the command takes"
        allowed = context.get_usage().removeprefix("Usage: ")
    return InputError(
        Problem(
            error.format_message(),
            allowed=" ".join(allowed.split()),
            remedy=remedy,
            key=parameter.opts[0] if parameter is not None and parameter.param_type_name == "option" else None,
        )
    )


def _out_of_memory(error: MemoryError) -> InputError:
    return InputError(
        Problem(
            "the machine's memory ran out",
            found=str(error) or "no room for the next array",
            remedy="lower search.largest_window_cells in the site file, or cut the DEM to the job",
        )
    )


def _fault(error: Exception) -> OvercrestError:
    return OvercrestError(
        Problem(
            "a fault in Overcrest, not in what you gave it",
            found=f"{type(error).__name__}: {error}",
            remedy="please report it with what `overcrest about` prints; run again with --verbose for the traceback",
        )
    )
