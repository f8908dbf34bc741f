"""Made grids: written as GeoTIFF, or as a terrain in memory."""

import json
from pathlib import Path

import numpy as np
import pytest
import rasterio
from rasterio import Affine

from routing.records import GridWindow, Terrain, TerrainAsk, TerrainFacts
from routing.terrain import open_dem

DATA = Path(__file__).resolve().parent.parent / "data"
UTM = Affine(10.0, 0.0, 450000.0, 0.0, -10.0, 5000000.0)


@pytest.fixture
def make_dem(tmp_path):
    """Write an array as a GeoTIFF and return its path; ``tags`` holds units, scale, offset and mask."""

    def write(values, crs="EPSG:32615", transform=UTM, name="dem.tif", tags=None, **profile):
        values = np.asarray(values)
        values = values if values.ndim == 3 else values[None]
        tags = tags or {}
        path = tmp_path / name
        with rasterio.open(
            path,
            "w",
            driver="GTiff",
            height=values.shape[1],
            width=values.shape[2],
            count=values.shape[0],
            dtype=values.dtype,
            crs=crs,
            transform=transform,
            **profile,
        ) as dataset:
            dataset.write(values)
            if "unit" in tags:
                dataset.units = (tags["unit"],) * values.shape[0]
            if "scale" in tags:
                dataset.scales, dataset.offsets = (tags["scale"],), (tags["offset"],)
            if "mask" in tags:
                dataset.write_mask(tags["mask"])
        return path

    return write


@pytest.fixture
def read_dem():
    """Open a DEM file, read all of it and return the terrain."""

    def read(path, **ask):
        ask.setdefault("vertical_unit", "m")
        with open_dem(TerrainAsk(file=path, **ask)) as dem:
            return dem.read()

    return read


@pytest.fixture
def make_terrain():
    """A terrain in memory: 1 m cells unless said otherwise, north-west corner at (0, rows)."""

    def make(elevation, valid=None, step_x=1.0, step_y=1.0, window=None, dtype="float32"):
        elevation = np.array(elevation, dtype=np.float64)
        rows, cols = elevation.shape
        valid = np.isfinite(elevation) if valid is None else np.array(valid, dtype=bool)
        transform = (1.0, 0.0, 0.0, 0.0, -1.0, float(rows))
        facts = TerrainFacts(
            file="made.tif",
            sha256="",
            driver="GTiff",
            dtype=dtype,
            rows=rows,
            cols=cols,
            transform=transform,
            crs_wkt="EPSG:32615",
            crs_name="WGS 84 / UTM zone 15N",
            horizontal_unit="metre",
            vertical_unit="m",
            vertical_unit_source="made",
            vertical_datum="not stated",
            metres_per_vertical_unit=1.0,
            datum_offset_m=0.0,
            nodata=None,
            vertical_error_m=None,
            surface="ground",
            water_shown="surface",
        )
        return Terrain(
            elevation_m=np.where(valid, elevation, 0.0),
            valid=valid,
            step_x_m=np.broadcast_to(np.asarray(step_x, dtype=float), rows).copy(),
            step_y_m=np.broadcast_to(np.asarray(step_y, dtype=float), rows).copy(),
            transform=transform,
            window=window or GridWindow(0, 0, rows, cols, rows, cols),
            facts=facts,
        )

    return make


@pytest.fixture(scope="session")
def cases():
    """The 13 jobs on real ground (tests/data/README.md)."""
    return json.loads((DATA / "cases.json").read_text(encoding="utf-8"))["cases"]


@pytest.fixture(scope="session")
def real_ground():
    """The three real grids by file name, each read whole."""
    found = {}
    for path in sorted(DATA.glob("*.tif")):
        with open_dem(TerrainAsk(file=path, vertical_unit="m")) as dem:
            found[path.name] = dem.read()
    return found


@pytest.fixture(scope="session")
def data_folder():
    """Folder of the real grids."""
    return DATA
