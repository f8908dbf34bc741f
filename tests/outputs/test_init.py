import ast
import subprocess
import sys
from pathlib import Path

import pytest

import routing.outputs

HEAVY = {"rich", "geopandas", "pandas", "pyogrio", "rasterio", "scipy", "numba", "matplotlib", "click"}


def loaded_by(statement):
    code = f"import sys; {statement}; print(*sorted({{name.partition('.')[0] for name in sys.modules}}))"
    return set(subprocess.run([sys.executable, "-c", code], check=True, capture_output=True, text=True).stdout.split())


def test_importing_the_room_loads_no_third_party():
    assert not loaded_by("import routing.outputs") & (HEAVY | {"numpy", "pyproj", "shapely"})


def test_writing_files_loads_neither_a_terminal_nor_a_table_library():
    found = loaded_by("from routing.outputs import write_run, plan_document, routes_layer")
    assert not found & HEAVY
    assert "pyproj" in found


def test_an_error_can_be_told_without_maps():
    assert not loaded_by("from routing.outputs import error_text, error_document") & (HEAVY | {"pyproj", "shapely"})


@pytest.mark.parametrize("name", routing.outputs.__all__)
def test_public_names(name):
    assert getattr(routing.outputs, name) is not None
    assert not isinstance(getattr(routing.outputs, name), type(ast))  # no module of the same name in its way
    assert name in dir(routing.outputs)


def test_unknown_names_are_told():
    with pytest.raises(AttributeError, match="no attribute 'sumary'; public names: CAUTIONS"):
        routing.outputs.sumary  # noqa: B018


def test_no_other_room_is_imported():
    allowed = {"routing.errors", "routing.records", "routing.outputs"}
    for path in Path(routing.outputs.__file__).parent.glob("*.py"):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.ImportFrom) and (node.module or "").startswith("routing"):
                assert ".".join(node.module.split(".")[:2]) in allowed, (path.name, node.module)
            if isinstance(node, ast.Import):
                assert not any(alias.name.startswith("routing") for alias in node.names), path.name
