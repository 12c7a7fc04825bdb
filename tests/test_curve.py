"""The pressure-drop curve: weight, bump, level (common practice, no source)."""

import numpy as np
import pytest

from psdflow.fluidization.curve import LET_GO, pressure_drop_curve

BED = {
    "minimum_fluidization_velocity": 0.003,
    "bed_weight": 6000.0,
    "voidage_mf": 0.45,
    "compacted_voidage": 0.43,
    "diameter_sv": 70e-6,
    "fluid_density": 1.2,
    "fluid_viscosity": 1.8e-5,
}


def test_the_loose_bed_carries_its_weight_at_u_mf_and_stays_level():
    found = pressure_drop_curve(velocity=np.array([0.003, 0.004, 0.01, 0.3]), **BED)
    assert found.falling == pytest.approx([6000.0] * 4)
    assert found.rising[2:] == pytest.approx([6000.0] * 2)


def test_linear_for_fine_grains_before_that():
    found = pressure_drop_curve(velocity=np.array([0.0, 0.001, 0.002]), **BED)
    assert found.falling == pytest.approx([0.0, 2000.0, 4000.0], rel=1e-3)
    assert found.rising[2] / found.rising[1] == pytest.approx(2.0, rel=1e-3)


def test_a_compacted_bed_shows_a_bump_and_a_loose_one_none():
    velocity = np.linspace(0, 0.009, 400)[1:]
    tight = pressure_drop_curve(velocity=velocity, **BED)
    loose = pressure_drop_curve(velocity=velocity, **{**BED, "compacted_voidage": 0.45})
    assert tight.rising.max() > 1.05 * 6000
    assert loose.rising.max() == pytest.approx(6000)
    assert velocity[tight.rising.argmax()] == pytest.approx(0.003, rel=0.02)
    assert np.all(tight.rising[velocity > LET_GO * 0.003] == pytest.approx(6000))


def test_it_broadcasts():
    found = pressure_drop_curve(
        velocity=np.linspace(0, 0.01, 7)[None, :], **{**BED, "voidage_mf": np.array([[0.44], [0.46]])}
    )
    assert found.rising.shape == (2, 7)
