"""Disengaging heights and the decay of the flux in the freeboard."""

import numpy as np
import pytest

from psdflow.carryover import freeboard


def test_zenz_weil_chart_point():
    """Horio's fit of the Zenz & Weil chart: D 0.05 m, U 0.3 m/s gives 0.563 m (looked up in a public test)."""
    assert freeboard.tdh_zenz_weil(velocity=0.3, bed_diameter=0.05) == pytest.approx(0.563, abs=5e-4)


@pytest.mark.parametrize(
    ("velocity", "heights"),
    [
        (0.1, (0.42, 0.62, 1.15, 2.15, 3.55)),
        (0.5, (0.76, 1.03, 1.69, 2.90, 4.47)),
        (1.0, (1.58, 1.93, 2.76, 4.19, 5.96)),
    ],
)
def test_zenz_weil_table(velocity, heights):
    """Computed by hand from Horio's fit (form from memory) for D 0.05, 0.1, 0.3, 1 and 3 m."""
    found = freeboard.tdh_zenz_weil(velocity=velocity, bed_diameter=np.array([0.05, 0.1, 0.3, 1.0, 3.0]))
    assert found == pytest.approx(heights, abs=0.006)


def test_amitin():
    """Amitin et al. 1968 with log10 (form looked up; base of the logarithm ambiguous): computed by hand."""
    found = freeboard.tdh_amitin(velocity=np.array([0.1, 0.3, 0.5, 1.0, 1.5]))
    assert found == pytest.approx([0.457, 1.595, 2.846, 6.231, 9.843], abs=0.002)


def test_from_bubbles():
    """Fung & Hamdullahpur 13.8 D_b, Horio 4.47 D_b^0.5, George & Grace 18.2 D_b (from memory): computed by hand."""
    bubble = np.array([0.05, 0.1, 0.2, 0.5])
    assert freeboard.tdh_fung_hamdullahpur(bubble_diameter=bubble) == pytest.approx([0.69, 1.38, 2.76, 6.90])
    assert freeboard.tdh_horio(bubble_diameter=bubble) == pytest.approx([1.00, 1.41, 2.00, 3.16], abs=0.005)
    assert freeboard.tdh_george_grace(bubble_diameter=0.1) == pytest.approx(1.82)


def test_kunii_levenspiel_example_7_6():
    """Kunii & Levenspiel 1991, ex. 7.6 (looked up): E_inf 0.6539, E_0 5.0, a = 0.72/0.503, 2 m: 0.9021 kg/m²s."""
    found = freeboard.flux_at_height(far_flux=0.6539, surface_flux=5.0, height=2.0, decay=0.72 / 0.503)
    assert found == pytest.approx(0.9021, abs=2e-4)


def test_wen_chen_surface_flux_and_decay():
    """Wen & Chen 1982 (from memory), by hand: 231 kg/m²s for D_b 0.1 m; with a = 4 it is 32.1 at 0.5 m, 1.077 at 2 m."""
    thrown = freeboard.surface_flux(
        velocity=0.5,
        minimum_fluidization_velocity=0.003,
        bubble_diameter=0.1,
        fluid_density=1.2,
        fluid_viscosity=1.8e-5,
    )
    assert thrown == pytest.approx(231, rel=0.01)
    found = freeboard.flux_at_height(far_flux=1.0, surface_flux=thrown, height=np.array([0.5, 1.0, 2.0, 3.0]))
    assert found == pytest.approx([32.1, 5.20, 1.077, 1.0014], rel=0.003)


def test_flux_far_up_is_the_far_flux():
    assert freeboard.flux_at_height(far_flux=0.3, surface_flux=9.0, height=100.0) == pytest.approx(0.3)
