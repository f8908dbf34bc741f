"""One siphon at one state of levels: checked records, and what follows from them before any flow is known."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from routing.hydraulics.checking import check_records
from routing.hydraulics.flow import Conduit
from routing.records import FloatArray, Levels, Limits, Losses, Pipe, Water


@dataclass(frozen=True, slots=True)
class Case:
    """Checked records of one siphon. Made by :meth:`of`, which is the only door."""

    conduit: Conduit
    levels: Levels
    losses: Losses
    water: Water
    limits: Limits

    @classmethod
    def of(cls, pipe: Pipe, levels: Levels, losses: Losses, water: Water, limits: Limits) -> Case:
        """Check the records and join them.

        Parameters
        ----------
        pipe, levels, losses, water, limits
            The records of one siphon at one state of levels.

        Raises
        ------
        InputError
            Where a number is outside its range.
        """
        check_records(pipe, levels, losses, water, limits)
        return cls(Conduit.of(pipe, water, limits.gravity_ms2), levels, losses, water, limits)

    @property
    def unit_weight_nm3(self) -> float:
        """Weight of a cubic metre of water, rho g."""
        return self.water.density_kgm3 * self.limits.gravity_ms2

    @property
    def still_lift_m(self) -> float:
        """Highest crown above the water surface that the air pressure allows in still water, reserve kept."""
        usable = self.limits.air_pressure_pa - self.water.vapour_pressure_pa
        return usable / self.unit_weight_nm3 - self.limits.reserve_m

    @property
    def still_ceiling_m(self) -> float:
        """Highest crown level in still water."""
        return self.levels.water_m + self.still_lift_m

    @property
    def cap_m(self) -> float:
        """Highest crown level that the user allows whatever the pressure; ``inf`` where there is no such limit."""
        lift = self.limits.highest_lift_m
        return math.inf if lift is None else self.levels.water_m + lift

    @property
    def fittings_total(self) -> float:
        """Sum of K of all fittings."""
        return sum(loss for _, loss in self.losses.fittings)

    def local_to_crown(self, chainage_m: FloatArray) -> FloatArray:
        """Return ``1 + K_in + sum K(<= s) + bends s`` at each chainage: what acts on the crown besides friction."""
        losses = self.losses
        local = 1.0 + losses.entrance + losses.bends_per_m * chainage_m
        if losses.fittings:
            at, loss = np.array(sorted(losses.fittings)).T
            sums = np.concatenate([[0.0], np.cumsum(loss)])
            local = local + sums[np.searchsorted(at, chainage_m, side="right")]
        return local

    def local_of_line(self, length_m: float) -> float:
        """Return the sum of K of the whole line with the valve open; every fitting counts, wherever it stands."""
        losses = self.losses
        return losses.entrance + losses.exit + losses.valve_open + self.fittings_total + losses.bends_per_m * length_m

    def energy_velocity_ms(self, length_m: float) -> float:
        """Return the velocity at which the whole fall is used up with the valve open."""
        return self.conduit.largest_velocity_ms(self.levels.fall_m, self.local_of_line(length_m), length_m)
