"""``overcrest new``: a commented starter site file for a DEM."""

from __future__ import annotations

import json
import os
import tempfile
from pathlib import Path

import click

from routing.commands.options import EXIT_DONE, refuse_existing, replace_option, verbose_option
from routing.commands.streams import emit
from routing.errors import OutputError, Problem


@click.command(short_help="Write a commented starter site file for a DEM.")
@click.argument("dem", metavar="[DEM]", required=False, type=click.Path(path_type=Path))
@click.option(
    "-o",
    "--output",
    default="site.toml",
    show_default=True,
    type=click.Path(path_type=Path),
    help="The site file to write; - prints it on stdout.",
)
@click.option("--schema", is_flag=True, help="Print the JSON Schema of site files instead; needs no DEM.")
@replace_option
@verbose_option
def new(dem: Path | None, output: Path, schema: bool, replace: bool) -> int:
    """Write a commented starter site file for the elevation model DEM.

    Everything that the DEM tells is filled in; every value that only you know is marked. Paths in a site
    file are relative to its own folder.
    """
    if schema:
        from routing.site import schema as site_schema

        emit(json.dumps(site_schema(), indent=2))
        return EXIT_DONE
    if dem is None:
        raise click.MissingParameter(ctx=click.get_current_context(), param_hint="'DEM'", param_type="argument")
    printed = str(output) == "-"
    if not printed:
        refuse_existing(output, replace=replace)
    text = _starter(dem, Path.cwd() if printed else output.absolute().parent)
    if printed:
        emit(text)
        return EXIT_DONE
    write_whole(text, output, replace=replace)
    emit(f"{output} written. Fill in the marked values, then check it: overcrest look {output}")
    return EXIT_DONE


def _starter(dem: Path, folder: Path) -> str:
    from routing.planning import inspect_dem
    from routing.site import starter

    text: str = starter(inspect_dem(dem), dem_path=dem.absolute(), folder=folder)
    return text


def write_whole(text: str, path: Path, *, replace: bool) -> None:
    """Write a text file all at once: what is at `path` afterwards is the old file or the whole new one.

    Raises
    ------
    OutputError
        If the folder does not exist or cannot be written, or the file has come into being meanwhile.
    """
    try:
        number, name = tempfile.mkstemp(dir=path.absolute().parent, prefix=f".{path.name}.")
    except OSError as error:
        raise _cannot_write(path, error) from error
    try:
        with os.fdopen(number, "w", encoding="utf-8", newline="\n") as file:
            file.write(text)
        refuse_existing(path, replace=replace)
        Path(name).chmod(0o644)
        Path(name).replace(path)
    except OSError as error:
        raise _cannot_write(path, error) from error
    finally:
        Path(name).unlink(missing_ok=True)


def _cannot_write(path: Path, error: OSError) -> OutputError:
    return OutputError(
        Problem(
            "the file cannot be written",
            found=error.strerror or str(error),
            allowed="a file in a folder that exists and that you may write to",
            remedy="make the folder, or give another place with -o",
            file=str(path),
        )
    )
