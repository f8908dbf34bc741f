"""Pictures of a plan: map above, long section below, as PNG and SVG.

Every name below is loaded when it is first used, so that matplotlib is loaded only where something is drawn.
"""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from routing.outputs.pictures.files import picture, picture_files
    from routing.outputs.pictures.page import draw_page
    from routing.outputs.pictures.subject import Subject, Wanted, grade_line_m, overview, single_routes
    from routing.outputs.pictures.words import picture_text, picture_title, pictures_text

_HOMES = {
    "Subject": "subject",
    "Wanted": "subject",
    "draw_page": "page",
    "grade_line_m": "subject",
    "overview": "subject",
    "picture": "files",
    "picture_files": "files",
    "picture_text": "words",
    "picture_title": "words",
    "pictures_text": "words",
    "single_routes": "subject",
}

__all__ = [
    "Subject",
    "Wanted",
    "draw_page",
    "grade_line_m",
    "overview",
    "picture",
    "picture_files",
    "picture_text",
    "picture_title",
    "pictures_text",
    "single_routes",
]


def __getattr__(name: str) -> Any:
    """Load a public name on first use."""
    home = _HOMES.get(name)
    if home is None:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}; public names: {', '.join(__all__)}")
    return getattr(importlib.import_module(f"{__name__}.{home}"), name)


def __dir__() -> list[str]:
    return sorted(__all__)
