"""Records built by hand: a small lake behind a ridge, two routes over it, several schemes. All invented.

Pressures follow the steady energy balance with a fixed friction factor, so that the numbers hang together.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np
import pytest
from pyproj import CRS, Transformer
from shapely import LineString, box

from routing.records import (
    Appraisal,
    Check,
    Cost,
    CostLine,
    Crossing,
    DemandAsk,
    GridWindow,
    IntakeAsk,
    Levels,
    Limits,
    Losses,
    OutletAsk,
    Outlook,
    Pipe,
    PlacedPoint,
    Plan,
    PointAsk,
    PriceList,
    Proof,
    Route,
    Saddle,
    Sample,
    Scheme,
    Setting,
    Shortfall,
    SiphonRun,
    Site,
    Terrain,
    TerrainAsk,
    TerrainFacts,
    Verdict,
    Water,
    WaterAsk,
    WaterBody,
)

G = 9.80665
WATER = Water(999.7, 1.306e-6, 1228.0, 10.0)  # 10 degC, recalled round values
LIMITS = Limits(96_000.0, 2.5, None, 0.3, 2.0, G)
LOWEST = Levels(100.0, 92.0, None, 97.5)
PRESENT = Levels(102.0, 92.0, None, 97.5)
HELP = "What would help: a trench in the ridge, or a lowest level higher than now."
ASSUMPTIONS = (
    "the DEM shows the flat water surface of the survey day",
    "air pressure: standard atmosphere at 250 m, less 3000 Pa for a barometric low",
    "friction: roughness of new pipe",
)


@dataclass(frozen=True)
class Place:
    """Where on the earth the job lies."""

    crs: str = "EPSG:32632"
    x: float = 500_000.0
    y: float = 5_300_000.0
    cell: float = 5.0
    horizontal_unit: str = "metre"

    def wkt(self) -> str:
        return CRS.from_user_input(self.crs).to_wkt()

    def point(self, x: float, y: float) -> PlacedPoint:
        lon, lat = Transformer.from_crs(self.crs, "OGC:CRS84", always_xy=True).transform(x, y)
        return PlacedPoint(x, y, lon, lat)

    def at(self, across: float, along: float) -> tuple[float, float]:
        """Map position of a place in metres of the job (one cell is 5 m)."""
        return self.x + across / 5.0 * self.cell, self.y - along / 5.0 * self.cell


def ground_level(across):
    """A ridge with its top, 103.4 m, at 150 m from the west; lake bed to the west, valley to the east."""
    return np.interp(across, [0, 60, 150, 160, 300, 400], [95.0, 99.0, 103.4, 103.4, 92.0, 91.0])


def make_route(name: str, place: Place, bend: float, *, whole_dem: bool = True) -> Route:
    across = np.array([40.0, 150.0, 320.0])
    along = np.array([150.0, 150.0 - bend, 150.0])
    t = np.linspace(0.0, 2.0, 41)
    a, b = np.interp(t, [0, 1, 2], across), np.interp(t, [0, 1, 2], along)
    z = ground_level(a) + 0.002 * bend
    step = np.sqrt(np.diff(a) ** 2 + np.diff(b) ** 2 + np.diff(z) ** 2)
    x, y = place.at(a, b)
    chainage = np.concatenate([[0.0], np.cumsum(step)])
    straight = float(np.hypot(a[-1] - a[0], z[-1] - z[0]))
    text = f"No route is shorter than {straight:.1f} m; on the grid this one is the shortest under the ceiling."
    return Route(
        name,
        np.column_stack([b // 5, a // 5]).astype(np.intp),
        LineString(np.column_stack(place.at(across, along))),
        x,
        y,
        chainage,
        z,
        Proof(float(chainage[-1]) + 0.4, straight, 1.0275, whole_dem, 0.0605, 0.0606, text),
        underwater_length_m=12.5,
    )


def make_run(route: Route, crown, pipe: Pipe, discharge: float, levels: Levels, governs: str) -> SiphonRun:
    velocity = discharge / pipe.area_m2
    head = velocity**2 / (2 * G)
    factor = 0.015
    loss = (1.5 + factor * route.chainage_m / pipe.bore_m) * head
    pressure = LIMITS.air_pressure_pa + WATER.density_kgm3 * G * (levels.water_m - crown - loss)
    reserve = (pressure - WATER.vapour_pressure_pa) / (WATER.density_kgm3 * G) - LIMITS.reserve_m
    top, worst = int(np.argmax(crown)), int(np.argmin(reserve))
    fall = levels.fall_m
    whole_loss = 2.5 + factor * route.length_m / pipe.bore_m
    return SiphonRun(
        discharge,
        velocity,
        velocity * pipe.bore_m / WATER.kinematic_viscosity_m2s,
        factor if discharge > 0 else 0.0,
        governs,
        discharge if governs == "energy" else 1.4 * discharge,
        discharge if governs == "suction" else np.inf,
        fall / head - whole_loss if discharge > 0 else np.inf,
        float(crown[top]) - levels.water_m,
        fall,
        float(route.chainage_m[top]),
        float(route.chainage_m[worst]),
        pressure,
        float(reserve[worst]),
        97.8,
        "intake",
    )


def make_appraisal(
    route: Route, pipe: Pipe, largest: float, duty: float | None, governs: str, raised: float = 0.0
) -> Appraisal:
    crown = route.ground_m + pipe.outside_diameter_m + raised
    runs = [
        make_run(route, crown, pipe, q, levels, governs)
        for q, levels in (
            (largest, LOWEST),
            (largest if duty is None else min(duty, largest), LOWEST),
            (1.1 * largest, PRESENT),
        )
    ]
    return Appraisal(crown, *runs, duty, 180_000.0, float(np.min(runs[0].crown_pressure_pa)), 9.79, (210.0, 250.0))


def make_checks(grade: str, reserve: float) -> tuple[Check, ...]:
    source = "limit of the site file"
    return (
        Check("suction", "Crown pressure", grade, reserve, 0.0, "m", reserve, f"reserve left {reserve:.2f} m", source),
        Check("collapse", "Collapse of the pipe wall", "fit", 4.1, 2.0, "", 2.1, "2 times over", "thin-ring buckling"),
        Check(
            "free air", "Air drawn at the outlet", None, None, None, "", None, "not made: needs the outlet's shape", ""
        ),
    )


def make_scheme(rank: int, route: Route, pipe: Pipe, count: int, **options) -> Scheme:
    grade = options.get("grade", "caution")
    largest = options.get("largest", 0.0605)
    appraisal = make_appraisal(
        route, pipe, largest, options.get("duty", 0.05), options.get("governs", "suction"), options.get("raised", 0.0)
    )
    checks = make_checks(grade, appraisal.reserve_left_m)
    reason = options.get("reason", checks[0].reason)
    amount = round(route.length_m * count * 61.5, 2)
    lines = (
        CostLine("supply", route.length_m * count, "m", 61.5, amount),
        CostLine("fixed, each scheme", 1.0, "", 2500.0, 2500.0),
    )
    return Scheme(
        rank,
        route,
        pipe,
        count,
        appraisal,
        Cost(lines, amount + 2500.0, "EUR", "2026-01", invented=options.get("invented", True)),
        Verdict(grade, grade, checks[0], reason, checks),
    )


def make_pipes() -> tuple[Pipe, ...]:
    return (
        Pipe("PE 250 SDR 17", "PE 100", 0.250, 0.0155, 0.0148, 1e-5, modulus_pa=4e8, source="ISO 4427, recalled"),
        Pipe("PE 315 SDR 17", "PE 100", 0.315, 0.0196, 0.0187, 1e-5, modulus_pa=4e8, source="ISO 4427, recalled"),
        Pipe("steel 219.1 x 4", "steel", 0.2191, 0.004, 0.0036, 4.5e-5, modulus_pa=2.1e11, source="EN 10220, recalled"),
    )


def make_site(folder: Path, **changes) -> Site:
    site = Site(
        file=folder / "site.toml",
        title="Upper basin, blocked bottom outlet",
        terrain=TerrainAsk(folder / "dem.tif"),
        water=WaterAsk(100.0, 102.0),
        intake=IntakeAsk(PointAsk(x=1.0, y=2.0, key="intake", line=12)),
        outlet=OutletAsk(PointAsk(lon=9.0, lat=47.8, key="outlet", line=20)),
        pipes=make_pipes(),
        demand=DemandAsk(0.1, 60_000.0, 4),
        prices=PriceList("EUR", "2026-01", invented=True, fixed_per_scheme=2500.0),
        lines={"water.lowest_level_m": 7},
        sha256="a" * 64,
    )
    return replace(site, **changes)


def make_terrain(place: Place, folder: Path, **changes) -> Terrain:
    rows, cols = 60, 80
    z = np.tile(ground_level((np.arange(cols) + 0.5) * 5.0), (rows, 1))
    transform = (place.cell, 0.0, place.x, 0.0, -place.cell, place.y)
    facts = TerrainFacts(
        str(folder / "dem.tif"), "b" * 64, "GTiff", "float32", rows, cols, transform, place.wkt(),
        CRS.from_user_input(place.crs).name, place.horizontal_unit, "metre", "said by the site file", "EVRF2007",
        1.0, 0.0, -9999.0, 0.25, "ground", "surface", ASSUMPTIONS[:1],
    )  # fmt: skip
    ones = np.ones(rows)
    window = GridWindow(0, 0, rows, cols, rows, cols)
    return Terrain(z, z > 0, 5.0 * ones, 5.0 * ones, transform, window, replace(facts, **changes))


def make_water(place: Place, terrain: Terrain, **changes) -> WaterBody:
    (west, south), (east, north) = place.at(0.0, 300.0), place.at(80.0, 0.0)
    island = box(*place.at(20.0, 120.0), *place.at(30.0, 100.0))
    shore = box(west, south, east, north).difference(island)
    spill = Saddle(103.1, *place.at(152.5, 20.0), "outlet", proven=False)
    body = WaterBody(terrain.elevation_m < 100.0, 102.0, 23_800.0, shore, 8, True, False, spill, "level")
    return replace(body, **changes)


def make_crossings(place: Place) -> tuple[Crossing, ...]:
    used, closed = "a route over it was appraised", "no way on from it keeps to the limits"
    return (
        Crossing("C1", *place.at(152.5, 147.5), 103.4, 280.1, 3.4, True, used),
        Crossing("C2", *place.at(152.5, 92.5), 103.5, 305.7, 3.5, True, used),
        Crossing("C3", *place.at(152.5, 32.5), 104.1, 391.2, 4.1, False, closed),
    )


def make_samples(place: Place) -> tuple[Sample, ...]:
    """Three weights: a path 1 m too high, the path of R1, and one so long that the fall does not drive the duty."""
    straight, same, long_way = (
        make_route(*what) for what in (("R3", place, -20.0), ("R1", place, 0.0), ("R4", place, 90.0))
    )
    large = make_pipes()[1]
    high = make_appraisal(straight, large, 0.1213, 0.1, "suction")
    gamma = WATER.density_kgm3 * G
    lower = high.duty.reserve_left_m + 1.0
    duty = replace(
        high.duty, crown_pressure_pa=high.duty.crown_pressure_pa - lower * gamma, reserve_left_m=-1.0,
        lift_m=high.duty.lift_m + lower,
    )  # fmt: skip
    return (
        Sample(large.name, 0.0, straight, replace(high, duty=duty), 1.0, ""),
        Sample(large.name, 1.0, same, make_appraisal(same, large, 0.1213, 0.1, "energy"), -2.3, "R1"),
        Sample(large.name, 10.0, long_way, make_appraisal(long_way, large, 0.06, 0.1, "energy"), -1.0, ""),
    )


class Maker:
    """Builds plans and outlooks; each keyword changes one thing."""

    def __init__(self, folder: Path) -> None:
        self.folder = folder
        (folder / "site.toml").write_text("title = 'x'\n")

    def place(self, **options) -> Place:
        return Place(**options)

    def scheme(self, rank: int, route: Route, pipe: Pipe, count: int, **options) -> Scheme:
        return make_scheme(rank, route, pipe, count, **options)

    def route(self, name: str, place: Place, bend: float, **options) -> Route:
        return make_route(name, place, bend, **options)

    def setting(self, place: Place) -> Setting:
        return Setting(
            place.point(*place.at(40.0, 150.0)), place.point(*place.at(320.0, 150.0)), (30, 8), (30, 64), PRESENT,
            LOWEST, WATER, LIMITS, Losses(), 250.0, "standard atmosphere at 250 m", ASSUMPTIONS[1:],
        )  # fmt: skip

    def plan(self, place: Place | None = None, **changes) -> Plan:
        place = place or Place()
        terrain = make_terrain(place, self.folder)
        first, second = make_route("R1", place, 0.0), make_route("R2", place, 60.0, whole_dem=False)
        small, large, steel = make_pipes()
        schemes = (
            make_scheme(1, first, large, 1, largest=0.1213, duty=0.1, grade="fit", governs="energy"),
            make_scheme(2, first, small, 2),
            make_scheme(3, second, steel, 2, largest=0.055),
            make_scheme(
                4,
                second,
                small,
                1,
                largest=0.0,
                duty=0.1,
                grade="unfit",
                raised=4.2,
                reason="0.80 m of reserve missing",
            ),
        )
        plan = Plan(
            make_site(self.folder), terrain, make_water(place, terrain),
            Saddle(103.02, *place.at(152.5, 60.0), "outlet", proven=True), self.setting(place), schemes,
            (Shortfall("steel 168.3 x 4", 0.1, "energy", None, "the fall of 8.00 m carries 31 l/s at most"),),
            ASSUMPTIONS, ("the DEM's edge cuts the lake",), {"search": 0.31, "total": 0.5},
        )  # fmt: skip
        return replace(plan, **changes)

    def beside(self, place: Place | None = None, **changes) -> Plan:
        """A plan with crossings, candidates by weights and a choice of ends."""
        place = place or Place()
        plan = self.plan(place)
        over = {"R1": "C1", "R2": "C2"}
        schemes = tuple(replace(s, route=replace(s.route, crossing=over[s.route.name])) for s in plan.schemes)
        plan = replace(
            plan, schemes=schemes, crossings=make_crossings(place), samples=make_samples(place),
            crossings_note="2 of 3 places on the divide have a route",
            choice_notes=("The outlet was chosen among 41 places; the second best carries 110 l/s.",),
        )  # fmt: skip
        return replace(plan, **changes)

    def beside_no_route(self) -> Plan:
        """The same where no route is feasible: the one scheme left lacks 0.8 m."""
        plan = self.beside()
        dead = plan.schemes[3]
        largest = replace(dead.appraisal.largest, energy_discharge_m3s=0.13)
        duty = replace(dead.appraisal.duty, reserve_left_m=-0.8)
        dead = replace(dead, rank=1, appraisal=replace(dead.appraisal, largest=largest, duty=duty))
        samples = plan.samples[0], plan.samples[2]
        return replace(plan, schemes=(dead,), shortfalls=self.no_route().shortfalls, samples=samples)

    def no_route(self) -> Plan:
        plan = self.plan()
        shortfalls = (
            Shortfall("PE 250 SDR 17", 0.05, "suction", 1.347, "the ground is 1.35 m too high for 50 l/s"),
            Shortfall(
                "PE 315 SDR 17", 0.05, "suction", 0.912, "PE 315 SDR 17: the ground is too high by 0.92 m. " + HELP
            ),
            Shortfall("steel 219.1 x 4", 0.05, "cut off", None, "no ground with data joins intake and outlet"),
        )
        return replace(plan, schemes=plan.schemes[3:], shortfalls=shortfalls, lowest_crest=None)

    def antimeridian(self) -> Place:
        """A job of which the 180th meridian cuts the ridge (UTM 1 south, central meridian 177 W)."""
        x, y = Transformer.from_crs("OGC:CRS84", "EPSG:32701", always_xy=True).transform(180.0, -16.9)
        return Place("EPSG:32701", x - 70.0, y + 150.0)

    def degrees(self) -> Place:
        return Place("EPSG:4326", 9.0, 47.8, 5.0 / 90_000.0, "degree")

    def feet(self) -> Place:
        return Place("EPSG:2263", 985_000.0, 200_000.0, 5.0 / 0.3048006096, "US survey foot")

    def outlook(self, place: Place | None = None, **changes) -> Outlook:
        plan = self.plan(place)
        outlook = Outlook(
            plan.site, plan.terrain, plan.water_body, plan.lowest_crest, plan.setting, 0.0125, (91.0, 103.4), 102.0,
            ASSUMPTIONS, ("the lake reaches the edge of the DEM",),
        )  # fmt: skip
        return replace(outlook, **changes)


@pytest.fixture
def make(tmp_path) -> Maker:
    folder = tmp_path / "job"
    folder.mkdir()
    return Maker(folder)


@pytest.fixture
def plan(make) -> Plan:
    return make.plan()
