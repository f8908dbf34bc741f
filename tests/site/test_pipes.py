"""Pipes: three ways of giving one, what each needs and refuses, and the records that come out."""

from __future__ import annotations

import pytest

from routing.hydraulics import pe_pipe, steel_pipe
from routing.records import PipePrices
from routing.site import load_site

PE = "outside_diameter_mm = 315.0\nsdr = 17.0"
STEEL = "outside_diameter_mm = 273.0\nwall_mm = 6.3"
FULL = """
least_wall_mm = 4.0
material = "steel"
modulus_mpa = 205000
poisson_ratio = 0.28
ovality_pct = 2
supply_per_m = 1
laying_per_m = 2
fixed_each = 3"""
OWN = "wall_mm = 5.0\nroughness_mm = 0.5"


def test_tables_give_what_hydraulics_gives(make):
    pe, steel, _ = load_site(
        make(("[intake]", "temperature_c = 30\n[intake]"), ("= 2.5", "= 2.5\npipe_load_hours = 100"))
    ).pipes
    assert pe == pe_pipe(315.0, 17.0, "PE100", temperature_c=30.0, load_hours=100.0)
    assert steel == steel_pipe(273.0, 6.3)


def test_pe_walls_are_those_of_the_standard(make):
    """MS 1058-2:2005 (identical with ISO 4427-2), 315 mm: SDR 17 has 18.7 mm at least, SDR 11 has 28.6 mm."""
    walls = [load_site(make(("sdr = 17.0", f"sdr = {sdr}"))).pipes[0].least_wall_m for sdr in (17.0, 11.0)]
    assert walls == pytest.approx([0.0187, 0.0286], abs=1e-12)


def test_load_and_warmth_soften_plastic(make):
    short, long, warm = (
        load_site(make(*edit)).pipes[0].modulus_pa
        for edit in (
            [("= 2.5", "= 2.5\npipe_load_hours = 12")],
            [],
            [("[intake]", "temperature_c = 35\n[intake]")],
        )
    )
    assert short > long > warm


def test_own_dimensions_in_si(make):
    own = load_site(
        make(
            (
                OWN,
                OWN + FULL,
            ),
            (PE, PE + "\nsupply_per_m = 0"),
            (STEEL, STEEL + "\nsupply_per_m = 0"),
        )
    ).pipes[2]
    assert own.name == "old steel"
    assert own.material == "steel"
    assert (own.outside_diameter_m, own.wall_m, own.least_wall_m) == (0.3, 0.005, 0.004)
    assert own.bore_m == pytest.approx(0.29)
    assert (own.roughness_m, own.darcy_factor) == (0.0005, None)
    assert (own.modulus_pa, own.poisson_ratio, own.ovality_pct) == (2.05e11, 0.28, 2.0)
    assert own.prices == PipePrices(1.0, 2.0, 3.0)
    assert "site file" in own.source


def test_own_dimensions_with_little_said(make):
    own = load_site(make((OWN, "wall_mm = 5.0\ndarcy_factor = 0.02"), ('name = "old steel"\n', ""))).pipes[2]
    assert own.name == "own 300 x 5 mm"
    assert own.darcy_factor == 0.02
    assert own.least_wall_m == own.wall_m
    assert own.modulus_pa is None


def test_a_table_pipe_may_be_overridden(make):
    pipe = load_site(make((PE, PE + "\nname = 'P'\nroughness_mm = 0.1\nmodulus_mpa = 500\novality_pct = 1"))).pipes[0]
    plain = pe_pipe(315.0, 17.0, "PE100", temperature_c=10.0, load_hours=8760.0)
    assert (pipe.name, pipe.roughness_m, pipe.modulus_pa, pipe.ovality_pct) == ("P", 1e-4, 5e8, 1.0)
    assert (pipe.wall_m, pipe.poisson_ratio) == (plain.wall_m, plain.poisson_ratio)
    factor = load_site(make((PE, PE + "\ndarcy_factor = 0.018"))).pipes[0]
    assert factor.darcy_factor == 0.018


@pytest.mark.parametrize(
    ("old", "new", "key", "found", "allowed", "remedy"),
    [
        ("sdr = 17.0", "sdr = 18.0", "pipes[1].sdr", "18", "17", "listed size"),
        ("315.0", "316.0", "pipes[1].outside_diameter_mm", "316", "315", "listed size"),
        ("wall_mm = 6.3", "wall_mm = 6.4", "pipes[2].wall_mm", "6.4", "6.3", "listed size"),
        ("273.0", "274.0", "pipes[2].outside_diameter_mm", "274", "273", "listed size"),
        ("sdr = 17.0", "sdr = 17.0\nmaterial = 'PVC'", "pipes[1].material", '"PVC"', '"PE100"', "leave 'table' out"),
        ("sdr = 17.0", "sdr = 17.0\nwall_mm = 5", "pipes[1].wall_mm", "wall_mm = 5", "ISO 4427", "the table gives it"),
        ("sdr = 17.0\n", "", "pipes[1].sdr", "315", "sdr", "add 'sdr"),
        ("wall_mm = 6.3\n", "", "pipes[2].wall_mm", "273", "wall_mm", "add 'wall_mm"),
        ("wall_mm = 6.3", "wall_mm = 6.3\nsdr = 11", "pipes[2].sdr", "sdr = 11", "EN 10220", "remove sdr"),
        (OWN, OWN + "\nsdr = 11", "pipes[3].sdr", "sdr = 11", "no table", 'table = "ISO 4427"'),
        ("wall_mm = 5.0\n", "", "pipes[3].wall_mm", "300", "wall_mm", "add 'wall_mm"),
        ("\nroughness_mm = 0.5", "", "pipes[3].roughness_mm", "300", "darcy_factor", "add 'roughness_mm"),
        (OWN, OWN + "\ndarcy_factor = 0.02", "pipes[3].darcy_factor", "roughness_mm = 0.5", "one of", "remove one"),
        (
            "sdr = 17.0",
            "sdr = 17.0\nroughness_mm = 0\ndarcy_factor = 0.02",
            "pipes[1].darcy_factor",
            "0.02",
            "one of",
            "remove",
        ),
        ("wall_mm = 5.0", "wall_mm = 150.0", "pipes[3].wall_mm", "150 mm", "below 150 mm", "correct"),
        (OWN, OWN + "\nleast_wall_mm = 6", "pipes[3].least_wall_mm", "6 mm", "at most 5 mm", "correct"),
        ('"old steel"', '"steel 273 x 6.3"', "pipes[3].name", '"steel 273 x 6.3"', "of its own", "another 'name'"),
    ],
)
def test_one_fault_one_problem(one, old, new, key, found, allowed, remedy):
    problem, line = one((old, new))
    assert problem.key == key
    assert found in problem.found
    assert allowed in problem.allowed
    assert remedy in problem.remedy
    assert key.rpartition(".")[2] in line or (line == "[[pipes]]" and remedy.startswith("add"))


def test_the_same_size_twice(one):
    again = f'[[pipes]]\ntable = "ISO 4427"\n{PE}\n\n'
    problem, line = one(("[[pipes]]", again + "[[pipes]]"))
    assert problem.key == "pipes[2]"
    assert line == "[[pipes]]"
    assert "pipes[1]" in problem.found
    assert "same name" in problem.what


def test_pipes_are_judged_although_others_are_wrong(refuse):
    problems = refuse(("sdr = 17.0", "sdr = 18.0"), ("wall_mm = 6.3", "wall_mm = 'x'"), ("roughness_mm = 0.5", ""))
    assert set(problems) == {"pipes[1].sdr", "pipes[2].wall_mm", "pipes[3].roughness_mm"}
