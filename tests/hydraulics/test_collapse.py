"""Collapse: laws and refusals. Published values are in tests/published/test_collapse.py."""

from dataclasses import replace

import pytest

from routing.errors import InputError
from routing.hydraulics import allowed_underpressure_pa, collapse_pressure_pa, ovality_factor, pe_pipe
from routing.records import Pipe


def pe(sdr, **job):
    return pe_pipe(225, sdr, **{"temperature_c": 20.0, "load_hours": 100.0, **job})


def test_thinner_warmer_longer_is_weaker():
    base = collapse_pressure_pa(pe(17))
    assert collapse_pressure_pa(pe(21)) < base
    assert collapse_pressure_pa(pe(17, temperature_c=40.0)) < base
    assert collapse_pressure_pa(pe(17, load_hours=10_000.0)) < base


def test_the_least_wall_counts_not_the_mean_wall():
    pipe = pe(17)
    thicker = replace(pipe, wall_m=1.2 * pipe.wall_m)
    assert collapse_pressure_pa(thicker) == collapse_pressure_pa(pipe)
    thinner = replace(pipe, least_wall_m=0.9 * pipe.least_wall_m)
    assert collapse_pressure_pa(thinner) < 0.75 * collapse_pressure_pa(pipe)


def test_unknown_modulus_or_wall_is_a_check_not_made():
    assert collapse_pressure_pa(Pipe.of_bore(0.2)) is None
    assert collapse_pressure_pa(replace(pe(17), modulus_pa=None)) is None
    assert collapse_pressure_pa(replace(pe(17), least_wall_m=0.0)) is None
    assert allowed_underpressure_pa(Pipe.of_bore(0.2), 2.0) is None


def test_safety_divides():
    pipe = pe(17)
    assert allowed_underpressure_pa(pipe, 2.0) == pytest.approx(0.5 * collapse_pressure_pa(pipe))


def test_high_yield_changes_little_low_yield_governs():
    pipe = replace(pe(17), modulus_pa=205e9)
    assert collapse_pressure_pa(pipe, yield_pa=1e10) < collapse_pressure_pa(pipe)
    assert collapse_pressure_pa(pipe, yield_pa=1e8) < collapse_pressure_pa(pipe, yield_pa=1e9)


@pytest.mark.parametrize(
    ("call", "words"),
    [
        (lambda: ovality_factor(11.0), "ovality"),
        (lambda: ovality_factor(-0.1), "ovality"),
        (lambda: allowed_underpressure_pa(pe(17), 0.5), "factor of safety"),
        (lambda: collapse_pressure_pa(replace(pe(17), poisson_ratio=1.0)), "Poisson"),
        (lambda: collapse_pressure_pa(replace(pe(17), modulus_pa=-1.0)), "modulus"),
        (lambda: collapse_pressure_pa(replace(pe(17), least_wall_m=0.1)), "least wall"),
        (lambda: collapse_pressure_pa(pe(17), yield_pa=250.0), "yield stress"),
    ],
)
def test_refusals(call, words):
    with pytest.raises(InputError, match=words):
        call()
