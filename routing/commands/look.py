"""``overcrest look``: what was understood of a site, before anything is planned."""

from __future__ import annotations

from datetime import UTC, datetime
from pathlib import Path

import click

from routing.commands.call import Call
from routing.commands.options import EXIT_DONE, json_option, quiet_option, site_argument, verbose_option
from routing.commands.progress import reporting
from routing.commands.streams import emit_json, emit_table
from routing.commands.warming import tell_if_compiling


@click.command(short_help="Say what was understood of a site, the lowest possible crest included.")
@site_argument
@json_option
@quiet_option
@verbose_option
@click.pass_obj
def look(call: Call, site_file: Path, as_json: bool, quiet: bool) -> int:
    """Say what was understood of the site file SITE before anything is planned.

    Size, cell, CRS, datum and units of the DEM, the water found, its spill level, the lowest possible crest,
    and every assumption made. Nothing is written.
    """
    from routing.outputs import RunFacts, look_document, outlook_summary
    from routing.planning import look as look_at
    from routing.site import load_site

    started = datetime.now(UTC)
    site = load_site(site_file)
    tell_if_compiling(quiet=quiet)
    with reporting(call.stop, quiet=quiet) as report:
        outlook = look_at(site, progress=report)
    if as_json:
        run = RunFacts(command=call.words, started=started, finished=datetime.now(UTC))
        emit_json(look_document(outlook, run))
    else:
        emit_table(outlook_summary(outlook))
    return EXIT_DONE
