"""Carryover: limits, broadcasting, conservation."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from psdflow import Duty, InputError, Material, assess
from psdflow.carryover import cyclone_models as models
from psdflow.carryover.cyclone import DESIGNS, own_design, saltation_velocity, shape_doubts, standard_design
from psdflow.carryover.elutriation import DEFAULT_LAWS, LAWS, combined_rate_constant, rate_constants
from psdflow.sizes.open_ends import with_open_ends


def constants(size, u_t, velocity=0.5, laws=LAWS):
    return rate_constants(
        laws, diameter=size, terminal_velocity=u_t, velocity=velocity, particle_density=1500, fluid_density=1.2,
        fluid_viscosity=1.8e-5, bed_diameter=0.5, minimum_fluidization_velocity=0.003,
    )  # fmt: skip


@given(st.floats(1e-9, 0.1), st.floats(1e-12, 100), st.floats(1e-3, 30))
def test_constants_are_finite_and_vanish_above_the_gas_velocity(size, u_t, velocity):
    for key, value in constants(size, u_t, velocity).items():
        assert np.isfinite(value), key
        assert value >= 0, key
        if u_t >= velocity:
            assert value == 0, key


def test_combination_uses_the_laws_in_range_only():
    size, u_t = np.array([40e-6, 60e-6]), np.array([0.08, 0.15])
    found = constants(size, u_t, laws=DEFAULT_LAWS)
    usable = {key: np.array(key in {"geldart-1979", "wen-chen-1982"}) for key in DEFAULT_LAWS}
    mean = combined_rate_constant(found, usable)
    assert mean == pytest.approx(np.sqrt(found["geldart-1979"] * found["wen-chen-1982"]))
    none = {key: np.array(False) for key in DEFAULT_LAWS}
    every = combined_rate_constant(found, none)
    assert np.all(every > np.min(list(found.values()), axis=0))
    assert np.all(every < np.max(list(found.values()), axis=0))


@given(st.sampled_from(sorted(DESIGNS)), st.floats(0.1, 3), st.floats(5, 30))
def test_efficiency_rises_with_size(design, body, inlet):
    shape = standard_design(design, body)
    size = np.geomspace(1e-8, 1e-3, 60)
    gas = {"particle_density": 2000, "fluid_density": 1.0, "fluid_viscosity": 2e-5}
    for key, cut in models.cut_sizes(geometry=shape, flow=inlet * shape.inlet_area, **gas).items():
        assert cut > 0
        grade = models.grade_efficiency(size=size, cut=cut, slope=models.grade_slope(key, geometry=shape, cut=cut))
        assert np.all(np.diff(grade) >= 0)
        assert grade[0] >= 0
        assert grade[-1] <= 1
    for model in (models.dietz_efficiency, models.leith_licht_efficiency):
        grade = model(
            geometry=shape, flow=inlet * shape.inlet_area, size=size, particle_density=2000, fluid_viscosity=2e-5
        )
        assert np.all(np.diff(grade) >= -1e-12)
        assert np.all((grade >= -1e-12) & (grade <= 1))


def test_loading_never_lets_more_through():
    passed = np.array([[0.9, 0.5, 0.1], [0.9, 0.5, 0.1]])
    found = models.penetration_with_loading(
        penetration=passed, loading=np.array([1e-4, 2.0]), limit=np.array([0.01, 0.02])
    )
    assert found[0] == pytest.approx(passed[0])
    assert found[1] == pytest.approx(passed[1] * 0.01)


def test_own_design_like_the_standard_one():
    he = standard_design("stairmand-high-efficiency", 0.4)
    same = own_design(0.4, inlet_height=0.2, inlet_width=0.08, outlet_diameter=0.2, outlet_length=0.2,
                      cylinder_height=0.6, total_height=1.6, dust_outlet_diameter=0.15)  # fmt: skip
    gas = {"particle_density": 2000, "fluid_density": 1.0, "fluid_viscosity": 2e-5}
    assert models.barth_cut(geometry=same, flow=0.2, **gas) == pytest.approx(
        models.barth_cut(geometry=he, flow=0.2, **gas)
    )
    assert "stairmand-similarity" not in models.cut_sizes(geometry=same, flow=0.2, **gas)


def test_refused_shapes():
    with pytest.raises(InputError, match="known are"):
        standard_design("whirl", 0.5)
    with pytest.raises(InputError, match="missing are inlet_height"):
        own_design(0.5)
    with pytest.raises(InputError, match="outlet_diameter"):
        own_design(0.5, inlet_height=0.2, inlet_width=0.1, outlet_diameter=0.6, outlet_length=0.2,
                   cylinder_height=0.6, total_height=1.6, dust_outlet_diameter=0.15)  # fmt: skip


def test_doubts_about_shapes():
    assert not shape_doubts(standard_design("lapple-general-purpose", 1.0))
    assert any("vortex finder" in said for said in shape_doubts(standard_design("stairmand-high-throughput", 1.0)))


def test_saltation_of_the_standard_case():
    """Stairmand 0.5 m, air, 2500 kg/m³: 15.0 m/s is 1.25 times the saltation velocity (by hand from Kalen & Zenz 1974)."""
    shape = standard_design("stairmand-high-efficiency", 0.5)
    found = saltation_velocity(
        geometry=shape, inlet_velocity=15.0, particle_density=2500, fluid_density=1.2, fluid_viscosity=1.81e-5
    )
    assert 15.0 / found == pytest.approx(1.25, abs=0.01)


CARRIER = Material(name="carrier", particle_density=1450, sphericity=0.9)
LOT = with_open_ends(
    edges=np.array([20, 38, 45, 53, 75, 106, 150]) * 1e-6, shares=[0.06, 0.07, 0.1, 0.3, 0.3, 0.12], below=0.05
)


def duty(velocity=0.4, **more) -> Duty:
    return Duty(
        name="d", fluid={"gas": "air", "temperature": 358.15, "pressure": 1.05e5}, velocity=velocity,
        bed={"diameter": 1.2, "settled_height": 0.9, "freeboard_height": 4.0, "distributor": "porous plate"}, **more,
    )  # fmt: skip


def cyclones(count: int):
    return [{"design": "stairmand-high-efficiency", "body_diameter": 0.45}] * count


def test_classes_add_up():
    """Flux, carried and lost shares by class agree with the totals; nothing above the hanging grain is carried."""
    found = assess(LOT, CARRIER, duty(cyclones=cyclones(1)), draws=0)
    rows = found.classes()
    assert sum(row["carryover_flux"] for row in rows) == pytest.approx(float(found["carryover_flux"]))
    assert sum(row["carryover_share"] for row in rows) == pytest.approx(1)
    assert sum(row["loss_share"] for row in rows) == pytest.approx(1)
    for row in rows:
        if row["lower"] > float(found["elutriable_size"]):
            assert row["carryover_flux"] == 0
        assert 0 <= row["cyclone_efficiency"] <= 1
    kept = float(found["cyclone_efficiency"])
    assert float(found["loss_rate"]) == pytest.approx((1 - kept) * float(found["carryover_rate"]))


def test_two_cyclones_lose_less_than_one():
    losses = [float(assess(LOT, CARRIER, duty(cyclones=cyclones(n)), draws=0)["loss_rate"]) for n in (1, 2, 3)]
    assert losses[0] > losses[1] > losses[2]


def test_more_velocity_carries_more():
    rates = [float(assess(LOT, CARRIER, duty(v), draws=0)["carryover_rate"]) for v in (0.3, 0.4, 0.5, 0.6)]
    assert np.all(np.diff(rates) > 0)


def test_a_fixed_bed_carries_nothing():
    assert float(assess(LOT, CARRIER, duty(0.0005), draws=0)["carryover_rate"]) == 0


def test_no_cyclone_says_so():
    absent = {row.key: row.note for row in assess(LOT, CARRIER, duty(), draws=0).rows() if row.value is None}
    assert "no cyclones" in absent["loss_rate"]


def test_interval_of_the_flux_is_never_narrow():
    """A factor of 2 either way at the least, whatever the laws say."""
    for velocity in (0.3, 0.6, 1.0):
        found = assess(LOT, CARRIER, duty(velocity))
        low, high = float(found.low["carryover_flux"]), float(found.high["carryover_flux"])
        assert high / float(found["carryover_flux"]) > 2
        assert float(found["carryover_flux"]) / low > 2
