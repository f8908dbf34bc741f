"""The package as others see it: names, loading, version, type information."""

from __future__ import annotations

import ast
import re
import subprocess
import sys
import tomllib
from importlib import metadata
from pathlib import Path

import pytest

import routing

ROOT = Path(__file__).resolve().parent.parent
PYPROJECT = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))

#: Import names of what the package depends on, and of what these load in turn.
THIRD_PARTIES = {
    "affine",
    "attr",
    "certifi",
    "click",
    "contourpy",
    "geopandas",
    "llvmlite",
    "matplotlib",
    "numba",
    "numpy",
    "packaging",
    "pandas",
    "platformdirs",
    "pydantic",
    "pyogrio",
    "pyproj",
    "rasterio",
    "rich",
    "scipy",
    "shapely",
}


def loaded_by(statement):
    """Return the third parties that a fresh process has loaded after a statement."""
    code = f"import sys\n{statement}\nprint(*{{name.split('.')[0] for name in sys.modules}}, file=sys.stderr)"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, timeout=120, check=True)
    return set(done.stderr.split()) & THIRD_PARTIES


def test_importing_the_package_loads_no_third_party():
    assert loaded_by("import routing; dir(routing)") == set()


def test_importing_the_commands_loads_click_only():
    assert loaded_by("import routing.commands") == {"click"}


@pytest.mark.parametrize("arguments", [["--help"], ["plan", "--help"], ["--version"]])
def test_help_loads_click_only(arguments):
    assert loaded_by(f"from routing.commands import main; main({arguments!r})") == {"click"}


def test_the_check_sees_a_third_party():
    assert "numpy" in loaded_by("import routing.records")


def test_dependencies_are_all_watched():
    names = {requirement.split(">")[0].strip() for requirement in PYPROJECT["project"]["dependencies"]}
    assert names <= THIRD_PARTIES


@pytest.mark.parametrize("name", routing.__all__)
def test_public_names_exist(name):
    assert getattr(routing, name) is not None


def test_public_names_are_those_promised():
    assert {"load_site", "look", "plan", "Site", "Plan", "Scheme", "Problem", "OvercrestError"} <= set(dir(routing))


def test_an_unknown_name_is_refused_with_the_known_ones():
    with pytest.raises(AttributeError, match=r"no_such_name.*load_site"):
        routing.no_such_name  # noqa: B018 - looking it up is the test


def test_one_version_everywhere():
    assert routing.__version__ == PYPROJECT["project"]["version"] == metadata.version("overcrest")


def test_type_information_is_shipped():
    assert (Path(routing.__file__).parent / "py.typed").is_file()
    assert PYPROJECT["tool"]["hatch"]["build"]["targets"]["wheel"]["packages"] == ["routing"]


def test_the_program_is_the_commands_main():
    assert PYPROJECT["project"]["scripts"] == {"overcrest": "routing.commands:main"}
    entry = metadata.entry_points(group="console_scripts", name="overcrest")
    assert {point.value for point in entry} == {"routing.commands:main"}


def test_folders_of_tests_mirror_the_rooms():
    rooms = {path.name for path in (ROOT / "routing").iterdir() if path.is_dir()}
    folders = {path.name for path in (ROOT / "tests").iterdir() if path.is_dir()}
    assert folders - {"published", "benchmarks", "data", "twins", "__pycache__"} <= rooms


def imported_by_tests():
    """Return the third parties that the tests import, by the first part of their names."""
    found = set()
    for path in (ROOT / "tests").rglob("*.py"):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.Import):
                found |= {alias.name.split(".")[0] for alias in node.names}
            elif isinstance(node, ast.ImportFrom) and node.module and not node.level:
                found.add(node.module.split(".")[0])
    own = {path.stem for path in (ROOT / "tests").rglob("*.py")} | {"routing", "twins"}
    return found - set(sys.stdlib_module_names) - own


def test_what_the_tests_import_is_in_the_test_extra():
    """A distribution is found by the import name that it gives; pandas and affine come with geopandas and rasterio."""
    project = PYPROJECT["project"]
    wanted = [*project["dependencies"], *project["optional-dependencies"]["test"]]
    declared = {re.split(r"[\[><=]", requirement)[0].lower() for requirement in wanted} | {"pandas", "affine"}
    gives = metadata.packages_distributions()
    missing = {name for name in imported_by_tests() if not {d.lower() for d in gives.get(name, [])} & declared}
    assert missing == set()
