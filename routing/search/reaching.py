"""Shortest lengths from sources to every cell, under a ceiling: `reach`."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass, replace
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from routing.errors import InputError, Problem
from routing.records import FloatArray
from routing.search import kernel
from routing.search.grid import Grid, bucket_width, prepare_grid
from routing.search.moves import Neighbours

GroundRule = Literal["bilinear", "cells"]
CellLike = tuple[int, int]
#: Called between slices with the number of cells settled; may raise to stop the search.
Tick = Callable[[int], None]

# About 30 ms of work: short enough for progress and Ctrl-C, long enough that the calls cost nothing.
_SLICE_CELLS = 200_000
_FIRST_POOL = 16_384
# Queues of more buckets than this take longer to go through than the cells: such levels are a mark for nodata.
_MOST_BUCKETS = 20_000_000
_MANY_BUCKETS = 100_000


@dataclass(frozen=True, slots=True)
class Limitation:
    """What a label must keep to: ceiling, cap, longest length, ground rule, and the goal if there is one.

    ``along``: bilinear ground is held against the ceiling at each place of an edge; without it, all of an edge is
    held against the ceiling at its far end (safe, and coarse where cells are large).
    ``goal``: only this cell matters; the search stops when it is settled, and leaves out cells from which even
    a straight line would exceed ``longest_m``.
    """

    ceiling_level_m: float = np.inf
    ceiling_gradient: float = 0.0
    cap_level_m: float = np.inf
    longest_m: float = np.inf
    rule: GroundRule = "bilinear"
    along: bool = False
    goal: CellLike | None = None

    def raised(self, by_m: float) -> Limitation:
        """Return the same with ceiling and cap raised."""
        return replace(self, ceiling_level_m=self.ceiling_level_m + by_m, cap_level_m=self.cap_level_m + by_m)


@dataclass(frozen=True, slots=True)
class Reach:
    """Shortest lengths from the sources.

    Attributes
    ----------
    length_m : (rows, cols) float64 array
        3-D length of the shortest allowed path to each cell; ``inf`` where not reached.
    parent : (rows, cols) uint8 array
        Move by which each cell was reached; 254 at a source, 255 where not reached.
    settled
        Number of cells settled.
    complete
        False where the search stopped early at its goal: lengths beyond the goal's are then not final.
    """

    length_m: FloatArray
    parent: NDArray[np.uint8]
    settled: int
    complete: bool
    _moves: tuple[NDArray[np.intp], NDArray[np.intp]]

    def path_to(self, row: int, col: int) -> NDArray[np.intp]:
        """Return the cells of the shortest path to a cell, source first.

        Returns
        -------
        (n, 2) int array
            Rows and columns.

        Raises
        ------
        InputError
            If the cell was not reached or is outside the grid.
        """
        rows, cols = self.length_m.shape
        if not (0 <= row < rows and 0 <= col < cols):
            raise InputError(
                Problem(
                    "the cell is outside the grid", found=f"({row}, {col})", allowed=f"rows < {rows}, cols < {cols}"
                )
            )
        if not np.isfinite(self.length_m[row, col]):
            raise InputError(
                Problem(
                    "the cell was not reached",
                    found=f"({row}, {col})",
                    allowed="cells with a finite length",
                    remedy="raise the ceiling, or look where the way is barred",
                )
            )
        path = [(row, col)]
        drow, dcol = self._moves
        while self.parent[row, col] != kernel.PARENT_SOURCE:
            move = self.parent[row, col]
            row, col = row - int(drow[move]), col - int(dcol[move])
            path.append((row, col))
        return np.array(path[::-1], dtype=np.intp)


def _flat_sources(
    grid: Grid, sources: Iterable[CellLike], start_length_m: Sequence[float] | FloatArray | float | None
) -> tuple[NDArray[np.int32], FloatArray]:
    """Return the sources as flat cells with start lengths, shortest start first."""
    rows, cols = grid.shape
    cells = np.asarray(sources if isinstance(sources, np.ndarray) else list(sources), dtype=np.int64)
    if cells.ndim == 1 and cells.size == 2:
        cells = cells.reshape(1, 2)
    if cells.ndim != 2 or cells.shape[1] != 2 or len(cells) == 0:
        raise InputError(Problem("sources must be (row, column) pairs", found=f"shape {cells.shape}", key="sources"))
    outside = (cells < 0).any(axis=1) | (cells[:, 0] >= rows) | (cells[:, 1] >= cols)
    if outside.any():
        found = tuple(int(v) for v in cells[outside][0])
        raise InputError(
            Problem("a source is outside the grid", found=f"{found}", allowed=f"{rows} x {cols} cells", key="sources")
        )
    starts = np.zeros(len(cells)) if start_length_m is None else np.asarray(start_length_m, dtype=np.float64)
    starts = np.broadcast_to(starts, (len(cells),)) if starts.ndim == 0 else starts
    if starts.shape != (len(cells),) or not np.all(np.isfinite(starts) & (starts >= 0.0)):
        raise InputError(
            Problem(
                "start lengths must be finite, not negative, one a source",
                found=f"{starts}",
                allowed=f"{len(cells)} numbers >= 0",
                key="start_length_m",
            )
        )
    order = np.argsort(starts, kind="stable")
    return (cells[order, 0] * cols + cells[order, 1]).astype(np.int32), np.ascontiguousarray(starts[order])


def _rules(grid: Grid, limitation: Limitation) -> kernel.Rules:
    for name in ("ceiling_level_m", "ceiling_gradient", "cap_level_m", "longest_m"):
        if np.isnan(getattr(limitation, name)):
            raise InputError(Problem("a limit is not a number", found="NaN", allowed="a number", key=name))
    if not 0.0 <= limitation.ceiling_gradient < np.inf:
        raise InputError(
            Problem(
                "the ceiling must be level or fall with length",
                found=f"{limitation.ceiling_gradient}",
                allowed="0 or more, finite",
                key="ceiling_gradient",
            )
        )
    if limitation.rule not in ("bilinear", "cells"):
        raise InputError(
            Problem("unknown rule", found=f"{limitation.rule}", allowed="bilinear or cells", key="ground_rule")
        )
    goal = limitation.goal or (-1, -1)
    return kernel.Rules(
        ceiling_level=float(limitation.ceiling_level_m),
        ceiling_gradient=float(limitation.ceiling_gradient),
        cap_level=float(limitation.cap_level_m),
        has_ceiling=bool(min(limitation.ceiling_level_m, limitation.cap_level_m) < np.inf),
        bilinear=limitation.rule == "bilinear",
        along=limitation.along,
        longest=float(limitation.longest_m),
        goal_row=int(goal[0]),
        goal_col=int(goal[1]),
        goal_level=float(grid.level[goal]) if limitation.goal else 0.0,
        least_step_x=float(grid.step_x_m.min()),
        least_step_y=float(grid.step_y_m.min()),
    )


def _longest_edge(grid: Grid) -> float:
    """Return a bound on the length of any edge, weight included.

    The whole range of levels serves where it makes no large queue; else the steepest steps along rows and columns.
    """
    plan, weight = float(grid.ground.plan.max()), float(grid.ground.weight.max(initial=1.0))
    loose = float(np.hypot(plan, np.ptp(grid.level))) * weight
    if loose < _MANY_BUCKETS * grid.least_step_m:
        return loose
    down, right = (float(np.abs(np.diff(grid.level, axis=axis)).max(initial=0.0)) for axis in (0, 1))
    rise = float(np.max(np.abs(grid.moves.drow) * down + np.abs(grid.moves.dcol) * right))
    return min(loose, float(np.hypot(plan, rise)) * weight)


def _new_queue(grid: Grid, cells: NDArray[np.int32], starts: FloatArray) -> kernel.Queue:
    """Return an empty queue with a ring long enough that no label laps the bucket at hand."""
    width = bucket_width(grid)
    longest_edge = _longest_edge(grid)
    if longest_edge > _MOST_BUCKETS * width:
        raise InputError(
            Problem(
                "the levels differ too much for so short steps",
                found=f"an edge of up to {longest_edge:g} m, steps from {grid.least_step_m:g} m",
                allowed=f"edges up to {_MOST_BUCKETS:,} times the shortest step",
                remedy="set cells without ground to NaN",
                key="ground_m",
            )
        )
    ring = 1 << int(np.ceil(np.log2(longest_edge / width + 3.0)))
    pool = _FIRST_POOL + 2 * cells.size
    return kernel.Queue(
        head=np.full(ring, -1, dtype=np.int32),
        cell=np.empty(pool, dtype=np.int32),
        next=np.empty(pool, dtype=np.int32),
        per_length=1.0 / width,
        source_cell=cells,
        source_start=starts,
    )


def _with_larger_pool(queue: kernel.Queue) -> kernel.Queue:
    """Return the queue with twice the room."""
    return queue._replace(
        cell=np.concatenate([queue.cell, np.empty_like(queue.cell)]),
        next=np.concatenate([queue.next, np.empty_like(queue.next)]),
    )


def search_grid(
    grid: Grid,
    sources: Iterable[CellLike],
    limitation: Limitation,
    *,
    start_length_m: Sequence[float] | FloatArray | float | None = None,
    tick: Tick | None = None,
) -> Reach:
    """Search a prepared grid (see `reach`); with a goal in the limitation, stop there.

    Raises
    ------
    InputError
        If a source, start length or limit is not allowed.
    """
    cells, starts = _flat_sources(grid, sources, start_length_m)
    rules = _rules(grid, limitation)
    if grid.ground.weight.size and (rules.has_ceiling or np.isfinite(rules.longest)):
        raise InputError(
            Problem("a weighted search knows no ceiling and no longest length", found=f"{limitation}", key="limitation")
        )
    queue = _new_queue(grid, cells, starts)
    size = grid.flags.size
    flags = grid.flags.copy()
    field = kernel.Field(np.full(size, np.inf), np.full(size, kernel.PARENT_NONE, dtype=np.uint8), flags)
    state = np.zeros(kernel.STATE_SIZE, dtype=np.int64)
    state[kernel.FREE] = -1
    if limitation.goal is not None:
        flags[limitation.goal[0] * grid.ground.cols + limitation.goal[1]] |= kernel.TARGET
        state[kernel.TARGETS_LEFT] = 1
    while True:
        end = kernel.settle(grid.ground, grid.moves, rules, queue, field, state, _SLICE_CELLS)
        if end == kernel.POOL_SMALL:
            queue = _with_larger_pool(queue)
        elif end in (kernel.DONE, kernel.TARGETS_MET):
            break
        if tick is not None:
            tick(int(state[kernel.SETTLED_CELLS]))
    return Reach(
        length_m=field.length.reshape(grid.shape),
        parent=field.parent.reshape(grid.shape),
        settled=int(state[kernel.SETTLED_CELLS]),
        complete=end == kernel.DONE,
        _moves=(grid.moves.drow, grid.moves.dcol),
    )


def reach(  # noqa: PLR0913 - one question, many optional conditions
    ground_m: ArrayLike,
    step_x_m: ArrayLike,
    step_y_m: ArrayLike,
    sources: Iterable[CellLike],
    *,
    start_length_m: Sequence[float] | FloatArray | float | None = None,
    barred: ArrayLike | None = None,
    blocked_moves: ArrayLike | None = None,
    ceiling_level_m: float = np.inf,
    ceiling_gradient: float = 0.0,
    neighbours: Neighbours = 16,
    ground_rule: GroundRule = "bilinear",
    max_length_m: float = np.inf,
) -> Reach:
    """Find the shortest 3-D length from the sources to every cell, under a ceiling that falls with length.

    The graph's nodes are cell centres. An edge is as long as the 3-D distance between its two centres; one
    between rows takes the mean of its two rows' steps. The result is exact on that graph.

    Parameters
    ----------
    ground_m : (rows, cols) array
        Ground level. NaN means nodata: such a cell is never entered or crossed, and under the bilinear rule no
        edge runs through a patch that has one as a corner. Infinities are refused.
    step_x_m, step_y_m
        Ground distance between neighbouring centres along a row and from row to row: a number, or one a row.
    sources : (row, column) pairs
        Where paths start. A source above the ceiling is not reached.
    start_length_m : optional
        Length already behind each source (0 by default).
    barred : (rows, cols) bool array, optional
        Cells that no edge may enter or cross; an edge through a corner is refused when both other cells there
        are barred.
    blocked_moves : optional
        See `prepare_grid`.
    ceiling_level_m, ceiling_gradient
        The ground of an edge must be at or below ``ceiling_level_m - ceiling_gradient * length`` with the length at
        its far end.
    neighbours
        8, 16 or 32.
    ground_rule
        ``"bilinear"``: the highest bilinear ground along the edge counts; ``"cells"``: the highest cell whose
        interior it crosses.
    max_length_m
        Longer paths are left out.

    Returns
    -------
    Reach

    Raises
    ------
    InputError
        If an argument is not allowed; the message names it.

    Examples
    --------
    >>> import numpy as np
    >>> found = reach(np.zeros((3, 4)), 1.0, 1.0, [(0, 0)])
    >>> round(float(found.length_m[1, 2]), 6)
    2.236068
    >>> found.path_to(1, 2).tolist()
    [[0, 0], [1, 2]]
    """
    grid = prepare_grid(ground_m, step_x_m, step_y_m, barred=barred, blocked_moves=blocked_moves, neighbours=neighbours)
    limitation = Limitation(ceiling_level_m, ceiling_gradient, longest_m=max_length_m, rule=ground_rule)
    return search_grid(grid, sources, limitation, start_length_m=start_length_m)
