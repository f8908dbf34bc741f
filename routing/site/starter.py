"""A commented site file to begin with, made for one DEM."""

from __future__ import annotations

import json
import os
from pathlib import Path

from routing.records import TerrainFacts

#: How the reader of DEMs says that a DEM does not say something.
_UNKNOWN = {"", "unknown", "not stated"}
#: Column at which the comments behind the values stand.
_COMMENT_AT = 31

_TEXT = """\
# Site file for a siphon over a dam or ridge. Text after '#' is a comment.
# Lines marked REQUIRED are commented out: take their first '#' away and write your own values.
# Until then the file is refused, with the numbers of these lines.
# Every key names its unit. Levels are in metres in the datum of the DEM. Paths are relative to this file.

title = {title}

[terrain]
file = {file}
# {crs}
# {size}
{unit}
{datum}
# datum_offset_m = 0.0           # added to every elevation of the DEM
# vertical_error_90_m = 0.3      # error that 90 % of the elevations keep; unknown: no verdict better than caution
{surface}# "ground", "canopy" (trees and roofs are in it) or "unknown"
{water_shown}# what the DEM shows of the water: its flat "surface" or its "bed"

[air]
# Air pressure at the site limits the lift.
{air}
# altitude_m = 250.0
# pressure_pa = 98000.0
barometric_low_pa = 3000.0     # taken off for bad weather

[water]
# present_level_m = 101.2        # left out: read off the DEM at the intake
# REQUIRED: the lowest water level at which the siphon must still work
# lowest_level_m = 99.0
temperature_c = 10.0           # warmest water to expect: it boils soonest

[intake]
# REQUIRED: a point in the water, as x and y in the CRS of the DEM (below: the middle of the DEM), or as lon and lat,
# or as a file (GeoJSON, GeoPackage) that holds one point
# x = {x}
# y = {y}
# REQUIRED where the DEM shows the water's surface: level of the top of the intake mouth
# mouth_level_m = 98.5
# To let it lie anywhere along the shore of that water, see intake.kind in the reference.

[outlet]
# REQUIRED: a point beyond the dam or ridge, lower than the lowest level
# x = {x}
# y = {y}
height_above_ground_m = 0.3    # of the pipe's axis; or give its level:
# level_m = 95.0
# tailwater_level_m = 94.5       # left out: the outlet discharges freely
# To let it lie along a stream, in a field, or anywhere low that drains, see outlet.kind in the reference.

[losses]
# Local losses, as K in K V2/2g.
entrance = 0.5
exit = 1.0
valve_open = 0.2               # outlet valve, fully open
bend_loss_per_km = 2.0

[limits]
reserve_m = 2.5                # metres of water kept between the lowest pressure and boiling
least_submergence_m = 0.3      # least depth of water over the intake mouth
collapse_safety = 2.0
pipe_load_hours = 8760.0       # how long the suction lasts in all; a year here

[demand]
# discharge_m3s = 0.1            # total wanted at the lowest level; left out: as much as one pipe can carry
# budget = 50000.0
most_pipes = 4

[prices]
# currency = "EUR"
# date = "2026-01"
invented = false
fixed_per_scheme = 0.0

# Ground that routes must not touch, or where laying costs more: polygons, any number of these tables.
# [[zones]]
# name = "protected bank"
# file = "bank.geojson"
# kind = "barred"                # or "cost", and then: cost_factor = 2.0

# Pipe sizes to choose from, one [[pipes]] table each. Prices: for every pipe, or for none.
[[pipes]]
table = "ISO 4427"             # polyethylene, by outside diameter and SDR
material = "PE100"
outside_diameter_mm = 250.0
sdr = 17.0
# supply_per_m = 40.0
# laying_per_m = 15.0
# fixed_each = 2500.0

[[pipes]]
table = "ISO 4427"
material = "PE100"
outside_diameter_mm = 315.0
sdr = 11.0
# supply_per_m = 90.0
# laying_per_m = 18.0
# fixed_each = 3200.0
"""


def starter(facts: TerrainFacts, *, dem_path: str | os.PathLike[str], folder: str | os.PathLike[str]) -> str:
    """Return a commented site file to begin with.

    Parameters
    ----------
    facts
        What was understood of the DEM.
    dem_path
        The DEM.
    folder
        Where the site file will lie; the path of the DEM is written relative to it.

    Returns
    -------
    str
        TOML text. What only the user knows stands in it commented out, so that ``load_site`` refuses the file and
        names the lines to fill in.
    """
    x, y = _middle(facts)
    return _TEXT.format(
        title=_quoted(Path(dem_path).stem.replace("_", " ")),
        file=_quoted(_relative(dem_path, folder)),
        crs=_plain(f"CRS: {facts.crs_name or 'unknown'}, in {facts.horizontal_unit or 'an unknown unit'}"),
        size=f"{facts.cols} x {facts.rows} cells, x {_span(facts, 0)}, y {_span(facts, 1)}",
        unit=_unit_line(facts),
        datum=_datum_line(facts),
        air=_air_line(facts),
        surface=f'surface = "{facts.surface}"'.ljust(_COMMENT_AT),
        water_shown=f'water_shown = "{facts.water_shown}"'.ljust(_COMMENT_AT),
        x=x,
        y=y,
    )


def _quoted(text: str) -> str:
    """Return text as a TOML string; JSON's escapes are TOML's too."""
    return json.dumps(text, ensure_ascii=False).replace("\x7f", "\\u007f")


def _plain(text: str) -> str:
    """Return text fit for a comment: one line, no control characters."""
    return " ".join("".join(char if char.isprintable() else " " for char in text).split())


def _relative(dem_path: str | os.PathLike[str], folder: str | os.PathLike[str]) -> str:
    path = Path(dem_path).resolve()
    try:
        return Path(os.path.relpath(path, Path(folder).resolve())).as_posix()
    except ValueError:  # another drive
        return path.as_posix()


def _at(facts: TerrainFacts, col: float, row: float) -> tuple[float, float]:
    a, b, c, d, e, f = facts.transform
    return a * col + b * row + c, d * col + e * row + f


def _middle(facts: TerrainFacts) -> tuple[str, str]:
    x, y = _at(facts, facts.cols / 2.0, facts.rows / 2.0)
    return _ordinate(facts, x), _ordinate(facts, y)


def _ordinate(facts: TerrainFacts, value: float) -> str:
    return f"{value:.6f}" if facts.horizontal_unit.lower().startswith("deg") else f"{value:.1f}"


def _span(facts: TerrainFacts, axis: int) -> str:
    ends = sorted(_at(facts, col, row)[axis] for col in (0, facts.cols) for row in (0, facts.rows))
    return f"{_ordinate(facts, ends[0])} to {_ordinate(facts, ends[-1])}"


def _unit_line(facts: TerrainFacts) -> str:
    if facts.vertical_unit in _UNKNOWN:
        return (
            '# REQUIRED: the DEM does not say in what unit its elevations are; write "m", "ft" or "us-ft"\n'
            '# vertical_unit = "m"'
        )
    unit, source = _plain(facts.vertical_unit), _plain(facts.vertical_unit_source)
    return (
        f'# vertical_unit = "{unit}"'.ljust(_COMMENT_AT + 2) + "# as the DEM says" + (f" ({source})" if source else "")
    )


def _datum_line(facts: TerrainFacts) -> str:
    if facts.vertical_datum not in _UNKNOWN:
        return f"# vertical_datum = {_quoted(facts.vertical_datum)}  # as the DEM says"
    return '# vertical_datum = "..."'.ljust(_COMMENT_AT + 2) + "# the DEM does not name one"


def _air_line(facts: TerrainFacts) -> str:
    if facts.vertical_datum in _UNKNOWN:
        return (
            "# REQUIRED, since the DEM names no datum: altitude or measured pressure of the site; or, if levels count\n"
            "# from the sea, the name of their datum above (vertical_datum)"
        )
    return "# Give an altitude or a measured pressure, unless levels count from the sea."
