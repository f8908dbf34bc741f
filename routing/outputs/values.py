"""Plain values for files: nothing that JSON or a table reader would choke on leaves through here."""

from __future__ import annotations

import json
import math
from collections.abc import Mapping
from dataclasses import fields, is_dataclass
from pathlib import Path
from typing import Any

import numpy as np

#: What one cell of a table, or one property of a map feature, may be.
Value = str | int | float | bool | None


def clean(value: object, decimals: int | None = None) -> Value:
    """Return a value as plain text, number, flag or ``None``.

    Parameters
    ----------
    value
        Text, path, flag, number (also numpy's) or ``None``.
    decimals
        Places to round a number to; ``None`` keeps it.

    Returns
    -------
    str, int, float, bool or None
        ``None`` for NaN and infinities: I-JSON (RFC 7493, section 2.2) knows neither, and an infinite valve
        loss means that there is no such number to give.

    Raises
    ------
    TypeError
        For anything else: a fault of ours.
    """
    if value is None:
        return None
    if isinstance(value, bool | np.bool_):
        return bool(value)
    if isinstance(value, int | np.integer):
        return int(value)
    if isinstance(value, float | np.floating):
        return _clean_float(float(value), decimals)
    if isinstance(value, str | Path):
        # A file name that is no UTF-8 holds lone surrogates, which no UTF-8 file can.
        return str(value).encode("utf-8", "backslashreplace").decode("utf-8")
    raise TypeError(f"{type(value).__name__} is no plain value: {value!r}")


def _clean_float(value: float, decimals: int | None) -> float | None:
    if not math.isfinite(value):
        return None
    rounded = value if decimals is None else round(value, decimals)
    return rounded + 0.0  # turns -0.0 into 0.0


def plain(value: object, *, without: frozenset[str] = frozenset()) -> Any:
    """Return a record as nested dictionaries and lists of plain values.

    Parameters
    ----------
    value
        A dataclass, mapping, tuple, list or single value.
    without
        Names of fields to leave out at any depth. Arrays are always left out: the tables hold them.

    Returns
    -------
    dict, list, str, int, float, bool or None
        Paths as text, NaN and infinities as ``None``.

    Raises
    ------
    TypeError
        For a value that has no plain form: a fault of ours.
    """
    if is_dataclass(value) and not isinstance(value, type):
        return plain({field.name: getattr(value, field.name) for field in fields(value)}, without=without)
    if isinstance(value, Mapping):
        kept = {str(key): item for key, item in value.items() if str(key) not in without}
        return {key: plain(item, without=without) for key, item in kept.items() if not isinstance(item, np.ndarray)}
    if isinstance(value, tuple | list):
        return [plain(item, without=without) for item in value]
    return clean(value)


def json_text(document: Mapping[str, Any]) -> str:
    """Return one JSON document as text: UTF-8, indented, no NaN or infinity.

    Raises
    ------
    ValueError
        If a NaN or an infinity got in: a fault of ours.
    """
    return json.dumps(document, allow_nan=False, ensure_ascii=False, indent=2) + "\n"
