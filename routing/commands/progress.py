"""What a run shows on stderr while it works."""

from __future__ import annotations

import sys
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from routing.commands.call import Stop
from routing.commands.streams import note

if TYPE_CHECKING:
    from rich.progress import Progress, TaskID

Report = Callable[[str, float], None]

#: Stages quicker than this are not worth a line.
_SLOW_S = 1.0


@dataclass(slots=True)
class Lines:
    """Plain lines, for a stderr that is a file or a pipe: one when a stage turns out slow, one when it ends."""

    clock: Callable[[], float] = time.monotonic
    stage: str | None = None
    started_s: float = 0.0
    told: bool = False

    def __call__(self, stage: str, share: float) -> None:
        """Take a report of a stage and its share done (0 to 1)."""
        if stage != self.stage:
            self.close()
            self.stage, self.started_s, self.told = stage, self.clock(), False
        elif not self.told and share < 1.0 and self.clock() - self.started_s > _SLOW_S:
            self.told = True
            note(f"stage {stage} ...")

    def close(self) -> None:
        """End the stage at hand."""
        if self.stage is None:
            return
        took_s = self.clock() - self.started_s
        if self.told or took_s > _SLOW_S:
            note(f"stage {self.stage}: done in {took_s:.1f} s")
        self.stage = None


@dataclass(slots=True)
class Bars:
    """Moving bars, for a terminal: one a stage, gone when the run ends."""

    display: Progress
    tasks: dict[str, TaskID] = field(default_factory=dict)

    def __call__(self, stage: str, share: float) -> None:
        """Take a report of a stage and its share done (0 to 1)."""
        if stage not in self.tasks:
            for task in self.tasks.values():
                self.display.update(task, completed=1.0)
            self.tasks[stage] = self.display.add_task(stage, total=1.0)
        self.display.update(self.tasks[stage], completed=min(max(share, 0.0), 1.0))

    def close(self) -> None:
        """End the display."""
        self.display.stop()


def _bars() -> Bars:
    from rich.console import Console
    from rich.progress import BarColumn, Progress, TextColumn, TimeElapsedColumn

    display = Progress(
        TextColumn("{task.description}"),
        BarColumn(),
        TimeElapsedColumn(),
        console=Console(stderr=True),
        transient=True,
        redirect_stdout=False,
        redirect_stderr=False,
    )
    display.start()
    return Bars(display)


@contextmanager
def reporting(stop: Stop, *, quiet: bool) -> Iterator[Report]:
    """Yield the function to hand to planning: it shows progress, and ends the run if a stop was asked for."""
    terminal = sys.stderr is not None and sys.stderr.isatty()
    shown = None if quiet else _bars() if terminal else Lines()

    def report(stage: str, share: float) -> None:
        stop.check()
        if shown is not None:
            shown(stage, share)

    try:
        yield report
    finally:
        if shown is not None:
            shown.close()
