"""Pipes from built-in tables of open standards: PE to ISO 4427, steel to EN 10220."""

from __future__ import annotations

import math
from collections.abc import Iterable
from typing import Literal

from routing.errors import InputError, Problem
from routing.hydraulics import pipe_tables as tables
from routing.records import Pipe

PeMaterial = Literal["PE100", "PE80"]

#: Colebrook-White roughness. PE: 0.01 mm, upper end of what is used for new plastic (0.0015 to 0.01, common
#: practice); it agrees with Hazen-Williams C = 150 within 2 %. Steel: 0.045 mm, new commercial steel (Moody, Trans.
#: ASME 66, 1944); steel that has rusted is rougher by a factor of 3 to 30.
PE_ROUGHNESS_M = 1e-5
STEEL_ROUGHNESS_M = 4.5e-5

PE_POISSON_RATIO = 0.45
#: Ovality (out-of-roundness) assumed of PE pipe, per cent. Makers may deliver straight pipe 2 % out of round up to
#: 250 mm and 3.5 % above (EN 12201-2 figures in a maker's table), and storage in the sun adds to it; 3 % is the usual
#: allowance (common practice). Coiled pipe can reach 6 %: measure it.
PE_OVALITY_PCT = 3.0
#: EN 1993 takes 210 GPa, other texts 205 to 207; the smallest is on the safe side.
STEEL_MODULUS_PA = 205e9
STEEL_POISSON_RATIO = 0.3
#: ASME VIII-1 lets vessels under outside pressure be 1 % out of round.
STEEL_OVALITY_PCT = 1.0

_PE_COLDEST_C = -40.0
_NEAREST = 4


def table_names() -> tuple[str, ...]:
    """Return the names of the built-in tables: ``"PE100"``, ``"PE80"``, ``"steel"``."""
    return (*tables.PE_MODULUS_PSI, "steel")


def table_sizes(name: str) -> tuple[tuple[float, float], ...]:
    """Return the sizes of a built-in table.

    Parameters
    ----------
    name
        One of :func:`table_names`.

    Returns
    -------
    tuple of (float, float)
        (outside diameter in mm, SDR) for PE; (outside diameter in mm, wall in mm) for steel.

    Raises
    ------
    InputError
        For an unknown name.
    """
    if name == "steel":
        return tuple((d, t) for d, walls in tables.STEEL_WALLS_MM.items() for t in walls)
    _known_pe(name)
    sizes = ((d, sdr) for d in tables.PE_DIAMETERS_MM for sdr in tables.PE_SERIES)
    return tuple(size for size in sizes if tables.pe_least_wall_mm(*size) is not None)


def _known_pe(material: str) -> None:
    if material not in tables.PE_MODULUS_PSI:
        names = ", ".join(table_names())
        raise InputError(
            Problem("there is no built-in pipe table of that name", f'"{material}"', names, "give the pipe in numbers")
        )


def _nearest(value: float, choices: Iterable[float]) -> str:
    near = sorted(sorted(choices, key=lambda c: abs(c - value))[:_NEAREST])
    return ", ".join(f"{c:g}" for c in near)


def _not_listed(what: str, found: float, choices: Iterable[float], unit: str) -> InputError:
    return InputError(
        Problem(
            f"{what} is not in the built-in table",
            f"{found:g} {unit}".strip(),
            f"nearest: {_nearest(found, choices)} {unit}".strip(),
            "take a listed size, or give the pipe in numbers (outside diameter, wall, roughness, modulus)",
        )
    )


def pe_modulus_pa(material: str, *, temperature_c: float, load_hours: float) -> float:
    """Return the apparent modulus of PE in Pa for a load that lasts.

    PPI Handbook of PE Pipe, table B.1.1 at 23 °C, straight lines in the logarithm of time, times a temperature factor
    (table B.1.2, recalled from memory) that is 1 up to 23 °C: no credit for cold. Loads shorter than half an hour
    get the half-hour value.

    Parameters
    ----------
    material
        ``"PE100"`` or ``"PE80"``.
    temperature_c
        Temperature of the pipe wall in °C, -40 to 60. A pipe in the sun is far warmer than its water.
    load_hours
        How long the vacuum lasts, in hours: above 0, at most 50 years (438 300 h). Add up what comes again and again.

    Raises
    ------
    InputError
        For an unknown material or a value outside its range.
    """
    _known_pe(material)
    warmest = tables.PE_TEMPERATURES_C[-1]
    if not _PE_COLDEST_C <= temperature_c <= warmest:
        allowed = f"{_PE_COLDEST_C:g} to {warmest:g} °C"
        raise InputError(
            Problem("the temperature of the PE pipe is outside its range", f"{temperature_c:g} °C", allowed)
        )
    longest = tables.PE_DURATIONS_H[-1]
    if not 0.0 < load_hours <= longest:
        allowed = f"above 0, at most {longest:.0f} h (50 years)"
        raise InputError(Problem("the load duration is outside the modulus table", f"{load_hours:g} h", allowed))
    times = tuple(math.log(t) for t in tables.PE_DURATIONS_H)
    psi = tables.interpolate(math.log(load_hours), times, tables.PE_MODULUS_PSI[material])
    factor = tables.interpolate(temperature_c, tables.PE_TEMPERATURES_C, tables.PE_TEMPERATURE_FACTORS)
    return psi * tables.PSI_PA * factor


def pe_pipe(
    outside_diameter_mm: float, sdr: float, material: str = "PE100", *, temperature_c: float, load_hours: float
) -> Pipe:
    """Return a PE pipe to ISO 4427-2.

    The least wall is the standard's minimum; the mean wall, which gives the bore, is the minimum plus half the
    tolerance of ISO 11922-1 grade V. The outside diameter is the nominal one, which is the smallest allowed.

    Parameters
    ----------
    outside_diameter_mm, sdr
        A listed size; see :func:`table_sizes`.
    material
        ``"PE100"`` or ``"PE80"``.
    temperature_c, load_hours
        Of the pipe wall under vacuum; see :func:`pe_modulus_pa`.

    Raises
    ------
    InputError
        For a size that is not listed (the nearest are named) or a value outside its range.
    """
    modulus = pe_modulus_pa(material, temperature_c=temperature_c, load_hours=load_hours)
    if outside_diameter_mm not in tables.PE_DIAMETERS_MM:
        raise _not_listed("the outside diameter of the PE pipe", outside_diameter_mm, tables.PE_DIAMETERS_MM, "mm")
    least = tables.pe_least_wall_mm(float(outside_diameter_mm), float(sdr))
    if least is None:
        listed = [s for d, s in table_sizes(material) if d == outside_diameter_mm]
        raise _not_listed(f"the SDR of the {outside_diameter_mm:g} mm PE pipe", sdr, listed, "")
    mean = least + 0.5 * tables.pe_wall_tolerance_mm(least)
    return Pipe(
        name=f"{material} {outside_diameter_mm:g} SDR {sdr:g}",
        material=material,
        outside_diameter_m=outside_diameter_mm / 1000.0,
        wall_m=mean / 1000.0,
        least_wall_m=least / 1000.0,
        roughness_m=PE_ROUGHNESS_M,
        modulus_pa=modulus,
        poisson_ratio=PE_POISSON_RATIO,
        ovality_pct=PE_OVALITY_PCT,
        source=(
            f"ISO 4427-2, wall {least:g} mm by ISO 4065, mean wall {mean:g} mm by ISO 11922-1 grade V; "
            f"modulus {modulus / 1e6:.0f} MPa for {load_hours:g} h at {temperature_c:g} °C (PPI Handbook of PE Pipe, "
            f"B.1.1; temperature factor from memory); ovality {PE_OVALITY_PCT:g} % assumed; "
            f"roughness {PE_ROUGHNESS_M * 1000:g} mm assumed"
        ),
    )


def steel_pipe(outside_diameter_mm: float, wall_mm: float) -> Pipe:
    """Return a steel pipe with a diameter and wall of EN 10220, new and unlined.

    The mean wall is the nominal one; the least wall is 12.5 % thinner (the tolerance of seamless tube). Rust takes
    more: give a corroded pipe in numbers.

    Parameters
    ----------
    outside_diameter_mm, wall_mm
        A listed size; see :func:`table_sizes`.

    Raises
    ------
    InputError
        For a size that is not listed (the nearest are named).
    """
    if outside_diameter_mm not in tables.STEEL_WALLS_MM:
        raise _not_listed("the outside diameter of the steel pipe", outside_diameter_mm, tables.STEEL_WALLS_MM, "mm")
    walls = tables.STEEL_WALLS_MM[outside_diameter_mm]
    if wall_mm not in walls:
        raise _not_listed(f"the wall of the {outside_diameter_mm:g} mm steel pipe", wall_mm, walls, "mm")
    return Pipe(
        name=f"steel {outside_diameter_mm:g} x {wall_mm:g}",
        material="steel",
        outside_diameter_m=outside_diameter_mm / 1000.0,
        wall_m=wall_mm / 1000.0,
        least_wall_m=(1.0 - tables.STEEL_WALL_SHORT) * wall_mm / 1000.0,
        roughness_m=STEEL_ROUGHNESS_M,
        modulus_pa=STEEL_MODULUS_PA,
        poisson_ratio=STEEL_POISSON_RATIO,
        ovality_pct=STEEL_OVALITY_PCT,
        source=(
            f"EN 10220 (sizes from memory), least wall {100 * tables.STEEL_WALL_SHORT:g} % under the nominal; modulus "
            f"{STEEL_MODULUS_PA / 1e9:g} GPa; ovality {STEEL_OVALITY_PCT:g} % assumed; new steel, roughness "
            f"{STEEL_ROUGHNESS_M * 1000:g} mm (Moody)"
        ),
    )
