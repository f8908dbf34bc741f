"""``overcrest plan``: find, prove, appraise, price and rank schemes."""

from __future__ import annotations

from datetime import UTC, datetime
from pathlib import Path
from typing import Literal

import click

from routing.commands.call import Call
from routing.commands.options import (
    EXIT_DONE,
    EXIT_NO_ROUTE,
    json_option,
    quiet_option,
    replace_option,
    site_argument,
    verbose_option,
)
from routing.commands.progress import reporting
from routing.commands.streams import emit_json, emit_table, note
from routing.commands.warming import tell_if_compiling


@click.command(short_help="Find, prove, price and rank schemes; write them to a folder.")
@site_argument
@click.option(
    "--out",
    "folder",
    type=click.Path(path_type=Path),
    help="Folder for the results; it must not exist yet. Without it: SITE's name with -plan, in the current folder.",
)
@replace_option
@click.option(
    "--top",
    type=click.IntRange(min=1),
    default=10,
    show_default=True,
    metavar="N",
    help="Schemes to show in the table; the files and the JSON document hold all.",
)
@click.option(
    "--pictures",
    type=click.Choice(["overview", "all", "none"]),
    default="overview",
    show_default=True,
    help="Pictures to draw: one of the whole plan, or one of each route besides, or none.",
)
@click.option("--no-pictures", "pictures", flag_value="none", help="The same as --pictures none.")
@json_option
@quiet_option
@verbose_option
@click.pass_obj
def plan(
    call: Call,
    site_file: Path,
    folder: Path | None,
    replace: bool,
    top: int,
    pictures: Literal["overview", "all", "none"],
    as_json: bool,
    quiet: bool,
) -> int:
    """Find the routes that a siphon can work on for the site file SITE, and rank what can be built on them.

    Writes one folder: routes.geojson for the map, schemes.csv with every figure, overview.png and overview.svg with
    map and long section, run.json with all that the results rest on. Where no route is feasible the folder is
    written all the same, says what is missing, and the exit code is 3.
    """
    from routing.outputs import RunFacts, check_folder, plan_document, summary, write_run
    from routing.planning import plan as make_plan
    from routing.site import load_site

    started = datetime.now(UTC)
    folder = Path(f"{site_file.stem}-plan") if folder is None else folder
    check_folder(folder, replace=replace)
    site = load_site(site_file)
    tell_if_compiling(quiet=quiet)
    with reporting(call.stop, quiet=quiet) as report:
        result = make_plan(site, progress=report)
        call.stop.check()
    run = RunFacts(command=call.words, started=started, finished=datetime.now(UTC))
    write_run(result, folder, replace=replace, run=run, pictures=pictures)
    if as_json:
        emit_json({**plan_document(result, run), "folder": str(folder)})
    else:
        emit_table(summary(result, top=top))
        if not quiet:
            note(f"results: {folder}")
    return EXIT_DONE if result.feasible else EXIT_NO_ROUTE
