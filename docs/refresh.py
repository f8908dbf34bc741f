"""Puts into the pages what the program really says: reference pages, excerpts of a run on the demo site, its picture.

Run it as ``python docs/refresh.py`` after a change that shows. A test makes everything again and compares.
"""

from __future__ import annotations

import io
import re
import shutil
import subprocess
import sys
import tempfile
from pathlib import Path

# The picture is made small here; Pillow comes with matplotlib.
from PIL import Image
from PIL.PngImagePlugin import PngInfo

from routing.commands.reference import commands_page
from routing.outputs import fields_page
from routing.site import reference_page

ROOT = Path(__file__).resolve().parent.parent
SITE = "sample_dem/brackenmere/site.toml"
#: The picture in README and how-to, its width in dots and its colours.
PICTURE, WIDTH, COLOURS = ROOT / "docs" / "pictures" / "brackenmere.png", 1400, 64
#: The change that the tutorial makes to the demo site, after which no route works.
LIMIT = "highest_lift_m = 4.0"
#: An excerpt: its name in a comment that readers do not see, then a block.
MARK = re.compile(r"(?<=<!-- shown: )(\S+) -->\n```text\n.*?^```", re.MULTILINE | re.DOTALL)


def run(folder: Path, *arguments: str) -> list[str]:
    """Return what a call of the program prints, line by line."""
    call = [sys.executable, "-m", "routing.commands", *arguments]
    done = subprocess.run(call, cwd=folder, capture_output=True, text=True, check=False)  # noqa: S603
    if not done.stdout:
        raise SystemExit(done.stderr)
    return done.stdout.splitlines()


def first_rows(lines: list[str], rows: int) -> list[str]:
    """Return the headline and the first rows of the table."""
    end = next(k for k, line in enumerate(lines) if re.match(rf" *{rows + 1}  R", line) or line.startswith("Prices"))
    return [*lines[1:end], "..."]


def paragraph(lines: list[str], start: str) -> list[str]:
    """Return the lines from one that begins with `start` to the next empty one."""
    first = next((k for k, line in enumerate(lines) if line.startswith(start)), None)
    if first is None:
        raise SystemExit(f"no line begins with {start!r} in:\n" + "\n".join(lines))
    return lines[first : lines.index("", first)]


def first_item(lines: list[str]) -> list[str]:
    """Return the head of a list and its first item."""
    second = [k for k, line in enumerate(lines) if line.startswith("- ")][1:2]
    return lines[: second[0]] if second else lines


def excerpts() -> dict[str, list[str]]:
    """Run the demo job, and the tutorial's change of it, in a copy; return the excerpts by name."""
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        shutil.copytree(ROOT / "sample_dem", folder / "sample_dem")
        look, plan = run(folder, "look", SITE), run(folder, "plan", SITE)
        site = folder / SITE
        text = site.read_text(encoding="utf-8").replace("[limits]\n", f"[limits]\n{LIMIT}\n")
        site.write_text(text, encoding="utf-8")
        none = run(folder, "plan", SITE, "--replace")
    facts = [line for line in look[1 : look.index("Assumptions") - 1] if not line.startswith("file ")]
    return {
        "look": facts,
        "schemes": first_rows(plan, 3),
        "best": paragraph(plan, "Scheme "),
        "no-route": [*paragraph(none, "No route works"), "...", *first_item(paragraph(none, "No route for")), "..."],
    }


def refreshed(page: str, shown: dict[str, list[str]]) -> str:
    """Return a page with its excerpts made anew."""
    return MARK.sub(lambda mark: "\n".join([f"{mark[1]} -->", "```text", *shown[mark[1]], "```"]), page)


def picture() -> bytes:
    """Draw the demo job; return its picture small, with the text alternative that it came with."""
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        shutil.copytree(ROOT / "sample_dem", folder / "sample_dem")
        run(folder, "plan", SITE, "--out", "plan", "--quiet")
        return reduced(folder / "plan" / "overview.png")


def reduced(file: Path) -> bytes:
    """Return a picture at a width for pages, in few colours, with its text."""
    with Image.open(file) as large:
        told = PngInfo()
        for name in ("Title", "Description"):
            told.add_text(name, large.info[name])
        size = (WIDTH, round(WIDTH * large.height / large.width))
        small = large.convert("RGB").resize(size, Image.Resampling.LANCZOS)
    data = io.BytesIO()
    few = small.quantize(COLOURS, dither=Image.Dither.NONE)
    few.save(data, "PNG", optimize=True, pnginfo=told)
    return data.getvalue()


def pages() -> dict[Path, str]:
    """Return the text that every page with made parts should have."""
    shown = excerpts()
    reference = ROOT / "docs" / "reference"
    made = {
        reference / "commands.md": commands_page().rstrip("\n") + "\n",
        reference / "fields.md": fields_page(),
        reference / "site-file.md": reference_page(),
    }
    for path in (ROOT / "README.md", ROOT / "docs" / "tutorial.md"):
        made[path] = refreshed(path.read_text(encoding="utf-8"), shown)
    return made


if __name__ == "__main__":
    for target, content in pages().items():
        target.write_text(content, encoding="utf-8", newline="\n")
    PICTURE.parent.mkdir(exist_ok=True)
    PICTURE.write_bytes(picture())
