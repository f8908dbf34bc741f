"""Getting the text of a site file, and its tables, with messages where that fails."""

from __future__ import annotations

import hashlib
import re
import tomllib
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from routing.errors import Problem, SiteError

#: A site file is a few kilobytes; anything far larger is another file given by mistake.
LARGEST_BYTES = 2_000_000

_PLACE = re.compile(r"\s*\((?:at line (?P<line>\d+), column (?P<column>\d+)|at end of document)\)\s*$")
_DECIMAL_COMMA = re.compile(r"[+-]?\d+,\d+")
_BARE_TEXT = re.compile(r"(?!(?:true|false)\b)[^\W\d]|[./]")
_WITH_UNIT = re.compile(r"[+-]?[\d.]+\s*[^\W\d_]")
_ALLOWED = "a TOML text file: tables like [terrain], and below each its keys, one 'key = value' a line"


@dataclass(frozen=True, slots=True)
class SiteText:
    """A site file as read: its text, the tables in it, and the SHA-256 of its bytes."""

    text: str
    tables: dict[str, Any]
    sha256: str


def read_site_text(path: Path) -> SiteText:
    """Read a site file and take its TOML apart.

    Parameters
    ----------
    path
        The file as the user named it.

    Returns
    -------
    SiteText

    Raises
    ------
    SiteError
        If there is no such file, it is a folder, it cannot be read, it is not UTF-8 text, or it is not TOML.
    """
    data = _read_bytes(path)
    try:
        text = data.decode("utf-8-sig").replace("\r\n", "\n")
    except UnicodeDecodeError as error:
        raise SiteError(_not_text(path, data, error)) from error
    try:
        tables = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise SiteError(_not_toml(path, text, str(error))) from error
    except RecursionError as error:
        what = "the file nests brackets too deeply"
        raise SiteError(Problem(what, "", _ALLOWED, "write each table under a head of its own", str(path))) from error
    return SiteText(text, tables, hashlib.sha256(data).hexdigest())


def _read_bytes(path: Path) -> bytes:
    name, allowed = str(path), "the path of a site file, such as site.toml"
    if path.is_dir():
        inside = sorted(entry.name for entry in path.glob("*.toml"))
        remedy = f"name the file in it: {path / inside[0]}" if inside else "name a site file, not a folder"
        raise SiteError(Problem("this is a folder, not a site file", name, allowed, remedy, name))
    if not path.is_file():
        remedy = "correct the path, or write a starter file with 'overcrest new'"
        raise SiteError(Problem("there is no such site file", name, allowed, remedy, name))
    try:
        size = path.stat().st_size
        if size > LARGEST_BYTES:
            found, limit = f"{size} bytes", f"a text file of at most {LARGEST_BYTES} bytes"
            remedy = "name the site file; the DEM is named inside it, by terrain.file"
            raise SiteError(Problem("this file is too large to be a site file", found, limit, remedy, name))
        return path.read_bytes()
    except OSError as error:
        what, found = "the site file cannot be read", error.strerror or str(error)
        raise SiteError(Problem(what, found, allowed, "check that you may read the file", name)) from error


def _not_text(path: Path, data: bytes, error: UnicodeDecodeError) -> Problem:
    line = data.count(b"\n", 0, error.start) + 1
    found = f"byte 0x{data[error.start]:02X}"
    if data[:2] in {b"\xff\xfe", b"\xfe\xff"}:
        found, line = "UTF-16 text", 1
    elif data[:4] in {b"II*\x00", b"MM\x00*"}:
        found, line = "a TIFF image", 1
    remedy = "save the file as UTF-8 in your editor; if it is a DEM, name the site file instead"
    return Problem("the site file is not UTF-8 text", found, "text saved as UTF-8", remedy, str(path), None, line)


def _not_toml(path: Path, text: str, message: str) -> Problem:
    place = _PLACE.search(message)
    lines = text.split("\n")
    line = int(place["line"]) if place and place["line"] else max(1, len(text.rstrip().split("\n")))
    found = lines[line - 1].strip() if line <= len(lines) else ""
    what = f"the file is not valid TOML: {_PLACE.sub('', message)[:1].lower()}{_PLACE.sub('', message)[1:]}"
    return Problem(what, found, _ALLOWED, _toml_remedy(found, message), str(path), None, line)


def _toml_remedy(found: str, message: str) -> str:
    _, equals, value = found.partition("=")
    value = value.partition("#")[0].strip()
    twice = any(word in message.lower() for word in ("overwrite", "declare", "duplicate"))
    remedies = (
        (twice, "this stands twice: remove one of the two (each pipe is headed [[pipes]], with two brackets)"),
        (_DECIMAL_COMMA.fullmatch(value), f"write decimals with a point: {value.replace(',', '.')}"),
        ("\\" in value, "a backslash has a meaning of its own in quotes: write paths with forward slashes"),
        (equals and not value, "write a value after the equals sign, or put '#' at the start of the line"),
        (_BARE_TEXT.match(value), "put text in quotes; write true and false in small letters"),
        (_WITH_UNIT.match(value), "write the number without its unit: the key names the unit"),
    )
    usual = "write 'key = value' on one line, text in quotes, a comment after '#'"
    return next((remedy for fits, remedy in remedies if fits), usual)
