"""From stored numbers to levels and a mask."""

import numpy as np
import pytest

from routing.terrain.levels import Conversion, to_levels


@pytest.mark.parametrize("dtype", ["int16", "uint16", "int32", "uint8", "float32", "float64"])
def test_every_type_becomes_float64_metres(dtype):
    level, valid, notes = to_levels(np.array([[1, 2], [3, 4]], dtype=dtype), None, Conversion())
    assert level.dtype == np.float64
    assert level.tolist() == [[1.0, 2.0], [3.0, 4.0]]
    assert valid.all()
    assert notes == ()


def test_scale_offset_unit_and_datum_offset_in_that_order():
    conversion = Conversion(scale=0.1, offset=1000.0, unit_m=0.3048, datum_offset_m=-2.0)
    level, _, _ = to_levels(np.array([[50]], dtype=np.int16), None, conversion)
    assert level[0, 0] == pytest.approx((50 * 0.1 + 1000.0) * 0.3048 - 2.0, rel=1e-14)


def test_mask_nan_and_infinity_are_cells_without_data():
    raw = np.array([[1.0, np.nan, np.inf], [-np.inf, 5.0, 6.0]], dtype=np.float32)
    mask = np.array([[255, 255, 255], [255, 0, 255]], dtype=np.uint8)
    level, valid, notes = to_levels(raw, mask, Conversion(unit_m=0.3048))
    assert valid.tolist() == [[True, False, False], [False, False, True]]
    assert np.isfinite(level).all()
    assert len(notes) == 1
    assert "2 cells hold an infinite number" in notes[0]


@pytest.mark.parametrize("marker", [-32768, -9999, 32767])
def test_undeclared_markers_are_told(marker):
    _, valid, notes = to_levels(np.array([[300, marker]], dtype=np.int16), None, Conversion())
    assert valid.tolist() == [[True, False]]
    assert f"such as {marker}" in notes[0]


def test_low_dry_land_and_high_summits_are_ground():
    # Shore of the Dead Sea near -430 m, Everest 8849 m (general knowledge, from memory).
    _, valid, notes = to_levels(np.array([[-430, 8849]], dtype=np.int16), None, Conversion())
    assert valid.all()
    assert notes == ()


def test_the_callers_array_is_left_alone():
    raw = np.array([[1.0, np.nan]])
    kept = raw.copy()
    to_levels(raw, None, Conversion(unit_m=2.0))
    assert np.array_equal(raw, kept, equal_nan=True)
