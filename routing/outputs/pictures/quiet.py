"""Keeping the drawing library's remarks off the user's screen."""

from __future__ import annotations

import logging
import warnings
from collections.abc import Iterator
from contextlib import contextmanager


@contextmanager
def quietly() -> Iterator[None]:
    """Load and use matplotlib without its remarks: a font list being made, a letter that its font lacks."""
    logger = logging.getLogger("matplotlib")
    before = logger.level
    logger.setLevel(logging.ERROR)
    try:
        with warnings.catch_warnings():
            warnings.filterwarnings("ignore", message=".*missing from font", category=UserWarning)
            yield
    finally:
        logger.setLevel(before)
