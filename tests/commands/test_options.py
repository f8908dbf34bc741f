"""Options that commands share, and what is refused before any work is done."""

from __future__ import annotations

import click
import pytest
from click.testing import CliRunner

from routing import errors
from routing.commands import options
from routing.errors import OutputError


def test_exit_codes_are_those_of_the_errors():
    assert options.EXIT_DONE == 0
    assert errors.OvercrestError.exit_code == options.EXIT_FAULT
    assert options.EXIT_INPUT == errors.InputError.exit_code == errors.OutputError.exit_code
    assert errors.Interrupted.exit_code == options.EXIT_INTERRUPTED
    codes = [value for name, value in vars(options).items() if name.startswith("EXIT_")]
    assert len(set(codes)) == len(codes) == 5


def test_exit_codes_are_those_of_the_page(project):
    page = (project / "docs" / "reference" / "errors.md").read_text(encoding="utf-8")
    listed = [
        int(line.split("|")[1]) for line in page.splitlines() if line.startswith("| ") and line.split()[1].isdigit()
    ]
    assert sorted(listed) == sorted(value for name, value in vars(options).items() if name.startswith("EXIT_"))


@pytest.mark.parametrize("kind", ["file", "folder"])
def test_what_is_there_is_not_touched_unless_asked(tmp_path, kind):
    place = tmp_path / "run"
    options.refuse_existing(place, replace=False)  # nothing there yet
    place.mkdir() if kind == "folder" else place.write_text("precious")
    options.refuse_existing(place, replace=True)
    with pytest.raises(OutputError) as caught:
        options.refuse_existing(place, replace=False)
    (problem,) = caught.value.problems
    assert problem.found == problem.file == str(place)
    assert "--replace" in problem.remedy
    assert place.exists()


@pytest.fixture
def probe():
    """A command with every shared option, that says what reached it."""

    @click.command()
    @options.site_argument
    @options.json_option
    @options.quiet_option
    @options.replace_option
    @options.verbose_option
    def command(**given):
        click.echo(sorted(given.items()))

    def run(*arguments):
        return CliRunner().invoke(command, arguments)

    return run


@pytest.mark.parametrize(
    ("typed", "set_"),
    [
        ([], set()),
        (["--json"], {"as_json"}),
        (["-q"], {"quiet"}),
        (["--quiet", "--replace"], {"quiet", "replace"}),
        (["-v"], set()),  # read from the call itself, see routing.commands.entry
        (["--verbose", "--json"], {"as_json"}),
    ],
)
def test_options_arrive_under_their_names(probe, typed, set_):
    done = probe("job.toml", *typed)
    assert done.exit_code == 0
    for name in ("as_json", "quiet", "replace"):
        assert f"('{name}', {name in set_})" in done.output
    assert "verbose" not in done.output
    assert "job.toml" in done.output


def test_a_site_must_be_named(probe):
    done = probe()
    assert done.exit_code == 2
    assert "SITE" in done.output
