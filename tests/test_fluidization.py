"""Limits, shapes and monotone behaviour of psdflow.fluidization."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from psdflow.fluidization import (
    bed,
    bubbling,
    expansion,
    groups,
    minimum,
    numbers,
    regimes,
    slugging,
    spouting,
    terminal,
)
from psdflow.methods.fluidization import METHODS

FLUIDS = {  # density kg/m³, viscosity Pa·s, from a property library
    "air 20 °C": (1.2046, 1.8206e-5),
    "air 850 °C": (0.3142, 4.6679e-5),
    "air 20 bar": (23.920, 1.8511e-5),
    "hydrogen": (0.0838, 8.8e-6),
    "water": (998.2, 1.0016e-3),
}
AIR = {"fluid_density": 1.2, "fluid_viscosity": 1.8e-5}

sizes = st.floats(1e-8, 1e-2)
densities = st.floats(50.0, 20000.0)
fluids = st.sampled_from(sorted(FLUIDS))
steps = st.floats(1.001, 10.0)
shapes = st.floats(0.3, 1.0)


def fluid(name):
    density, viscosity = FLUIDS[name]
    return {"fluid_density": density, "fluid_viscosity": viscosity}


def all_u_mf(diameter, density, name, shape=0.8):
    return minimum.minimum_fluidization_velocities(
        diameter_sv=diameter,
        diameter_v=diameter,
        particle_density=density,
        sphericity=shape,
        voidage=0.45,
        **fluid(name),
    )


@given(sizes, steps, densities, fluids)
def test_u_mf_rises_with_size(diameter, step, density, name):
    for key, u in all_u_mf(np.array([diameter, diameter * step]), density, name).items():
        if density > FLUIDS[name][0]:
            assert 0 < u[0] < u[1], key
        else:
            assert np.isnan(u).all(), key


@given(sizes, steps, densities, fluids)
def test_u_mf_rises_with_density(diameter, step, density, name):
    for key, u in all_u_mf(diameter, np.array([density, density * step]), name).items():
        if density > FLUIDS[name][0]:
            assert u[0] < u[1], key


@given(sizes, steps, densities, fluids, shapes, st.sampled_from(sorted(terminal.DRAG_LAWS)), st.booleans())
@settings(max_examples=300)
def test_terminal_velocity_rises_with_size_and_density(diameter, step, density, name, shape, law, slip):
    case = {"sphericity": shape, "law": law, "mean_free_path": 6.65e-8 if slip else None, **fluid(name)}
    by_size = terminal.terminal_velocity(
        diameter=np.array([diameter, diameter * step]), particle_density=density, **case
    )
    by_density = terminal.terminal_velocity(
        diameter=diameter, particle_density=np.array([density, density * step]), **case
    )
    if density > FLUIDS[name][0]:
        assert 0 < by_size[0] < by_size[1]
        assert by_density[0] < by_density[1]
    else:
        assert np.isnan(by_size).all()


@given(sizes, densities, fluids, shapes, st.sampled_from(sorted(terminal.DRAG_LAWS)), st.booleans())
@settings(max_examples=300)
def test_size_and_terminal_velocity_are_inverses(diameter, density, name, shape, law, slip):
    case = {"sphericity": shape, "law": law, "mean_free_path": 6.65e-8 if slip else None, **fluid(name)}
    density = max(density, 1.1 * FLUIDS[name][0])
    u = terminal.terminal_velocity(diameter=diameter, particle_density=density, **case)
    size = terminal.size_with_terminal_velocity(terminal_velocity=u, particle_density=density, **case)
    assert size == pytest.approx(diameter, rel=1e-9)


@pytest.mark.parametrize("law", sorted(terminal.DRAG_LAWS))
@pytest.mark.parametrize("shape", [0.1, 0.3, 0.6, 0.9, 1.0])
def test_force_balance_over_24_decades(law, shape):
    ar = np.logspace(-12, 12, 2001)
    d = np.cbrt(ar * 1e-6 / (1000.0 * 1500.0 * numbers.GRAVITY))
    u = terminal.terminal_velocity(
        diameter=d, particle_density=2500.0, fluid_density=1000.0, fluid_viscosity=1e-3, sphericity=shape, law=law
    )
    re = u * d * 1000.0 / 1e-3
    cd = terminal.DRAG_LAWS[law](reynolds=re, sphericity=shape)
    assert cd * re**2 == pytest.approx(4.0 / 3.0 * ar, rel=1e-10)


@pytest.mark.parametrize("law", sorted(terminal.DRAG_LAWS))
def test_stokes_limit(law):
    case = {"diameter": np.array([1e-8, 1e-7]), "particle_density": 2500.0, **AIR}
    assert terminal.terminal_velocity(law=law, **case) == pytest.approx(
        terminal.terminal_velocity_stokes(**case), rel=2e-4
    )


def test_grains_without_size_weight_or_meaning():
    case = {"particle_density": np.array([2500.0, 1000.0, 900.0]), "fluid_density": 1000.0, "fluid_viscosity": 1e-3}
    for diameter, expected in ((1e-4, [False, True, False]), (0.0, [True, True, False])):
        u = terminal.terminal_velocity(diameter=diameter, mean_free_path=1e-8, **case)
        explicit = terminal.terminal_velocity_explicit(diameter=diameter, **case)
        u_mf = minimum.recommended_u_mf(diameter_sv=diameter, diameter_v=diameter, **case).value
        for value in (u, explicit, u_mf):
            assert (value == 0.0).tolist() == expected
            assert np.isnan(value).tolist() == [False, False, True]
    size = terminal.size_with_terminal_velocity(terminal_velocity=np.array([0.0, -1.0]), particle_density=2500.0, **AIR)
    assert size[0] == 0.0
    assert np.isnan(size[1])
    with pytest.raises(ValueError, match="sphericity"):
        terminal.terminal_velocity(diameter=1e-4, particle_density=2500.0, sphericity=1.2, **AIR)


def test_shapes_broadcast():
    d = np.logspace(-5, -3, 7)
    density = np.full((3, 1), 2500.0)
    gas = np.full((2, 1, 1), 1.2)
    case = {"particle_density": density, "fluid_density": gas, "fluid_viscosity": 1.8e-5}
    shape = (2, 3, 7)
    assert terminal.terminal_velocity(diameter=d, mean_free_path=6.6e-8, sphericity=0.8, **case).shape == shape
    assert terminal.terminal_velocity(
        diameter=1e-4, particle_density=2500.0, sphericity=np.linspace(0.5, 1, 4), **AIR
    ).shape == (4,)
    assert terminal.size_with_terminal_velocity(
        terminal_velocity=0.1, particle_density=2500.0, sphericity=np.linspace(0.5, 1, 4), **AIR
    ).shape == (4,)
    assert terminal.size_with_terminal_velocity(
        terminal_velocity=0.1, particle_density=2500.0, mean_free_path=np.array([1e-8, 1e-7]), **AIR
    ).shape == (2,)
    values = minimum.minimum_fluidization_velocities(diameter_sv=d, diameter_v=d, sphericity=0.8, voidage=0.45, **case)
    assert {u.shape for u in values.values()} == {shape}
    chosen = minimum.recommended_u_mf(diameter_sv=d, diameter_v=d, pressure=1e5, **case)
    assert chosen.value.shape == chosen.method.shape == shape
    for boundaries in groups.boundary_sizes(fines_45um=0.1, **case).values():
        assert {line.shape for line in boundaries} == {(2, 3, 1)}
        assert groups.group_letters(diameter_sv=d, boundaries=boundaries).shape == shape
    for methods in regimes.transition_velocities(diameter_sv=d, bed_diameter=0.3, **case).values():
        assert {u.shape for u in methods.values()} == {shape}
    ratio = expansion.bed_expansions(
        velocity=np.linspace(0.1, 1.0, 7),
        minimum_fluidization_velocity=np.full((3, 1), 0.05),
        bed_height_mf=1.0,
        bed_diameter=1.0,
        visible_flow_share=0.6,
        diameter=d,
        particle_density=2500.0,
        fluid_density=1.2,
    )
    assert {value.shape for value in ratio.values()} == {(3, 7)}


def test_rule_names_its_method():
    d = np.array([50e-6, 200e-6, 800e-6])
    case = {"diameter_sv": d, "diameter_v": d / 0.8, "particle_density": 2600.0}
    low = minimum.recommended_u_mf(**case, **AIR)
    assert low.method.tolist() == ["baeyens-geldart-1974", "grace-1982", "wen-yu-chitester-mean"]
    high = minimum.recommended_u_mf(**case, **fluid("air 20 bar"), pressure=20e5)
    assert high.method.tolist() == ["baeyens-geldart-1974", "wen-yu-chitester-mean", "wen-yu-chitester-mean"]
    liquid = minimum.recommended_u_mf(**case, **fluid("water"))
    assert liquid.method.tolist() == ["grace-1982", "grace-1982", "wen-yu-chitester-mean"]
    known = minimum.recommended_u_mf(
        **case, **AIR, sphericity=0.8, voidage=0.45, measured=np.array([True, False, True])
    )
    assert known.method.tolist() == ["ergun-1952", "grace-1982", "ergun-1952"]
    values = minimum.minimum_fluidization_velocities(**case, **AIR, sphericity=0.8, voidage=0.45)
    assert known.value[0] == values["ergun-1952"][0]
    assert low.value[0] == values["baeyens-geldart-1974"][0]
    assert low.value[1] == values["grace-1982"][1]
    assert low.value[2] ** 2 == pytest.approx(values["wen-yu-1966"][2] * values["chitester-1984"][2])
    with pytest.raises(ValueError, match="measured"):
        minimum.recommended_u_mf(**case, **AIR, sphericity=0.8, measured=True)


def test_each_method_gets_its_own_size():
    one = minimum.minimum_fluidization_velocities(diameter_sv=50e-6, diameter_v=60e-6, particle_density=2500.0, **AIR)
    other = minimum.minimum_fluidization_velocities(diameter_sv=50e-6, diameter_v=70e-6, particle_density=2500.0, **AIR)
    unmoved = {key for key in one if one[key] == other[key]}
    assert unmoved == {entry.key for entry in METHODS if entry.quantity == "u_mf" and entry.diameter == "sv"}
    assert "ergun-1952" not in one


def test_two_constants_do_not_cancel():
    ar = np.array([1e-14, 1e-8, 1e12])
    re = minimum.reynolds_two_constants(archimedes=ar, constant_1=33.7, constant_2=0.0408)
    assert re[:2] == pytest.approx(ar[:2] * 0.0408 / 67.4, rel=1e-9)
    assert re[2] == pytest.approx(np.sqrt(0.0408e12), rel=1e-3)


def test_complete_fluidization_lies_between_the_classes():
    u, share = np.array([[0.01, 0.02, 0.05], [0.1, 0.2, 0.5]]), np.array([0.2, 0.5, 0.3])
    mean = minimum.complete_fluidization_knowlton(class_minimum_fluidization_velocity=u, class_share=share)
    assert mean == pytest.approx([0.027, 0.27])
    doubled = minimum.complete_fluidization_knowlton(class_minimum_fluidization_velocity=u, class_share=2 * share)
    assert doubled == pytest.approx(mean)


@given(densities, fluids, st.floats(0, 1))
def test_groups_follow_size(density, name, fines):
    if density <= FLUIDS[name][0] + 1:
        return
    sets = groups.boundary_sizes(particle_density=density, fines_45um=fines, **fluid(name))
    assert tuple(sets) == (*groups.BOUNDARY_SETS, *groups.SHOWN_SETS)
    for key, boundaries in sets.items():
        assert 0 < boundaries.size_ca <= boundaries.size_ab <= boundaries.size_bd, key
        index = groups.group_index(diameter_sv=np.logspace(-8, 0, 200), boundaries=boundaries)
        assert np.all(np.diff(index) >= 0)
        assert index[0] == 0
        assert np.all((index >= 0) & (index <= 3))


def test_group_a_vanishes_in_dense_grains():
    gold = {"particle_density": 19300.0, **fluid("hydrogen")}
    boundaries = groups.boundary_sizes(**gold)["geldart-1973"]
    assert groups.geldart_ab_size(**gold) < boundaries.size_ca == boundaries.size_ab
    letters = groups.group_letters(diameter_sv=np.array([0.99, 1.01]) * boundaries.size_ca, boundaries=boundaries)
    assert letters.tolist() == ["C", "B"]


def test_no_group_for_floating_grains():
    boundaries = groups.boundary_sizes(particle_density=900.0, **fluid("water"))["geldart-1973"]
    with pytest.raises(ValueError, match="nan"):
        groups.group_index(diameter_sv=1e-4, boundaries=boundaries)


def test_bubbling_fines_are_clamped():
    u = bubbling.minimum_bubbling_abrahamsen_geldart(diameter_sv=50e-6, fines_45um=np.array([0, 0.3, 1.0]), **AIR)
    assert u[1] > u[0]
    assert u[2] == u[1]


def test_smooth_bed_starts_at_u_mf_and_expands():
    e = bubbling.smooth_voidage(
        velocity=np.array([0.001, 0.002, 0.004, 0.008]),
        minimum_fluidization_velocity=0.002,
        voidage_mf=0.45,
        diameter_sv=60e-6,
        particle_density=1500.0,
        **AIR,
    )
    assert e[:2] == pytest.approx([0.45, 0.45], rel=1e-12)
    assert np.all(np.diff(e[1:]) > 0)
    assert e[3] < 1
    pull = 1498.8 * numbers.GRAVITY * 60e-6**2 / 1.8e-5
    assert e[3] ** 3 / (1 - e[3]) * pull == pytest.approx(210 * 0.006 + 0.45**3 / 0.55 * pull, rel=1e-12)


@given(st.floats(0.0, 2.0), st.floats(0.001, 0.5), st.floats(0.05, 5.0), st.floats(0.05, 5.0), st.booleans())
def test_bubbles_grow_and_beds_expand(excess, u_mf, height, bed_diameter, holes):
    area = 1e-3 if holes else None
    flow = {"minimum_fluidization_velocity": u_mf, "bed_diameter": bed_diameter, "orifice_area": area}
    low, high = (bubbling.bubble_diameters(velocity=u_mf + excess, height=z, **flow) for z in (height, 1.1 * height))
    for key, size in low.items():
        assert 0 <= size <= high[key], key
    capped = bubbling.capped_bubble_diameter(bubble_diameter=size, bed_diameter=bed_diameter, largest_stable=0.1)
    assert capped <= min(0.1, 0.8 * bed_diameter)
    ratio = expansion.bed_expansion_two_phase(
        velocity=u_mf + np.array([excess, excess + 0.1]), bed_height_mf=height, visible_flow_share=0.8, **flow
    )
    assert 1 <= ratio[0] < ratio[1] < 10


def test_expansion_is_the_mean_over_the_height():
    flow = {"velocity": 0.5, "minimum_fluidization_velocity": 0.05}
    z = (np.arange(20000) + 0.5) / 20000 * 1.2
    size = bubbling.capped_bubble_diameter(
        bubble_diameter=bubbling.bubble_diameter_darton(height=z, **flow), bed_diameter=5.0
    )
    rise = bubbling.bubble_rise_velocity(bubble_diameter=size, bed_diameter=5.0)
    share = bubbling.bubble_fraction(bubble_rise=rise, visible_flow_share=0.6, **flow)
    got = expansion.bed_expansion_two_phase(bed_height_mf=1.2, bed_diameter=5.0, visible_flow_share=0.6, **flow)
    assert got == pytest.approx(np.mean(1 / (1 - share)), rel=1e-4)


def test_visible_flow_by_group():
    shares = bubbling.VISIBLE_FLOW_SHARE[[groups.GROUPS.index(letter) for letter in "ABD"]]
    assert shares.tolist() == [0.8, 0.6, 0.3]
    assert np.isnan(bubbling.VISIBLE_FLOW_SHARE[groups.GROUPS.index("C")])
    assert bubbling.visible_flow_share(archimedes=np.array([1.0, 1e4])) == pytest.approx([1.0, 0.3281], rel=1e-3)


def test_largest_stable_bubble_of_catalyst():
    """A group A bed keeps small bubbles, a group B one does not (common practice, no source)."""
    catalyst = bubbling.largest_stable_bubble(diameter_v=60e-6, particle_density=1500.0, **AIR)
    sand = bubbling.largest_stable_bubble(diameter_v=300e-6, particle_density=2600.0, **AIR)
    assert 0.02 < catalyst < 0.3
    assert sand > 5


def test_slugs():
    case = {"diameter": 300e-6, "particle_density": 2600.0, "bed_diameter": 0.15}
    assert slugging.can_slug(bed_height_mf=np.array([0.2, 0.5]), **case).tolist() == [False, True]
    assert not slugging.can_slug(bed_height_mf=0.5, largest_stable=0.05, **case)
    ratio = slugging.slugging_bed_height_ratio(
        velocity=np.array([0.01, 0.05, 0.3]), minimum_fluidization_velocity=0.05, bed_diameter=0.15
    )
    assert ratio[:2].tolist() == [1.0, 1.0]
    assert ratio[2] == pytest.approx(1 + 0.25 / (0.35 * np.sqrt(9.81 * 0.15)))


def test_richardson_zaki_limits():
    n = bed.richardson_zaki_exponent(reynolds_t=np.array([0.0, 1e-6, 1e9]))
    assert n == pytest.approx([4.7, 4.7, 2.35], abs=1e-3)
    pieces = bed.richardson_zaki_exponent_piecewise(reynolds_t=np.array([0.0, 1e9]), diameter_ratio=0.01)
    assert pieces == pytest.approx([4.845, 2.39])
    e = bed.liquid_bed_voidage(velocity=np.array([0, 1e-3, 1.0]), terminal_velocity=0.01, exponent=4.7, voidage_mf=0.4)
    assert e.tolist() == pytest.approx([0.4, 0.1 ** (1 / 4.7), 1.0])
    height = bed.expanded_height(bed_height_mf=1.0, voidage_mf=0.4, voidage=np.array([0.4, 0.7, 1.0]))
    assert height == pytest.approx([1.0, 2.0, np.inf])


@given(sizes, steps, densities, fluids)
def test_transitions_rise_with_size(diameter, step, density, name):
    if density <= FLUIDS[name][0]:
        return
    values = regimes.transition_velocities(
        diameter_sv=np.array([diameter, diameter * step]), particle_density=density, bed_diameter=0.3, **fluid(name)
    )
    falling = {"horio-1986-uk"}  # its published pieces step down at Ar 1e4
    for methods in values.values():
        for key, u in methods.items():
            if key not in falling:
                assert u[0] < u[1], key


def test_regimes_in_order():
    bounds = {
        "minimum_fluidization_velocity": 0.01,
        "complete_fluidization_velocity": 0.02,
        "minimum_bubbling_velocity": 0.03,
        "slugging_velocity": 0.3,
        "turbulent_velocity": 1.0,
        "transport_velocity": 2.0,
    }
    u = np.array([0.0, 0.005, 0.01, 0.015, 0.02, 0.025, 0.03, 0.2, 0.3, 0.9, 1.0, 1.9, 2.0, 9.0])
    found = regimes.regime(velocity=u, **bounds)
    assert found.tolist() == [0, 0, 1, 1, 2, 2, 3, 3, 4, 4, 5, 5, 6, 6]
    without = regimes.regime(velocity=u, **{**bounds, "slugging_velocity": np.nan})
    assert without.tolist() == [0, 0, 1, 1, 2, 2, 3, 3, 3, 3, 5, 5, 6, 6]
    with pytest.raises(ValueError, match="nan"):
        regimes.regime(velocity=u, **{**bounds, "turbulent_velocity": np.nan})


@given(st.lists(st.floats(1e-4, 10.0), min_size=6, max_size=6))
def test_regimes_never_step_back(values):
    u_mf, u_cf, u_mb, u_slug, u_c, u_fast = values
    found = regimes.regime(
        velocity=np.logspace(-5, 2, 300),
        minimum_fluidization_velocity=u_mf,
        complete_fluidization_velocity=u_cf,
        minimum_bubbling_velocity=u_mb,
        slugging_velocity=u_slug,
        turbulent_velocity=u_c,
        transport_velocity=u_fast,
    )
    assert np.all(np.diff(found) >= 0)
    assert found[0] == 0
    assert found[-1] == len(regimes.REGIMES) - 1


def test_liquid_regimes():
    found = regimes.liquid_regime(
        velocity=np.array([0.001, 0.01, 0.2]), minimum_fluidization_velocity=0.005, terminal_velocity=0.1
    )
    assert [regimes.LIQUID_REGIMES[i] for i in found] == ["fixed bed", "smooth fluidization", "hydraulic transport"]
    with pytest.raises(ValueError, match="nan"):
        regimes.liquid_regime(velocity=0.1, minimum_fluidization_velocity=0.005, terminal_velocity=np.nan)


def test_spouting_limits():
    grain = {"diameter": 3e-3, "particle_density": 1400.0, "fluid_density": 1.2}
    u = spouting.minimum_spouting_velocity(
        column_diameter=np.array([0.15, 0.6]), inlet_diameter=np.array([0.02, 0.08]), bed_height=0.3, **grain
    )
    assert u[0] / u[1] == pytest.approx(4 / 1.2)
    tiny = {**grain, "diameter": 1e-6}
    height = spouting.maximum_spoutable_height(
        fluid_viscosity=1.8e-5, column_diameter=0.15, inlet_diameter=0.02, **tiny
    )
    ar = numbers.archimedes(fluid_viscosity=1.8e-5, **tiny)  # sqrt(1 + x) - 1 -> x/2
    limit = 0.15**2 / 1e-6 * 7.5 ** (2 / 3) * 568 * 1.11**2 * (35.9e-6 / 2) ** 2 * ar
    assert height == pytest.approx(limit, rel=1e-6)
    assert spouting.stable_inlet(
        diameter=3e-3, column_diameter=0.15, inlet_diameter=np.array([0.02, 0.06, 0.08])
    ).tolist() == [True, False, False]


def test_catalogue_covers_every_result():
    by_key = {entry.key: entry for entry in METHODS}
    assert len(by_key) == len(METHODS)
    one = {"diameter_sv": 2e-4, "diameter_v": 2e-4, "particle_density": 2500.0, **AIR}
    found = {"u_mf": set(minimum.minimum_fluidization_velocities(sphericity=0.8, voidage=0.45, **one))}
    found["u_mf"].add("wen-yu-chitester-mean")
    transitions = regimes.transition_velocities(diameter_sv=2e-4, particle_density=2500.0, bed_diameter=0.3, **AIR)
    found |= {quantity: set(methods) for quantity, methods in transitions.items()}
    found["group"] = {*groups.BOUNDARY_SETS, *groups.SHOWN_SETS}
    found["u_t"] = {*terminal.DRAG_LAWS, "haider-levenspiel-1989-explicit", "stokes-1851"}
    found["u_mb"] = set(bubbling.minimum_bubbling_velocities(diameter_sv=2e-4, **AIR))
    found["bubble_diameter"] = set(
        bubbling.bubble_diameters(velocity=0.3, minimum_fluidization_velocity=0.05, height=0.5, bed_diameter=0.5)
    )
    found["u_ms_slug"] = set(
        slugging.slugging_velocities(minimum_fluidization_velocity=0.05, bed_diameter=0.15, bed_height_mf=0.5)
    )
    for quantity, keys in found.items():
        assert {entry.key for entry in METHODS if entry.quantity == quantity} == keys, quantity
    assert all(entry.scatter > 0 and entry.source for entry in METHODS)
    assert {entry.checked for entry in METHODS} == {"looked up", "from memory"}
    assert {entry.diameter for entry in METHODS} == {"sv", "v", ""}
    assert all(low < high for entry in METHODS for low, high in entry.ranges.values())
    assert {regimes.RECOMMENDED[quantity] in methods for quantity, methods in transitions.items()} == {True}
