"""Minimum bubbling, bubbles, expansion and slugging against measured powders and worked examples."""

import csv
from pathlib import Path

import numpy as np
import pytest

from psdflow.fluidization.bubbling import (
    bed_height_ratio_at_bubbling,
    bubble_diameters,
    bubble_fraction,
    bubble_rise_velocity,
    minimum_bubbling_abrahamsen_geldart,
    minimum_bubbling_velocities,
)
from psdflow.fluidization.expansion import bed_expansion_babu
from psdflow.fluidization.minimum_forms import baeyens_geldart_1974
from psdflow.fluidization.slugging import slug_free_height_ratio, slugging_velocities

MEASURED = Path(__file__).parent / "data" / "umf_umb_measured.csv"
AIR = {"fluid_density": 1.2, "fluid_viscosity": 1.8e-5}


def columns(*names):
    lines = [line for line in MEASURED.read_text().splitlines() if not line.startswith("#")]
    rows = list(csv.DictReader(lines))
    return [np.array([float(row[name] or "nan") for row in rows]) for name in names]


def test_measured_minimum_bubbling():
    """Geldart 1973, table 1 (open transcription), 22 powders, no fines term: mean -4.7 %, mean absolute 10 %."""
    d, u_mb = columns("d_sv_um", "u_mb_ms")
    values = minimum_bubbling_velocities(diameter_sv=d * 1e-6, **AIR)
    for key, u in values.items():
        error, spread = u / u_mb - 1, np.sqrt(np.mean(np.log(u_mb / u) ** 2))
        print(
            f"{key:30s} mean {100 * error.mean():6.1f} %  absolute {100 * np.abs(error).mean():5.1f} %  ln {spread:.3f}"
        )
    error = values["abrahamsen-geldart-1980-umb"] / u_mb - 1
    assert 100 * error.mean() == pytest.approx(-4.7, abs=0.5)
    assert 100 * np.abs(error).mean() == pytest.approx(10.0, abs=1.0)
    assert np.abs(values["geldart-1973-umb"] / u_mb - 1).mean() < 0.2


def test_measured_expansion():
    """Geldart 1973, table 1: H_mb/H_0 against (U_mb/U_mf)^0.22: 17 of 21 rows within 0.04, 20 within 0.06."""
    u_mf, u_mb, height = columns("u_mf_ms", "u_mb_ms", "bed_height_ratio_mb")
    known = np.isfinite(u_mf)
    ratio = bed_height_ratio_at_bubbling(
        minimum_bubbling_velocity=u_mb[known], minimum_fluidization_velocity=u_mf[known]
    )
    missed = np.abs(ratio - height[known])
    assert np.sum(missed <= 0.0405) == 17
    assert np.sum(missed <= 0.0605) == 20


def test_bubbling_ratio_form():
    """Abrahamsen & Geldart 1980: U_mb/U_mf = 2300 ρ_g^0.126 µ^0.523 exp(0.716 F45)/[d^0.8 (g Δρ)^0.934]."""
    d, density, fines = 50e-6, 1500.0, 0.2
    u_mb = minimum_bubbling_abrahamsen_geldart(diameter_sv=d, fines_45um=fines, **AIR)
    u_mf = baeyens_geldart_1974(diameter=d, particle_density=density, **AIR)
    top = 2300 * 1.2**0.126 * 1.8e-5**0.523 * np.exp(0.716 * fines)
    assert u_mb / u_mf == pytest.approx(top / (d**0.8 * (9.81 * (density - 1.2)) ** 0.934), rel=2e-3)
    explicit = 5.50 * np.exp(0.158 * fines) * 1.2**0.028 * 1.8e-5**0.115 / (d**0.176 * (9.81 * 1498.8) ** 0.205)
    height = bed_height_ratio_at_bubbling(minimum_bubbling_velocity=u_mb, minimum_fluidization_velocity=u_mf)
    assert height == pytest.approx(explicit, rel=0.01)  # its exponents are rounded


def test_bubble_vector():
    """Bed 0.5 m, 0.5 m up, U 0.3, U_mf 0.05, porous plate: recomputed by hand from the published equations."""
    sizes = bubble_diameters(velocity=0.3, minimum_fluidization_velocity=0.05, height=0.5, bed_diameter=0.5)
    expected = {"mori-wen-1975": 0.145, "darton-1977": 0.118, "werther-1978": 0.102, "rowe-1976": 0.168}
    assert {key: float(size) for key, size in sizes.items()} == pytest.approx(expected, abs=6e-4)
    rise = bubble_rise_velocity(bubble_diameter=sizes["mori-wen-1975"])
    assert rise + 0.25 == pytest.approx(1.097, abs=1e-3)
    share = bubble_fraction(velocity=0.3, minimum_fluidization_velocity=0.05, bubble_rise=rise, visible_flow_share=1.0)
    assert share == pytest.approx(0.228, abs=5e-4)
    assert 1 / (1 - share) == pytest.approx(1.295, abs=1e-3)


def test_bubble_rise_example():
    """Kunii & Levenspiel 1991, example 6.1 inputs: d_b 3.75 cm in a 0.5 m bed: 0.711 sqrt(g d_b) = 0.431 m/s."""
    assert bubble_rise_velocity(bubble_diameter=0.0375, bed_diameter=0.5) == pytest.approx(0.4312, rel=1e-3)


def test_mori_wen_in_cgs():
    """Mori & Wen 1975: d_m = 0.652 [A (U-U_mf)]^0.4 in cm, s: the height limit of our SI form."""
    tall = bubble_diameters(velocity=0.3, minimum_fluidization_velocity=0.05, height=100.0, bed_diameter=0.5)
    expected = 0.652 * (np.pi / 4 * 50.0**2 * 25.0) ** 0.4 / 100
    assert tall["mori-wen-1975"] == pytest.approx(expected, rel=3e-3)


def test_babu_in_cgs():
    """Babu et al. 1978 (from memory): H/H_mf - 1 = 1.957 (U-U_mf)^0.738 d^1.006 ρ_p^0.376/(ρ_g^0.126 U_mf^0.937)."""
    # in cm, g, s
    expected = 1.957 * 25.0**0.738 * 0.03**1.006 * 2.6**0.376 / (1.2e-3**0.126 * 5.0**0.937)
    got = bed_expansion_babu(
        velocity=0.3,
        minimum_fluidization_velocity=0.05,
        diameter=300e-6,
        particle_density=2600.0,
        fluid_density=1.2,
        bed_diameter=0.5,
    )
    assert got - 1 == pytest.approx(expected, rel=2e-3)


def test_slugging_vector():
    """D 0.15, H_mf 0.5, U_mf 0.05, recomputed by hand; Baeyens & Geldart 1974, Yagi & Muchi 1952 (from memory)."""
    u = slugging_velocities(minimum_fluidization_velocity=0.05, bed_diameter=0.15, bed_height_mf=0.5)
    assert u["baeyens-geldart-1974-slugging"] == pytest.approx(0.169, abs=5e-4)
    assert u["stewart-davidson-1967"] == pytest.approx(0.05 + 0.0849, abs=1e-4)
    assert slug_free_height_ratio(diameter=300e-6, particle_density=2600.0) == pytest.approx(2.05, abs=0.005)
    cgs = 1.6e-3 * (60 * 15.0**0.175 - 50.0) ** 2 / 100  # cm/s; its 60 D^0.175 is our 1.34 D^0.175
    assert u["baeyens-geldart-1974-slugging"] - u["stewart-davidson-1967"] == pytest.approx(cgs, rel=0.02)
