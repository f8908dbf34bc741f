"""Made jobs: ground from a formula, written as a DEM with its site file."""

from __future__ import annotations

import math
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest
import rasterio
from rasterio import Affine

import routing
from routing.planning import placing

#: 10 m cells in UTM; the north-west corner of cell (0, 0).
WEST, NORTH, CELL = 500000.0, 5000000.0, 10.0

#: A fixed Darcy factor and nothing that depends on tables, so that a formula of one line gives the discharge.
SECTIONS = {
    "terrain": {"file": "dem.tif", "vertical_unit": "m", "surface": "ground", "vertical_error_90_m": 0.1},
    "air": {"pressure_pa": 101325.0, "barometric_low_pa": 0.0},
    "water": {"present_level_m": 100.0, "lowest_level_m": 99.0, "temperature_c": 10.0},
    "intake": {"mouth_level_m": 95.0},
    "outlet": {"level_m": 90.0},
    "losses": {"entrance": 0.5, "exit": 1.0, "valve_open": 0.0, "bend_loss_per_km": 0.0},
    "limits": {"reserve_m": 2.5, "gravity_ms2": 9.81},
    "demand": {},
    "search": {},
}
PIPE = {
    "name": "P",
    "outside_diameter_mm": 320.0,
    "wall_mm": 10.0,
    "darcy_factor": 0.02,
    "modulus_mpa": 200000.0,
    "material": "steel",
}


#: Ground length of one cell: UTM shrinks lengths to 0.9996 at its central meridian, where the job lies.
STEP = CELL / 0.9996


def valley(rows=40, cols=80, top=103.0, crest_col=30, foot=90.0, water=100.0):
    """Ground that changes along the columns only: flat water, a ridge of slopes 1 in 10, a flat valley floor."""
    col = np.arange(cols, dtype=np.float64)
    ridge = top - np.abs(col - crest_col) * CELL * 0.1
    floor = np.where(col < crest_col, water, foot)
    return np.tile(np.maximum(ridge, floor), (rows, 1))


def reservoir(bank=110.0, **valley_asks):
    """The same with banks round the water, so that the DEM's edge does not cut it."""
    ground = valley(**valley_asks)
    crest = valley_asks.get("crest_col", 30)
    ground[:, :2] = bank
    ground[:5, : crest + 2] = bank
    ground[-5:, : crest + 2] = bank
    return ground


def length_along(level, step=STEP):
    """3-D length of a row of levels from centre to centre."""
    return float(np.sum(np.hypot(step, np.diff(level))))


@dataclass(frozen=True)
class Job:
    """A site file that was written, and the way to run it."""

    file: Path

    @property
    def site(self):
        return routing.load_site(self.file)

    def look(self):
        return routing.look(self.site)

    def plan(self, progress=None):
        return routing.plan(self.site, progress)

    def line_of(self, text):
        """Number of the first line of the site file that starts so."""
        lines = self.file.read_text(encoding="utf-8").splitlines()
        return next(number for number, line in enumerate(lines, 1) if line.startswith(text))


def write_dem(path, values, crs="EPSG:32631", transform=None, tags=None, **profile):
    values = np.asarray(values)
    tags = tags or {}
    with rasterio.open(
        path,
        "w",
        driver="GTiff",
        height=values.shape[0],
        width=values.shape[1],
        count=1,
        dtype=values.dtype,
        crs=crs,
        transform=transform or Affine(CELL, 0.0, WEST, 0.0, -CELL, NORTH),
        **profile,
    ) as dataset:
        dataset.write(values, 1)
        if "unit" in tags:
            dataset.units = (tags["unit"],)
        if "scale" in tags:
            dataset.scales, dataset.offsets = (tags["scale"],), (tags["offset"],)
        if "mask" in tags:
            dataset.write_mask(tags["mask"])
    return path


def _toml(value):
    if isinstance(value, bool):
        return str(value).lower()
    return f'"{value}"' if isinstance(value, str) else repr(value)


def write_site(path, sections, pipes):
    lines = []
    for name, keys in sections.items():
        if keys:
            lines += [f"[{name}]", *(f"{key} = {_toml(value)}" for key, value in keys.items() if value is not None), ""]
    for pipe in pipes:
        lines += ["[[pipes]]", *(f"{key} = {_toml(value)}" for key, value in pipe.items()), ""]
    path.write_text("\n".join(lines), encoding="utf-8")
    return path


@pytest.fixture(autouse=True)
def windows_of_small_dems(monkeypatch, request):
    """Made DEMs are small: let windows grow on them all the same, but where a test asks for what users see."""
    if "small_dems_whole" not in request.fixturenames:
        monkeypatch.setattr(placing, "_SMALL_DEM_CELLS", 0)


@pytest.fixture
def small_dems_whole():
    """Leave the reading of small DEMs as it is."""


@pytest.fixture
def make_job(tmp_path):
    """Write a DEM and a site file.

    ``ends`` are the cells of intake and outlet (10 m cells of the default frame); ``changes`` are keys by section
    (``None`` takes a key away); ``dem`` holds what else the file says.
    """

    def make(ground, ends=((20, 10), (20, 60)), pipes=(PIPE,), folder=tmp_path, dem=None, **changes):
        folder.mkdir(parents=True, exist_ok=True)
        if ground is not None:
            write_dem(folder / "dem.tif", ground, **(dem or {}))
        sections = {name: dict(keys) for name, keys in SECTIONS.items()}
        for what, (row, col) in zip(("intake", "outlet"), ends, strict=True):
            sections[what] |= {"x": WEST + CELL * (col + 0.5), "y": NORTH - CELL * (row + 0.5)}
        for name, keys in changes.items():
            sections[name] |= keys
        return Job(write_site(folder / "site.toml", sections, pipes))

    return make


@pytest.fixture
def hand():
    """Closed forms for a pipe with a fixed Darcy factor: pressures in metres of water."""
    return Hand()


@dataclass(frozen=True)
class Hand:
    """A siphon by hand. Water at 10 degC: 999.7 kg/m3, vapour pressure 1228 Pa (common tables, from memory)."""

    bore_m: float = 0.3
    darcy: float = 0.02
    entrance: float = 0.5
    exit: float = 1.0
    gravity: float = 9.81
    crown_m: float = 0.31  # outside diameter less one wall

    def energy_m3s(self, fall_m, length_m):
        """Discharge that uses up the fall."""
        loss = self.entrance + self.exit + self.darcy * length_m / self.bore_m
        return self._area * math.sqrt(2 * self.gravity * fall_m / loss)

    def suction_m3s(self, water_m, ground_m, chainage_m, air_pa=101325.0, reserve_m=2.5):
        """Discharge at which the crown pressure at one place meets its limit."""
        head = (air_pa - 1228.0) / (999.7 * self.gravity) - reserve_m - (ground_m + self.crown_m - water_m)
        loss = 1.0 + self.entrance + self.darcy * chainage_m / self.bore_m
        return self._area * math.sqrt(2 * self.gravity * head / loss)

    @property
    def _area(self):
        return 0.25 * math.pi * self.bore_m**2


@dataclass(frozen=True)
class Ground:
    """The made grounds, and lengths on them."""

    valley = staticmethod(valley)
    reservoir = staticmethod(reservoir)
    length = staticmethod(length_along)


@pytest.fixture(scope="session")
def ground():
    """Made grounds."""
    return Ground()


@pytest.fixture(scope="session")
def pipe():
    """Keys of the one pipe."""
    return dict(PIPE)


@pytest.fixture
def rng():
    """Random numbers, the same every run."""
    return np.random.default_rng(7)
