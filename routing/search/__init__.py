"""Paths over a grid under a ceiling: arrays only."""
from routing.search.compiling import cache_folder, kernels_ready
from routing.search.grid import Grid, free_ratio, prepare_grid
from routing.search.moves import move_list
from routing.search.reaching import Limitation, Reach, reach, search_grid
