"""The data of pipe tables: consistent with itself. Published values are in tests/published/test_pipe_walls.py."""

import pytest

from routing.hydraulics import pipe_tables as tables


def test_every_pe_wall_is_near_its_sdr():
    for diameter in tables.PE_DIAMETERS_MM:
        for sdr in tables.PE_SERIES:
            wall = tables.pe_least_wall_mm(diameter, sdr)
            if wall is not None:
                assert abs(wall - diameter / sdr) <= 0.04 * wall + 0.1


def test_sizes_not_made():
    assert tables.pe_least_wall_mm(113.0, 17.0) is None
    assert tables.pe_least_wall_mm(110.0, 17.6) is None
    assert tables.pe_least_wall_mm(32.0, 41.0) is None
    assert tables.pe_least_wall_mm(1200.0, 6.0) is None


@pytest.mark.parametrize(("least", "tolerance"), [(2.0, 0.3), (10.0, 1.1), (10.1, 1.2), (45.4, 4.7)])
def test_tolerance_rule_by_hand(least, tolerance):
    assert tables.pe_wall_tolerance_mm(least) == pytest.approx(tolerance)


def test_tables_run_in_step():
    assert sorted(tables.PE_DURATIONS_H) == list(tables.PE_DURATIONS_H)
    assert sorted(tables.PE_TEMPERATURES_C) == list(tables.PE_TEMPERATURES_C)
    assert len(tables.PE_TEMPERATURES_C) == len(tables.PE_TEMPERATURE_FACTORS)
    assert sorted(tables.PE_TEMPERATURE_FACTORS, reverse=True) == list(tables.PE_TEMPERATURE_FACTORS)
    for psi in tables.PE_MODULUS_PSI.values():
        assert len(psi) == len(tables.PE_DURATIONS_H)
        assert sorted(psi, reverse=True) == list(psi)
    for walls in tables.STEEL_WALLS_MM.values():
        assert sorted(set(walls)) == list(walls)


def test_interpolation():
    xs, ys = (0.0, 1.0, 3.0), (5.0, 7.0, 3.0)
    assert [tables.interpolate(x, xs, ys) for x in (-1.0, 0.0, 0.5, 1.0, 2.0, 3.0, 9.0)] == [5, 5, 6, 7, 5, 3, 3]
