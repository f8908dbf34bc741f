"""Who may import whom: the table in DEVELOPERS.md, held against the imports of every module."""

from __future__ import annotations

import ast
import re
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parent.parent
PACKAGE = ROOT / "routing"

#: Any room may use these two; they use none (see `test_errors_and_records_stand_lowest`).
SHARED = {"errors", "records"}


def read_table(text):
    """Return the fenced ``rooms`` block of DEVELOPERS.md as room -> rooms that it may import."""
    block = re.search(r"^```rooms\n(.*?)^```", text, flags=re.DOTALL | re.MULTILINE)
    if block is None:
        raise ValueError("DEVELOPERS.md has no fenced block named rooms")
    table = {}
    for line in block[1].splitlines():
        room, arrow, allowed = line.partition("->")
        if not arrow:
            raise ValueError(f"not a row of the rooms table: {line!r}")
        table[room.strip()] = set(allowed.split()) - {"-"}
    return table


TABLE = read_table((ROOT / "DEVELOPERS.md").read_text(encoding="utf-8"))


def module_name(path, package=PACKAGE):
    """Return the dotted name of a module file."""
    parts = path.relative_to(package.parent).with_suffix("").parts
    return ".".join(parts[:-1] if parts[-1] == "__init__" else parts)


def imported_modules(source, name, *, is_package):
    """Return every module of ours that a module imports, wherever in the file the import stands.

    ``from a.b import c`` counts as ``a.b.c``: the caller cuts it to what exists. Anything taken from the package
    root, ``from routing import ...``, counts as ``routing`` itself.
    """
    found = set()
    for node in ast.walk(ast.parse(source)):
        if isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            base = node.module or ""
            if node.level:
                parts = name.split(".")
                parts = parts[: len(parts) - node.level + (1 if is_package else 0)]
                base = ".".join([*parts, base] if base else parts)
            found |= {base} if base == "routing" else {f"{base}.{alias.name}" for alias in node.names}
    return {target for target in found if target.split(".")[0] == "routing"}


def room_of(module):
    """Return the room (or shared module) that a module belongs to; ``routing`` itself is the root."""
    parts = module.split(".")
    return parts[1] if len(parts) > 1 else "root"


def modules_of_package(package=PACKAGE):
    """Return name -> path of every module."""
    return {module_name(path, package): path for path in sorted(package.rglob("*.py"))}


MODULES = modules_of_package()


def targets_of(name, modules=MODULES):
    """Return what a module imports of ours."""
    path = modules[name]
    return imported_modules(path.read_text(encoding="utf-8"), name, is_package=path.name == "__init__.py")


def existing(target, modules=MODULES):
    """Cut a dotted name to the module that it is, or is in."""
    while target not in modules:
        target = target.rpartition(".")[0]
    return target


@pytest.mark.parametrize("name", [name for name in MODULES if name != "routing"])
def test_no_arrow_that_the_table_forbids(name):
    room = room_of(name)
    allowed = TABLE.get(room, set()) | SHARED | {room}
    for target in targets_of(name):
        assert target != "routing", f"{name} imports the package root; import from the room that holds the name"
        assert room_of(target) in allowed, (
            f"{name} imports {target}, but the table lets {room} import {sorted(allowed)}"
        )


def test_the_table_lists_every_room():
    rooms = {room_of(name) for name in MODULES if name != "routing"} - SHARED
    assert rooms <= set(TABLE), f"not in the table of DEVELOPERS.md: {rooms - set(TABLE)}"
    assert set().union(*TABLE.values()) <= set(TABLE)


def test_errors_and_records_stand_lowest():
    for name in MODULES:
        if room_of(name) in SHARED:
            assert {room_of(target) for target in targets_of(name)} <= {room_of(name)}


def circle_in(graph):
    """Return one circle of a graph (node -> nodes), or an empty list."""
    done, path = set(), []

    def visit(node):
        if node in path:
            return [*path[path.index(node) :], node]
        if node in done:
            return []
        path.append(node)
        for target in sorted(graph.get(node, ())):
            circle = visit(target)
            if circle:
                return circle
        path.pop()
        done.add(node)
        return []

    for node in sorted(graph):
        circle = visit(node)
        if circle:
            return circle
    return []


def test_no_circles_between_modules():
    graph = {name: {existing(t) for t in targets_of(name)} - {name} for name in MODULES if name != "routing"}
    assert circle_in(graph) == []


def test_no_circles_in_the_table():
    assert circle_in(TABLE) == []


@pytest.mark.parametrize(
    ("source", "expected"),
    [
        ("import routing.search", {"routing.search"}),
        ("from routing import search", {"routing"}),
        ("import routing", {"routing"}),
        ("from .. import terrain", {"routing"}),
        ("from routing.search.kernel import settle", {"routing.search.kernel.settle"}),
        ("from . import moves", {"routing.search.moves"}),
        ("from ..terrain import grid", {"routing.terrain.grid"}),
        ("def f():\n    from routing.outputs import fields", {"routing.outputs.fields"}),
        ("if TYPE_CHECKING:\n    import routing.planning", {"routing.planning"}),
        ("import numpy", set()),
    ],
)
def test_every_form_of_import_is_seen(source, expected):
    assert imported_modules(source, "routing.search.reach", is_package=False) == expected


def test_relative_imports_of_a_package_are_its_own():
    assert imported_modules("from .moves import table", "routing.search", is_package=True) == {
        "routing.search.moves.table"
    }


def test_a_circle_is_found():
    assert circle_in({"a": {"b"}, "b": {"c"}, "c": {"a"}}) == ["a", "b", "c", "a"]
    assert circle_in({"a": {"b", "c"}, "b": {"c"}, "c": set()}) == []


@pytest.mark.parametrize("text", ["no block", "```rooms\nterrain: hydraulics\n```\n"])
def test_a_broken_table_is_not_taken(text):
    with pytest.raises(ValueError, match="rooms"):
        read_table(text)
