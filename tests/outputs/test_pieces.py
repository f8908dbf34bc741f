import io

from rich.console import Console

from routing.outputs.pieces import MOST_LINES, bullets, heading, pairs


def shown(renderable, width=30):
    console = Console(file=io.StringIO(), width=width)
    console.print(renderable)
    return [line.rstrip() for line in console.file.getvalue().splitlines()]


def test_long_lines_hang():
    assert shown(bullets(["a line that is rather longer than the screen"])) == [
        "- a line that is rather longer",
        "  than the screen",
    ]


def test_lists_are_cut_only_where_the_rest_can_be_found():
    lines = [str(k) for k in range(MOST_LINES + 2)]
    assert len(shown(bullets(lines))) == len(lines)
    assert shown(bullets(lines, "in run.json"))[-1] == "  and 2 more, in run.json"
    assert len(shown(bullets(lines[:MOST_LINES], "in run.json"))) == MOST_LINES


def test_pairs_and_headings_keep_brackets():
    assert shown(pairs([("file", "[x]"), ("crs", "b")])) == ["file  [x]", "crs   b"]
    assert shown(heading("[Water]")) == ["[Water]"]


def test_a_long_path_is_folded_not_lost():
    path = "/a" * 30
    assert "".join(line.strip() for line in shown(pairs([("file", path)]))) == "file  " + path
