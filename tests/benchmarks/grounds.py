"""Scripted grounds for the benchmarks: the same on every machine."""

import numpy as np


def hills(size, seed=1):
    """Smooth random hills, 0 to about 40 m, by adding waves (no library's random field)."""
    rng = np.random.default_rng(seed)
    rows, cols = np.mgrid[:size, :size] / size
    ground = np.zeros((size, size))
    for _ in range(40):
        turns, bearing, phase = rng.uniform(2, 18), rng.uniform(0, np.pi), rng.uniform(0, 2 * np.pi)
        ground += np.sin(2 * np.pi * turns * (rows * np.sin(bearing) + cols * np.cos(bearing)) + phase) / turns
    return 40.0 * (ground - ground.min()) / np.ptp(ground)


def bank(size, height_m):
    """A lake and a valley with a long bank between, its crest uneven: low places far from the straight way."""
    rows, cols = np.mgrid[:size, :size]
    across = np.exp(-(((cols - 0.5 * size) / (0.02 * size)) ** 2))
    away = np.abs(rows - 0.5 * size) / size
    crest = height_m * (1.25 - 0.6 * away + 0.04 * np.sin(rows / 9.0))
    floor = np.where(cols < 0.5 * size, -1.0, -8.0) + 0.3 * np.sin(rows / 31.0) * np.sin(cols / 23.0)
    return floor + across * (crest - floor)
