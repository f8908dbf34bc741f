"""Pipes from the built-in tables."""

import math

import pytest

from routing.errors import InputError
from routing.hydraulics import pe_modulus_pa, pe_pipe, steel_pipe, table_names, table_sizes

ONE_YEAR_H = 365.25 * 24


def pe(diameter, sdr, material="PE100"):
    return pe_pipe(diameter, sdr, material, temperature_c=20.0, load_hours=100.0)


def test_every_listed_size_makes_a_pipe():
    for name in table_names():
        sizes = table_sizes(name)
        assert len(set(sizes)) == len(sizes) > 50
        for first, second in sizes:
            pipe = steel_pipe(first, second) if name == "steel" else pe(first, second, name)
            assert 0.0 < pipe.least_wall_m <= pipe.wall_m or name == "steel"
            assert 0.5 * pipe.outside_diameter_m < pipe.bore_m < pipe.outside_diameter_m


def test_pe_pipe_says_where_it_comes_from():
    pipe = pe(225, 17)
    assert pipe.name == "PE100 225 SDR 17"
    assert pipe.bore_m == pytest.approx(0.225 - 2 * (0.0134 + 0.00075))  # 13.4 mm to 14.9 mm, by hand
    assert pipe.least_wall_m == pytest.approx(0.0134)
    assert pipe.ovality_pct == 3.0
    assert pipe.poisson_ratio == 0.45
    for word in ("ISO 4427-2", "ISO 11922-1", "379 MPa", "100 h", "20 °C", "from memory", "assumed"):
        assert word in pipe.source


def test_steel_pipe_says_where_it_comes_from():
    pipe = steel_pipe(168.3, 7.1)
    assert pipe.bore_m == pytest.approx(0.1541)
    assert pipe.least_wall_m == pytest.approx(0.0071 * 0.875)
    assert pipe.modulus_pa == 205e9
    assert pipe.ovality_pct == 1.0
    assert "EN 10220" in pipe.source


def test_modulus_between_table_points_is_straight_in_log_time():
    middle = math.sqrt(100.0 * ONE_YEAR_H)
    found = pe_modulus_pa("PE100", temperature_c=23.0, load_hours=middle)
    assert found == pytest.approx(0.5 * (55_000 + 40_000) * 6894.757, rel=1e-6)


def test_modulus_gives_no_credit_for_cold_or_for_short_loads():
    warm = pe_modulus_pa("PE100", temperature_c=23.0, load_hours=0.5)
    assert pe_modulus_pa("PE100", temperature_c=0.0, load_hours=0.5) == warm
    assert pe_modulus_pa("PE100", temperature_c=23.0, load_hours=0.01) == warm


def test_modulus_falls_with_heat():
    moduli = [pe_modulus_pa("PE80", temperature_c=t, load_hours=100.0) for t in (23, 25, 30, 40, 50, 60)]
    assert moduli == sorted(set(moduli), reverse=True)
    assert moduli[-1] == pytest.approx(0.43 * moduli[0])


@pytest.mark.parametrize(
    ("call", "words"),
    [
        (lambda: pe(113, 17), ("113 mm", "nearest: 90, 110, 125, 140 mm", "give the pipe in numbers")),
        (lambda: pe(110, 17.6), ("SDR of the 110 mm", "17.6", "11, 13.6, 17, 21")),
        (lambda: pe(32, 41), ("41", "nearest")),
        (lambda: pe(110, 17, "PE63"), ('"PE63"', "PE100, PE80, steel")),
        (lambda: steel_pipe(168.0, 7.1), ("168 mm", "139.7, 168.3")),
        (lambda: steel_pipe(168.3, 7.0), ("7 mm", "6.3, 7.1")),
        (lambda: table_sizes("copper"), ('"copper"', "PE100, PE80, steel")),
        (lambda: pe_pipe(110, 17, temperature_c=61.0, load_hours=1.0), ("61 °C", "-40 to 60 °C")),
        (lambda: pe_pipe(110, 17, temperature_c=math.nan, load_hours=1.0), ("nan °C",)),
        (lambda: pe_pipe(110, 17, temperature_c=20.0, load_hours=0.0), ("0 h", "50 years")),
        (lambda: pe_pipe(110, 17, temperature_c=20.0, load_hours=5e5), ("500000 h", "438300 h")),
    ],
)
def test_refusals_name_what_was_found_and_what_is_near(call, words):
    with pytest.raises(InputError) as caught:
        call()
    for word in words:
        assert word in str(caught.value)
