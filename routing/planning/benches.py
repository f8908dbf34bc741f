"""One job on the bench: the records that the searches for every pipe share, and the routes found so far."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field, replace

import numpy as np
from numpy.typing import NDArray

from routing.hydraulics import discharge_under, energy_discharge_m3s, suction_ceiling
from routing.planning.open_ends import axis_m, join_ends, mouth_m
from routing.planning.scenes import Scene
from routing.planning.zoning import route_line
from routing.records import GroundLine, Levels, Pipe, Profile, Proof, Route, Setting, Site
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
    def reference(self) -> Levels:
        """Levels at the lowest water and the lowest of the outlets: what limits of the search count from."""
        outlets = self.scene.outlets
        return self.setting.lowest if outlets is None else self._levels(self.setting.lowest, outlets.lowest)

    def _levels(self, levels: Levels, outlet: tuple[int, int]) -> Levels:
        """Return levels with the outlet at a cell, where it was left open."""
        if self.scene.outlets is None:
            return levels
        axis = axis_m(self.site, self.scene.terrain, np.array([outlet], dtype=np.intp))
        return replace(levels, outlet_m=float(axis[0]))

    def conditions_at(self, cells: NDArray[np.intp]) -> Conditions:
        """Return levels, losses, water and limits of a path, with the intake and the outlet that it ends at."""
        setting = self.setting
        intake, outlet = (int(cells[0, 0]), int(cells[0, 1])), (int(cells[-1, 0]), int(cells[-1, 1]))
        mouth = mouth_m(self.site, self.scene.terrain, self.scene.intakes, intake, setting.lowest.intake_mouth_m)
        present, lowest = (
            replace(self._levels(levels, outlet), intake_mouth_m=mouth) for levels in (setting.present, setting.lowest)
        )
        return Conditions(present, lowest, setting.losses, setting.water, setting.limits)

    @property
    def job(self) -> Job:
        """The search problem."""
        scene = self.scene
        band = border_band(scene.grid, scene.terrain.window.open_sides)
        ends = (scene.intake_cell, scene.outlet_cell)
        open_ends = join_ends(scene.intakes, scene.outlets, ends, self.setting.lowest.tailwater_m)
        return Job(scene.grid, *ends, band, self.tick, open_ends)

    def offset_m(self, pipe: Pipe) -> float:
        """Height of the crown above the ground."""
        return crown_offset_m(pipe, self.site.search.bed_offset_m)

    def section(self, path: PathEdges) -> GroundLine:
        """Return the sampled long section of a path, from the mouth on where a length of pipe lies before its shore.

        The mouth's place on the map is not known: it is told at that of the shore.
        """
        line = long_section(self.scene.terrain, path.cells)
        if path.start_length_m <= 0.0:
            return line
        largest = max(self.site.pipes, key=lambda pipe: pipe.outside_diameter_m)
        mouth = self.site.intake.mouth_level_m
        crown = self.setting.lowest.water_m - largest.outside_diameter_m if mouth is None else mouth
        return GroundLine(
            x=np.append(line.x[:1], line.x),
            y=np.append(line.y[:1], line.y),
            chainage_m=np.append(0.0, line.chainage_m + path.start_length_m),
            ground_m=np.append(crown - self.offset_m(largest), line.ground_m),
        )

    def profile(self, pipe: Pipe, line: GroundLine) -> Profile:
        """Return the long section of the crown of a pipe laid along a line."""
        return Profile(line.chainage_m, line.ground_m + self.offset_m(pipe))

    def limit_at(self, pipe: Pipe, discharge_m3s: float, stretch: float = 1.0) -> Limitation:
        """Return what a discharge means for the search.

        ``stretch`` is how much longer the sampled long section is than the path on the graph, which runs straight
        from centre to centre: lengths on the graph are judged as if stretched by it.
        """
        setting, offset = self.setting, self.offset_m(pipe)
        ceiling = suction_ceiling(pipe, self.reference, setting.losses, setting.water, setting.limits, discharge_m3s)
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
        rest = (setting.losses, setting.water, setting.limits)

        def carried_by(path: PathEdges) -> float:
            row, col = path.cells[-1]
            lowest = self._levels(setting.lowest, (int(row), int(col)))
            return discharge_under(pipe, lowest, *rest, path.at_length_m, path.at_level_m + offset, path.length_m)

        return Flow(
            limit_at=lambda discharge: self.limit_at(pipe, discharge),
            carried_by=carried_by,
            carried_at_length=lambda length: energy_discharge_m3s(pipe, length, self.reference, *rest),
        )

    def route(self, path: PathEdges, line: GroundLine, best: Found, claim: str = "") -> Route:
        """Make a route of a path; the same path always gets the same name.

        ``claim`` is what else is proven of it, as a sentence.
        """
        key = path.cells.tobytes()
        name = self.names.setdefault(key, f"R{len(self.names) + 1}")
        levels = self.conditions_at(path.cells).lowest
        return Route(
            name=name,
            cells=path.cells,
            line=route_line(self.scene.terrain, self.scene.zones, path.cells, _corners(path.cells)),
            x=line.x,
            y=line.y,
            chainage_m=line.chainage_m,
            ground_m=line.ground_m,
            proof=self._proof(path, best, claim),
            outlet_m=levels.outlet_m,
            mouth_m=levels.intake_mouth_m,
            underwater_length_m=self._underwater_m(path, line),
        )

    def _underwater_m(self, path: PathEdges, line: GroundLine) -> float | None:
        """Return the length of pipe from the mouth to the shore; ``None`` where the intake is a point."""
        places = self.scene.intakes
        if places is None:
            return None
        if not places.measured:
            return path.start_length_m
        above = np.flatnonzero(line.ground_m > self.setting.lowest.water_m)
        if above.size == 0 or above[0] == 0:
            return 0.0 if above.size else float(line.chainage_m[-1])
        ends = slice(above[0] - 1, above[0] + 1)
        return float(np.interp(self.setting.lowest.water_m, line.ground_m[ends], line.chainage_m[ends]))

    def _proof(self, path: PathEdges, best: Found, claim: str) -> Proof:
        scene, start = self.scene, path.start_length_m
        first, last = ((int(row), int(col)) for row, col in path.cells[[0, -1]])
        straight = start + scene.grid.straight_m(first, last)
        more = scene.outlets is not None and scene.outlets.more_outside  # they may be lower than any that was read
        whole = (best.proven_outside and not more) or scene.terrain.window.whole
        where = "on the whole DEM" if whole else "inside the part of the DEM that was read"
        ask = self.site.search
        rule = "bilinear ground" if ask.ground_rule == "bilinear" else "cells"
        bars = self.scene.zones is not None and self.scene.zones.blocked_moves.any()
        clear = " clear of the barred zones" if bars else ""
        clear += ", from any intake" * (scene.intakes is not None) + ", to any outlet" * (scene.outlets is not None)
        ends = "" if scene.intakes is None and scene.outlets is None else " between its ends"
        text = (
            f"No path {where}{clear} ({ask.neighbours} neighbours, {rule}) carries more than "
            f"{best.high:.4g} m3/s in one pipe; the best found carries {best.low:.4g} by the same rule. "
            f"On the grid its path is {path.length_m:,.1f} m long; "
            f"no line of any kind{ends} is shorter than {straight:,.1f} m."
        )
        text = f"{text} {claim}".rstrip()
        return Proof(path.length_m, straight, free_ratio(self.scene.grid), whole, best.low, best.high, text)


def _corners(cells: NDArray[np.intp]) -> NDArray[np.intp]:
    """Drop the cells at which a path goes straight on."""
    steps = np.diff(cells, axis=0)
    turns = np.any(steps[1:] != steps[:-1], axis=1)
    kept: NDArray[np.intp] = cells[np.concatenate([[True], turns, [True]])]
    return kept
