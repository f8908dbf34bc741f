"""What a DEM says of itself."""

import hashlib

import numpy as np
import pytest

from routing.errors import TerrainError
from routing.records import TerrainAsk
from routing.terrain import facts as facts_module
from routing.terrain import inspect, open_dem
from routing.terrain.facts import fingerprint

RAMP = np.arange(30, dtype=np.float32).reshape(5, 6)


def facts_of(path, **ask):
    with open_dem(TerrainAsk(path, **ask)) as dem:
        return dem.facts


def test_facts_of_a_real_grid(data_folder):
    facts = inspect(data_folder / "lidar_potholes_1m.tif")
    assert (facts.driver, facts.dtype, facts.rows, facts.cols) == ("GTiff", "float32", 400, 400)
    assert facts.crs_name == "NAD83 / UTM zone 15N"
    assert facts.horizontal_unit == "metre"
    assert facts.vertical_unit == "unknown"
    assert facts.vertical_datum == "not stated"
    assert facts.nodata == pytest.approx(-3.4028230607370965e38)


def test_what_the_user_says_is_kept(make_dem):
    facts = facts_of(
        make_dem(RAMP),
        vertical_unit="ft",
        vertical_datum="works datum, crest 100.00",
        vertical_error_m=0.4,
        surface="canopy",
        water_shown="bed",
        datum_offset_m=12.5,
    )
    assert facts.metres_per_vertical_unit == 0.3048
    assert facts.vertical_datum == "works datum, crest 100.00"
    assert (facts.vertical_error_m, facts.surface, facts.water_shown) == (0.4, "canopy", "bed")
    assert facts.datum_offset_m == 12.5


@pytest.mark.parametrize(("text", "unit"), [("m", "m"), ("US survey foot", "us-ft"), ("ft", "ft")])
def test_unit_from_the_band(make_dem, text, unit):
    facts = facts_of(make_dem(RAMP, tags={"unit": text}))
    assert facts.vertical_unit == unit
    assert "band" in facts.vertical_unit_source


@pytest.mark.parametrize(
    ("crs", "unit", "datum"),
    [
        ("EPSG:32615+5703", "m", "NAVD88 height"),
        ("EPSG:32615+8228", "ft", "NAVD88 height (ft)"),
        ("EPSG:32615+6360", "us-ft", "NAVD88 height (ftUS)"),
    ],
)
def test_unit_and_datum_from_the_crs(make_dem, crs, unit, datum):
    facts = facts_of(make_dem(RAMP, crs=crs))
    assert facts.vertical_unit == unit
    assert facts.vertical_datum == datum
    assert "WGS 84 / UTM zone 15N" in facts.crs_name
    assert "VERTCRS" not in facts.crs_wkt


def test_another_name_for_the_datum_is_told(make_dem):
    facts = facts_of(make_dem(RAMP, crs="EPSG:32615+5703"), vertical_datum="NAVD 88, GEOID18")
    assert facts.vertical_datum == "NAVD 88, GEOID18"
    assert any("NAVD88 height" in note for note in facts.assumptions)


def test_heights_above_the_ellipsoid_are_told(make_dem):
    from rasterio import Affine

    facts = facts_of(make_dem(RAMP, crs="EPSG:4979", transform=Affine(0.001, 0, -93, 0, -0.001, 45)))
    assert any("ellipsoid" in note for note in facts.assumptions)


def test_depths_are_refused(make_dem):
    with pytest.raises(TerrainError, match="holds depths"):
        facts_of(make_dem(RAMP, crs="EPSG:32615+5715"))


def test_unit_text_that_is_not_understood_is_told(make_dem):
    facts = facts_of(make_dem(RAMP, tags={"unit": "fathom-ish"}), vertical_unit="m")
    assert any("fathom-ish" in note for note in facts.assumptions)


@pytest.mark.parametrize("band", [0, 3])
def test_a_band_that_is_not_there(make_dem, band):
    with pytest.raises(TerrainError, match=r"no such band[\s\S]*1 to 2"):
        facts_of(make_dem(np.stack([RAMP, RAMP])), band=band, vertical_unit="m")


def test_the_band_taken_is_told(make_dem):
    assert any(
        "Band 2 of 2" in n for n in facts_of(make_dem(np.stack([RAMP, RAMP])), band=2, vertical_unit="m").assumptions
    )


def test_complex_numbers_are_refused(make_dem):
    with pytest.raises(TerrainError, match="complex"):
        inspect(make_dem(RAMP.astype(np.complex64)))


def test_hash_is_that_of_the_file(make_dem):
    path = make_dem(RAMP)
    assert fingerprint(path) == (hashlib.sha256(path.read_bytes()).hexdigest(), ())
    assert facts_of(path, vertical_unit="m").sha256 == hashlib.sha256(path.read_bytes()).hexdigest()


def test_hash_of_a_large_file_covers_part_of_it_and_says_so(make_dem, monkeypatch):
    path = make_dem(RAMP)
    whole, _ = fingerprint(path)
    monkeypatch.setattr(facts_module, "LARGEST_HASHED_FILE", 10)
    part, notes = fingerprint(path)
    assert part != whole
    assert part == fingerprint(path)[0]
    assert "not the whole content" in notes[0]
    path.write_bytes(path.read_bytes() + b"x")
    assert fingerprint(path)[0] != part


def test_hash_of_a_folder(tmp_path):
    (tmp_path / "grid").mkdir()
    (tmp_path / "grid" / "w001.adf").write_bytes(b"1")
    first, notes = fingerprint(tmp_path / "grid")
    (tmp_path / "grid" / "w001.adf").write_bytes(b"22")
    assert fingerprint(tmp_path / "grid")[0] != first
    assert notes


def test_hash_of_a_vrt_covers_what_it_points_to(make_dem):
    path = make_dem(RAMP)
    vrt = path.with_suffix(".vrt")
    vrt.write_text(
        '<VRTDataset rasterXSize="6" rasterYSize="5"><SRS>EPSG:32615</SRS>'
        "<GeoTransform>450000, 10, 0, 5000000, 0, -10</GeoTransform>"
        '<VRTRasterBand dataType="Float32" band="1"><SimpleSource>'
        f'<SourceFilename relativeToVRT="1">{path.name}</SourceFilename><SourceBand>1</SourceBand>'
        "</SimpleSource></VRTRasterBand></VRTDataset>"
    )
    first = facts_of(vrt, vertical_unit="m")
    make_dem(RAMP + 1)
    second = facts_of(vrt, vertical_unit="m")
    assert first.driver == "VRT"
    assert first.sha256 != second.sha256
    assert any("not the whole content" in note for note in first.assumptions)
