"""What the site file leaves open, and what is taken in its place: told with every result."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from routing.records import Pipe
from routing.site.fields import number_text
from routing.site.models import AirModel, LimitsModel, LossesModel, PipeModel, SiteModel, WaterModel
from routing.site.pipes import DEFAULT_POISSON_RATIO


def list_assumptions(model: SiteModel, pipes: tuple[Pipe, ...]) -> tuple[str, ...]:
    """Say every default that was used and matters.

    Parameters
    ----------
    model
        The site file as checked.
    pipes
        Its pipes as built, in the same order.

    Returns
    -------
    tuple of str
        One sentence each.
    """
    parts = (_terrain(model), _air(model.air), _water(model.water), _intake(model), _outlet(model))
    rest = (_losses(model.losses), _limits(model.limits), _prices(model), _pipes(model, pipes), _zones(model))
    return tuple(sentence for part in (*parts, *rest) for sentence in part)


def _terrain(model: SiteModel) -> Iterator[str]:
    given = model.terrain.model_fields_set
    if model.terrain.surface == "unknown":
        yield "Whether the DEM shows bare ground or the top of trees is not stated (terrain.surface)."
    if model.terrain.vertical_error_90_m is None:
        yield "The vertical error of the DEM is not stated (terrain.vertical_error_90_m)."
    if "water_shown" not in given:
        yield "The DEM is taken to show the water's flat surface, not its bed (terrain.water_shown)."


def _air(air: AirModel) -> Iterator[str]:
    if "barometric_low_pa" not in air.model_fields_set:
        low = number_text(air.barometric_low_pa)
        yield f"{low} Pa are taken off the air pressure for bad weather (air.barometric_low_pa)."
    if air.pressure_pa is None and air.altitude_m is None:
        yield "Air pressure follows from the levels of the DEM, taken as heights above the sea (air.altitude_m)."


def _water(water: WaterModel) -> Iterator[str]:
    if water.present_level_m is None:
        yield "The present water level is read off the DEM at the intake (water.present_level_m)."
    if "temperature_c" not in water.model_fields_set:
        yield f"The water is taken to be at {number_text(water.temperature_c)} °C (water.temperature_c)."


def _intake(model: SiteModel) -> Iterator[str]:
    intake = model.intake
    if intake.kind == "point":
        return
    if model.terrain.water_shown == "surface":
        yield "The shore of the water that the DEM shows stands for the shore at the lowest level (intake.kind)."
    if intake.underwater_length_m is not None and intake.mouth_level_m is None:
        yield (
            "The pipe's crown at the intake mouth is taken to lie one outside diameter below the lowest level "
            "(intake.mouth_level_m)."
        )


def _outlet(model: SiteModel) -> Iterator[str]:
    outlet = model.outlet
    if outlet.level_m is None and outlet.height_above_ground_m is None:
        yield "The outlet's axis lies at ground level (outlet.height_above_ground_m)."
    if outlet.tailwater_level_m is None:
        yield "The outlet discharges freely; no water stands above its axis (outlet.tailwater_level_m)."


def _losses(losses: LossesModel) -> Iterator[str]:
    words = {
        "entrance": "the entrance",
        "exit": "the exit",
        "valve_open": "the open outlet valve",
        "bend_loss_per_km": "the bends of a kilometre",
    }
    for name, text in words.items():
        if name not in losses.model_fields_set:
            yield f"The loss of {text} is taken as K = {number_text(getattr(losses, name))} (losses.{name})."


def _limits(limits: LimitsModel) -> Iterator[str]:
    words = {
        "reserve_m": "A reserve of {} m of water is kept against boiling",
        "least_submergence_m": "The intake mouth stays at least {} m under water",
        "collapse_safety": "The factor of safety against collapse is {}",
        "pipe_load_hours": "Suction acts on the pipe for {} h in all",
    }
    for name, text in words.items():
        if name not in limits.model_fields_set:
            yield f"{text.format(number_text(getattr(limits, name)))} (limits.{name})."


def _prices(model: SiteModel) -> Iterator[str]:
    priced = any(pipe.supply_per_m is not None for pipe in model.pipes)
    if not priced:
        yield "No pipe has a price: costs are 0 and rank nothing (pipes.supply_per_m)."
        return
    if not model.prices.currency:
        yield "The currency of the prices is not stated (prices.currency)."
    if not model.prices.date:
        yield "The date of the prices is not stated (prices.date)."
    for name in ("laying_per_m", "fixed_each"):
        without = [str(number) for number, pipe in enumerate(model.pipes, start=1) if getattr(pipe, name) is None]
        if without:
            yield f"{_numbered('pipe', without)}: {name} is not given and counts as 0."


def _zones(model: SiteModel) -> Iterator[str]:
    barred = [str(number) for number, zone in enumerate(model.zones, start=1) if zone.kind == "barred"]
    if barred:
        yield f"{_numbered('zone', barred)}: barred as drawn, with no distance kept from the edge (zones.file)."
    if any(zone.kind == "cost" for zone in model.zones):
        if not any(pipe.laying_per_m for pipe in model.pipes):
            yield "No pipe has a price of laying, so cost zones change nothing (pipes.laying_per_m)."
        else:
            yield "A cost zone multiplies the price of laying there, not that of the pipe (zones.cost_factor)."


def _pipes(model: SiteModel, pipes: tuple[Pipe, ...]) -> Iterator[str]:
    """Say what was taken for the pipes, each thing once with the pipes that it holds for."""
    numbers: dict[str, list[str]] = {}
    for number, (asked, pipe) in enumerate(zip(model.pipes, pipes, strict=True), start=1):
        for sentence in _pipe(asked, pipe):
            numbers.setdefault(sentence, []).append(str(number))
    for sentence, holds in numbers.items():
        yield f"{_numbered('pipe', holds)}: {sentence}"


def _numbered(noun: str, numbers: Sequence[str]) -> str:
    """Return tables of the site file by their numbers: ``pipe 2``, ``pipes 1, 3``."""
    return f"{noun}{'s' if len(numbers) > 1 else ''} {', '.join(numbers)}"


def _pipe(asked: PipeModel, pipe: Pipe) -> Iterator[str]:
    own = asked.table is None
    if asked.ovality_pct is None:
        yield f"Out-of-roundness is taken as {number_text(pipe.ovality_pct)} % (ovality_pct)."
    if own and asked.least_wall_mm is None:
        yield "The thinnest wall is taken to be the mean wall (least_wall_mm)."
    if own and asked.modulus_mpa is None:
        yield "No modulus is given, so collapse cannot be checked (modulus_mpa)."
    if own and asked.poisson_ratio is None:
        yield f"Poisson's ratio is taken as {number_text(DEFAULT_POISSON_RATIO)} (poisson_ratio)."
    if asked.table == "ISO 4427" and asked.material is None:
        yield "The material is taken to be PE100 (material)."
