"""Overcrest: finds, proves and prices siphon pipelines over dams and ridges.

>>> import routing
>>> site = routing.load_site("site.toml")        # doctest: +SKIP
>>> plan = routing.plan(site)                    # doctest: +SKIP
>>> plan.schemes[0].appraisal.discharge_m3s      # doctest: +SKIP

Importing this package loads no third party: each name below is loaded when it is first used.
"""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from routing.errors import InputError, OvercrestError, Problem, SiteError, TerrainError
    from routing.planning import look, plan
    from routing.records import Outlook, Plan, Scheme, Site
    from routing.site import load_site

__version__ = "0.1.0"

_HOMES = {
    "InputError": "routing.errors",
    "Outlook": "routing.records",
    "OvercrestError": "routing.errors",
    "Plan": "routing.records",
    "Problem": "routing.errors",
    "Scheme": "routing.records",
    "Site": "routing.records",
    "SiteError": "routing.errors",
    "TerrainError": "routing.errors",
    "load_site": "routing.site",
    "look": "routing.planning",
    "plan": "routing.planning",
}

__all__ = [
    "InputError",
    "Outlook",
    "OvercrestError",
    "Plan",
    "Problem",
    "Scheme",
    "Site",
    "SiteError",
    "TerrainError",
    "__version__",
    "load_site",
    "look",
    "plan",
]


def __getattr__(name: str) -> Any:
    """Load a public name on first use (PEP 562)."""
    home = _HOMES.get(name)
    if home is None:
        raise AttributeError(f"module 'routing' has no attribute {name!r}; public names: {', '.join(__all__)}")
    return getattr(importlib.import_module(home), name)


def __dir__() -> list[str]:
    return sorted(__all__)
