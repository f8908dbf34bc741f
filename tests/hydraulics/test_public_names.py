"""What the room offers, and that it starts fast."""

import ast
import subprocess
import sys
from pathlib import Path

from routing import hydraulics


def test_public_names_are_exactly_those_re_exported():
    tree = ast.parse(Path(hydraulics.__file__).read_text(encoding="utf-8"))
    imported = [alias.name for node in tree.body if isinstance(node, ast.ImportFrom) for alias in node.names]
    assert sorted(imported) == sorted(hydraulics.__all__)
    assert len(set(hydraulics.__all__)) == len(hydraulics.__all__)


def test_every_public_function_is_documented():
    functions = [getattr(hydraulics, name) for name in hydraulics.__all__ if callable(getattr(hydraulics, name))]
    assert len(functions) > 15
    assert all(function.__doc__ for function in functions)


def test_import_loads_numpy_and_no_other_library():
    code = (
        "import sys, routing.hydraulics; heavy = {'scipy', 'numba', 'pandas', 'shapely', 'rasterio', 'pydantic'};"
        "print(sorted(heavy & set(sys.modules)))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"
