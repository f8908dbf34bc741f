"""One job on the bench: the records that the searches for every pipe share, and the routes found so far."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from routing.hydraulics import discharge_under, energy_discharge_m3s, suction_ceiling
from routing.planning.scenes import Scene
from routing.planning.zoning import route_line
from routing.records import GroundLine, Pipe, Profile, Proof, Route, Setting, Site
from routing.schemes import Conditions, crown_offset_m
from routing.search import Flow, Found, Job, Limitation, PathEdges, border_band, free_ratio
from routing.terrain import long_section


@dataclass(frozen=True, slots=True)
class Bench:
    """Site, ground and conditions of one job in one window."""

    site: Site
    scene: Scene
    setting: Setting
    tick: Callable[[int], None]
    names: dict[bytes, str] = field(default_factory=dict)

    @property
    def conditions(self) -> Conditions:
        """Levels, losses, water and limits."""
        setting = self.setting
        return Conditions(setting.present, setting.lowest, setting.losses, setting.water, setting.limits)

    @property
    def job(self) -> Job:
        """The search problem."""
        scene = self.scene
        band = border_band(scene.grid, scene.terrain.window.open_sides)
        return Job(scene.grid, scene.intake_cell, scene.outlet_cell, band, self.tick)

    def offset_m(self, pipe: Pipe) -> float:
        """Height of the crown above the ground."""
        return crown_offset_m(pipe, self.site.search.bed_offset_m)

    def section(self, path: PathEdges) -> GroundLine:
        """Return the sampled long section of a path."""
        return long_section(self.scene.terrain, path.cells)

    def profile(self, pipe: Pipe, line: GroundLine) -> Profile:
        """Return the long section of the crown of a pipe laid along a line."""
        return Profile(line.chainage_m, line.ground_m + self.offset_m(pipe))

    def limit_at(self, pipe: Pipe, discharge_m3s: float, stretch: float = 1.0) -> Limitation:
        """Return what a discharge means for the search.

        ``stretch`` is how much longer the sampled long section is than the path on the graph, which runs straight
        from centre to centre: lengths on the graph are judged as if stretched by it.
        """
        setting, offset = self.setting, self.offset_m(pipe)
        ceiling = suction_ceiling(pipe, setting.lowest, setting.losses, setting.water, setting.limits, discharge_m3s)
        return Limitation(
            ceiling_level_m=ceiling.level_m - offset,
            ceiling_gradient=ceiling.gradient * stretch,
            cap_level_m=ceiling.cap_m - offset,
            longest_m=ceiling.longest_m / stretch,
            rule=self.site.search.ground_rule,
            along=self.site.search.ground_rule == "bilinear",
        )

    def flow(self, pipe: Pipe) -> Flow:
        """Return the hydraulics of a pipe as the search asks for them."""
        setting, offset = self.setting, self.offset_m(pipe)
        rest = (setting.lowest, setting.losses, setting.water, setting.limits)
        return Flow(
            limit_at=lambda discharge: self.limit_at(pipe, discharge),
            carried_by=lambda path: discharge_under(
                pipe, *rest, path.at_length_m, path.at_level_m + offset, path.length_m
            ),
            carried_at_length=lambda length: energy_discharge_m3s(pipe, length, *rest),
        )

    def route(self, path: PathEdges, line: GroundLine, best: Found) -> Route:
        """Make a route of a path; the same path always gets the same name."""
        key = path.cells.tobytes()
        name = self.names.setdefault(key, f"R{len(self.names) + 1}")
        return Route(
            name=name,
            cells=path.cells,
            line=route_line(self.scene.terrain, self.scene.zones, path.cells, _corners(path.cells)),
            x=line.x,
            y=line.y,
            chainage_m=line.chainage_m,
            ground_m=line.ground_m,
            proof=self._proof(path, best),
        )

    def _proof(self, path: PathEdges, best: Found) -> Proof:
        straight = self.scene.grid.straight_m(self.scene.intake_cell, self.scene.outlet_cell)
        whole = best.proven_outside or self.scene.terrain.window.whole
        where = "on the whole DEM" if whole else "inside the part of the DEM that was read"
        ask = self.site.search
        rule = "bilinear ground" if ask.ground_rule == "bilinear" else "cells"
        bars = self.scene.zones is not None and self.scene.zones.blocked_moves.any()
        clear = " clear of the barred zones" if bars else ""
        text = (
            f"No path {where}{clear} ({ask.neighbours} neighbours, {rule}) carries more than "
            f"{best.high:.4g} m3/s in one pipe; the best found carries {best.low:.4g} by the same rule. "
            f"The path is {path.length_m:.1f} m long; no line of any kind is shorter than {straight:.1f} m."
        )
        return Proof(path.length_m, straight, free_ratio(self.scene.grid), whole, best.low, best.high, text)


def _corners(cells: NDArray[np.intp]) -> NDArray[np.intp]:
    """Drop the cells at which a path goes straight on."""
    steps = np.diff(cells, axis=0)
    turns = np.any(steps[1:] != steps[:-1], axis=1)
    kept: NDArray[np.intp] = cells[np.concatenate([[True], turns, [True]])]
    return kept
