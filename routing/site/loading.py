"""The site file, read and checked into frozen records."""

from __future__ import annotations

import os
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from routing.errors import OvercrestError
from routing.records import (
    AirAsk,
    DemandAsk,
    IntakeAsk,
    LimitsAsk,
    Losses,
    OutletAsk,
    Pipe,
    PointAsk,
    PriceList,
    SearchAsk,
    Site,
    TerrainAsk,
    WaterAsk,
    ZoneAsk,
)
from routing.site.assumptions import list_assumptions
from routing.site.checks import check_across
from routing.site.draft import Draft
from routing.site.ledger import Ledger
from routing.site.lines import LineMap, map_lines
from routing.site.models import LimitsModel, PipeModel, PointModel, SiteModel, WaterModel
from routing.site.pipes import PipeSetting, build_pipe, check_names, check_pipe
from routing.site.reading import SiteText, read_site_text
from routing.site.refusals import note_refusals


def load_site(path: str | os.PathLike[str]) -> Site:
    """Read a site file and check all that can be checked without opening the DEM.

    Parameters
    ----------
    path
        The site file, TOML. Paths in it are relative to its folder.

    Returns
    -------
    Site
        The job in SI units, every default told in ``assumptions``.

    Raises
    ------
    SiteError
        With every problem found, each with file, key, line, what was found, what is allowed and what to do.
    """
    file = Path(path)
    read = read_site_text(file)
    lines = map_lines(read.text)
    ledger = Ledger(str(file), lines)
    model = _validate(read.tables, ledger)
    refused = {problem.key for problem in ledger.problems if problem.key}
    draft = Draft(read.tables, refused, file.parent)
    check_across(draft, ledger)
    pipes = _build_pipes(read.tables, draft, ledger)
    ledger.close()
    if model is None:
        raise OvercrestError(f"{file}: the site file was refused, but no reason was noted; please report this")
    return _to_site(file, model, pipes, read, lines)


def _validate(tables: dict[str, Any], ledger: Ledger) -> SiteModel | None:
    try:
        return SiteModel.model_validate(tables)
    except ValidationError as error:
        note_refusals(error, ledger)
        return None


def _build_pipes(tables: dict[str, Any], draft: Draft, ledger: Ledger) -> tuple[Pipe, ...]:
    """Check and build the pipes that can be judged, also where the rest of the file is wrong."""
    temperature, hours = draft.number("water.temperature_c"), draft.number("limits.pipe_load_hours")
    setting = PipeSetting(
        WaterModel.model_fields["temperature_c"].default if temperature is None else temperature,
        LimitsModel.model_fields["pipe_load_hours"].default if hours is None else hours,
    )
    built: dict[str, Pipe] = {}
    for prefix in draft.pipes():
        entry = tables["pipes"][int(prefix[len("pipes[") : -1]) - 1]
        try:
            model = PipeModel.model_validate(entry)
        except ValidationError:
            continue  # told already, key by key
        before = len(ledger.problems)
        check_pipe(prefix, model, ledger)
        pipe = build_pipe(prefix, model, setting, ledger) if len(ledger.problems) == before else None
        if pipe is not None:
            built[prefix] = pipe
    check_names({prefix: pipe.name for prefix, pipe in built.items()}, ledger)
    return tuple(built.values())


def _to_site(file: Path, model: SiteModel, pipes: tuple[Pipe, ...], read: SiteText, lines: LineMap) -> Site:
    folder = file.parent.resolve()
    return Site(
        file=folder / file.name,
        title=model.title or folder.name or file.stem,
        terrain=_terrain(model, folder),
        water=_water(model, folder),
        intake=_intake(model, folder, lines),
        outlet=_outlet(model, folder, lines),
        pipes=pipes,
        air=AirAsk(**model.air.model_dump()),
        losses=_losses(model),
        limits=LimitsAsk(**model.limits.model_dump()),
        demand=DemandAsk(**model.demand.model_dump()),
        prices=PriceList(**model.prices.model_dump()),
        search=SearchAsk(**model.search.model_dump()),
        lines=dict(lines.keys),
        zones=_zones(model, folder, lines),
        sha256=read.sha256,
        assumptions=list_assumptions(model, pipes),
    )


def _terrain(model: SiteModel, folder: Path) -> TerrainAsk:
    asked = model.terrain
    return TerrainAsk(
        file=folder / asked.file,
        band=asked.band,
        vertical_unit=asked.vertical_unit,
        vertical_datum=asked.vertical_datum,
        datum_offset_m=asked.datum_offset_m,
        vertical_error_m=asked.vertical_error_90_m,
        surface=asked.surface,
        water_shown=asked.water_shown,
    )


def _water(model: SiteModel, folder: Path) -> WaterAsk:
    asked = model.water
    return WaterAsk(
        lowest_level_m=asked.lowest_level_m,
        present_level_m=asked.present_level_m,
        temperature_c=asked.temperature_c,
        polygon_file=_path(asked.polygon_file, folder),
        polygon_layer=asked.polygon_layer,
    )


def _path(text: str | None, folder: Path) -> Path | None:
    return None if text is None else folder / text


def _point(section: str, asked: PointModel, folder: Path, lines: LineMap) -> PointAsk:
    given = next((name for name in ("x", "lon", "file") if getattr(asked, name) is not None), "kind")
    return PointAsk(
        x=asked.x,
        y=asked.y,
        lon=asked.lon,
        lat=asked.lat,
        file=_path(asked.file, folder),
        layer=asked.layer,
        key=f"{section}.{given}",
        line=lines.find(f"{section}.{given}"),
    )


def _intake(model: SiteModel, folder: Path, lines: LineMap) -> IntakeAsk:
    asked = model.intake
    return IntakeAsk(
        at=_point("intake", asked, folder, lines),
        mouth_level_m=asked.mouth_level_m,
        kind=asked.kind,
        underwater_length_m=asked.underwater_length_m,
    )


def _outlet(model: SiteModel, folder: Path, lines: LineMap) -> OutletAsk:
    asked = model.outlet
    return OutletAsk(
        at=_point("outlet", asked, folder, lines),
        level_m=asked.level_m,
        height_above_ground_m=0.0 if asked.height_above_ground_m is None else asked.height_above_ground_m,
        tailwater_level_m=asked.tailwater_level_m,
        kind=asked.kind,
        beyond_toe_m=asked.beyond_toe_m,
    )


def _zones(model: SiteModel, folder: Path, lines: LineMap) -> tuple[ZoneAsk, ...]:
    return tuple(
        ZoneAsk(
            name=asked.name,
            file=folder / asked.file,
            layer=asked.layer,
            kind=asked.kind,
            cost_factor=1.0 if asked.cost_factor is None else asked.cost_factor,
            key=f"zones[{number}].file",
            line=lines.find(f"zones[{number}].file"),
        )
        for number, asked in enumerate(model.zones, start=1)
    )


def _losses(model: SiteModel) -> Losses:
    asked = model.losses
    return Losses(
        entrance=asked.entrance,
        exit=asked.exit,
        valve_open=asked.valve_open,
        bends_per_m=asked.bend_loss_per_km / 1000.0,
    )
