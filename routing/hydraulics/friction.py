"""Darcy friction factor: laminar law below a critical Reynolds number, full Colebrook-White above it."""

from __future__ import annotations

import math
from typing import overload

import numpy as np

from routing.errors import InputError, Problem
from routing.records import FloatArray

#: Up to this Reynolds number flow is taken as laminar. Avila et al. (Science 333:192, 2011) found that turbulence in
#: a pipe keeps itself up above 2040 (10 either way); figure recalled from memory, not read again.
CRITICAL_REYNOLDS = 2040.0

#: Roughness beyond a tenth of the bore is no longer the roughness that Colebrook-White speaks of.
LARGEST_RELATIVE_ROUGHNESS = 0.1

_TWO_OVER_LN10 = 2.0 / math.log(10.0)
_ROUGH = 1.0 / 3.7
_SMOOTH = 2.51
#: Newton steps from Haaland's start: 3 reach rounding everywhere in the range, the rest is margin.
_STEPS = 12
_STOP = 4e-16


def colebrook_x(reynolds: float, relative_roughness: float) -> float:
    """Return 1/sqrt(f) of the Colebrook-White equation; inputs are trusted (turbulent branch at any Reynolds number).

    Newton's method on ``x + 2 log10(k/(3.7 D) + 2.51 x / Re) = 0``, which is concave and rising in x, so that it
    converges from any start near the root. The start is Haaland's explicit formula.

    Parameters
    ----------
    reynolds
        Reynolds number, above 0.
    relative_roughness
        Roughness over bore, 0 or more.
    """
    a = relative_roughness * _ROUGH
    b = _SMOOTH / reynolds
    x = -1.8 * math.log10(a**1.11 + 6.9 / reynolds)
    for _ in range(_STEPS):
        inside = a + b * x
        step = (x + _TWO_OVER_LN10 * math.log(inside)) / (1.0 + _TWO_OVER_LN10 * b / inside)
        x -= step
        if abs(step) <= _STOP * x:
            break
    return x


def _factor_scalar(reynolds: float, relative_roughness: float) -> float:
    if reynolds <= CRITICAL_REYNOLDS:
        return 64.0 / reynolds
    x = colebrook_x(reynolds, relative_roughness)
    return 1.0 / (x * x)


def _factor_array(reynolds: FloatArray, relative_roughness: FloatArray) -> FloatArray:
    a = relative_roughness * _ROUGH
    turbulent = np.maximum(reynolds, CRITICAL_REYNOLDS)
    b = _SMOOTH / turbulent
    x = -1.8 * np.log10(a**1.11 + 6.9 / turbulent)
    for _ in range(_STEPS):
        inside = a + b * x
        step = (x + _TWO_OVER_LN10 * np.log(inside)) / (1.0 + _TWO_OVER_LN10 * b / inside)
        x = x - step
        if np.all(np.abs(step) <= _STOP * x):
            break
    return np.where(reynolds <= CRITICAL_REYNOLDS, 64.0 / reynolds, 1.0 / (x * x))


def _refuse(name: str, found: float, allowed: str) -> InputError:
    remedy = "still water has no friction factor: treat a velocity of 0 apart" if name == "Reynolds number" else ""
    return InputError(Problem(f"the {name} is outside its range", f"{found:g}", allowed, remedy))


@overload
def darcy_factor(reynolds: float, relative_roughness: float) -> float: ...
@overload
def darcy_factor(reynolds: FloatArray, relative_roughness: float | FloatArray) -> FloatArray: ...
@overload
def darcy_factor(reynolds: float, relative_roughness: FloatArray) -> FloatArray: ...


def darcy_factor(reynolds: float | FloatArray, relative_roughness: float | FloatArray) -> float | FloatArray:
    """Return the Darcy friction factor f of ``h = f L/D V^2/2g`` (four times Fanning's).

    ``64/Re`` up to Re = 2040, above it the Colebrook-White equation
    ``1/sqrt(f) = -2 log10(k/(3.7 D) + 2.51/(Re sqrt(f)))`` (Colebrook, J. Inst. Civ. Eng. 11, 1939), solved to
    rounding. The factor jumps up at 2040; nothing is smoothed over.

    Parameters
    ----------
    reynolds
        Reynolds number V D / nu, above 0; a number or an array.
    relative_roughness
        Roughness over bore, 0 to 0.1; a number or an array that broadcasts with ``reynolds``.

    Returns
    -------
    float or array
        Dimensionless; an array of the broadcast shape where either input is one.

    Raises
    ------
    InputError
        Where a value is not finite or outside its range.

    Examples
    --------
    >>> round(darcy_factor(1e5, 1e-4), 6)
    0.018514
    """
    if isinstance(reynolds, np.ndarray) or isinstance(relative_roughness, np.ndarray):
        re, rough = np.broadcast_arrays(np.asarray(reynolds, np.float64), np.asarray(relative_roughness, np.float64))
        good = np.isfinite(re) & (re > 0.0)
        if not good.all():
            raise _refuse("Reynolds number", float(re[~good].flat[0]), "above 0, finite")
        good = (rough >= 0.0) & (rough <= LARGEST_RELATIVE_ROUGHNESS)
        if not good.all():
            raise _refuse("relative roughness", float(rough[~good].flat[0]), f"0 to {LARGEST_RELATIVE_ROUGHNESS:g}")
        return _factor_array(re, rough)
    if not (reynolds > 0.0 and math.isfinite(reynolds)):
        raise _refuse("Reynolds number", reynolds, "above 0, finite")
    if not 0.0 <= relative_roughness <= LARGEST_RELATIVE_ROUGHNESS:
        raise _refuse("relative roughness", relative_roughness, f"0 to {LARGEST_RELATIVE_ROUGHNESS:g}")
    return _factor_scalar(float(reynolds), float(relative_roughness))
