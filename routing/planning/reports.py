"""Progress: stages and shares, handed to whoever asked to see them."""

from __future__ import annotations

import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field

#: Called with the name of a stage and the share of it that is done (0 to 1); may raise to stop the run.
Progress = Callable[[str, float], None]


def _silent(stage: str, share: float) -> None:
    del stage, share


@dataclass(slots=True)
class Reporter:
    """Tells progress and keeps the time of each stage."""

    progress: Progress = _silent
    timings_s: dict[str, float] = field(default_factory=dict)

    @contextmanager
    def stage(self, name: str, cells: int = 0) -> Iterator[Callable[[int], None]]:
        """Run a stage; yields a function to call with the number of cells done so far."""
        started = time.perf_counter()
        self.progress(name, 0.0)

        furthest = 0.0

        def tick(done: int) -> None:
            # A stage may search several times; what it shows never goes back.
            nonlocal furthest
            furthest = max(furthest, min(done / cells, 0.99) if cells else 0.0)
            self.progress(name, furthest)

        yield tick
        self.progress(name, 1.0)
        self.timings_s[name] = self.timings_s.get(name, 0.0) + time.perf_counter() - started


def reporter(progress: Progress | None) -> Reporter:
    """Return a reporter; a silent one for ``None``."""
    return Reporter() if progress is None else Reporter(progress)
