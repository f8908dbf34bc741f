"""One pipe and one liquid: loss from velocity, and the velocity that uses up a given head."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from routing.hydraulics.friction import CRITICAL_REYNOLDS, colebrook_x
from routing.records import FloatArray, Pipe, Water

#: The laminar side of the jump is approached to this relative distance, so that a Reynolds number formed again
#: from the result does not round to the turbulent side.
_JUMP_SIDE = 1.0 - 1e-12
#: Below this Reynolds number water counts as still: 64/Re would overflow, and nothing is lost that could be told.
_STILL_REYNOLDS = 1e-100
_TWO_OVER_LN10 = 2.0 / math.log(10.0)
_STEPS = 60
_STOP = 1e-15
_CLEAR = 1.0 - 1e-14


@dataclass(frozen=True, slots=True)
class Conduit:
    """What resists flow in one pipe: bore, roughness or fixed factor, viscosity; and gravity."""

    bore_m: float
    area_m2: float
    relative_roughness: float
    fixed_factor: float | None
    viscosity_m2s: float
    gravity_ms2: float

    @classmethod
    def of(cls, pipe: Pipe, water: Water, gravity_ms2: float) -> Conduit:
        """Return the conduit of checked records.

        Parameters
        ----------
        pipe, water
            What flows in what.
        gravity_ms2
            Acceleration of gravity.
        """
        bore = float(pipe.bore_m)
        return cls(
            bore_m=bore,
            area_m2=float(pipe.area_m2),
            relative_roughness=pipe.roughness_m / bore,
            fixed_factor=pipe.darcy_factor,
            viscosity_m2s=water.kinematic_viscosity_m2s,
            gravity_ms2=gravity_ms2,
        )

    @property
    def jump_velocity_ms(self) -> float:
        """Velocity at which laminar flow ends."""
        return CRITICAL_REYNOLDS * self.viscosity_m2s / self.bore_m

    def reynolds(self, velocity_ms: float) -> float:
        """Return V D / nu."""
        return velocity_ms * self.bore_m / self.viscosity_m2s

    def velocity_head_m(self, velocity_ms: float) -> float:
        """Return V^2/2g."""
        return velocity_ms * velocity_ms / (2.0 * self.gravity_ms2)

    def factor(self, velocity_ms: float) -> float:
        """Return the Darcy factor; 0 in still water, where it has no meaning. A fixed factor holds at any velocity."""
        reynolds = self.reynolds(velocity_ms)
        if reynolds <= _STILL_REYNOLDS:
            return 0.0
        if self.fixed_factor is not None:
            return self.fixed_factor
        if reynolds <= CRITICAL_REYNOLDS:
            return 64.0 / reynolds
        x = colebrook_x(reynolds, self.relative_roughness)
        return 1.0 / (x * x)

    def largest_velocity_ms(self, head_m: float, local: float, length_m: float) -> float:
        """Return the largest V with ``(local + f L/D) V^2/2g <= head``.

        The loss rises strictly with V and jumps up where laminar flow ends. Where the head falls into the jump the
        answer is the velocity at the jump (laminar side): the loss is then below the head.

        Parameters
        ----------
        head_m
            Head that may be lost; 0 or less gives 0. Where nothing resists, more than 0 gives ``inf``.
        local
            Sum of local losses K, with a velocity head counted as 1.
        length_m
            Length with friction.
        """
        if head_m <= 0.0:
            return 0.0
        g2 = 2.0 * self.gravity_ms2
        slender = length_m / self.bore_m
        if self.fixed_factor is not None:
            resistance = local + self.fixed_factor * slender
            return math.sqrt(g2 * head_m / resistance) if resistance > 0.0 else math.inf
        if local <= 0.0 and slender <= 0.0:
            return math.inf
        # Laminar: f L/D V^2/2g is linear in V, which leaves a quadratic.
        linear = 64.0 * self.viscosity_m2s * slender / (g2 * self.bore_m)
        velocity = 2.0 * head_m / (linear + math.sqrt(linear * linear + 4.0 * (local / g2) * head_m))
        jump = self.jump_velocity_ms
        if velocity <= jump * _JUMP_SIDE:
            return velocity
        x = colebrook_x(CRITICAL_REYNOLDS, self.relative_roughness)
        lower = math.sqrt(g2 * head_m / (local + slender / (x * x)))
        if lower <= jump:
            return jump * _JUMP_SIDE
        return self._turbulent_velocity(g2 * head_m, local, slender, lower)

    def _turbulent_velocity(self, twice_g_head: float, local: float, slender: float, start_ms: float) -> float:
        """Solve ``V = sqrt(2 g h / (local + f(V) L/D))`` by Newton's method in ln V, from below.

        With x = 1/sqrt(f) and w the share of the second term in the logarithm of Colebrook-White, differentiation
        gives ``d ln f / d ln V = -2 c w / (x + c w)``, c = 2/ln 10.
        """
        velocity = start_ms
        for _ in range(_STEPS):
            reynolds = self.reynolds(velocity)
            x = colebrook_x(reynolds, self.relative_roughness)
            friction = slender / (x * x)
            total = local + friction
            smooth = 2.51 * x / reynolds
            weight = _TWO_OVER_LN10 * smooth / (self.relative_roughness / 3.7 + smooth)
            slope = friction / total * weight / (x + weight)
            step = (0.5 * math.log(twice_g_head / total) - math.log(velocity)) / (1.0 - slope)
            velocity *= math.exp(step)
            if abs(step) <= _STOP:
                break
        return velocity

    def largest_velocity_under_ms(self, headroom_m: FloatArray, local: FloatArray, chainage_m: FloatArray) -> float:
        """Return the largest V with ``(local + f s/D) V^2/2g <= headroom`` at every point.

        The point that is tightest for the present factor is solved for exactly; the next tightest is looked for
        with the factor so found. Each round lowers V, and a point once solved for never comes back, so that it ends
        (after two or three rounds, as the factor changes little).

        Parameters
        ----------
        headroom_m, local, chainage_m : (n,) arrays
            Head that may be lost up to each point, sum of K up to it, distance to it.

        Returns
        -------
        float
            0 where a headroom is 0 or less; ``inf`` where there is no point.
        """
        if headroom_m.size == 0:
            return math.inf
        if headroom_m.min() <= 0.0:
            return 0.0
        tightest = int(np.argmin(headroom_m / (local + (0.02 / self.bore_m) * chainage_m)))
        velocity = math.inf
        for _ in range(headroom_m.size + 1):
            point = float(headroom_m[tightest]), float(local[tightest]), float(chainage_m[tightest])
            velocity = self.largest_velocity_ms(*point)
            allowed = headroom_m / (local + (self.factor(velocity) / self.bore_m) * chainage_m)
            tightest = int(np.argmin(allowed))
            if allowed[tightest] >= self.velocity_head_m(velocity) * _CLEAR:
                break
        return velocity
