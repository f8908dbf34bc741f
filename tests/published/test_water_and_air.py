"""Water and air against published tables, and against general-purpose libraries over their whole range."""

import numpy as np
import pytest
from CoolProp.CoolProp import PropsSI
from fluids import ATMOSPHERE_1976
from pvlib.atmosphere import alt2pres

from routing.hydraulics import barometric_head_m, standard_pressure_pa, vapour_pressure_pa, water_at

ATMOSPHERE_PA = 101_325.0
EARTH_RADIUS_M = 6_356_766.0  # effective radius of the US Standard Atmosphere 1976

# Standard atmosphere by geopotential height (ISO 2533; Anderson, Fundamentals of Aerodynamics, appendix D; read in
# copies of the table). Pa, 1 Pa.
ISA = [
    (0, 101_325.0),
    (500, 95_460.8),
    (1000, 89_874.6),
    (1500, 84_556.0),
    (2000, 79_495.2),
    (2500, 74_682.5),
    (3000, 70_108.5),
    (4000, 61_640.2),
    (5000, 54_019.9),
    (6000, 47_181.0),
]
# US Standard Atmosphere 1976, table I, by geometric height. Pa, 2 Pa.
USSA = [(1000, 89_876), (2000, 79_501), (3000, 70_121), (4000, 61_660), (5000, 54_048), (6000, 47_217)]
# Reference equations of IAPWS (IAPWS-95, IF97, R12-08) evaluated with two libraries at 101.325 kPa:
# °C, kg/m3, mPa s, 1e-6 m2/s, Pa.
WATER = [
    (0.01, 999.844, 1.7911, 1.7914, 611.66),
    (4, 999.975, 1.5673, 1.5673, 813.55),
    (5, 999.967, 1.5182, 1.5182, 872.57),
    (10, 999.702, 1.3059, 1.3063, 1228.18),
    (15, 999.103, 1.1376, 1.1386, 1705.74),
    (20, 998.207, 1.0016, 1.0034, 2339.21),
    (25, 997.048, 0.8900, 0.8927, 3169.75),
    (30, 995.649, 0.7972, 0.8007, 4246.69),
]
# M. Chaplin, Water Structure and Science, data page: °C, kg/m3, cP, kPa. 0.2 %.
HANDBOOK = [
    (0, 999.8, 1.792, 0.611),
    (10, 999.7, 1.307, 1.228),
    (20, 998.2, 1.002, 2.339),
    (30, 995.7, 0.797, 4.247),
]
# Ceiling of the lift, (p_atm - p_v)/(rho g), m: altitude, °C, head. Computed with ISA and CoolProp. 0.1 %.
LIFT = [
    (0, 5, 10.244),
    (0, 10, 10.210),
    (0, 20, 10.112),
    (1000, 10, 9.042),
    (2000, 10, 7.983),
    (3000, 20, 6.923),
    (4000, 10, 6.162),
    (5000, 20, 5.279),
]


@pytest.mark.parametrize(("altitude", "pressure"), ISA)
def test_standard_atmosphere(altitude, pressure):
    assert standard_pressure_pa(altitude) == pytest.approx(pressure, abs=1.0)


@pytest.mark.parametrize(("height", "pressure"), USSA)
def test_standard_atmosphere_by_geometric_height(height, pressure):
    geopotential = EARTH_RADIUS_M * height / (EARTH_RADIUS_M + height)
    assert standard_pressure_pa(geopotential) == pytest.approx(pressure, abs=2.0)
    # Taking the geometric height itself errs to the safe side.
    assert standard_pressure_pa(height) < pressure


@pytest.mark.parametrize(("feet", "psia"), [(5000, 12.228), (10_000, 10.107)])
def test_standard_atmosphere_in_feet(feet, psia):
    # ASHRAE form of the atmosphere, 0.02 %.
    assert standard_pressure_pa(feet * 0.3048) / 6894.757 == pytest.approx(psia, rel=2e-4)


@pytest.mark.parametrize(("celsius", "density", "dynamic", "kinematic", "vapour"), WATER)
def test_water_table(celsius, density, dynamic, kinematic, vapour):
    water = water_at(celsius)
    assert water.density_kgm3 == pytest.approx(density, rel=2e-5)
    assert water.kinematic_viscosity_m2s * water.density_kgm3 * 1e3 == pytest.approx(dynamic, rel=1e-3)
    assert water.kinematic_viscosity_m2s * 1e6 == pytest.approx(kinematic, rel=1e-3)
    assert water.vapour_pressure_pa == pytest.approx(vapour, rel=1e-5)


@pytest.mark.parametrize(("celsius", "density", "centipoise", "kilopascal"), HANDBOOK)
def test_water_handbook(celsius, density, centipoise, kilopascal):
    water = water_at(celsius)
    assert water.density_kgm3 == pytest.approx(density, rel=2e-3)
    assert water.kinematic_viscosity_m2s * water.density_kgm3 * 1e3 == pytest.approx(centipoise, rel=2e-3)
    assert water.vapour_pressure_pa / 1e3 == pytest.approx(kilopascal, rel=2e-3)


@pytest.mark.parametrize(
    ("kelvin", "megapascal"), [(300.0, 0.353658941e-2), (500.0, 0.263889776e1), (600.0, 0.123443146e2)]
)
def test_saturation_equation_verification_points(kelvin, megapascal):
    # IAPWS R7-97(2012), table 35.
    assert vapour_pressure_pa(kelvin) / 1e6 == pytest.approx(megapascal, rel=1e-8)


@pytest.mark.parametrize(("altitude", "celsius", "head"), LIFT)
def test_ceiling_of_the_lift(altitude, celsius, head):
    water = water_at(celsius)
    usable = standard_pressure_pa(altitude) - water.vapour_pressure_pa
    assert barometric_head_m(usable, water) == pytest.approx(head, rel=1e-3)


def test_barometric_head():
    # By hand from the same tables: 101 325 Pa on water of 10 °C.
    assert barometric_head_m(ATMOSPHERE_PA, water_at(10.0)) == pytest.approx(10.335, abs=0.001)


def test_water_agrees_with_coolprop_from_0_to_40():
    for celsius in np.linspace(0.01, 40.0, 81):
        kelvin, water = celsius + 273.15, water_at(celsius)
        density = PropsSI("D", "T", kelvin, "P", ATMOSPHERE_PA, "Water")
        viscosity = PropsSI("V", "T", kelvin, "P", ATMOSPHERE_PA, "Water")
        assert water.density_kgm3 == pytest.approx(density, rel=2e-5)
        assert water.kinematic_viscosity_m2s * water.density_kgm3 == pytest.approx(viscosity, rel=2e-3)
        assert water.vapour_pressure_pa == pytest.approx(PropsSI("P", "T", kelvin, "Q", 0, "Water"), rel=2e-4)


def test_atmosphere_agrees_with_fluids():
    # That library takes geometric heights.
    for altitude in np.linspace(-500.0, 9000.0, 96):
        geometric = EARTH_RADIUS_M * altitude / (EARTH_RADIUS_M - altitude)
        assert standard_pressure_pa(altitude) == pytest.approx(ATMOSPHERE_1976(geometric).P, abs=1.0)


def test_atmosphere_agrees_with_pvlib():
    altitudes = np.linspace(-500.0, 9000.0, 96)
    ours = [standard_pressure_pa(altitude) for altitude in altitudes]
    np.testing.assert_allclose(ours, alt2pres(altitudes), rtol=0.0, atol=1.0)
