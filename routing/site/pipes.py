"""Pipes of the site file turned into pipe records: by the tables of ``routing.hydraulics``, or by own dimensions."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

from routing.errors import InputError, Problem
from routing.hydraulics import pe_pipe, steel_pipe, table_names
from routing.records import Pipe, PipePrices
from routing.site.fields import number_text, value_text
from routing.site.ledger import Ledger
from routing.site.models import PipeModel

#: Out-of-roundness where nothing is known: upper end of what laid plastic pipe is usually allowed (common practice).
DEFAULT_OVALITY_PCT = 3.0
#: Poisson's ratio where nothing is known: that of steel; it enters collapse as 1 - ratio squared.
DEFAULT_POISSON_RATIO = 0.3

#: For each way of giving a pipe: keys that must be there, keys that must not.
_NEEDS = {"ISO 4427": ("sdr",), "EN 10220": ("wall_mm",), None: ("wall_mm",)}
_REFUSES = {"ISO 4427": ("wall_mm", "least_wall_mm"), "EN 10220": ("sdr", "least_wall_mm", "material"), None: ("sdr",)}
_SIZE_KEYS = ("sdr", "wall_mm", "outside_diameter_mm")


@dataclass(frozen=True, slots=True)
class PipeSetting:
    """What the properties of a plastic wall depend on."""

    temperature_c: float
    load_hours: float


def check_pipe(prefix: str, model: PipeModel, ledger: Ledger) -> None:
    """Check the keys of a pipe against each other.

    Parameters
    ----------
    prefix
        Dotted key of the pipe, ``pipes[2]``.
    model
        The pipe as the file has it, each key good by itself.
    ledger
        Takes the problems.
    """
    way = f'table = "{model.table}"' if model.table else "no table (own dimensions)"
    for name in _NEEDS[model.table]:
        if getattr(model, name) is None:
            ledger.add(
                f"{prefix}.{name}",
                f"{name} is missing, which a pipe with {way} needs",
                found=_shown(model),
                allowed=_way_text(),
                remedy=ledger.lift_comment(f"{prefix}.{name}", "..."),
            )
    for name in _REFUSES[model.table]:
        value = getattr(model, name)
        if value is not None:
            ledger.add(
                f"{prefix}.{name}",
                f"{name} does not go with {way}",
                found=f"{name} = {value_text(value)}",
                allowed=_way_text(),
                remedy=_stray_remedy(name, model),
            )
    _check_material(prefix, model, ledger)
    _check_friction(prefix, model, ledger)
    _check_walls(prefix, model, ledger)


def _stray_remedy(name: str, model: PipeModel) -> str:
    if model.table is None:
        return f"add 'table = \"ISO 4427\"' if this is a PE pipe by that standard, or remove {name}"
    return f"remove {name}: the table gives it"


def _check_material(prefix: str, model: PipeModel, ledger: Ledger) -> None:
    plastics = [name for name in table_names() if name.startswith("PE")]
    if model.table == "ISO 4427" and model.material is not None and model.material not in plastics:
        ledger.add(
            f"{prefix}.material",
            "the table has no such material",
            found=value_text(model.material),
            allowed=" or ".join(value_text(name) for name in plastics),
            remedy="write one of the two, or leave 'table' out and give the dimensions",
        )


def _way_text() -> str:
    return (
        'table = "ISO 4427" with outside_diameter_mm and sdr; table = "EN 10220" with outside_diameter_mm and wall_mm; '
        "or no table, with outside_diameter_mm, wall_mm and roughness_mm (or darcy_factor)"
    )


def _shown(model: PipeModel) -> str:
    return ", ".join(f"{name} = {value_text(value)}" for name, value in model.model_dump(exclude_none=True).items())


def _check_friction(prefix: str, model: PipeModel, ledger: Ledger) -> None:
    both = model.roughness_mm is not None and model.darcy_factor is not None
    none = model.roughness_mm is None and model.darcy_factor is None
    if both:
        ledger.add(
            f"{prefix}.darcy_factor",
            "roughness and a fixed friction factor are both given",
            found=f"roughness_mm = {number_text(model.roughness_mm or 0.0)}, "
            f"darcy_factor = {number_text(model.darcy_factor or 0.0)}",
            allowed="one of roughness_mm and darcy_factor",
            remedy="remove one of the two",
        )
    elif none and model.table is None:
        ledger.add(
            f"{prefix}.roughness_mm",
            "the friction of this pipe is not given",
            found=_shown(model),
            allowed="roughness_mm (0 to 20 mm) or darcy_factor (0.004 to 0.2)",
            remedy=ledger.lift_comment(f"{prefix}.roughness_mm", "..."),
        )


def _check_walls(prefix: str, model: PipeModel, ledger: Ledger) -> None:
    outside, wall, least = model.outside_diameter_mm, model.wall_mm, model.least_wall_mm
    if wall is not None and 2.0 * wall >= outside:
        ledger.add(
            f"{prefix}.wall_mm",
            "the wall leaves no bore",
            found=f"{number_text(wall)} mm",
            allowed=f"below {number_text(outside / 2.0)} mm, half the outside diameter",
            remedy="correct wall_mm or outside_diameter_mm",
        )
    if wall is not None and least is not None and least > wall:
        ledger.add(
            f"{prefix}.least_wall_mm",
            "the thinnest wall is thicker than the mean wall",
            found=f"{number_text(least)} mm",
            allowed=f"at most {number_text(wall)} mm, the mean wall",
            remedy="correct least_wall_mm or wall_mm",
        )


def build_pipe(prefix: str, model: PipeModel, setting: PipeSetting, ledger: Ledger) -> Pipe | None:
    """Turn a checked pipe into a record.

    Parameters
    ----------
    prefix, model, ledger
        As for :func:`check_pipe`.
    setting
        Temperature and load duration of the job.

    Returns
    -------
    Pipe or None
        ``None`` where the table refuses the size; the reason is then in the ledger.
    """
    try:
        pipe = _own_pipe(model) if model.table is None else _table_pipe(model, setting)
    except InputError as error:
        for problem in error.problems:
            _note_table(prefix, model, problem, ledger)
        return None
    return replace(pipe, **_overrides(model), prices=_prices(model))


def _table_pipe(model: PipeModel, setting: PipeSetting) -> Pipe:
    if model.table == "EN 10220":
        return steel_pipe(model.outside_diameter_mm, model.wall_mm or 0.0)
    return pe_pipe(
        model.outside_diameter_mm,
        model.sdr or 0.0,
        model.material or "PE100",
        temperature_c=setting.temperature_c,
        load_hours=setting.load_hours,
    )


def _own_pipe(model: PipeModel) -> Pipe:
    wall = model.wall_mm or 0.0
    material = model.material or "own"
    return Pipe(
        name=f"{material} {number_text(model.outside_diameter_mm)} x {number_text(wall)} mm",
        material=material,
        outside_diameter_m=model.outside_diameter_mm / 1000.0,
        wall_m=wall / 1000.0,
        least_wall_m=(wall if model.least_wall_mm is None else model.least_wall_mm) / 1000.0,
        roughness_m=0.0,
        poisson_ratio=DEFAULT_POISSON_RATIO,
        ovality_pct=DEFAULT_OVALITY_PCT,
        source="own dimensions in the site file",
    )


def _overrides(model: PipeModel) -> dict[str, Any]:
    """Return the fields that the file sets whatever the table says."""
    wanted = {
        "name": model.name,
        "roughness_m": None if model.roughness_mm is None else model.roughness_mm / 1000.0,
        "darcy_factor": model.darcy_factor,
        "modulus_pa": None if model.modulus_mpa is None else model.modulus_mpa * 1e6,
        "poisson_ratio": model.poisson_ratio,
        "ovality_pct": model.ovality_pct,
    }
    return {name: value for name, value in wanted.items() if value is not None}


def _prices(model: PipeModel) -> PipePrices:
    return PipePrices(model.supply_per_m or 0.0, model.laying_per_m or 0.0, model.fixed_each or 0.0)


def _note_table(prefix: str, model: PipeModel, problem: Problem, ledger: Ledger) -> None:
    """Give a refusal of the pipe tables its place in the site file."""
    said = (problem.key or "", problem.what, problem.found)
    name = next((key for text in said for key in _SIZE_KEYS if _mentions(text, key)), "outside_diameter_mm")
    ledger.add(
        f"{prefix}.{name}",
        problem.what,
        found=problem.found or _shown(model),
        allowed=problem.allowed or f"a size of {model.table}",
        remedy=problem.remedy or "choose a size of the table, or leave 'table' out and give the dimensions",
    )


def _mentions(text: str, key: str) -> bool:
    plain = key.removesuffix("_mm").replace("_", " ")
    return plain in text.lower().replace("_", " ")


def check_names(names: dict[str, str], ledger: Ledger) -> None:
    """Check that no two pipes bear one name.

    Parameters
    ----------
    names
        Name by dotted prefix, in the order of the file.
    ledger
        Takes the problems.
    """
    first: dict[str, str] = {}
    for prefix, name in names.items():
        if name not in first:
            first[name] = prefix
            continue
        key = f"{prefix}.name" if ledger.lines.keys.get(f"{prefix}.name") else prefix
        ledger.add(
            key,
            "two pipes have the same name",
            found=f"{value_text(name)}, also the name of {first[name]}",
            allowed="a name of its own for each pipe",
            remedy="give one of them another 'name', or remove it if it is there twice",
        )
