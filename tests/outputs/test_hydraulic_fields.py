from dataclasses import replace

import numpy as np
import pytest

from routing.outputs.field import row
from routing.outputs.hydraulic_fields import DISCHARGE_FIELDS, GEOMETRY_FIELDS, PRESSURE_FIELDS


def test_velocity_is_discharge_over_area(plan):
    for scheme in plan.schemes:
        found = row(DISCHARGE_FIELDS, plan, scheme)
        area = np.pi / 4 * scheme.pipe.bore_m**2
        assert found["velocity_ms"] == pytest.approx(found["discharge_m3s"] / area, abs=1e-3)
        assert found["total_discharge_m3s"] == pytest.approx(scheme.count * found["discharge_m3s"], abs=1e-6)
        assert found["present_total_discharge_m3s"] == pytest.approx(
            scheme.count * found["present_discharge_m3s"], abs=1e-6
        )


def test_lift_and_fall_hang_together(plan):
    for scheme in plan.schemes:
        found = row(GEOMETRY_FIELDS, plan, scheme)
        assert found["fall_m"] == found["lowest_level_m"] - found["receiving_level_m"]
        higher = found["present_level_m"] - found["lowest_level_m"]
        assert found["lift_m"] - found["present_lift_m"] == pytest.approx(higher)
        assert found["present_fall_m"] - found["fall_m"] == pytest.approx(higher)
        assert found["length_m"] > found["straight_m"]


def test_reserve_left_agrees_with_the_least_pressure(plan):
    """Least crown pressure as head, less vapour pressure and reserve (no highest lift is set here)."""
    water = plan.setting.water
    for scheme in plan.schemes:
        found = row(PRESSURE_FIELDS, plan, scheme)
        head = (found["least_crown_pressure_pa"] - water.vapour_pressure_pa) / (water.density_kgm3 * 9.80665)
        assert head - found["reserve_m"] == pytest.approx(found["reserve_left_m"], abs=1e-3)


def test_pressures_are_those_at_duty(plan):
    first = plan.schemes[0]
    found = row(PRESSURE_FIELDS, plan, first)
    assert found["least_crown_pressure_pa"] > first.appraisal.largest.crown_pressure_pa.min() + 1000
    assert found["governing_chainage_m"] == round(first.appraisal.duty.governing_chainage_m, 2)


def test_what_cannot_be_said_is_nothing(plan):
    first = plan.schemes[0]
    no_pressure = replace(first.appraisal.duty, crown_pressure_pa=np.array([]))
    odd = replace(
        first, appraisal=replace(first.appraisal, duty=no_pressure, collapse_pressure_pa=None, barometric_head_m=0.0)
    )
    found = row(PRESSURE_FIELDS, plan, odd)
    assert found["least_crown_pressure_pa"] is None
    assert found["collapse_pressure_pa"] is None
    assert found["lift_share"] is None
