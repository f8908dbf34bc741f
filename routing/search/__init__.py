"""Paths over a grid under a ceiling: arrays only, with the compiled kernels.

`reach` is the plain search; `largest_discharge`, `shortest_path` and `least_raise` ask it the questions of a
siphon; `lowest_crest` floods the bilinear ground.
"""

from routing.search.choosing import Flow, Found, largest_discharge, least_raise, shortest_path
from routing.search.compiling import cache_folder, kernels_ready
from routing.search.crests import Crest, crest_levels, lowest_crest
from routing.search.divides import Divide, Pass, distinct_passes, find_divide, join_paths, same_pass
from routing.search.ends import Job, OpenEnds, search_back, search_job, search_on
from routing.search.gaps import moves_over_gaps
from routing.search.grid import Grid, free_ratio, prepare_grid, with_barred
from routing.search.moves import move_list
from routing.search.paths import PathEdges, border_band, may_escape, path_edges
from routing.search.reaching import Limitation, Reach, reach, search_grid
from routing.search.weighing import height_penalty, weighted_path

__all__ = [
    "Crest",
    "Divide",
    "Flow",
    "Found",
    "Grid",
    "Job",
    "Limitation",
    "OpenEnds",
    "Pass",
    "PathEdges",
    "Reach",
    "border_band",
    "cache_folder",
    "crest_levels",
    "distinct_passes",
    "find_divide",
    "free_ratio",
    "height_penalty",
    "join_paths",
    "kernels_ready",
    "largest_discharge",
    "least_raise",
    "lowest_crest",
    "may_escape",
    "move_list",
    "moves_over_gaps",
    "path_edges",
    "prepare_grid",
    "reach",
    "same_pass",
    "search_back",
    "search_grid",
    "search_job",
    "search_on",
    "shortest_path",
    "weighted_path",
    "with_barred",
]
