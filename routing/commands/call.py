"""One call of the program: what was typed, and whether a stop was asked for."""

from __future__ import annotations

import math
import signal
import sys
import threading
import time
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from types import FrameType
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from sys import UnraisableHookArgs

#: Signals that mean "stop": Ctrl-C, and a polite request of the system's to end.
_STOPS = (signal.SIGINT, signal.SIGTERM)

#: A finger that stays on Ctrl-C must not break off the cleaning up that its first press began.
_PATIENCE_S = 1.0


@dataclass(slots=True)
class Stop:
    """Whether the user asked the run to stop.

    The flag outlives an exception that a library swallowed: the next progress report raises again.
    """

    asked: bool = False
    raised_s: float = -math.inf

    def check(self) -> None:
        """Stop here if a stop was asked for.

        Raises
        ------
        KeyboardInterrupt
            If so.
        """
        if self.asked:
            raise KeyboardInterrupt


@dataclass(frozen=True, slots=True)
class Call:
    """What the program was called with; click hands it to every command.

    ``program`` is what was typed before the arguments: another program may have this one among its commands.
    """

    arguments: tuple[str, ...] = ()
    stop: Stop = field(default_factory=Stop)
    program: str = "overcrest"

    @property
    def words(self) -> tuple[str, ...]:
        """The call, the program's name included."""
        return (*self.program.split(), *self.arguments)

    def asks(self, *options: str) -> bool:
        """Return whether one of the options was typed; this works before, and without, a successful parse."""
        end = self.arguments.index("--") if "--" in self.arguments else len(self.arguments)
        return any(option in self.arguments[:end] for option in options)


@contextmanager
def listening_for_stops(stop: Stop) -> Iterator[None]:
    """Turn Ctrl-C, and a request to end, into a flag and a `KeyboardInterrupt` while the block runs.

    A signal that the caller made us ignore (a background job of a shell, ``nohup``) stays ignored. Outside the
    main thread, where signals cannot be set, nothing is changed.
    """
    if threading.current_thread() is not threading.main_thread():
        yield
        return

    def ask(_signum: int, _frame: FrameType | None) -> None:
        now_s = time.monotonic()
        if now_s - stop.raised_s < _PATIENCE_S:
            return
        stop.asked, stop.raised_s = True, now_s
        raise KeyboardInterrupt

    usual_hook = sys.unraisablehook

    def hook(unraisable: UnraisableHookArgs) -> None:
        # Python drops what is raised inside a callback from C (numba's compiler has such); the flag remains.
        if not (stop.asked and isinstance(unraisable.exc_value, KeyboardInterrupt)):
            usual_hook(unraisable)

    before = {name: signal.getsignal(name) for name in _STOPS}
    for name, handler in before.items():
        if handler is not signal.SIG_IGN:
            signal.signal(name, ask)
    sys.unraisablehook = hook
    try:
        yield
    finally:
        sys.unraisablehook = usual_hook
        for name, handler in before.items():
            signal.signal(name, handler)
