"""From the numbers a file stores to levels in metres and a mask of the cells that hold ground."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from routing.records import BoolArray, FloatArray

# The lowest dry land lies near -430 m, the deepest lake bed near -1200 m, the highest summit near 8850 m
# (general knowledge, from memory). Beyond these, a number is a marker for "no data" that the file does not declare.
LOWEST_GROUND_M = -2000.0
HIGHEST_GROUND_M = 9000.0


@dataclass(frozen=True, slots=True)
class Conversion:
    """How stored numbers become levels: ``level = (number * scale + offset) * unit_m + datum_offset_m``."""

    scale: float = 1.0
    offset: float = 0.0
    unit_m: float = 1.0
    datum_offset_m: float = 0.0


def to_levels(
    raw: NDArray[Any], mask: NDArray[np.uint8] | None, conversion: Conversion
) -> tuple[FloatArray, BoolArray, tuple[str, ...]]:
    """Convert stored numbers to levels.

    Parameters
    ----------
    raw
        (rows, cols) array as stored.
    mask
        (rows, cols) array, zero where the file says that there is no data; ``None``: it says so nowhere.
    conversion
        Scale, offset and unit.

    Returns
    -------
    elevation_m : (rows, cols) float64 array
        Finite everywhere, zero where not valid.
    valid : (rows, cols) bool array
        Whether the cell holds ground.
    notes : tuple of str
        What was assumed of odd cells.
    """
    notes: list[str] = []
    valid = np.ones(raw.shape, dtype=np.bool_) if mask is None else mask != 0
    elevation = raw.astype(np.float64)
    if raw.dtype.kind == "f":
        infinite = int(np.count_nonzero(np.isinf(raw) & valid))
        if infinite:
            notes.append(f"{infinite} cells hold an infinite number: taken as cells without data.")
        valid &= np.isfinite(raw)
        elevation[~valid] = 0.0
    if conversion.scale * conversion.unit_m != 1.0:
        elevation *= conversion.scale * conversion.unit_m
    if conversion.offset:
        elevation += conversion.offset * conversion.unit_m
    absurd = valid & ((elevation < LOWEST_GROUND_M) | (elevation > HIGHEST_GROUND_M))
    count = int(np.count_nonzero(absurd))
    if count:
        example = raw[np.unravel_index(int(np.argmax(absurd)), absurd.shape)]
        notes.append(
            f"{count} cells hold levels that no ground on Earth has (such as {example}): taken as cells without data, "
            "though the file does not say so."
        )
        valid &= ~absurd
    if conversion.datum_offset_m:
        elevation += conversion.datum_offset_m
    elevation[~valid] = 0.0
    return elevation, valid, tuple(notes)
