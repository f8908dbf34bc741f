"""Why there is no route, where barred zones have a part in it."""

from __future__ import annotations

from dataclasses import replace

from routing.planning.benches import Bench
from routing.planning.grids import make_grid
from routing.planning.zoning import names_met, route_line
from routing.records import Pipe, Shortfall
from routing.search import least_raise

# Less than this of a raise is no difference worth telling.
_TELLING_M = 0.01


def with_bars_told(bench: Bench, pipe: Pipe, shortfall: Shortfall | None) -> Shortfall | None:
    """Say in a shortfall what the barred zones have to do with it: they close every way, or the low ones.

    Parameters
    ----------
    bench
        The job that the shortfall was found for.
    pipe
        The pipe that it was found for.
    """
    zones = bench.scene.zones
    if shortfall is None or shortfall.cause == "energy" or zones is None or not zones.blocked_moves.any():
        return shortfall
    open_scene = replace(bench.scene, grid=make_grid(bench.site, bench.scene.terrain))
    limitation = bench.limit_at(pipe, shortfall.duty_m3s or 0.0)
    if shortfall.cause == "cut off" or limitation.longest_m <= 0.0:
        limitation = bench.limit_at(pipe, 0.0)
    free = least_raise(replace(bench, scene=open_scene).job, limitation)
    if free.path is None:
        return shortfall
    names = ", ".join(names_met(zones.zones, route_line(open_scene.terrain, None, free.path.cells, free.path.cells)))
    if shortfall.cause == "cut off":
        text = (
            f"{pipe.name}: barred zones close every way between intake and outlet; the best without them runs through "
            f"{names}. What would help: a gap in the zone, leave to cross it, or another intake or outlet."
        )
        return replace(shortfall, text=text)
    need = max(free.high, 0.0)
    if shortfall.raise_m is None or shortfall.raise_m - need <= _TELLING_M:
        return shortfall
    without = f"only {need:.2f} m too high" if need > 0.0 else "low enough"
    return replace(
        shortfall, text=f"{shortfall.text} Through the barred zones ({names}) the ground would be {without}."
    )
