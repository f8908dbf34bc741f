"""What the documentation says is tried: commands, code, settings and links."""

from __future__ import annotations

import importlib.util
import re
import shlex
import subprocess
import sys
import tomllib
from pathlib import Path

import click
import pytest

from routing.commands.group import COMMANDS, overcrest

ROOT = Path(__file__).resolve().parent.parent
PAGES = [ROOT / "README.md", ROOT / "DEVELOPERS.md", *sorted((ROOT / "docs").rglob("*.md"))]
README = (ROOT / "README.md").read_text(encoding="utf-8")


def name_of(page):
    return str(page.relative_to(ROOT))


def blocks(text, language):
    """Return the fenced blocks of a language."""
    return re.findall(rf"^```{language}\n(.*?)^```", text, flags=re.DOTALL | re.MULTILINE)


def commands_of(text):
    """Return every call of the program in the shell blocks, as lists of arguments."""
    lines = "\n".join(blocks(text, "sh")).replace("\\\n", " ").splitlines()
    parts = [part.split("#")[0].strip() for line in lines for part in line.split("&&")]
    words = [shlex.split(part) for part in parts if part]
    return [arguments[1:] for arguments in words if arguments[0].rsplit("/")[-1] == "overcrest"]


def prose(text):
    """Return the text without its fenced blocks and code spans."""
    return re.sub(r"`[^`\n]*`", "", re.sub(r"^```.*?^```", "", text, flags=re.DOTALL | re.MULTILINE))


def anchors_of(text):
    """Return the anchors that the headings of a page make."""
    heads = re.findall(r"^#+ (.+)$", re.sub(r"^```.*?^```", "", text, flags=re.DOTALL | re.MULTILINE), re.MULTILINE)
    return {re.sub(r"[\s-]+", "-", re.sub(r"[^\w\s-]", "", head.lower()).strip()) for head in heads}


@pytest.mark.parametrize("page", PAGES, ids=name_of)
def test_links_lead_somewhere(page):
    text = page.read_text(encoding="utf-8")
    for target in re.findall(r"\]\(([^)\s]+)\)", prose(text)):
        if re.match(r"[a-z]+:", target):
            continue
        path, _, anchor = target.partition("#")
        file = (page.parent / path).resolve() if path else page
        assert file.exists(), f"{name_of(page)} links to {target}"
        if anchor:
            assert anchor in anchors_of(file.read_text(encoding="utf-8")), f"{name_of(page)} links to {target}"


@pytest.mark.parametrize("page", PAGES, ids=name_of)
def test_calls_of_the_program_are_such_that_it_takes(page):
    for arguments in commands_of(page.read_text(encoding="utf-8")):
        name, *rest = arguments
        if name.startswith("-"):
            continue
        assert name in COMMANDS, f"{name_of(page)}: overcrest {shlex.join(arguments)}"
        command = overcrest.get_command(click.Context(overcrest), name)
        command.make_context(name, rest)


@pytest.mark.parametrize("page", PAGES, ids=name_of)
def test_settings_and_code_can_be_read(page):
    text = page.read_text(encoding="utf-8")
    for block in blocks(text, "toml"):
        tomllib.loads(block)
    for block in blocks(text, "python"):
        compile(block, name_of(page), "exec")


def install_lines():
    """Return the lines of the README that make an environment."""
    return [line for block in blocks(README, "sh") for line in block.splitlines() if line.startswith("python3 -m venv")]


def test_the_readme_has_two_commands_for_a_bare_machine():
    run, test = install_lines()
    assert run.startswith("python3 -m venv .venv && .venv/bin/pip install . && .venv/bin/overcrest plan ")
    assert test == 'python3 -m venv .venv && .venv/bin/pip install -e ".[test]" && .venv/bin/pytest'


def test_the_test_extra_holds_every_tool_of_the_checks():
    extras = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]["optional-dependencies"]
    tools = set(re.findall(r'"\$bin/(\w+)"', (ROOT / ".ci" / "run").read_text(encoding="utf-8")))
    named = {re.split(r"[\[><=]", requirement)[0].lower() for requirement in extras["test"]}
    assert tools == {"ruff", "mypy", "codespell", "pytest", "mkdocs"}
    assert tools <= named


def test_the_check_script_takes_its_command_from_the_readme():
    script = (ROOT / ".ci" / "run").read_text(encoding="utf-8")
    pattern = re.search(r"grep -E '([^']+)' README\.md", script)
    found = [line for line in README.splitlines() if re.search(pattern[1], line)]
    assert found == [install_lines()[1]]
    assert "pip install" not in script


def test_the_readme_job_runs_as_written(demo_run):
    folder, done = demo_run
    assert done.returncode == 0, done.stderr
    words = shlex.split(install_lines()[0].rpartition("&&")[2])
    assert words == [".venv/bin/overcrest", *done.args[3:]]
    for name in re.findall(r"`([\w-]+\.(?:geojson|csv|json))`", README):
        assert (folder / "site-plan" / name).is_file(), name
    assert "`site-plan`" in README


@pytest.fixture(scope="module")
def refresh():
    """The script that makes parts of the pages."""
    spec = importlib.util.spec_from_file_location("refresh", ROOT / "docs" / "refresh.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def test_what_is_shown_is_what_really_comes_out(refresh):
    for path, text in refresh.pages().items():
        assert path.read_text(encoding="utf-8") == text, f"{name_of(path)} is stale: run python docs/refresh.py"


def test_the_picture_is_that_of_the_demo(refresh, demo_run):
    """Letters may be drawn a little differently elsewhere, so its words are compared, not its dots."""
    from PIL import Image

    folder, _ = demo_run
    assert refresh.PICTURE.stat().st_size < 200_000
    with Image.open(folder / "site-plan" / "overview.png") as drawn, Image.open(refresh.PICTURE) as kept:
        assert kept.info["Description"] == drawn.info["Description"], "run python docs/refresh.py"
        assert kept.width == refresh.WIDTH
    again = refresh.reduced(folder / "site-plan" / "overview.png")
    assert len(again) < 200_000


def test_an_excerpt_is_made_anew_and_the_rest_kept(refresh):
    page = "before\n\n<!-- shown: look -->\n```text\nold\n```\n\nafter\n\n```text\nkept\n```\n"
    assert refresh.refreshed(page, {"look": ["new", "lines"]}) == page.replace("old", "new\nlines")


def test_both_pages_show_a_run(refresh):
    names = [
        refresh.MARK.findall((ROOT / name).read_text(encoding="utf-8")) for name in ("README.md", "docs/tutorial.md")
    ]
    assert names == [["schemes"], ["look", "schemes", "best", "no-route"]]


def test_the_readme_code_runs(demo):
    (code,) = blocks(README, "python")
    assert len([line for line in code.splitlines() if line.strip()]) <= 6
    done = subprocess.run(
        [sys.executable, "-c", code],
        cwd=demo.parents[2],
        capture_output=True,
        text=True,
        timeout=120,
        check=False,
    )
    assert done.returncode == 0, done.stderr
    assert "LINESTRING" in done.stdout


def test_the_pages_are_all_in_the_contents():
    contents = (ROOT / "mkdocs.yml").read_text(encoding="utf-8")
    for page in PAGES:
        if page.is_relative_to(ROOT / "docs"):
            assert f" {page.relative_to(ROOT / 'docs').as_posix()}\n" in contents
    for page in re.findall(r": ([\w/-]+\.md)$", contents, flags=re.MULTILINE):
        assert (ROOT / "docs" / page).is_file(), page


def test_the_word_list_is_in_order():
    words = re.findall(r"^\| ([^|]+) \|", (ROOT / "docs/reference/words.md").read_text(encoding="utf-8"), re.MULTILINE)
    entries = [word for word in words if word not in {"word", "---"}]
    assert entries == sorted(entries, key=str.lower)


def test_the_errors_page_lists_the_family():
    from routing import errors

    page = (ROOT / "docs/reference/errors.md").read_text(encoding="utf-8")
    family = [errors.OvercrestError, *_below(errors.OvercrestError)]
    for error in family:
        assert f"| `{error.__name__}` | {error.exit_code} |" in page


def _below(error):
    return [found for child in error.__subclasses__() for found in (child, *_below(child))]
