"""Cyclone models against textbook cases and one cross-model case computed by hand."""

from dataclasses import replace

import numpy as np
import pytest

from psdflow.carryover import cyclone_models as models
from psdflow.carryover.cyclone import standard_design

HE = standard_design("stairmand-high-efficiency", 0.5)
AIR = {"particle_density": 2500, "fluid_density": 1.2, "fluid_viscosity": 1.81e-5}
FLOW = 0.375  # m³/s: 15 m/s in the inlet of the 0.5 m cyclone


@pytest.mark.parametrize(
    ("design", "printed"),
    [
        ("stairmand-high-efficiency", 551.3),
        ("swift-high-efficiency", 699.2),
        ("lapple-general-purpose", 402.9),
        ("swift-general-purpose", 381.8),
        ("stairmand-high-throughput", 29.8),
        ("swift-high-throughput", 30.5),
    ],
)
def test_koch_licht_geometry_constant(design, printed):
    """Koch & Licht 1977 (printed G from memory): confirms every proportion of the design at once."""
    assert models.geometry_constant(standard_design(design, 0.7)) == pytest.approx(printed, rel=2e-3)


def test_cross_model_case():
    """Stairmand high efficiency, D 0.5 m, 15 m/s, 2500 kg/m³, air (by hand from the published equations): cut sizes
    Lapple 3.546, similarity 2.186, Barth 2.808, Iozia & Leith 2.808 µm."""
    found = {key: value * 1e6 for key, value in models.cut_sizes(geometry=HE, flow=FLOW, **AIR).items()}
    assert found["lapple-1951"] == pytest.approx(3.546, abs=0.002)
    assert found["stairmand-similarity"] == pytest.approx(2.186, abs=0.002)
    assert found["barth-1956"] == pytest.approx(2.808, abs=0.002)
    assert found["iozia-leith-1989"] == pytest.approx(2.808, abs=0.003)


def test_barth_swirl():
    """Same case, Barth 1956: wall velocity 16.064 m/s, core 25.654 m/s (by hand)."""
    wall, core = models.barth_swirl(HE, FLOW)
    assert wall == pytest.approx(16.064, abs=0.002)
    assert core == pytest.approx(25.654, abs=0.005)


def test_grade_curves_of_the_case():
    """Same case at 1, 2, 5, 10 µm (by hand): Leith & Licht, Dietz, Iozia & Leith, Lapple, Rhodes."""
    size = np.array([1, 2, 5, 10]) * 1e-6
    flow = {"geometry": HE, "flow": FLOW, "size": size, "particle_density": 2500, "fluid_viscosity": 1.81e-5}
    assert models.leith_licht_efficiency(**flow) == pytest.approx([0.4479, 0.5995, 0.8021, 0.9176], abs=3e-4)
    assert models.dietz_efficiency(**flow) == pytest.approx([0.0410, 0.1773, 0.7270, 0.9428], abs=5e-4)
    cut = models.cut_sizes(geometry=HE, flow=FLOW, **AIR)
    expected = {
        "iozia-leith-1989": [0.0217, 0.2224, 0.8936, 0.9909],
        "lapple-1951": [0.0737, 0.2413, 0.6653, 0.8883],
        "stairmand-similarity": [0.1731, 0.4558, 0.8396, 0.9544],
    }
    for key, values in expected.items():
        slope = models.grade_slope(key, geometry=HE, cut=cut[key])
        assert models.grade_efficiency(size=size, cut=cut[key], slope=slope) == pytest.approx(values, abs=6e-4), key


def test_theodore_depaola_points():
    """Points of Lapple's curve (looked up): 20, 50, 80, 90, 96.2, 99 % at x/x50 of 0.5, 1, 2, 3, 5, 10."""
    found = models.grade_efficiency(size=np.array([0.5, 1, 2, 3, 5, 10]), cut=1.0, slope=2.0)
    assert found == pytest.approx([0.20, 0.50, 0.80, 0.90, 0.962, 0.990], abs=5e-4)


def test_rhodes_example_9_2_separation():
    """Rhodes 2008, WE 9.2 (from memory): 90 g feed and the coarse product by class: 68.56 %, grade .01 .235 .72 .91 .975 1."""
    feed, caught = np.array([10, 15, 25, 30, 15, 5]), np.array([0.1, 3.53, 18, 27.3, 14.63, 5.0])
    assert caught / feed == pytest.approx([0.01, 0.235, 0.72, 0.91, 0.975, 1.0], abs=1e-3)
    assert caught.sum() / feed.sum() == pytest.approx(0.6856, abs=1e-4)


def test_rhodes_exercise_9_4_scale_up():
    """Rhodes 2008 exercise (number uncertain, from memory): Stairmand high rate, two of 0.43 m, cut 6.8 µm; 9.6 µm at half
    the flow."""
    shape = standard_design("stairmand-high-throughput", 0.4324)
    gas = {"particle_density": 2000, "fluid_density": 0.5, "fluid_viscosity": 2e-5}
    assert models.similarity_cut(geometry=shape, flow=1.5, **gas) * 1e6 == pytest.approx(6.8, abs=0.05)
    assert models.similarity_cut(geometry=shape, flow=0.75, **gas) * 1e6 == pytest.approx(9.6, abs=0.05)
    assert models.pressure_drops(geometry=shape, flow=1.5, fluid_density=0.5)["stairmand-euler"] == pytest.approx(
        1200, rel=0.01
    )


def test_epa_precleaner():
    """US EPA / Theodore training problem (from memory): D 4 ft, 50 ft/s, sg 2.75, 4.5 turns: cut 6.46 µm; 57 % at 7.5 µm."""
    foot = 0.3048
    shape = standard_design("lapple-general-purpose", 4 * foot)
    flow = 50 * foot * shape.inlet_area
    gas = {"particle_density": 2750, "fluid_density": 1.2, "fluid_viscosity": 1.21e-5 * 1.48816}
    cut = models.lapple_cut(geometry=shape, flow=flow, turns=4.5, **gas)
    assert cut * 1e6 == pytest.approx(6.46, abs=0.02)
    assert models.grade_efficiency(size=7.5e-6, cut=np.array([cut]), slope=np.array([2.0])) == pytest.approx(
        0.574, abs=2e-3
    )


def test_cooper_alley():
    """Cooper & Alley ch. 4 (from memory): Lapple D 1 m, 150 m³/min, 350 K: cut 6.26 to 6.3 µm printed, 1616 Pa."""
    shape = standard_design("lapple-general-purpose", 1.0)
    gas = {"particle_density": 1600, "fluid_density": 1.01, "fluid_viscosity": 0.0748 / 3600}
    assert models.lapple_cut(geometry=shape, flow=2.5, turns=6, **gas) * 1e6 == pytest.approx(6.26, abs=0.05)
    assert models.pressure_drops(geometry=shape, flow=2.5, fluid_density=1.01)["shepherd-lapple-1940"] == pytest.approx(
        1616, rel=1e-3
    )


def test_lapple_keeps_its_pi():
    """A public answer drops pi and gets 17.0 µm; Lapple's equation gives 9.62 µm at 8 m/s (looked up, as a trap)."""
    shape = standard_design("lapple-general-purpose", 1.0)
    gas = {"particle_density": 1500, "fluid_density": 0.0, "fluid_viscosity": 18.6e-6}
    assert models.lapple_cut(geometry=shape, flow=8 * shape.inlet_area, turns=6, **gas) * 1e6 == pytest.approx(
        9.62, abs=0.01
    )


@pytest.mark.parametrize(
    ("design", "heads"),
    [
        ("stairmand-high-efficiency", (6.40, 5.14, 4.85)),
        ("swift-high-efficiency", (9.24, 7.10, 7.07)),
        ("lapple-general-purpose", (8.00, 6.16, 6.79)),
        ("swift-general-purpose", (8.00, 6.16, 6.11)),
        ("peterson-whitby", (7.76, 5.99, 6.32)),
        ("stairmand-high-throughput", (8.00, 6.16, 7.30)),
    ],
)
def test_pressure_drop_in_inlet_heads(design, heads):
    """Shepherd & Lapple (looked up), Casal & Martinez-Benet, Dirgo (from memory) for each design, by hand."""
    shape = standard_design(design, 0.6)
    found = models.pressure_drops(geometry=shape, flow=10 * shape.inlet_area, fluid_density=0.02)  # head 1 Pa
    keys = ("shepherd-lapple-1940", "casal-martinez-1983", "dirgo-1988")
    assert [float(found[key]) for key in keys] == pytest.approx(heads, abs=0.006)


def test_euler_numbers_in_inlet_heads():
    """Eu 320 and 46 on the body velocity are 5.19 and 5.90 inlet heads (Rhodes 2008, from memory)."""
    for design, heads in (("stairmand-high-efficiency", 5.19), ("stairmand-high-throughput", 5.90)):
        shape = standard_design(design, 0.5)
        found = models.pressure_drops(geometry=shape, flow=10 * shape.inlet_area, fluid_density=0.02)
        assert found["stairmand-euler"] == pytest.approx(heads, abs=0.01)


def test_critical_loading():
    """Muschelknautz as in Hoffmann & Stein (from memory), loaded cut 3.545 µm on a 10 µm feed at 0.1 kg/kg: 8.862e-3 by
    hand; the exponent is 0.581 at 0.001 kg/kg and the limit is continuous at 0.1."""
    found = models.critical_loading(cut=3.545e-6, median_size=10e-6, loading=0.1)
    assert found == pytest.approx(8.862e-3, rel=1e-3)
    thin = models.critical_loading(cut=3.545e-6, median_size=10e-6, loading=0.001)
    assert thin == pytest.approx(0.025 * 0.3545 * 0.01**0.5808, rel=1e-3)
    either = [models.critical_loading(cut=3e-6, median_size=1e-5, loading=c) for c in (0.0999999, 0.1000001)]
    assert either[0] == pytest.approx(either[1], rel=1e-5)


@pytest.mark.parametrize(
    ("loading", "limit", "overall"), [(0.001, 4.468e-4, 0.9812), (0.1, 8.862e-3, 0.99186), (1.0, 0.02124, 0.99455)]
)
def test_muschelknautz_overall(loading, limit, overall):
    """The same case with a log-normal feed, 10 µm and geometric s.d. 2, slope 5 (by hand from the method, from memory):
    critical loading and overall efficiency with the efficiency in the friction iterated."""
    from scipy.stats import norm

    from psdflow.carryover.muschelknautz import GRADE_SLOPE, muschelknautz_cut

    edges = np.geomspace(1e-7, 1e-3, 2001)
    share = np.diff(norm.cdf(np.log(edges / 10e-6) / np.log(2)))
    size, caught = np.sqrt(edges[1:] * edges[:-1]), 0.95
    for _ in range(6):
        cut = muschelknautz_cut(geometry=HE, flow=FLOW, loading=loading, efficiency=caught, **AIR)
        grade = models.grade_efficiency(size=size, cut=cut, slope=np.asarray(GRADE_SLOPE))
        most = models.critical_loading(cut=cut, median_size=10e-6, loading=loading)
        through = models.penetration_with_loading(penetration=1 - grade, loading=loading, limit=most)
        caught = 1 - float((share * through).sum())
    assert most == pytest.approx(limit, rel=0.012)
    assert caught == pytest.approx(overall, abs=4e-4)


def test_davis_cornwell():
    """Davis & Cornwell, standard cyclone (from memory): D 0.5 m, 4 m³/s, 800 kg/m³: 2.41 µm with b rounded to 0.13, 2.322 with
    0.125; 94.5 to 95 % at 10 µm."""
    shape = standard_design("lapple-general-purpose", 0.5)
    gas = {"particle_density": 800, "fluid_density": 0.0, "fluid_viscosity": 18.5e-6}
    cut = models.lapple_cut(geometry=shape, flow=4.0, turns=6, **gas)
    assert cut * 1e6 == pytest.approx(2.322, abs=0.005)
    assert models.grade_efficiency(size=10e-6, cut=cut, slope=np.asarray(2.0)) == pytest.approx(0.945, abs=0.006)


def test_catch_and_loss_make_the_inlet():
    """E x catch + (1 - E) x loss = feed for every class (Rhodes 2008, mass balance)."""
    feed = np.array([0.2, 0.5, 0.3])
    grade = models.grade_efficiency(size=np.array([1, 3, 9]) * 1e-6, cut=np.asarray(2e-6), slope=np.asarray(2.0))
    through = models.penetration_with_loading(penetration=1 - grade, loading=0.5, limit=0.02)
    assert feed * (1 - through) + feed * through == pytest.approx(feed)
    assert np.all(through <= 1 - grade)


def test_rhodes_example_9_2_design(monkeypatch):
    """Rhodes 2008, WE 9.2 (from memory): Eu 384, Stk50 1e-3, 10 m³/s in two cyclones of 1.67 m: 1200 Pa and 9.85 µm."""
    monkeypatch.setitem(models.SIMILARITY, "example", (1e-3, 384.0))
    shape = replace(standard_design("stairmand-high-efficiency", 1.6702), design="example")
    gas = {"particle_density": 2500, "fluid_density": 1.2, "fluid_viscosity": 18.4e-6}
    assert models.similarity_cut(geometry=shape, flow=5.0, **gas) * 1e6 == pytest.approx(9.85, abs=0.01)
    assert models.pressure_drops(geometry=shape, flow=5.0, fluid_density=1.2)["stairmand-euler"] == pytest.approx(
        1200, abs=2
    )


def test_coulson_richardson_example_10_4():
    """Coulson & Richardson vol. 6, ex. 10.4 (from memory): nitrogen at 150 °C, 4 x 0.42 m at 1000 m³/h each against the tested
    0.203 m at 223 m³/h: scaling factor 1.42, overall 88.7 % (88.62 without the print's rounding)."""
    factor = models.scaled_size(
        size=1.0,
        body_diameter=(0.203, 0.42),
        flow=(223.0, 1000.0),
        density_difference=(2000.0, 2500.0),
        fluid_viscosity=(0.018e-3, 0.023e-3),
    )
    assert factor == pytest.approx(1.42, abs=0.005)
    share, caught = [10, 15, 10, 10, 25, 20, 6, 4], [98, 97, 96, 95, 93, 86, 72, 10]
    assert np.dot(share, caught) / 100 == pytest.approx(88.7, abs=0.1)


def test_an_almost_clean_gas_gets_no_credit_for_its_loading():
    """Below 0.001 kg/kg the critical loading stays level, so nothing drops out unclassified (physical limit)."""
    loading = np.array([1e-7, 1e-5, 1e-4])
    limit = models.critical_loading(cut=2.5e-6, median_size=10e-6, loading=loading)
    assert np.all(limit > loading)
    passed = np.array([[0.5, 0.1]] * 3)
    assert models.penetration_with_loading(penetration=passed, loading=loading, limit=limit) == pytest.approx(passed)
