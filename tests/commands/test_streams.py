"""Results and notes, and readers that leave early."""

from __future__ import annotations

import errno
import io
import json
import subprocess
import sys

import pytest
from rich.text import Text

from routing.commands import streams
from routing.errors import OutputError


def test_json_is_plain_ascii(capsys):
    streams.emit_json({"name": "Nádrž", "value": 1.5})
    text = capsys.readouterr().out
    assert text.isascii()
    assert json.loads(text) == {"name": "Nádrž", "value": 1.5}


def test_a_table_is_plain_text_a_hundred_columns_wide_off_the_terminal(capsys):
    streams.emit_table(Text("word " * 50, style="bold red"))
    lines = capsys.readouterr().out.splitlines()
    assert "\x1b" not in "".join(lines)
    assert 90 < max(map(len, lines)) <= 100


def test_a_table_is_coloured_on_a_terminal(monkeypatch, capsys):
    monkeypatch.setattr(streams.sys.stdout, "isatty", lambda: True, raising=False)
    monkeypatch.setenv("TERM", "xterm")
    monkeypatch.delenv("NO_COLOR", raising=False)
    shown = []
    monkeypatch.setattr(streams, "emit", shown.append)
    streams.emit_table(Text("crest", style="bold red"))
    assert "\x1b[" in shown[0]


def test_json_refuses_what_json_cannot_say():
    with pytest.raises(ValueError, match="JSON"):
        streams.emit_json({"value": float("inf")})


def test_a_full_disk_is_told(monkeypatch):
    def full(_text, err=False):
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr(streams.click, "echo", full)
    monkeypatch.setattr(streams, "silence", lambda stream: None)
    with pytest.raises(OutputError, match="No space left"):
        streams.emit("text")


def test_a_note_that_nobody_reads_does_not_end_the_run(monkeypatch):
    silenced = []

    def gone(_text, err=False):
        raise BrokenPipeError(errno.EPIPE, "Broken pipe")

    monkeypatch.setattr(streams.click, "echo", gone)
    monkeypatch.setattr(streams, "silence", silenced.append)
    streams.note("text")
    assert silenced == [sys.stderr]


def test_silence_bears_streams_without_a_number(capsys):
    streams.silence(None)
    streams.silence(io.StringIO())
    assert capsys.readouterr().out == ""


@pytest.mark.parametrize("arguments", [["--help"], ["new", "--schema"]])
def test_a_reader_that_leaves_is_no_fault(arguments):
    """Like ``overcrest ... | head``: the pipe's reading end is closed before anything is written."""
    code = (
        "import os, sys; from routing.commands import main; "
        "ends = os.pipe(); os.dup2(ends[1], 1); os.close(ends[0]); os.close(ends[1]); "
        f"sys.exit(main({arguments!r}))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, timeout=120, check=False)
    assert (done.returncode, done.stderr) == (0, "")
