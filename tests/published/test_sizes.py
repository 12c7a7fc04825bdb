"""Means, percentiles and surfaces against worked examples of handbooks."""

import itertools

import numpy as np
import pytest

from psdflow.distribution import SizeDistribution
from psdflow.sizes import statistics as st
from psdflow.sizes.open_ends import moved_ends, with_open_ends

# McCabe, Smith & Harriott, Unit Operations of Chemical Engineering, example 28.1 (from memory): aperture in mm and
# mass share retained on the next finer sieve; the pan holds 0.0075.
MCCABE_MM = [4.699, 3.327, 2.362, 1.651, 1.168, 0.833, 0.589, 0.417, 0.295, 0.208, 0.147, 0.104, 0.074]
MCCABE_SHARE = [0.0251, 0.1250, 0.3207, 0.2570, 0.1590, 0.0538, 0.0210, 0.0102, 0.0077, 0.0058, 0.0041, 0.0031]


def mccabe() -> SizeDistribution:
    return SizeDistribution.of(np.array(MCCABE_MM[::-1]) * 1e-3, MCCABE_SHARE[::-1])


def test_mccabe_surface_mean():
    """McCabe ex. 28.1 (from memory): Ds 1.207 mm = 1/sum(x/D) with 0.9925 as the sum of shares, pan omitted."""
    renormalised = st.d32(mccabe(), "arithmetic-midpoint") * 1e3
    assert renormalised == pytest.approx(1.19846, rel=1e-4)
    assert renormalised / sum(MCCABE_SHARE) == pytest.approx(1.207, rel=1e-3)


def test_mccabe_mass_mean():
    """McCabe ex. 28.1 (from memory): Dw 1.677 mm on the shares without the pan."""
    assert st.d43(mccabe(), "arithmetic-midpoint") * 1e3 * sum(MCCABE_SHARE) == pytest.approx(1.677, rel=1e-3)


def test_mccabe_specific_surface():
    """McCabe ex. 28.1 (from memory): Aw 3309 mm²/g at 2650 kg/m³ and sphericity 0.571."""
    sauter = float(st.d32(mccabe(), "arithmetic-midpoint"))
    assert 6 / (0.571 * 2650 * sauter) * 1e3 == pytest.approx(3309, rel=1e-3)


def test_kunii_levenspiel_example_3_1():
    """Kunii & Levenspiel 1991, ch. 3, ex. 1 (from memory): 360 g, mean size 98 µm; 97.93 recomputed."""
    edges = np.array([50, 75, 100, 125, 150, 175]) * 1e-6
    powder = SizeDistribution.of(edges, np.diff([0, 60, 150, 270, 330, 360]))
    assert st.d32(powder, "arithmetic-midpoint") * 1e6 == pytest.approx(98, abs=0.1)
    assert st.d32(powder, "geometric-midpoint") * 1e6 == pytest.approx(96.887, abs=0.001)
    assert powder.percentile(0.5) * 1e6 == pytest.approx(100 * 1.25**0.25, rel=1e-9)  # by hand: Q is 0.41667, 0.75


def test_coulson_richardson_example_1_1():
    """Coulson & Richardson vol. 2, ex. 1.1 (from memory): mass linear from 1 to 101 µm, surface mean 21.7 µm."""
    edges = np.linspace(1, 101, 4001) * 1e-6
    assert st.d32(SizeDistribution.of(edges, np.ones(4000))) * 1e6 == pytest.approx(100 / np.log(101), rel=1e-5)


def test_holdich_number_basis():
    """Holdich, Fundamentals of Particle Technology, ch. 2, Q6 (answer looked up): number uniform 1..101 µm,
    specific surface 7.9e4 1/m; the same shape as the example above, on a number basis."""
    edges = np.linspace(1, 101, 4001) * 1e-6
    powder = SizeDistribution.of(edges, np.ones(4000), quantity="number")
    assert 6 / st.d32(powder) == pytest.approx(7.9e4, rel=0.005)
    assert st.d32(powder) * 1e6 == pytest.approx(75.750, rel=1e-4)


def test_rhodes_area_basis():
    """Rhodes, Introduction to Particle Technology, WE 1.2 (problem looked up): area distribution (x/45)², so the
    volume distribution is (x/45)³ and d32 is 30 µm."""
    edges = np.geomspace(0.045, 45, 6001) * 1e-6
    powder = SizeDistribution.of(edges, np.diff((edges / 45e-6) ** 2), quantity="area")
    assert st.d32(powder) * 1e6 == pytest.approx(30.0, rel=1e-3)
    assert powder.undersize(22.5e-6) == pytest.approx(0.125, rel=1e-3)


def test_rhodes_mixing_rule():
    """Rhodes (from memory): equal masses of surface-volume sizes 100 and 200 µm mix to 133 µm."""
    narrow = 1.0001
    edges = np.array([100 / narrow, 100 * narrow, 200 / narrow, 200 * narrow]) * 1e-6
    assert st.d32(SizeDistribution.of(edges, [0.5, 0, 0.5])) * 1e6 == pytest.approx(133.33, rel=1e-3)


# Drop sizes of ASTM E799 as given in the documentation of the library fluids (looked up): counts per class.
E799_EDGES = np.array([240, 360, 450, 562.5, 703, 878, 1097, 1371, 1713, 2141, 2676, 3345, 4181, 5226, 6532], float)
E799_COUNTS = np.array([65, 119, 232, 410, 629, 849, 990, 981, 825, 579, 297, 111, 21, 1], float)


def test_e799_number_to_volume():
    """ASTM E799 drops: D32 2269.3 µm with counts spread evenly in x (fluids documentation, looked up); ours spreads
    them evenly in ln x, so it is matched by cutting each class into slices uniform in x first."""
    slices = 200
    edges = np.concatenate([np.linspace(a, b, slices, endpoint=False) for a, b in itertools.pairwise(E799_EDGES)])
    edges = np.append(edges, E799_EDGES[-1]) * 1e-6
    powder = SizeDistribution.of(edges, np.repeat(E799_COUNTS / slices, slices), quantity="number")
    expected = {(1, 0): 1459.3726, (2, 0): 1646.574, (3, 0): 1832.3967, (2, 1): 1857.7889, (3, 1): 2053.2704,
                (3, 2): 2269.321, (4, 3): 2670.752}  # fmt: skip
    for (p, q), value in expected.items():
        assert st.moment_mean(powder, p, q) * 1e6 == pytest.approx(value, rel=1e-5)


def test_e799_agrees_with_fluids():
    """The same distribution in the library fluids gives the same D32 and D43."""
    from fluids.particle_size_distribution import ParticleSizeDistribution

    theirs = ParticleSizeDistribution(
        ds=list(E799_EDGES * 1e-6), fractions=list(E799_COUNTS / E799_COUNTS.sum()), order=0
    )
    slices = 400
    edges = np.concatenate([np.linspace(a, b, slices, endpoint=False) for a, b in itertools.pairwise(E799_EDGES)])
    ours = SizeDistribution.of(
        np.append(edges, E799_EDGES[-1]) * 1e-6, np.repeat(E799_COUNTS / slices, slices), quantity="number"
    )
    assert st.moment_mean(ours, 3, 2) == pytest.approx(theirs.mean_size(3, 2), rel=2e-6)
    assert st.moment_mean(ours, 4, 3) == pytest.approx(theirs.mean_size(4, 3), rel=2e-6)


@pytest.mark.parametrize(
    ("p", "q", "power"), [(3, 2, -0.5), (4, 3, 0.5), (1, 0, -2.5), (2, 0, -2), (3, 0, -1.5), (3, 3, 0)]
)
def test_lognormal_means(p, q, power):
    """Hatch & Choate 1929 (coefficients looked up in an aerosol handbook): D[p,q] = x50,3 exp((p+q-6) s²/2)."""
    from scipy.stats import norm

    median, s = 80e-6, np.log(1.6)
    edges = median * np.exp(np.linspace(-8, 8, 8001) * s)
    powder = SizeDistribution.of(edges, np.diff(norm.cdf(np.log(edges / median) / s)))
    assert st.moment_mean(powder, p, q) == pytest.approx(median * np.exp(power * s**2), rel=2e-4)


SIEVED = [  # median µm, geometric s.d., sieves µm: log-normals cut exactly (recomputed; no publication)
    (70, 1.5, (38, 45, 53, 75, 106, 150)),
    (70, 1.5, (53, 75, 106, 150, 212)),
    (70, 1.8, (45, 53, 63, 75, 106, 125, 150, 212)),
    (70, 1.8, (63, 90, 125, 180, 250)),
    (150, 1.4, (75, 90, 106, 125, 150, 180, 212, 250, 300)),
]


@pytest.mark.parametrize(("median", "spread", "sieves"), SIEVED)
def test_open_ends_of_lognormal(median, spread, sieves):
    """The tail rule returns the true d32 of a sieved log-normal (Hatch & Choate: x50 exp(-s²/2)) within 1 %, and the
    bounds hold it."""
    from scipy.stats import norm

    edges = np.array(sieves) * 1e-6
    under = norm.cdf(np.log(edges / (median * 1e-6)) / np.log(spread))
    powder = with_open_ends(edges=edges, shares=np.diff(under), below=under[0], above=1 - under[-1])
    truth = median * 1e-6 * np.exp(-(np.log(spread) ** 2) / 2)
    assert st.d32(powder) == pytest.approx(truth, rel=0.01)
    low, high = st.d32(moved_ends(powder, np.array([0.0, 1.0]), np.array([0.0, 1.0])))
    assert low < truth < high


def test_powder_means_are_ordered():
    """D10 <= D20 <= D30 <= D32 <= D43 for any powder (ISO 9276-2 moments; mathematics)."""
    values = [st.moment_mean(mccabe(), p, q) for p, q in ((1, 0), (2, 0), (3, 0), (3, 2), (4, 3))]
    assert np.all(np.diff(values) > 0)
