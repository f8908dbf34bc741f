"""Checks across several keys: all that can be checked without opening the DEM."""

from __future__ import annotations

import difflib
from pathlib import Path

from routing.site.choices import check_choices, has_point
from routing.site.draft import Draft
from routing.site.fields import number_text, value_text
from routing.site.ledger import Ledger
from routing.site.points import check_ends, check_point
from routing.site.zones import check_zones

_FILE_KEYS = ("terrain.file", "water.polygon_file", "intake.file", "outlet.file")
_PRICE_KEYS = ("supply_per_m", "laying_per_m", "fixed_each")


def check_across(draft: Draft, ledger: Ledger) -> None:
    """Run every check that concerns more than one key, or the disk.

    Parameters
    ----------
    draft
        The values that can be used.
    ledger
        Takes the problems.
    """
    for key in (*_FILE_KEYS, *(f"{zone}.file" for zone in draft.zones())):
        _check_file(key, draft, ledger)
    for section in ("intake", "outlet"):
        if section in draft.sections and has_point(section, draft):
            check_point(section, draft, ledger)
    check_ends(draft, ledger)
    check_choices(draft, ledger)
    _check_air(draft, ledger)
    _check_water(draft, ledger)
    _check_mouth(draft, ledger)
    _check_outlet(draft, ledger)
    _check_prices(draft, ledger)
    check_zones(draft, ledger)


def _metres(value: float) -> str:
    return f"{number_text(value)} m"


def _check_file(key: str, draft: Draft, ledger: Ledger) -> None:
    path = draft.path(key)
    if path is None:
        return
    found = value_text(draft.text(key))
    allowed = "a file, its path relative to the folder of the site file"
    if path.is_dir():
        ledger.add(key, "this is a folder, not a file", found=found, allowed=allowed, remedy="name the file in it")
    elif not path.is_file():
        remedy = _missing_file_remedy(path, draft.folder)
        ledger.add(
            key, "there is no such file", found=f"{found} (sought as {path.absolute()})", allowed=allowed, remedy=remedy
        )


def _missing_file_remedy(path: Path, folder: Path) -> str:
    turned = Path(str(path).replace("\\", "/"))
    if turned.is_file():
        return f'write the path with forward slashes: "{str(path.relative_to(folder)).replace(chr(92), "/")}"'
    if path.parent.is_dir():
        names = sorted(entry.name for entry in path.parent.iterdir() if entry.is_file())
        near = difflib.get_close_matches(path.name, names, n=1, cutoff=0.6)
        if near:
            return f"did you mean '{near[0]}'?"
    return "put the file there, or correct the path"


def _check_air(draft: Draft, ledger: Ledger) -> None:
    pressure, altitude = draft.number("air.pressure_pa"), draft.number("air.altitude_m")
    if pressure is not None and altitude is not None:
        ledger.add(
            "air.altitude_m",
            "air pressure and altitude are both given",
            found=f"pressure_pa = {number_text(pressure)}, altitude_m = {number_text(altitude)}",
            allowed="one of pressure_pa and altitude_m, or neither",
            remedy="keep the measured pressure and remove altitude_m, or the other way round",
        )


def _check_water(draft: Draft, ledger: Ledger) -> None:
    present, lowest = draft.number("water.present_level_m"), draft.number("water.lowest_level_m")
    if present is not None and lowest is not None and lowest > present:
        ledger.add(
            "water.lowest_level_m",
            "the lowest level is above the present level",
            found=_metres(lowest),
            allowed=f"at most {_metres(present)}, the present level",
            remedy="lower lowest_level_m, or raise present_level_m; both count in the datum of the DEM",
        )
    for section, layer, file in (
        ("water", "polygon_layer", "polygon_file"),
        ("intake", "layer", "file"),
        ("outlet", "layer", "file"),
    ):
        name = draft.text(f"{section}.{layer}")
        if name and section in draft.sections and not draft.given(f"{section}.{file}"):
            ledger.add(
                f"{section}.{layer}",
                "a layer is named, but no file",
                found=value_text(name),
                allowed=f"{layer} together with {file}",
                remedy=f"add '{file} = \"...\"', or remove {layer}",
            )


def _check_mouth(draft: Draft, ledger: Ledger) -> None:
    key = "intake.mouth_level_m"
    if "intake" not in draft.sections or ledger.names(key):
        return
    mouth, lowest = draft.number(key), draft.number("water.lowest_level_m")
    depth = draft.number("limits.least_submergence_m")
    if mouth is None:
        at_point = draft.text("intake.kind") == "point"
        if at_point and draft.text("terrain.water_shown") == "surface" and "terrain" in draft.sections:
            ledger.add(
                key,
                "the level of the intake mouth is not given, and the DEM shows the water's surface, not its bed",
                found='terrain.water_shown = "surface"',
                allowed="a level in metres, below the lowest water level less the least submergence",
                remedy=ledger.lift_comment(key, "...") + ', or set terrain.water_shown = "bed" if the DEM shows it',
            )
        return
    if lowest is None or depth is None or mouth <= lowest - depth:
        return
    ledger.add(
        key,
        "the intake mouth is too high for the lowest water level",
        found=_metres(mouth),
        allowed=f"at most {_metres(lowest - depth)}: lowest level {_metres(lowest)} less submergence {_metres(depth)}",
        remedy="set the mouth lower, raise water.lowest_level_m, or give a smaller limits.least_submergence_m",
    )


def _check_outlet(draft: Draft, ledger: Ledger) -> None:
    if "outlet" not in draft.sections:
        return
    level, height = draft.number("outlet.level_m"), draft.number("outlet.height_above_ground_m")
    if level is not None and height is not None:
        ledger.add(
            "outlet.height_above_ground_m",
            "the outlet's level is given twice",
            found=f"level_m = {number_text(level)}, height_above_ground_m = {number_text(height)}",
            allowed="one of level_m and height_above_ground_m",
            remedy="remove one of the two",
        )
    lowest = draft.number("water.lowest_level_m")
    for name, what in (("level_m", "the outlet"), ("tailwater_level_m", "the water outside the outlet")):
        found = draft.number(f"outlet.{name}")
        if found is not None and lowest is not None and found >= lowest:
            ledger.add(
                f"outlet.{name}",
                f"{what} is not below the lowest water level, so nothing would flow there",
                found=_metres(found),
                allowed=f"below {_metres(lowest)}, the lowest level",
                remedy="choose a lower outlet, or raise water.lowest_level_m; both count in the datum of the DEM",
            )


def _check_prices(draft: Draft, ledger: Ledger) -> None:
    priced = [p for p in draft.pipes() if any(draft.given(f"{p}.{name}") for name in _PRICE_KEYS)]
    budget = draft.number("demand.budget")
    if budget is not None and draft.pipes() and not priced:
        ledger.add(
            "demand.budget",
            "a budget is set, but no pipe has a price",
            found=number_text(budget),
            allowed="a budget together with prices of the pipes",
            remedy="add supply_per_m and laying_per_m to each of the [[pipes]], or remove the budget",
        )
    if not priced:
        return
    for prefix in draft.pipes():
        key = f"{prefix}.supply_per_m"
        if not draft.given(key) and not ledger.names(key):
            ledger.add(
                key,
                "this pipe has no price, while others have: it would look the cheapest",
                allowed="a price a metre for every pipe, or for none",
                remedy=ledger.lift_comment(key, "...") + " (0 if you own the pipe)",
            )
