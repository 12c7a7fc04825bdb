"""Pressure drop and liquid beds against a library, tables and worked examples."""

import numpy as np
import pytest
from fluids.packed_bed import Ergun

from psdflow.fluidization.bed import (
    bed_pressure_drop_of_mass,
    expanded_height,
    froude_mf,
    liquid_bed_voidage,
    packed_bed_pressure_gradient,
    richardson_zaki_exponent,
    richardson_zaki_exponent_piecewise,
)
from psdflow.fluidization.minimum import minimum_fluidization_velocities


@pytest.mark.parametrize("velocity", [1e-4, 0.01, 1.0, 10.0])
@pytest.mark.parametrize("voidage", [0.35, 0.5, 0.8])
def test_packed_bed_equals_the_fluids_library(velocity, voidage):
    """fluids.packed_bed.Ergun."""
    got = packed_bed_pressure_gradient(
        velocity=velocity,
        diameter=3e-4,
        voidage=voidage,
        fluid_density=1.2,
        fluid_viscosity=1.8e-5,
        sphericity=0.8,
    )
    assert got == pytest.approx(Ergun(dp=2.4e-4, voidage=voidage, vs=velocity, rho=1.2, mu=1.8e-5), rel=1e-6)


def test_pressure_drop_of_mass():
    """Rhodes, worked example 7.1 (from memory): 3.6 kg of 2590 kg/m³ in water, 75.7 mm column: 4817 Pa."""
    drop = bed_pressure_drop_of_mass(bed_mass=3.6, bed_diameter=0.0757, particle_density=2590.0, fluid_density=1000.0)
    assert drop == pytest.approx(4817.0, rel=1e-3)


REYNOLDS = [0.39, 0.49, 0.76, 1.23, 2.02, 2.35, 2.75, 6.53, 9.45, 14.45, 18.2, 27.5, 38.25, 41.7, 80, 171, 267, 489]
EXPONENT = [4.52, 4.45, 4.42, 4.33, 4.17, 4.14, 4.02, 3.76, 3.54, 3.39, 3.33, 3.19, 3.05, 3.00, 2.86, 2.55, 2.50, 2.39]


@pytest.mark.parametrize(
    ("law", "within"), [(richardson_zaki_exponent, 0.1), (richardson_zaki_exponent_piecewise, 0.115)]
)
def test_richardson_zaki_table(law, within):
    """Richardson & Zaki 1954, table VI, n without walls (open transcription)."""
    assert np.abs(law(reynolds_t=REYNOLDS) - EXPONENT).max() < within


def test_liquid_expansion_exercise():
    """Rhodes, exercise (from memory): 130 kg of 1500 kg/m³ in water, 0.2 m²: H_mf 0.818 m, voidage 0.662, 0.612."""
    height_mf = 130.0 / (1500.0 * 0.2 * (1 - 0.47))
    assert height_mf == pytest.approx(0.818, abs=5e-4)
    voidage = liquid_bed_voidage(
        velocity=2e-5 / 0.2, terminal_velocity=np.array([0.68e-3, 0.98e-3]), exponent=4.65, voidage_mf=0.47
    )
    assert voidage == pytest.approx([0.6622, 0.6121], abs=2e-4)
    height = expanded_height(bed_height_mf=height_mf, voidage_mf=0.47, voidage=voidage)
    assert height * (1 - voidage) == pytest.approx(130.0 / 300.0)


def test_wilhelm_kwauk():
    """Wilhelm & Kwauk 1948: glass in water fluidizes smoothly (Fr_mf < 0.13), lead shot in air bubbles (> 1.3)."""
    glass = minimum_fluidization_velocities(
        diameter_sv=5e-4, diameter_v=5e-4, particle_density=2500.0, fluid_density=998.0, fluid_viscosity=1e-3
    )["wen-yu-1966"]
    lead = minimum_fluidization_velocities(
        diameter_sv=1.3e-3, diameter_v=1.3e-3, particle_density=11300.0, fluid_density=1.2, fluid_viscosity=1.8e-5
    )["wen-yu-1966"]
    assert froude_mf(minimum_fluidization_velocity=glass, diameter=5e-4) < 0.13
    assert froude_mf(minimum_fluidization_velocity=lead, diameter=1.3e-3) > 1.3
