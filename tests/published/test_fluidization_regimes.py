"""Transition velocities and spouting against hand calculations and an open example."""

import pytest

from psdflow.fluidization.bubbling import minimum_bubbling_abrahamsen_geldart
from psdflow.fluidization.minimum import recommended_u_mf
from psdflow.fluidization.numbers import velocity_scale
from psdflow.fluidization.regimes import REGIMES, regime, transition_velocities
from psdflow.fluidization.spouting import maximum_spoutable_height, minimum_spouting_velocity
from psdflow.fluidization.terminal import terminal_velocity

CATALYST = {"particle_density": 1500.0, "fluid_density": 1.2046, "fluid_viscosity": 1.8206e-5}
EXPECTED = {
    "bi-grace-1995-uc": 0.94,
    "bi-grace-1995-uc-absolute": 0.44,
    "horio-1986-uc": 0.75,
    "nakajima-1991-uc": 0.52,
    "lee-kim-1990-uc": 0.58,
    "cai-1989-uc": 0.50,
    "horio-1986-uk": 1.40,
    "bi-grace-1995-use": 1.31,
    "bi-fan-1991-utr": 1.60,
    "lee-kim-1990-utr": 1.75,
    "perales-1990-utr": 1.16,
    "adanez-1993-utr": 1.63,
    "tsukada-1993-utr": 1.40,
}


def test_catalyst_in_air():
    """60 µm catalyst, air 20 °C, D 0.3 m: recomputed by hand; Bi & Grace 1995 looked up, the others from memory."""
    values = transition_velocities(diameter_sv=60e-6, bed_diameter=0.3, **CATALYST)
    flat = {key: float(u) for methods in values.values() for key, u in methods.items()}
    assert {key: flat[key] for key in EXPECTED} == pytest.approx(EXPECTED, abs=0.0065)


VECTORS = {  # (size, density, gas density, viscosity): U_c and U_se of Bi & Grace 1995
    (60e-6, 1500.0, 1.2046, 1.8206e-5): (0.939, 1.309),
    (60e-6, 1500.0, 0.3142, 4.6679e-5): (2.161, 2.565),
    (60e-6, 1500.0, 23.920, 1.8511e-5): (0.181, 0.292),
    (300e-6, 2600.0, 1.2046, 1.8206e-5): (2.113, 3.855),
    (300e-6, 2600.0, 0.3142, 4.6679e-5): (4.862, 7.550),
    (300e-6, 2600.0, 23.920, 1.8511e-5): (0.407, 0.861),
    (1e-3, 2500.0, 1.2046, 1.8206e-5): (3.164, 6.902),
    (1e-3, 2500.0, 0.3142, 4.6679e-5): (7.281, 13.52),
    (1e-3, 2500.0, 23.920, 1.8511e-5): (0.610, 1.542),
}


@pytest.mark.parametrize("vector", VECTORS)
def test_vectors(vector):
    """Recomputed by hand from Bi & Grace 1995, air by CoolProp at 20 °C, 850 °C and 20 bar."""
    d, density, gas, viscosity = vector
    values = transition_velocities(
        diameter_sv=d, particle_density=density, fluid_density=gas, fluid_viscosity=viscosity
    )
    got = (values["u_c"]["bi-grace-1995-uc"], values["u_se"]["bi-grace-1995-use"])
    assert got == pytest.approx(VECTORS[vector], abs=6e-4, rel=5e-4)


@pytest.mark.parametrize(
    ("diameter", "gas", "viscosity", "velocity", "u_star"),
    [
        (60e-6, 1.5, 2e-5, 0.4, 0.789),
        (60e-6, 1.5, 2e-5, 0.8, 1.577),
        (450e-6, 1.0, 2.5e-5, 0.4, 0.559),
        (450e-6, 1.0, 2.5e-5, 0.8, 1.117),
    ],
)
def test_example_of_the_regime_map(diameter, gas, viscosity, velocity, u_star):
    """Kunii & Levenspiel 1991, example 3.4, p. 91, 1500 kg/m³: 450 µm bubbles at both velocities.

    Their map calls 60 µm at 0.4 m/s the onset of turbulence; Bi & Grace's line lies about twice as high,
    so it still bubbles here: the two published maps disagree.
    """
    fluid = {"particle_density": 1500.0, "fluid_density": gas, "fluid_viscosity": viscosity}
    assert velocity / velocity_scale(**fluid) == pytest.approx(u_star, abs=1.5e-3)
    transitions = transition_velocities(diameter_sv=diameter, **fluid)
    found = regime(
        velocity=velocity,
        minimum_fluidization_velocity=recommended_u_mf(diameter_sv=diameter, diameter_v=diameter, **fluid).value,
        minimum_bubbling_velocity=minimum_bubbling_abrahamsen_geldart(
            diameter_sv=diameter, fluid_density=gas, fluid_viscosity=viscosity
        ),
        turbulent_velocity=transitions["u_c"]["bi-grace-1995-uc"],
        transport_velocity=transitions["u_se"]["bi-grace-1995-use"],
    )
    assert REGIMES[int(found)] == "bubbling"


def test_entrainment_follows_the_terminal_velocity_of_coarse_grains():
    """Bi & Grace 1995: U_se = U_t above Ar 4e6; the two must be of one size there."""
    fluid = {"particle_density": 2600.0, "fluid_density": 1.2, "fluid_viscosity": 1.8e-5}
    u_t = terminal_velocity(diameter=4.2e-3, **fluid)
    with_it = transition_velocities(diameter_sv=4.2e-3, terminal_velocity=u_t, **fluid)["u_se"]["bi-grace-1995-use"]
    without = transition_velocities(diameter_sv=4.2e-3, **fluid)["u_se"]["bi-grace-1995-use"]
    assert with_it == u_t
    assert without == pytest.approx(u_t, rel=0.25)


def test_spouted_wheat():
    """Wheat-like grains, 152 mm column, recomputed by hand from Mathur & Gishler 1955, McNab & Bridgwater 1977."""
    grain = {"diameter": 3.6e-3, "particle_density": 1380.0, "fluid_density": 1.2}
    column = {"column_diameter": 0.152, "inlet_diameter": 0.0125}
    assert minimum_spouting_velocity(bed_height=0.30, **grain, **column) == pytest.approx(0.847, abs=5e-4)
    assert maximum_spoutable_height(fluid_viscosity=1.8e-5, **grain, **column) == pytest.approx(0.686, abs=5e-4)
