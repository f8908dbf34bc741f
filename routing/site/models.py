"""The site file as pydantic models: every key with its meaning, unit, range and default, and nothing else.

What concerns several keys at once is in ``checks``; the turn into records is in ``loading``.
"""

from __future__ import annotations

import datetime as dt
from typing import Annotated, Any, Literal

from pydantic import BeforeValidator, Field

from routing.records import STANDARD_GRAVITY_MS2
from routing.site.fields import Section, key

#: Levels on Earth with a margin, for slips such as a level in feet, in centimetres or with a stray digit.
LEVELS: dict[str, Any] = {"ge": -500.0, "le": 9000.0}
#: Map ordinates: larger ones are a slip (Earth's circumference is 40 000 km).
ORDINATES: dict[str, Any] = {"ge": -4.1e7, "le": 4.1e7}


def _date_as_text(value: Any) -> Any:
    """TOML has dates of its own; a date without quotes is as good as one with them."""
    return value.isoformat() if isinstance(value, dt.date) else value


DateText = Annotated[str, BeforeValidator(_date_as_text)]


class TerrainModel(Section):
    """The elevation model (DEM), and what its file does not say."""

    file: str = key("elevation raster that GDAL reads, relative to the site file", min_length=1)
    band: int = key("band that holds the elevations", 1, ge=1, le=1000)
    vertical_unit: Literal["m", "ft", "us-ft"] | None = key(
        "unit of the elevations: metre, international foot, US survey foot", None, otherwise="read from band or CRS"
    )
    vertical_datum: str | None = key(
        "name of the vertical datum, shown in results", None, otherwise="read from the CRS, else unknown"
    )
    datum_offset_m: float = key("added to every elevation of the DEM", 0.0, unit="m", ge=-500, le=500)
    vertical_error_90_m: float | None = key(
        "vertical error that 90 % of the elevations keep",
        None,
        unit="m",
        otherwise="unknown: no verdict better than caution",
        gt=0,
        le=100,
    )
    surface: Literal["ground", "canopy", "unknown"] = key(
        "whether the DEM shows bare ground or the top of trees and roofs", "unknown"
    )
    water_shown: Literal["surface", "bed"] = key(
        "what the DEM shows where there is water: the flat surface of the survey day, or the bed", "surface"
    )


class AirModel(Section):
    """Air pressure, given outright or from an altitude; one of the two, or neither."""

    pressure_pa: float | None = key(
        "usual air pressure at the site, absolute (not reduced to sea level)",
        None,
        unit="Pa",
        otherwise="from the altitude",
        ge=40_000,
        le=110_000,
    )
    altitude_m: float | None = key(
        "height above sea level, for air pressure from the standard atmosphere",
        None,
        unit="m",
        otherwise="from the levels of the DEM, if their datum is known",
        ge=-430,
        le=6500,
    )
    barometric_low_pa: float = key("taken off the air pressure for bad weather", 3000.0, unit="Pa", ge=0, le=10_000)


class WaterModel(Section):
    """The water body that is to be lowered."""

    present_level_m: float | None = key(
        "water level now, in the datum of the DEM",
        None,
        unit="m",
        otherwise="read off the flat water in the DEM at the intake",
        **LEVELS,
    )
    lowest_level_m: float = key("lowest water level at which the siphon must still work", unit="m", **LEVELS)
    temperature_c: float = key("warmest water to expect (warm water boils sooner)", 10.0, unit="°C", ge=0, le=40)
    polygon_file: str | None = key(
        "GeoJSON or GeoPackage with the water's outline", None, otherwise="flooded from the intake", min_length=1
    )
    polygon_layer: str | None = key("layer in that file", None, otherwise="its only layer", min_length=1)


class PointModel(Section):
    """A point: x and y, or lon and lat, or file; exactly one of the three ways."""

    x: float | None = key("easting in the CRS of the DEM", None, unit="unit of the CRS", **ORDINATES)
    y: float | None = key("northing in the CRS of the DEM", None, unit="unit of the CRS", **ORDINATES)
    lon: float | None = key("longitude, WGS 84, east positive", None, unit="°", ge=-180, le=180)
    lat: float | None = key("latitude, WGS 84, north positive", None, unit="°", ge=-90, le=90)
    file: str | None = key(
        "GeoJSON or GeoPackage that holds one point (for an outlet of kind line or polygon: those)", None, min_length=1
    )
    layer: str | None = key("layer in that file", None, otherwise="its only layer", min_length=1)


class IntakeModel(PointModel):
    """Where the pipe takes water: a point in the water body, by one of the three ways."""

    kind: Literal["point", "shore"] = key(
        "where water may be taken: at the point, or anywhere along the shore at the lowest level (the point then says "
        "of which water)",
        "point",
    )
    underwater_length_m: float | None = key(
        'length of pipe from the mouth to the shore, with kind = "shore"',
        None,
        unit="m",
        otherwise="measured on the bed, where the DEM shows it",
        ge=0,
        le=10_000,
    )
    mouth_level_m: float | None = key(
        "level of the top of the intake mouth; required for a point where the DEM shows the water's surface",
        None,
        unit="m",
        otherwise='level of the DEM there, where it shows the bed; unknown with kind = "shore"',
        **LEVELS,
    )


class OutletModel(PointModel):
    """Where the pipe lets water go: a point beyond the barrier, by one of the three ways, or a choice of places."""

    kind: Literal["point", "line", "polygon", "anywhere"] = key(
        "where the outlet may lie: at the point, on the lines of file, in the polygons of file, or anywhere on ground "
        "that is low enough and drains to the edge of the DEM",
        "point",
    )
    beyond_toe_m: float = key(
        'with kind = "anywhere": least distance from the toe, where the ground beyond the barrier falls back to the '
        "present level",
        0.0,
        unit="m",
        ge=0,
        le=100_000,
    )
    level_m: float | None = key("level of the outlet's axis", None, unit="m", otherwise="from the ground", **LEVELS)
    height_above_ground_m: float | None = key(
        "height of the outlet's axis above the ground of the DEM, instead of its level",
        None,
        unit="m",
        otherwise="0: on the ground, if level_m is not given either",
        ge=-10,
        le=30,
    )
    tailwater_level_m: float | None = key(
        "water level outside the outlet", None, unit="m", otherwise="free outlet", **LEVELS
    )


class LossesModel(Section):
    """Local losses, each as K in K V²/2g."""

    entrance: float = key("loss at the intake", 0.5, ge=0, le=20)
    exit: float = key("loss at the outlet, the lost velocity head included", 1.0, ge=0, le=20)
    valve_open: float = key("loss of the outlet valve when fully open", 0.0, ge=0, le=100)
    bend_loss_per_km: float = key("sum of the bend losses on a kilometre of pipe", 0.0, unit="1/km", ge=0, le=1000)


class LimitsModel(Section):
    """What must be kept."""

    reserve_m: float = key(
        "head kept between the lowest pressure in the pipe and boiling", 2.5, unit="m of water", ge=0, le=9
    )
    highest_lift_m: float | None = key(
        "highest crown above the water surface, whatever the pressure",
        None,
        unit="m",
        otherwise="set by the pressure alone",
        gt=0,
        le=10.5,
    )
    least_submergence_m: float = key("least depth of water over the intake mouth", 0.3, unit="m", ge=0, le=10)
    collapse_safety: float = key("factor of safety of the pipe wall against collapse", 2.0, ge=1, le=10)
    pipe_load_hours: float = key(
        "how long the suction lasts in all: plastic pipe yields with time", 8760.0, unit="h", ge=0.1, le=438_300
    )
    gravity_ms2: float = key("acceleration of gravity", STANDARD_GRAVITY_MS2, unit="m/s²", ge=9.76, le=9.84)


class DemandModel(Section):
    """What the siphon must do. Nothing asked: the largest discharge is sought."""

    discharge_m3s: float | None = key(
        "total discharge wanted at the lowest level, all pipes together",
        None,
        unit="m³/s",
        otherwise="as much as one pipe can carry",
        gt=0,
        le=1000,
    )
    budget: float | None = key("most that the scheme may cost", None, unit="currency", otherwise="no limit", gt=0)
    most_pipes: int = key("most pipes side by side", 4, ge=1, le=50)


class PricesModel(Section):
    """What the prices mean."""

    currency: str = key("currency of every price", "", otherwise="not stated")
    date: DateText = key("when the prices were valid", "", otherwise="not stated")
    invented: bool = key("whether the prices are invented examples; shown wherever a price is", default=False)
    fixed_per_scheme: float = key("cost of a scheme whatever its pipes", 0.0, unit="currency", ge=0)


class ZoneModel(Section):
    """Ground that a route must not touch, or on which laying costs more or less; any number of these tables."""

    name: str = key("name in results and messages", min_length=1, max_length=80)
    file: str = key("GeoJSON or GeoPackage with the zone's polygons, in any CRS", min_length=1)
    layer: str | None = key("layer in that file", None, otherwise="its only layer", min_length=1)
    kind: Literal["barred", "cost"] = key("whether routes must keep out, or laying has another price there", "barred")
    cost_factor: float | None = key(
        "what the price of laying is multiplied by there; for kind cost only, and required for it",
        None,
        otherwise="none: nothing is laid in a barred zone",
        ge=0.1,
        le=100,
    )


class SearchModel(Section):
    """How the search for routes is run."""

    neighbours: Literal[8, 16, 32] = key("directions in which a route may leave a cell", 16)
    ground_rule: Literal["bilinear", "cells"] = key(
        "what the ceiling is held against: the ground between cell centres, or the cells only", "bilinear"
    )
    bed_offset_m: float = key(
        "height of the pipe's underside above the ground: negative in a trench, positive on supports",
        0.0,
        unit="m",
        ge=-10,
        le=10,
    )
    tolerance: float = key("relative width at which the search for the largest discharge ends", 1e-3, ge=1e-6, le=0.1)
    largest_window_cells: int = key(
        "most cells of the DEM to read at once", 40_000_000, unit="cells", ge=10_000, le=2_000_000_000
    )


class PipeModel(Section):
    """One pipe size: from the table of a standard, or by its own dimensions."""

    name: str | None = key("name in results", None, otherwise="material and size", min_length=1, max_length=80)
    table: Literal["ISO 4427", "EN 10220"] | None = key(
        "standard that gives the wall: ISO 4427 (PE, by sdr) or EN 10220 (steel, by wall_mm)",
        None,
        otherwise="the pipe's own dimensions are given",
    )
    material: str | None = key(
        "material: PE80 or PE100 with ISO 4427; any text with own dimensions",
        None,
        otherwise="PE100 with ISO 4427",
        min_length=1,
    )
    outside_diameter_mm: float = key("outside diameter", unit="mm", ge=10, le=4000)
    sdr: float | None = key("outside diameter over wall, a size of ISO 4427", None, ge=5, le=50)
    wall_mm: float | None = key("mean wall (with EN 10220: the nominal wall)", None, unit="mm", gt=0, le=300)
    least_wall_mm: float | None = key(
        "thinnest wall, for collapse; own dimensions only", None, unit="mm", otherwise="wall_mm", gt=0, le=300
    )
    roughness_mm: float | None = key(
        "roughness of the bore (Colebrook-White)", None, unit="mm", otherwise="from the table", ge=0, le=20
    )
    darcy_factor: float | None = key(
        "fixed Darcy friction factor instead of a roughness (4 times the Fanning factor)",
        None,
        otherwise="from the roughness",
        ge=0.004,
        le=0.2,
    )
    modulus_mpa: float | None = key(
        "modulus of the wall for the temperature and duration of the job",
        None,
        unit="MPa",
        otherwise="from the table; with own dimensions collapse is not checked",
        ge=10,
        le=300_000,
    )
    poisson_ratio: float | None = key(
        "Poisson's ratio of the wall", None, otherwise="from the table, else 0.3", ge=0, lt=0.5
    )
    ovality_pct: float | None = key(
        "out-of-roundness, for collapse", None, unit="%", otherwise="from the table, else 3", ge=0, le=10
    )
    supply_per_m: float | None = key("price of the pipe", None, unit="currency/m", otherwise="0", ge=0)
    laying_per_m: float | None = key("price of laying it", None, unit="currency/m", otherwise="0", ge=0)
    fixed_each: float | None = key(
        "price of what each pipe needs once: intake, valve, priming", None, unit="currency", otherwise="0", ge=0
    )


class SiteModel(Section):
    """The whole site file."""

    title: str = key("name of the job, shown in results", "", otherwise="name of the folder", max_length=200)
    terrain: TerrainModel
    water: WaterModel
    intake: IntakeModel
    outlet: OutletModel
    pipes: Annotated[tuple[PipeModel, ...], BeforeValidator(lambda v: tuple(v) if isinstance(v, list) else v)] = key(
        "pipe sizes to choose from, one [[pipes]] table each", min_length=1, max_length=200
    )
    zones: Annotated[tuple[ZoneModel, ...], BeforeValidator(lambda v: tuple(v) if isinstance(v, list) else v)] = key(
        "barred ground and ground of another price, one [[zones]] table each", (), otherwise="no zones", max_length=200
    )
    air: AirModel = Field(default_factory=AirModel)
    losses: LossesModel = Field(default_factory=LossesModel)
    limits: LimitsModel = Field(default_factory=LimitsModel)
    demand: DemandModel = Field(default_factory=DemandModel)
    prices: PricesModel = Field(default_factory=PricesModel)
    search: SearchModel = Field(default_factory=SearchModel)


#: The tables of the site file that hold keys, by name, in the order of the reference page.
SECTIONS: dict[str, type[Section]] = {
    "terrain": TerrainModel,
    "air": AirModel,
    "water": WaterModel,
    "intake": IntakeModel,
    "outlet": OutletModel,
    "losses": LossesModel,
    "limits": LimitsModel,
    "demand": DemandModel,
    "prices": PricesModel,
    "search": SearchModel,
    "pipes": PipeModel,
    "zones": ZoneModel,
}
#: Those of them that may stand in the file more than once, headed by double brackets.
REPEATED = frozenset({"pipes", "zones"})


def heading(section: str) -> str:
    """Return the line that heads a table: ``[water]``, ``[[pipes]]``."""
    return f"[[{section}]]" if section in REPEATED else f"[{section}]"
