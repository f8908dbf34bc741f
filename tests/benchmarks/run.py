"""Time the search and the program against general-purpose libraries, in one run, and write the table.

    python tests/benchmarks/run.py [--write docs/benchmarks.md]

Ratios only: both sides of each are measured here and now, best of several. Needs the test extra.
"""

import argparse
import os
import platform
import shutil
import subprocess
import sys
import tempfile
import tracemalloc
from pathlib import Path

import numpy as np
import shapely
import skimage
from grounds import bank, hills
from rows import Row, best_of
from skimage.graph import MCP_Geometric
from ways import crossings

from routing.hydraulics import discharge_under, energy_discharge_m3s, pe_pipe, suction_ceiling, water_at
from routing.records import GridWindow, Levels, Limits, Losses, Terrain, TerrainFacts
from routing.schemes import crown_offset_m
from routing.search import Flow, Job, Limitation, border_band, largest_discharge, move_list, prepare_grid, search_grid
from routing.terrain.clipping import blocked_by, lay_over

SIZE = 1000
ROOT = Path(__file__).resolve().parents[2]


def ours(ground, neighbours, rule, level=np.inf, gradient=0.0, source=(SIZE // 2, SIZE // 2)):
    grid = prepare_grid(ground, 1.0, 1.0, neighbours=neighbours)
    limitation = Limitation(level, gradient, rule=rule)
    return best_of(lambda: search_grid(grid, [source], limitation))


def against_skimage():
    ground = hills(SIZE)
    costs = np.ones((SIZE, SIZE))
    middle = [(SIZE // 2, SIZE // 2)]
    theirs = best_of(lambda: MCP_Geometric(costs, fully_connected=True).find_costs(middle), 3)
    ours(ground[:50, :50], 8, "cells", source=(1, 1))  # load the kernel first
    eight, sixteen = ours(ground, 8, "cells"), ours(ground, 16, "cells")
    note = f"scikit-image {skimage.__version__} MCP_Geometric.find_costs took {theirs:.2f} s"
    yield Row(
        "8 neighbours, `cells`: times as fast as scikit-image", theirs / eight, "at least 4", theirs / eight >= 4, note
    )
    share = sixteen / theirs
    yield Row(
        "16 neighbours: share of scikit-image's time with 8", share, "at most 0.45", share <= 0.45, f"{sixteen:.3f} s"
    )
    low = tuple(int(v) for v in np.unravel_index(np.argmin(ground), ground.shape))
    for level in (25.0, 35.0):
        cells = ours(ground, 16, "cells", level, 1e-3, low)
        bilinear = ours(ground, 16, "bilinear", level, 1e-3, low)
        ratio = bilinear / cells
        what = f"`bilinear` over `cells`, 16 neighbours, ceiling at {level:g} m of 40"
        yield Row(what, ratio, "at most 1.5", ratio <= 1.5, f"{bilinear:.3f} s")


def memory():
    ground = hills(SIZE)
    tracemalloc.start()
    before = tracemalloc.get_traced_memory()[0]
    grid = prepare_grid(ground, 1.0, 1.0, neighbours=16)
    search_grid(grid, [(500, 500)], Limitation(30.0, 1e-3))
    peak = (tracemalloc.get_traced_memory()[1] - before) / ground.size
    tracemalloc.stop()
    yield Row("working memory beyond the DEM, bytes a cell", peak, "at most 24", peak <= 24, "peak, tracemalloc")


def flow_of(pipe, levels, *, along=True):
    rest = (levels, Losses(bends_per_m=0.002), water_at(10.0), Limits(air_pressure_pa=98_000.0))
    offset = crown_offset_m(pipe, 0.0)

    def limit_at(discharge):
        ceiling = suction_ceiling(pipe, *rest, discharge)
        return Limitation(ceiling.level_m - offset, ceiling.gradient, longest_m=ceiling.longest_m, along=along)

    return Flow(
        limit_at=limit_at,
        carried_by=lambda path: discharge_under(pipe, *rest, path.at_length_m, path.at_level_m + offset, path.length_m),
        carried_at_length=lambda length: energy_discharge_m3s(pipe, length, *rest),
    )


def largest_searches():
    pipe = pe_pipe(315, 11, temperature_c=10.0, load_hours=8760.0)
    for name, height, bar in (("energy governs", 1.5, 3.0), ("suction governs", 5.2, 8.0)):
        ground = bank(SIZE, height)
        grid = prepare_grid(ground, 1.0, 1.0)
        source, goal = (SIZE // 2, SIZE // 4), (SIZE // 2, 3 * SIZE // 4)
        job = Job(grid, source, goal, border_band(grid, (False,) * 4))
        flow = flow_of(pipe, Levels(0.0, float(ground[goal])))
        free = best_of(lambda grid=grid, source=source: search_grid(grid, [source], Limitation()), 3)
        whole = best_of(lambda job=job, flow=flow: largest_discharge(job, flow), 3)
        found = largest_discharge(job, flow)
        ratio = whole / free
        note = f"{found.searches} searches, {found.low * 1e3:.1f} l/s, {found.path.length_m:.0f} m"
        yield Row(f"largest discharge over one free search, {name}", ratio, f"at most {bar:g}", ratio <= bar, note)


def star_bar():
    """A barred star with some 2,000 boundary cells beside the source, laid over a grid of 1 m cells."""
    angle = np.linspace(0.0, 2.0 * np.pi, 2000, endpoint=False)
    radius = (0.25 + 0.02 * np.sin(9.0 * angle)) * SIZE
    ring = np.column_stack([0.7 * SIZE + radius * np.cos(angle), 0.5 * SIZE + radius * np.sin(angle)])
    transform = (1.0, 0.0, 0.0, 0.0, -1.0, float(SIZE))
    facts = TerrainFacts(
        "made", "", "", "", SIZE, SIZE, transform, "EPSG:32615", "", "metre", "m", "", "", 1.0, 0.0, None, None, "ground",
        "surface",
    )  # fmt: skip
    flat, ones = np.zeros((SIZE, SIZE)), np.ones(SIZE)
    window = GridWindow(0, 0, SIZE, SIZE, SIZE, SIZE)
    terrain = Terrain(flat, flat == 0.0, ones, ones, transform, window, facts)
    moves = move_list(16)
    return lambda: blocked_by(terrain, lay_over(terrain, shapely.Polygon(ring), 2), moves)


def bars():
    lay = star_bar()
    laying = best_of(lay, 3)
    blocked, ground = lay(), hills(SIZE)
    free, with_bars = (prepare_grid(ground, 1.0, 1.0, blocked_moves=bits) for bits in (None, blocked))
    source = [(SIZE // 2, SIZE // 4)]
    for name, limitation in (("free ground", Limitation()), ("ceiling at 30 m of 40", Limitation(30.0, 1e-3))):
        without = best_of(lambda limitation=limitation: search_grid(free, source, limitation))
        within = best_of(lambda limitation=limitation: search_grid(with_bars, source, limitation))
        ratio = within / without
        note = f"{within:.3f} s; laying the bar over cells and moves, not counted, {laying:.2f} s"
        yield Row(f"search with a barred zone over one without, {name}", ratio, "at most 1.3", ratio <= 1.3, note)


def run_command(*words):
    subprocess.run([sys.executable, *words], check=True, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL, cwd=ROOT)


def start_up():
    site = str(ROOT / "sample_dem" / "brackenmere" / "site.toml")
    with tempfile.TemporaryDirectory() as folder:
        out = str(Path(folder) / "plan")

        def plan(*more):
            shutil.rmtree(out, ignore_errors=True)
            run_command("-m", "routing.commands", "plan", site, "--out", out, "--quiet", *more)

        plan()  # compiles, if need be
        bare = best_of(lambda: run_command("-c", "import rasterio, geopandas, numba, scipy.optimize"), 7)
        warm, undrawn = best_of(plan, 7), best_of(lambda: plan("--no-pictures"), 5)
    helped = best_of(lambda: run_command("-m", "routing.commands", "--help"), 5)
    yield Row(
        "`overcrest plan` on the demo over the bare imports",
        warm / bare,
        "at most 3",
        warm / bare <= 3,
        f"{warm:.2f} s, its picture included",
    )
    yield Row(
        "the same with `--no-pictures`",
        undrawn / bare,
        "at most 3",
        undrawn / bare <= 3,
        f"{undrawn:.2f} s",
    )
    yield Row(
        "`overcrest --help` over the bare imports",
        helped / bare,
        "at most 0.3",
        helped / bare <= 0.3,
        f"{helped:.2f} s",
    )


def first_call():
    with tempfile.TemporaryDirectory() as folder:
        code = (
            "import time, numpy as np; from routing.search import reach; t = time.perf_counter();"
            "reach(np.zeros((9, 9)), 1.0, 1.0, [(0, 0)], ceiling_level_m=1.0); print(time.perf_counter() - t)"
        )
        environment = os.environ | {"NUMBA_CACHE_DIR": folder}
        times = [
            float(
                subprocess.run(
                    [sys.executable, "-c", code], check=True, capture_output=True, env=environment, cwd=ROOT
                ).stdout
            )
            for _ in range(2)
        ]
    yield Row("first search of a process, compiled by an earlier one, s", times[1], "none", True, "loading")
    yield Row("first search after install, s", times[0], "none", True, "compiling")


def table(rows):
    lines = ["| figure | measured | bar | met | note |", "| --- | --- | --- | --- | --- |"]
    lines += [f"| {r.what} | {r.measured:.2f} | {r.bar} | {'yes' if r.met else 'NO'} | {r.note} |" for r in rows]
    return "\n".join(lines)


HEAD = """# Benchmarks

Made by `python tests/benchmarks/run.py --write docs/benchmarks.md`, never typed. Both sides of each ratio are
measured in one run on one machine, best of several; grids of 1,000,000 cells. Seconds are those of that machine.

"""


def main():
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--write", type=Path, help="file to write the table to")
    ask = parser.parse_args()
    rows = []
    for part in (against_skimage, memory, bars, largest_searches, crossings, first_call, start_up):
        for row in part():
            rows.append(row)
            print(
                f"{row.what}: {row.measured:.2f} ({row.bar}) {'ok' if row.met else 'NOT MET'}; {row.note}", flush=True
            )
    if ask.write:
        machine = f"{platform.machine()}, {os.cpu_count()} cores, Python {platform.python_version()}"
        ask.write.write_text(f"{HEAD}{table(rows)}\n\nMachine: {machine}, numpy {np.__version__}.\n", encoding="utf-8")
    return 0 if all(row.met for row in rows) else 1


if __name__ == "__main__":
    sys.exit(main())
