"""Drag and terminal velocity against general-purpose libraries, tables and worked examples."""

import fluids
import numpy as np
import pytest

from psdflow.fluidization.terminal import (
    drag_clift_gauvin,
    drag_ganser,
    drag_haider_levenspiel,
    drag_schiller_naumann,
    slip_correction,
    terminal_velocity,
    terminal_velocity_explicit,
)

SAND_IN_AIR = {"particle_density": 2600.0, "fluid_density": 1.2, "fluid_viscosity": 1.8e-5}


def test_sphere_drag_equals_the_fluids_library():
    """Haider & Levenspiel 1989, sphere: fluids.drag.Haider_Levenspiel."""
    re = np.logspace(-3, 5, 50)
    expected = [fluids.drag.Haider_Levenspiel(x) for x in re]
    assert drag_haider_levenspiel(reynolds=re) == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize(
    ("law", "low", "high", "top"),
    [
        (drag_haider_levenspiel, -0.075, 0.045, 2e5),
        (drag_clift_gauvin, -0.055, 0.065, 2e5),
        (drag_schiller_naumann, -0.075, 0.055, 900.0),
    ],
)
def test_sphere_laws_stay_near_the_standard_curve(law, low, high, top):
    """Standard drag curve of Clift, Grace & Weber 1978: fluids.drag.Clift."""
    re = np.logspace(-2, np.log10(top), 200)
    deviation = law(reynolds=re) / np.array([fluids.drag.Clift(x) for x in re]) - 1.0
    assert deviation.min() > low
    assert deviation.max() < high


def test_ganser_is_far_low_for_spheres():
    """Against the standard curve of Clift, Grace & Weber 1978 (fluids.drag.Clift): why its range ends at 0.95."""
    re = np.logspace(1, 3, 100)
    deviation = drag_ganser(reynolds=re) / np.array([fluids.drag.Clift(x) for x in re]) - 1.0
    assert -0.28 < deviation.min() < -0.22


@pytest.mark.parametrize(
    ("law", "reynolds", "expected"),
    [
        (drag_haider_levenspiel, 1.0, [30.74, 33.78, 36.37]),
        (drag_haider_levenspiel, 100.0, [1.302, 1.887, 2.350]),
        (drag_haider_levenspiel, 1e4, [1.426, 2.220, 2.711]),
        (drag_ganser, 1.0, [31.54, 35.24, 37.72]),
        (drag_ganser, 100.0, [1.520, 2.073, 2.472]),
        (drag_ganser, 1e4, [1.390, 2.166, 2.729]),
    ],
)
def test_drag_of_other_shapes(law, reynolds, expected):
    """Sphericity 0.8, 0.67, 0.6: recomputed by hand from Haider & Levenspiel 1989 eq. 4 and Ganser 1993 eq. 18."""
    assert law(reynolds=reynolds, sphericity=[0.8, 0.67, 0.6]) == pytest.approx(expected, rel=5e-4)


def test_two_shape_laws_agree_with_each_other():
    """Haider & Levenspiel 1989 and Ganser 1993 are independent fits to overlapping data: within 26 % of each other."""
    re = np.logspace(-2, 4, 60)[:, None]
    phi = np.array([0.6, 0.67, 0.8, 0.85])
    ratio = drag_ganser(reynolds=re, sphericity=phi) / drag_haider_levenspiel(reynolds=re, sphericity=phi)
    assert np.abs(ratio - 1.0).max() < 0.26


def test_terminal_velocity_equals_the_fluids_library():
    """fluids.v_terminal with the same law; it switches to Stokes below Re 0.01."""
    for d in np.logspace(np.log10(30e-6), -2, 25):
        expected = fluids.v_terminal(D=d, rhop=2600.0, rho=1.2, mu=1.8e-5, Method="Haider_Levenspiel")
        g_ratio = 9.81 / 9.80665  # the library uses standard gravity
        got = terminal_velocity(diameter=d, **{**SAND_IN_AIR, "particle_density": 1.2 + 2598.8 / g_ratio})
        assert got == pytest.approx(expected, rel=1e-7)


def test_terminal_velocity_in_water():
    """fluids.v_terminal doc example, 70 µm, 2600 kg/m³, water: 0.004142497 m/s with the library's default law."""
    u = terminal_velocity(
        diameter=70e-6, particle_density=2600.0, fluid_density=1000.0, fluid_viscosity=1e-3, law="clift-gauvin-1971"
    )
    assert u == pytest.approx(0.004142497, rel=0.035)


def test_sand_in_air_table():
    """Sand 2600 in air 1.2, 1.8e-5, recomputed from the published laws with an independent bracketed root."""
    d = np.array([10, 30, 60, 100, 200, 500, 1000]) * 1e-6
    clift = [0.00784, 0.06821, 0.24662, 0.57179, 1.46125, 3.79427, 6.91931]
    naumann = [0.00784, 0.06821, 0.24662, 0.57179, 1.46137, 3.80097, 7.00575]
    explicit = [0.00779, 0.06729, 0.24670, 0.59656, 1.65459, 4.30783, 7.09686]
    assert terminal_velocity(diameter=d, law="clift-gauvin-1971", **SAND_IN_AIR) == pytest.approx(clift, rel=7e-4)
    assert terminal_velocity(diameter=d, law="schiller-naumann-1935", **SAND_IN_AIR) == pytest.approx(naumann, rel=7e-4)
    assert terminal_velocity_explicit(diameter=d, **SAND_IN_AIR) == pytest.approx(explicit, rel=7e-4)


def test_general_fit_carried_to_a_sphere():
    """Haider & Levenspiel's general fit just below sphericity 1, same independent root: 0.5486 m/s at 100 µm."""
    u = terminal_velocity(diameter=100e-6, sphericity=1.0 - 1e-9, **SAND_IN_AIR)
    assert u == pytest.approx(0.54860, rel=1e-4)
    assert terminal_velocity(diameter=100e-6, **SAND_IN_AIR) == pytest.approx(0.5541, rel=1e-3)


def test_sharp_sand_example():
    """Kunii & Levenspiel 1991, example 3.3: 160 µm, sphericity 0.67: 0.88 m/s by the explicit form (from memory)."""
    assert terminal_velocity_explicit(diameter=160e-6, sphericity=0.67, **SAND_IN_AIR) == pytest.approx(0.88, abs=0.01)
    assert terminal_velocity(diameter=160e-6, sphericity=0.67, **SAND_IN_AIR) == pytest.approx(0.88, rel=0.04)


@pytest.mark.parametrize(("diameter", "expected"), [(0.1e-6, 2.905), (1e-6, 1.167), (5e-6, 1.033), (10e-6, 1.017)])
def test_slip(diameter, expected):
    """Davies 1945, mean free path 0.0665 µm; values recomputed, those of Hinds 1999 lie within 1.5 %."""
    slip = slip_correction(diameter=diameter, mean_free_path=0.0665e-6)
    assert slip == pytest.approx(expected, abs=6e-4)
    x = diameter / 0.0665e-6
    assert slip == pytest.approx(1 + (2.34 + 1.05 * np.exp(-0.39 * x)) / x, rel=0.016)
