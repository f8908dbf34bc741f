"""The room as a whole: its public names, and what it loads."""

import subprocess
import sys

import routing.terrain


def test_public_names_are_there_and_sorted():
    names = routing.terrain.__all__
    assert names == sorted(names)
    assert all(hasattr(routing.terrain, name) for name in names)


def test_slow_parts_are_loaded_only_when_used():
    code = "import sys, routing.terrain; print(*sys.modules)"
    loaded = set(
        subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout.split()
    )
    assert "rasterio" in loaded
    assert not loaded & {"scipy.ndimage", "geopandas", "pandas", "pyogrio", "numba", "rasterio.features"}
