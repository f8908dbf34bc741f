"""Getting at the text: what is no site file at all is said in one message."""

from __future__ import annotations

import hashlib
import os

import pytest

from routing.errors import SiteError
from routing.site import load_site
from routing.site.reading import LARGEST_BYTES, read_site_text


def refusal(path):
    with pytest.raises(SiteError) as caught:
        load_site(path)
    (problem,) = caught.value.problems
    assert problem.file == str(path)
    assert problem.allowed
    assert problem.remedy
    return problem


def test_a_missing_file_is_named_with_what_to_do(tmp_path):
    problem = refusal(tmp_path / "none.toml")
    assert "no such site file" in problem.what
    assert "none.toml" in problem.found
    assert "overcrest new" in problem.remedy


def test_a_folder_names_the_site_file_in_it(tmp_path):
    assert "not a folder" in refusal(tmp_path).remedy
    (tmp_path / "job.toml").write_text("")
    problem = refusal(tmp_path)
    assert "folder" in problem.what
    assert str(tmp_path / "job.toml") in problem.remedy


@pytest.mark.parametrize(
    ("data", "found", "line"),
    [
        ("title = 'x'\nname = 'M\u00fchle'".encode("latin-1"), "0xFC", 2),
        ("title = 'x'".encode("utf-16"), "UTF-16", 1),
        (b"II*\x00\x08\x00\xff\xff", "TIFF", 1),
    ],
)
def test_text_that_is_not_utf_8(tmp_path, data, found, line):
    path = tmp_path / "site.toml"
    path.write_bytes(data)
    problem = refusal(path)
    assert "not UTF-8" in problem.what
    assert found in problem.found
    assert problem.line == line
    assert "UTF-8" in problem.remedy


def test_a_file_far_too_large_is_another_file(tmp_path):
    path = tmp_path / "dem.toml"
    with path.open("wb") as stream:
        stream.truncate(LARGEST_BYTES + 1)
    problem = refusal(path)
    assert "too large" in problem.what
    assert str(LARGEST_BYTES + 1) in problem.found
    assert "terrain.file" in problem.remedy


def test_a_file_that_may_not_be_read(tmp_path, monkeypatch):
    path = tmp_path / "site.toml"
    path.write_text("")

    def denied(self):
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr("pathlib.Path.read_bytes", denied)
    problem = refusal(path)
    assert "cannot be read" in problem.what
    assert problem.found == "Permission denied"


@pytest.mark.parametrize(
    ("text", "line", "found", "remedy"),
    [
        ("[air]\naltitude_m = 3,5\n", 2, "altitude_m = 3,5", "3.5"),
        ("[terrain]\n\nfile = dem.tif\n", 3, "file = dem.tif", "quotes"),
        ("[terrain]\nfile = 'a'\nfile = 'b'\n", 3, "file = 'b'", "twice"),
        ("[pipes]\nsdr = 1\n[pipes]\nsdr = 2\n", 3, "[pipes]", "[[pipes]]"),
        ('[terrain]\nfile = "data\\dem.tif"\n', 2, "data", "forward slashes"),
        ("[air]\naltitude_m =\n", 2, "altitude_m =", "value after"),
        ("[air]\naltitude_m = 12 m\n", 2, "12 m", "without its unit"),
        ("[prices]\ninvented = True\n", 2, "True", "small letters"),
        ("[air]\nnonsense\n", 2, "nonsense", "key = value"),
        ('title = "open\n', 1, "open", "key = value"),
    ],
)
def test_what_is_not_toml_names_line_and_remedy(tmp_path, text, line, found, remedy):
    path = tmp_path / "site.toml"
    path.write_text(text)
    problem = refusal(path)
    assert "not valid TOML" in problem.what
    assert "at line" not in problem.what
    assert problem.line == line
    assert found in problem.found
    assert remedy in problem.remedy


def test_brackets_without_end_end_in_a_message(tmp_path):
    path = tmp_path / "site.toml"
    path.write_text("a = " + "[" * 100_000)
    assert refusal(path).remedy


def test_byte_order_mark_and_windows_line_ends_are_taken(tmp_path):
    path = tmp_path / "site.toml"
    data = b"\xef\xbb\xbftitle = 'x'\r\n[air]\r\naltitude_m = 3\r\n"
    path.write_bytes(data)
    read = read_site_text(path)
    assert read.tables == {"title": "x", "air": {"altitude_m": 3}}
    assert read.sha256 == hashlib.sha256(data).hexdigest()


def test_a_path_may_be_text_or_path_like(tmp_path):
    for path in (str(tmp_path / "a.toml"), os.fsencode(tmp_path / "a.toml").decode()):
        assert "no such" in refusal(path).what
