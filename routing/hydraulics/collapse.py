"""Whether a pipe wall stands the vacuum: thin-ring collapse with ovality."""

from __future__ import annotations

from routing.hydraulics.checking import check_number
from routing.records import Pipe

_LARGEST_OVALITY_PCT = 10.0


def ovality_factor(ovality_pct: float) -> float:
    """Return what an oval shape leaves of the collapse pressure of a round pipe: ``[(1 - q)/(1 + q)^2]^3``.

    q is (largest - mean diameter)/mean diameter (ASTM F1216, equation recalled from memory).

    Parameters
    ----------
    ovality_pct
        100 q, 0 to 10.

    Raises
    ------
    InputError
        Outside the range.
    """
    q = check_number("ovality", ovality_pct, 0.0, _LARGEST_OVALITY_PCT, "%") / 100.0
    return float(((1.0 - q) / (1.0 + q) ** 2) ** 3)


def collapse_pressure_pa(pipe: Pipe, *, yield_pa: float | None = None) -> float | None:
    """Return the pressure difference in Pa (outside less inside) at which an unsupported long pipe collapses.

    Elastic: ``2 E / (1 - nu^2) (t / D_m)^3`` with the least wall t and the mean diameter D_m = outside diameter - t
    (Moser, Buried Pipe Design, eq. 3.13 and 3.14), times the ovality factor. Where the yield stress is known also
    the inelastic limit ``(t/R) s / (1 + 4 s R^2 / (E t^2))``, R = D_m/2 (Moser, eq. 3.15), times the same factor;
    the smaller is returned. Surrounding soil, stiffeners and joints are left out of account: the safe side.

    Parameters
    ----------
    pipe
        The pipe; its modulus must be the one for the temperature and duration of the load.
    yield_pa
        Yield stress s of the wall in Pa, for metals.

    Returns
    -------
    float or None
        ``None`` where modulus or wall is not known: a check not made.

    Raises
    ------
    InputError
        Where wall, modulus, Poisson's ratio, ovality or yield stress is outside its range.
    """
    if pipe.modulus_pa is None or pipe.least_wall_m == 0.0:
        return None
    modulus = check_number("modulus of the pipe wall", pipe.modulus_pa, 1e6, 1e12, "Pa")
    poisson = check_number("Poisson's ratio of the pipe wall", pipe.poisson_ratio, 0.0, 0.5)
    wall = check_number("least wall of the pipe", pipe.least_wall_m, 0.0, 0.25 * pipe.outside_diameter_m, "m")
    mean_diameter = pipe.outside_diameter_m - wall
    pressure = 2.0 * modulus / (1.0 - poisson**2) * (wall / mean_diameter) ** 3
    if yield_pa is not None:
        stress = check_number("yield stress of the pipe wall", yield_pa, 1e6, 1e10, "Pa")
        slender = 0.5 * mean_diameter / wall
        pressure = min(pressure, stress / slender / (1.0 + 4.0 * stress / modulus * slender**2))
    return float(pressure * ovality_factor(pipe.ovality_pct))


def allowed_underpressure_pa(pipe: Pipe, safety: float, *, yield_pa: float | None = None) -> float | None:
    """Return how far in Pa the inside pressure may lie below the air outside: collapse pressure over safety.

    Parameters
    ----------
    pipe, yield_pa
        As for :func:`collapse_pressure_pa`.
    safety
        Factor of safety, 1 to 10 (2 is usual for PE, 3 in ASME VIII-1 for steel).

    Returns
    -------
    float or None
        ``None`` where the collapse pressure is not known.

    Raises
    ------
    InputError
        Where a number is outside its range.
    """
    factor = check_number("factor of safety against collapse", safety, 1.0, 10.0)
    pressure = collapse_pressure_pa(pipe, yield_pa=yield_pa)
    return None if pressure is None else pressure / factor
