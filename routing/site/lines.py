"""Where each key of a TOML text stands: dotted key to line number.

The TOML reader of the standard library checks the syntax but forgets the lines. This scan is run on text
that the reader has accepted, so it only has to find its way, not to judge.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field

_BARE = re.compile(r"[A-Za-z0-9_-]+")
_COMMENTED_KEY = re.compile(r"#\s*([a-z][a-z0-9_]*)\s*=")
_COMMENTED_TABLE = re.compile(r"#\s*\[{1,2}\s*([a-z][a-z0-9_.]*)\s*\]{1,2}")
_BLANK = " \t\r"


@dataclass(frozen=True, slots=True)
class LineMap:
    """Line numbers (from 1) of the keys in a site file.

    Attributes
    ----------
    keys
        Dotted key to line. Entries of a list of tables count from 1: ``pipes[2].wall_mm`` is in the second.
    commented
        Dotted key to line for keys that stand in the text with a ``#`` before them.
    """

    keys: dict[str, int] = field(default_factory=dict)
    commented: dict[str, int] = field(default_factory=dict)

    def find(self, key: str) -> int | None:
        """Return the line of a key, else of its commented-out self, else of what holds it.

        Parameters
        ----------
        key
            Dotted key.

        Returns
        -------
        int or None
            ``None`` where neither the key nor anything that holds it stands in the text.
        """
        if key in self.keys:
            return self.keys[key]
        if key in self.commented:
            return self.commented[key]
        holder = _holder(key)
        return self.find(holder) if holder else None


def _holder(key: str) -> str:
    """Return the dotted key one step up: ``pipes[2].name``, ``pipes[2]``, ``pipes``, nothing."""
    if key.endswith("]"):
        return key[: key.rindex("[")]
    return key.rpartition(".")[0]


def map_lines(text: str) -> LineMap:
    """Find the line of every key in a TOML text.

    Parameters
    ----------
    text
        A text that the TOML reader accepts.

    Returns
    -------
    LineMap
        Lines of the keys, in tables, lists of tables, inline tables and dotted keys.
    """
    scan = _Scan(text)
    scan.document()
    return LineMap(scan.keys, scan.commented)


def _join(prefix: str, names: list[str]) -> str:
    return ".".join([prefix, *names] if prefix else names)


class _Scan:
    """A walk through the text; keeps the place, the line, and the table that keys belong to."""

    def __init__(self, text: str) -> None:
        self.text = text
        self.at = 0
        self.line = 1
        self.keys: dict[str, int] = {}
        self.commented: dict[str, int] = {}
        self.entries: dict[str, int] = {}

    def document(self) -> None:
        """Walk the whole text, statement by statement."""
        table = hidden = ""
        while self.at < len(self.text):
            char = self.text[self.at]
            if char == "\n" or char in _BLANK:
                self._step()
            elif char == "#":
                hidden = self._comment(hidden)
            elif char == "[":
                table = hidden = self._header()
            else:
                self._pair(table)

    def _step(self, count: int = 1) -> None:
        self.line += self.text.count("\n", self.at, self.at + count)
        self.at += count

    def _blank(self, *, newlines: bool = False) -> None:
        """Skip blanks; with ``newlines`` also line ends and comments (inside brackets)."""
        while self.at < len(self.text):
            char = self.text[self.at]
            if char in _BLANK or (newlines and char == "\n"):
                self._step()
            elif newlines and char == "#":
                self._rest_of_line()
            else:
                return

    def _rest_of_line(self) -> str:
        end = self.text.find("\n", self.at)
        rest = self.text[self.at :] if end < 0 else self.text[self.at : end]
        self.at += len(rest)
        return rest

    def _comment(self, table: str) -> str:
        """Note a commented-out key; return the table that the next commented-out key belongs to."""
        line = self.line
        comment = self._rest_of_line()
        header = _COMMENTED_TABLE.match(comment)
        if header:
            self.commented.setdefault(header[1], line)
            return header[1]
        pair = _COMMENTED_KEY.match(comment)
        if pair:
            self.commented.setdefault(_join(table, [pair[1]]), line)
        return table

    def _header(self) -> str:
        """Read ``[table]`` or ``[[list of tables]]`` and return its dotted key."""
        line = self.line
        entry = self.text.startswith("[[", self.at)
        self._step(2 if entry else 1)
        names = self._names()
        self._step(2 if entry else 1)
        key = ""
        for name in names[:-1]:
            key = _join(key, [name])
            if key in self.entries:
                key = f"{key}[{self.entries[key]}]"
        key = _join(key, names[-1:])
        self.keys.setdefault(key, line)
        if entry:
            self.entries[key] = self.entries.get(key, 0) + 1
            key = f"{key}[{self.entries[key]}]"
            self.keys[key] = line
        return key

    def _names(self) -> list[str]:
        """Read a key, dotted or not, and stop before what follows it."""
        names: list[str] = []
        while True:
            self._blank()
            if self.text[self.at] in "\"'":
                names.append(self._string())
            else:
                bare = _BARE.match(self.text, self.at)
                name = bare[0] if bare else self.text[self.at]
                names.append(name)
                self._step(len(name))
            self._blank()
            if not self.text.startswith(".", self.at):
                return names
            self._step()

    def _pair(self, table: str) -> None:
        line = self.line
        names = self._names()
        for count in range(1, len(names) + 1):
            self.keys.setdefault(_join(table, names[:count]), line)
        self._step()  # the equals sign
        self._value(_join(table, names))

    def _value(self, key: str) -> None:
        self._blank(newlines=True)
        char = self.text[self.at : self.at + 1]
        if char and char in "\"'":
            self._string()
        elif char == "{":
            self._inline_table(key)
        elif char == "[":
            self._array(key)
        else:
            while self.at < len(self.text) and self.text[self.at] not in ",]}#\n":
                self._step()

    def _inline_table(self, key: str) -> None:
        self._step()
        while True:
            self._blank(newlines=True)
            if self.text[self.at] == "}":
                self._step()
                return
            if self.text[self.at] == ",":
                self._step()
            else:
                self._pair(key)

    def _array(self, key: str) -> None:
        self._step()
        count = 0
        while True:
            self._blank(newlines=True)
            if self.text[self.at] == "]":
                self._step()
                return
            if self.text[self.at] == ",":
                self._step()
            else:
                count += 1
                self.keys[f"{key}[{count}]"] = self.line
                self._value(f"{key}[{count}]")

    def _string(self) -> str:
        """Read a string of any of the four kinds and return what stands between its quotes."""
        quote = self.text[self.at]
        mark = quote * 3 if self.text.startswith(quote * 3, self.at) else quote
        self._step(len(mark))
        start = self.at
        while not self.text.startswith(mark, self.at):
            self._step(2 if quote == '"' and self.text[self.at] == "\\" else 1)
        while len(mark) > 1 and self.text.startswith(mark, self.at + 1):
            self._step()  # a long string may end in one or two quotes of its own
        content = self.text[start : self.at]
        self._step(len(mark))
        return content
