"""Lines of keys: against texts written so that the lines are known, and against the TOML reader's own keys."""

from __future__ import annotations

import tomllib

from hypothesis import given
from hypothesis import strategies as st

from routing.site.lines import map_lines


def lines_of(text):
    tomllib.loads(text)  # the scan is promised valid text only
    return map_lines(text).keys


def flat_keys(value, prefix=""):
    """Return every dotted key of parsed TOML; entries of lists count from 1."""
    if isinstance(value, dict):
        for name, item in value.items():
            key = f"{prefix}.{name}" if prefix else name
            yield key
            yield from flat_keys(item, key)
    elif isinstance(value, list):
        for number, item in enumerate(value, start=1):
            yield f"{prefix}[{number}]"
            yield from flat_keys(item, f"{prefix}[{number}]")


def test_tables_and_top_keys():
    assert lines_of('title = "a"\n\n[air]\naltitude_m = 3\n') == {"title": 1, "air": 3, "air.altitude_m": 4}


def test_lists_of_tables_count_from_one():
    found = lines_of("[[pipes]]\nsdr = 11\n[[pipes]]\n# note\nsdr = 17\n[pipes.more]\na = 1\n")
    assert found["pipes"] == 1
    assert found["pipes[1].sdr"] == 2
    assert found["pipes[2]"] == 3
    assert found["pipes[2].sdr"] == 5
    assert found["pipes[2].more.a"] == 7


def test_what_looks_like_a_key_inside_strings_and_comments_is_none():
    text = "a = \"b = 1 # no\"  # c = 2\nd = \"\"\"\ne = 3\n[f]\n\"\"\"\ng = '''\nh = 4'''\ni = 'j\\'\nk = 5\n"
    assert lines_of(text) == {"a": 1, "d": 2, "g": 6, "i": 8, "k": 9}


def test_escaped_quotes_and_quotes_at_the_end_of_a_long_string():
    assert lines_of('a = "x\\"y"\nb = """one\n""two"""""\nc = 1\n') == {"a": 1, "b": 2, "c": 4}


def test_inline_tables_arrays_and_dotted_keys():
    text = (
        'intake = { x = 1, "y" = [2,\n 3] }\nair.low.pa = 3 # c\npipes = [ # sizes\n {sdr = 11},\n {sdr = 17,\n }\n]\n'
    )
    text = text.replace(",\n }", " }")  # a comma at the end of an inline table is not TOML 1.0
    found = lines_of(text)
    assert (found["intake.x"], found["intake.y[1]"], found["intake.y[2]"]) == (1, 1, 2)
    assert (found["air"], found["air.low"], found["air.low.pa"]) == (3, 3, 3)
    assert (found["pipes[1].sdr"], found["pipes[2].sdr"]) == (5, 6)


def test_quoted_and_spaced_heads():
    assert lines_of('[ "a b" . c ]\nd = 1979-05-27 07:32:00\ne = 2\n')["a b.c.e"] == 3


def test_commented_keys_are_noted_under_their_table():
    found = map_lines("[intake]\n# where it is:\n# x = 1.0\n#y=2\n# [air]\n# altitude_m = 3\n[outlet]\n# x = 4\n")
    assert found.commented == {"intake.x": 3, "intake.y": 4, "air": 5, "air.altitude_m": 6, "outlet.x": 8}
    assert found.keys == {"intake": 1, "outlet": 7}


def test_a_missing_key_falls_back_to_its_comment_then_to_its_table():
    found = map_lines("[intake]\n# x = 1\n[[pipes]]\nsdr = 1\n")
    assert found.find("intake.x") == 2
    assert found.find("intake.y") == 1
    assert found.find("pipes[1].wall_mm") == 3
    assert found.find("pipes[9].wall_mm") == 3
    assert found.find("nothing.here") is None


def test_an_empty_text_has_no_keys():
    assert map_lines("").keys == {}
    assert map_lines("# only a comment").keys == {}


NAMES = st.from_regex(r"[a-z][a-z0-9_]{0,5}", fullmatch=True)
VALUES = st.one_of(
    st.integers(-999, 999).map(str),
    st.sampled_from(['"a = 1"', "'# no'", "true", '"""\n[x]\n"""', "[1,\n2]", "[[1], []]", "{ k = 1, m = [1] }", "{}"]),
)
COMMENTS = st.sampled_from(["", "  # z = 1", "\n\n# [y]"])


@given(st.lists(st.tuples(NAMES, st.booleans(), st.dictionaries(NAMES, st.tuples(VALUES, COMMENTS))), max_size=5))
def test_every_key_the_reader_finds_has_the_line_it_was_written_in(tables):
    lines, expected, counts, seen = [], {}, {}, {}
    for name, many, pairs in tables:
        if seen.setdefault(name, many) != many or (not many and name in counts):
            continue
        counts[name] = counts.get(name, 0) + 1
        lines.append(f"[[{name}]]" if many else f"[{name}]")
        prefix = f"{name}[{counts[name]}]" if many else name
        expected[prefix] = len(lines)
        for key, (value, comment) in pairs.items():
            lines.extend(f"{key} = {value}{comment}".split("\n"))
            written = 1 + value.count("\n") + comment.count("\n")
            expected[f"{prefix}.{key}"] = len(lines) - written + 1
    text = "\n".join(lines) + "\n"
    found = lines_of(text)
    assert {key: found[key] for key in expected} == expected
    assert set(found) == set(flat_keys(tomllib.loads(text)))
