"""Pipe friction against computed tables, textbook examples and two libraries.

Factors are Darcy's (h = f L/D V^2/2g); a row whose book prints Fanning's (a quarter of it) says so. Figures of the
textbook rows come from readers' transcriptions (see test_siphon_textbooks.py) and were recomputed by hand.
"""

import fluids
import numpy as np
import pytest
from pygfunction.pipes import fluid_friction_factor_circular_pipe

from routing.hydraulics import darcy_factor, energy_discharge_m3s
from routing.records import Levels, Limits, Losses, Pipe, Water

G = 9.81
FT = 0.3048

# Colebrook-White to machine precision, computed with the library `fluids` 1.3. 1e-4.
REYNOLDS = (5e3, 1e4, 1e5, 1e6, 1e7, 1e8)
COLEBROOK = {
    0.0: (0.037393, 0.030883, 0.017990, 0.011645, 0.008103, 0.005940),
    1e-5: (0.037404, 0.030898, 0.018044, 0.011870, 0.008996, 0.008188),
    1e-4: (0.037505, 0.031037, 0.018514, 0.013441, 0.012166, 0.011999),
    1e-3: (0.038495, 0.032382, 0.022175, 0.019943, 0.019667, 0.019639),
    1e-2: (0.047259, 0.043127, 0.038504, 0.037965, 0.037910, 0.037904),
    5e-2: (0.075948, 0.073801, 0.071781, 0.071574, 0.071553, 0.071551),
}


@pytest.mark.parametrize("roughness", COLEBROOK)
def test_colebrook_table(roughness):
    np.testing.assert_allclose(darcy_factor(np.array(REYNOLDS), roughness), COLEBROOK[roughness], rtol=1e-4)


def head_loss_m(discharge, bore, length, viscosity, roughness, gravity=G):
    velocity = discharge / (0.25 * np.pi * bore**2)
    factor = darcy_factor(velocity * bore / viscosity, roughness / bore)
    return factor * length / bore * velocity**2 / (2 * gravity), factor


def test_massey_example_7_1():
    # Massey & Ward-Smith, Mechanics of Fluids, ex. 7.1 p. 255. Chart: Fanning 0.00515, 16.81 m; the full equation
    # gives 0.020428 (Darcy) and 16.67 m by hand. 1 % covers the chart.
    loss, factor = head_loss_m(0.05, 0.15, 300.0, 1.14e-6, 0.15e-3)
    assert loss == pytest.approx(16.81, rel=0.01)
    assert loss == pytest.approx(16.67, rel=5e-4)
    assert factor == pytest.approx(0.020428, rel=1e-4)


def free_case(head_m, viscosity, losses=None):
    losses = losses or Losses(entrance=0.0, exit=0.0)
    return (Levels(head_m, 0.0), losses, Water(1000.0, viscosity, 0.0, 20.0), Limits(101_325.0, gravity_ms2=G))


def test_massey_example_7_2_solved_for_flow():
    # Ex. 7.2 p. 255: Re 16 061, Fanning 0.00792, 0.0126 m3/s (0.012614 by hand). 0.3 %.
    pipe = Pipe.of_bore(0.1, roughness_m=0.25e-3)
    discharge = energy_discharge_m3s(pipe, 120.0, *free_case(5.0, 1e-5))
    assert discharge == pytest.approx(0.012614, rel=0.003)
    assert discharge / (0.25 * np.pi * 0.1) / 1e-5 == pytest.approx(16_061, rel=0.003)
    assert darcy_factor(16_061.0, 0.0025) / 4 == pytest.approx(0.00792, rel=0.003)


def test_massey_example_7_3_solved_for_bore():
    # Ex. 7.3 p. 256: bore 0.187 m (0.18730 by hand). 0.3 % on the bore is 0.8 % on the flow.
    pipe = Pipe.of_bore(0.18730, roughness_m=0.15e-3)
    assert energy_discharge_m3s(pipe, 180.0, *free_case(9.0, 1.14e-6)) == pytest.approx(0.085, rel=0.003)


def test_gate_question_full_equation():
    # GATE Civil 2017/18 question: fully rough 4.594 m; the full equation gives 4.682 m (computed outside).
    loss, _ = head_loss_m(3.0 * 0.25 * np.pi * 0.25, 0.5, 300.0, 0.9e-6, 0.25e-3)
    assert loss == pytest.approx(4.682, rel=0.002)
    # At a Reynolds number without end the rough law is left: f = 0.016692.
    assert darcy_factor(1e12, 0.0005) == pytest.approx(0.016692, rel=0.005)


def test_series_of_two_bores():
    # University tutorial (Wolaita), question 1:
    # 13.337 m with chart factors, 13.364 m with the full equation.
    wide, _ = head_loss_m(0.5, 0.6, 300.0, 1.31e-6, 0.26e-3)
    narrow, _ = head_loss_m(0.5, 0.4, 300.0, 1.31e-6, 0.26e-3)
    heads = [(0.5 / (0.25 * np.pi * d**2)) ** 2 / (2 * G) for d in (0.6, 0.4)]
    assert wide + narrow + 0.5 * heads[0] + (0.24 + 1.0) * heads[1] == pytest.approx(13.364, rel=0.001)


def test_vennard_examples_9_2_and_9_3():
    # Vennard, Elementary Fluid Mechanics, pp. 285-288: 3 in, Re 80 000; rough (0.002) 8.6 ft, smooth 6.35 ft (6.37
    # by the full equation); ex. 9.7 p. 298: 0.0234 fully rough.
    bore, viscosity = 0.25 * FT, 0.729e-5 * FT**2
    discharge = 80_000 * viscosity / bore * 0.25 * np.pi * bore**2
    rough, factor = head_loss_m(discharge, bore, 1000 * FT, viscosity, 0.002 * bore, 32.2 * FT)
    smooth, _ = head_loss_m(discharge, bore, 1000 * FT, viscosity, 0.0, 32.2 * FT)
    assert factor == pytest.approx(0.0255, rel=0.005)
    assert rough / FT == pytest.approx(8.6, rel=0.005)
    assert smooth / FT == pytest.approx(6.37, rel=0.005)
    assert darcy_factor(1e12, 0.002) == pytest.approx(0.0234, rel=0.002)


def test_cengel_example_8_3():
    # Cengel & Cimbala, Fluid Mechanics, ex. 8-3: water of 60 °F, 2 in, 0.2 ft3/s, 200 ft: Re 126 400, f 0.0174,
    # 11.8 psi, 27.2 to 27.3 ft.
    viscosity = 7.536e-4 / 62.36 * FT**2
    bore = FT / 6
    loss, factor = head_loss_m(0.2 * FT**3, bore, 200 * FT, viscosity, 7e-6 * FT, 32.2 * FT)
    assert factor == pytest.approx(0.0174, rel=0.005)
    assert loss / FT == pytest.approx(27.25, rel=0.005)
    assert loss / FT * 62.36 / 144 == pytest.approx(11.8, rel=0.005)


FIXED_FACTOR = [
    # source, bore, length, head, Darcy factor, losses, gravity, discharge
    (
        "Daugherty & Franzini, Fluid Mechanics with Engineering Applications, ex. 8.5 p. 241: 6.40 ft3/s",
        (10 / 12 * FT, 5000 * FT, 260 * FT, 0.02),
        Losses(0.5, 1.0),
        6.40 * FT**3,
        0.002,
    ),
    (
        "Schaschke, Worked Examples for Engineers, ex. 8.6 p. 204 (Fanning 0.0065): 15 m3/h under 12.29 m",
        (0.05, 100.0, 12.29, 0.026),
        Losses(0.5, 1.0),
        15 / 3600,
        0.002,
    ),
    (
        "Fox & McDonald ex. 8.5 p. 352: 0.0084 m3/s under 4.46 m (the transcription adds 1.6 m by mistake)",
        (0.075, 100.0, 4.46, 0.017),
        Losses(0.5, 1.0),
        0.0084,
        0.003,
    ),
]


@pytest.mark.parametrize(("source", "line", "losses", "discharge", "tolerance"), FIXED_FACTOR)
def test_fixed_factor_lines(source, line, losses, discharge, tolerance):
    bore, length, head, factor = line
    pipe = Pipe.of_bore(bore, darcy_factor=factor)
    found = energy_discharge_m3s(pipe, length, *free_case(head, 1e-6, losses))
    assert found == pytest.approx(discharge, rel=tolerance)


def test_polyethylene_agrees_with_hazen_williams():
    # 200 mm, 1.5 m/s, 10 °C, 0.01 mm: 8.98 m/km; Hazen-Williams C 150 gives 8.81 (both computed outside).
    loss, _ = head_loss_m(1.5 * 0.25 * np.pi * 0.04, 0.2, 1000.0, 1.3063e-6, 1e-5, 9.80665)
    assert loss == pytest.approx(8.98, rel=0.001)
    assert loss == pytest.approx(8.81, rel=0.02)


def test_agrees_with_fluids_over_the_range():
    for roughness in (0.0, 1e-6, 1e-5, 1e-4, 1e-3, 1e-2, 5e-2):
        for reynolds in np.geomspace(50.0, 1e8, 60):
            # Laminar up to 2040 there too; above it Clamond's iteration of the Colebrook-White equation.
            expected = fluids.friction_factor(Re=reynolds, eD=roughness)
            assert darcy_factor(float(reynolds), roughness) == pytest.approx(expected, rel=1e-9)


def test_agrees_with_pygfunction_over_the_range():
    # A library for ground heat exchangers that iterates the full Colebrook-White equation. It calls flow laminar up
    # to 2300 (2040 here), so that the stretch between the two is left out.
    bore, viscosity, density = 0.2, 1e-3, 1000.0
    reynolds = np.concatenate([np.geomspace(50.0, 2000.0, 15), np.geomspace(2310.0, 1e8, 45)])
    for roughness in (0.0, 1e-6, 1e-5, 1e-4, 1e-3, 1e-2, 5e-2):
        flow = reynolds * viscosity * bore * np.pi / 4
        expected = [
            fluid_friction_factor_circular_pipe(m, bore / 2, viscosity, density, roughness * bore, 1e-13) for m in flow
        ]
        np.testing.assert_allclose(darcy_factor(reynolds, roughness), expected, rtol=1e-9)
