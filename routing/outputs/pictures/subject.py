"""What a picture is of: the whole plan with its best scheme, or one route with the best scheme on it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from routing.outputs.geojson import routes_of
from routing.records import Crossing, FloatArray, Plan, Route, Scheme

#: Which pictures of a plan are wanted.
Wanted = Literal["none", "overview", "all"]


@dataclass(frozen=True, slots=True)
class Subject:
    """What one picture shows.

    Attributes
    ----------
    name
        Name of its files: ``overview``, or the route's.
    plan
        Everything else is drawn from it.
    routes
        The routes on the map; the first is drawn strongest. None where the plan found none.
    scheme
        The scheme in the long section, ``None`` where there is none.
    """

    name: str
    plan: Plan
    routes: tuple[Route, ...]
    scheme: Scheme | None

    @property
    def crossings(self) -> tuple[Crossing, ...]:
        """The crossings on the map: all of them, or the one of the single route."""
        if self.name == OVERVIEW or self.scheme is None:
            return self.plan.crossings
        return tuple(crossing for crossing in self.plan.crossings if crossing.name == self.scheme.route.crossing)


#: Name of the picture of the whole plan.
OVERVIEW = "overview"


def overview(plan: Plan) -> Subject:
    """Return the subject of the picture of a whole plan."""
    best = plan.schemes[0] if plan.schemes else None
    return Subject(OVERVIEW, plan, tuple(routes_of(plan)), best)


def single_routes(plan: Plan) -> list[Subject]:
    """Return the subject of a picture for each route; schemes are ranked, so the first one on it is its best."""
    return [
        Subject(route.name, plan, (route,), next(s for s in plan.schemes if s.route.name == route.name))
        for route in routes_of(plan)
    ]


def grade_line_m(plan: Plan, scheme: Scheme) -> FloatArray:
    """Return the hydraulic grade line at duty and lowest level: crown + (crown pressure - air pressure) / (rho g).

    It is where water would stand in a tube set into the pipe (Bernoulli's equation without the velocity head).

    Returns
    -------
    (n,) array
        Levels in metres, along the chainage of the route.
    """
    limits = plan.setting.limits
    gamma = plan.setting.water.density_kgm3 * limits.gravity_ms2
    return scheme.appraisal.profile_crown_m + (scheme.appraisal.crown_pressure_pa - limits.air_pressure_pa) / gamma
