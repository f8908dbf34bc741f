"""The gatekeeper: each number is refused outside its range, all at once, with the value found."""

import math
from dataclasses import replace

import numpy as np
import pytest

from routing.errors import InputError
from routing.hydraulics import run_siphon, water_at
from routing.hydraulics.checking import check_number, check_points, check_profile, check_records
from routing.records import Levels, Limits, Losses, Pipe, Profile

PIPE = Pipe("p", "PE100", 0.225, 0.0134, 0.0134, 1e-5)
GOOD = (PIPE, Levels(100.0, 90.0), Losses(), water_at(10.0), Limits(98_000.0))
PLACE = {type(record).__name__: at for at, record in enumerate(GOOD)}

BAD = [
    (Pipe, "outside_diameter_m", "outside diameter"),
    (Pipe, "wall_m", "wall of the pipe"),
    (Pipe, "least_wall_m", "least wall"),
    (Pipe, "roughness_m", "roughness"),
    (Pipe, "darcy_factor", "Darcy factor"),
    (Levels, "water_m", "water level"),
    (Levels, "outlet_m", "outlet level"),
    (Levels, "tailwater_m", "tailwater level"),
    (Levels, "intake_mouth_m", "intake mouth"),
    (Losses, "entrance", "entrance loss"),
    (Losses, "exit", "exit loss"),
    (Losses, "valve_open", "open valve"),
    (Losses, "bends_per_m", "bend loss"),
    (type(GOOD[3]), "density_kgm3", "density"),
    (type(GOOD[3]), "kinematic_viscosity_m2s", "viscosity"),
    (type(GOOD[3]), "vapour_pressure_pa", "vapour pressure"),
    (Limits, "air_pressure_pa", "air pressure"),
    (Limits, "reserve_m", "reserve"),
    (Limits, "highest_lift_m", "highest lift"),
    (Limits, "least_submergence_m", "least submergence"),
    (Limits, "collapse_safety", "safety against collapse"),
    (Limits, "gravity_ms2", "gravity"),
]


def with_field(kind, name, value):
    records = list(GOOD)
    at = PLACE[kind.__name__]
    records[at] = replace(records[at], **{name: value})
    return records


def test_good_records_pass():
    check_records(*GOOD)


@pytest.mark.parametrize(("kind", "name", "words"), BAD)
@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf, 1e9])
def test_each_number_is_checked(kind, name, words, value):
    with pytest.raises(InputError, match=words) as caught:
        check_records(*with_field(kind, name, value))
    assert f"{value:g}" in str(caught.value)
    assert caught.value.problems[0].allowed


@pytest.mark.parametrize("kind_name", [(k, n) for k, n, _ in BAD if k is not Levels])
def test_negative_numbers_are_refused_but_for_levels(kind_name):
    with pytest.raises(InputError):
        check_records(*with_field(*kind_name, -0.5))


def test_all_problems_are_told_at_once():
    records = with_field(Limits, "reserve_m", -1.0)
    records[PLACE["Losses"]] = Losses(entrance=-1.0, fittings=((math.nan, 0.1), (5.0, -0.2)))
    with pytest.raises(InputError) as caught:
        check_records(*records)
    found = [problem.found for problem in caught.value.problems]
    assert found == ["-1", "nan m", "-0.2", "-1 m"]


def test_a_wall_that_leaves_no_bore_is_refused():
    with pytest.raises(InputError, match="bore of the pipe"):
        check_records(*with_field(Pipe, "wall_m", 0.1125))


def test_a_fixed_factor_replaces_the_roughness():
    pipe = replace(PIPE, roughness_m=math.nan, darcy_factor=0.02)
    check_records(pipe, *GOOD[1:])


def test_a_line_without_any_loss_is_refused():
    records = [Pipe.of_bore(0.2, darcy_factor=0.0), *GOOD[1:]]
    records[PLACE["Losses"]] = Losses(0.0, 0.0)
    with pytest.raises(InputError, match="nothing resists"):
        check_records(*records)


@pytest.mark.parametrize(
    ("chainage", "crown", "words"),
    [
        ([0.0], [1.0], "too short"),
        ([], [], "too short"),
        ([0.0, 1.0], [1.0, 2.0, 3.0], "do not match"),
        ([[0.0, 1.0]], [[1.0, 2.0]], "do not match"),
        ([0.5, 1.0], [1.0, 2.0], "start at the intake"),
        ([0.0, 1.0, 1.0], [1.0, 2.0, 3.0], "1 m, then 1 m at position 2"),
        ([0.0, 2.0, 1.0], [1.0, 2.0, 3.0], "2 m, then 1 m at position 2"),
        ([0.0, math.nan], [1.0, 2.0], "chainage holds a value that is not finite"),
        ([0.0, 1.0], [1.0, math.inf], "inf at position 1"),
        ([0.0, -1.0], [1.0, 2.0], "negative"),
    ],
)
def test_profiles_refused(chainage, crown, words):
    with pytest.raises(InputError, match=words):
        check_profile(Profile(np.array(chainage), np.array(crown)))


def test_profiles_of_whole_numbers_and_lists_are_taken():
    chainage, crown = check_profile(Profile(np.array([0, 10, 20]), np.array([1, 2, 0])))
    assert chainage.dtype == crown.dtype == np.float64
    chainage, crown = check_points(np.arange(20.0)[::2], [1.0] * 10)
    assert chainage.flags["C_CONTIGUOUS"]
    assert crown.shape == (10,)


def test_inputs_are_not_changed():
    chainage, crown = np.array([0.0, 50.0, 100.0]), np.array([99.0, 103.0, 90.0])
    kept = chainage.copy(), crown.copy()
    pipe, *case = GOOD
    run_siphon(pipe, Profile(chainage, crown), *case)
    np.testing.assert_array_equal(chainage, kept[0])
    np.testing.assert_array_equal(crown, kept[1])


def test_numbers():
    assert check_number("depth", 3, 0.0, 5.0) == 3.0
    assert isinstance(check_number("depth", 3, 0.0, 5.0), float)
    assert check_number("depth", 5.0, 0.0, 5.0, "m") == 5.0
    with pytest.raises(InputError, match="depth") as caught:
        check_number("depth", 6.0, 0.0, 5.0, "m")
    assert caught.value.problems[0].found == "6 m"
    assert caught.value.problems[0].allowed == "0 to 5 m"
    assert caught.value.exit_code == 2
