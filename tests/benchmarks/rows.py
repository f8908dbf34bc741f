"""What a benchmark yields, and how it is timed."""

import time
from dataclasses import dataclass


@dataclass(frozen=True)
class Row:
    """One line of the table."""

    what: str
    measured: float
    bar: str
    met: bool
    note: str


def best_of(work, times=5):
    """Shortest of several runs, in seconds."""
    found = []
    for _ in range(times):
        start = time.perf_counter()
        work()
        found.append(time.perf_counter() - start)
    return min(found)
