"""Fitted distributions against published and recomputed parameters; tails against known curves."""

import itertools

import numpy as np
import pytest

from psdflow import InputError, SizeDistribution
from psdflow.sizes import statistics as st
from psdflow.sizes.fits import MODELS, Fit, fit_distribution, fit_models, ggs, log_normal, rrsb
from psdflow.sizes.open_ends import tail_mean_size, with_open_ends

BREZANI_MM = [0.08, 0.5, 1.25, 2, 4, 6.3, 8, 12.5, 16, 40]
BREZANI_OVER = [95.61, 87.71, 82.45, 79.78, 73.28, 66.98, 63.21, 55.4, 49.91, 23.95]


def of(fits: list[Fit], key: str) -> Fit:
    return next(fit for fit in fits if fit.key == key)


def test_brezani_rrsb():
    """Brezani 2011 (looked up): RRSB of crushed material by least squares, k 27.0236 mm, n 0.5946."""
    fit = of(fit_models(np.array(BREZANI_MM) * 1e-3, 1 - np.array(BREZANI_OVER) / 100), "rrsb")
    assert fit.size * 1e3 == pytest.approx(27.0236, abs=5e-4)
    assert fit.shape == pytest.approx(0.5946, abs=5e-5)
    assert fit.max_error == pytest.approx(0.0434, abs=1e-3)


def test_mccabe_rrsb():
    """McCabe, Smith & Harriott ex. 28.1 (data from memory): x' 1.846 mm, n 2.509, recomputed independently."""
    mm = np.array([0.074, 0.104, 0.147, 0.208, 0.295, 0.417, 0.589, 0.833, 1.168, 1.651, 2.362, 3.327, 4.699])
    shares = [0.0031, 0.0041, 0.0058, 0.0077, 0.0102, 0.0210, 0.0538, 0.1590, 0.2570, 0.3207, 0.1250, 0.0251]
    under = 0.0075 + np.concatenate([[0], np.cumsum(shares)])
    fit = of(fit_models(mm * 1e-3, under), "rrsb")
    assert (fit.size * 1e3, fit.shape) == pytest.approx((1.846, 2.509), abs=1e-3)


def test_kunii_levenspiel_rrsb():
    """Kunii & Levenspiel 1991, ch. 3, ex. 1 (data from memory): x' 116.31 µm, n 3.902 on 75 to 150 µm, recomputed."""
    fit = of(fit_models(np.array([75, 100, 125, 150]) * 1e-6, np.array([60, 150, 270, 330]) / 360), "rrsb")
    assert (fit.size * 1e6, fit.shape) == pytest.approx((116.31, 3.902), rel=2e-3)


@pytest.mark.parametrize(("key", "size", "shape"), [("rrsb", 5e-5, 1.7), ("log-normal", 5e-5, 1.7), ("ggs", 4e-4, 1.3)])
def test_exact_curves_come_back(key, size, shape):
    """Mathematics: a curve made by a model is fitted by it, and by no other as well."""
    x = np.geomspace(2e-6, 3e-4, 25)
    fits = fit_models(x, MODELS[key].undersize(x, size, shape))
    assert fits[0].key == key
    assert (fits[0].size, fits[0].shape) == pytest.approx((size, shape), rel=1e-6)
    assert fits[0].r_squared == pytest.approx(1)
    assert fits[1].error > 1e-3


def test_weights_decide_where_a_curve_is_met():
    x = np.geomspace(2e-6, 3e-4, 25)
    q = 0.5 * (rrsb(x, 5e-5, 1.2) + log_normal(x, 6e-5, 1.5))
    heavy = of(fit_models(x, q, np.where(q < 0.1, 100.0, 1.0)), "rrsb")
    even = of(fit_models(x, q), "rrsb")
    fine = q < 0.1
    assert np.abs(heavy.undersize(x)[fine] - q[fine]).max() < np.abs(even.undersize(x)[fine] - q[fine]).max()


@pytest.mark.parametrize(
    ("function", "size", "shape"), [(rrsb, 90e-6, 2.5), (log_normal, 90e-6, 1.6), (ggs, 200e-6, 2.5)]
)
def test_tails_of_sieved_curves(function, size, shape):
    """The surface-mean size of the pan, by lines and by fit, is the integral of q/x below the finest sieve (mathematics)."""
    sieves = np.array([45, 63, 90, 125, 180]) * 1e-6
    fine = np.geomspace(1e-8, 45e-6, 20001)
    under = function(fine, size, shape)
    true = under[-1] / (np.diff(under) * (1 / fine[:-1] + 1 / fine[1:]) / 2).sum()
    fit = fit_models(sieves, function(sieves, size, shape))[0]
    assert fit.mean_size_below(45e-6) == pytest.approx(true, rel=2e-3)
    assert float(tail_mean_size(sieves, function(sieves, size, shape))) * 45e-6 == pytest.approx(true, rel=2e-3)


def test_tails_of_many_lots_are_those_of_each():
    sieves = np.array([45, 63, 90, 125, 180]) * 1e-6
    under = np.stack([rrsb(sieves, 90e-6, 2.5), log_normal(sieves, 90e-6, 1.6), ggs(sieves, 200e-6, 1.5)])
    together = tail_mean_size(np.broadcast_to(sieves, under.shape), under)
    assert together.tolist() == [float(tail_mean_size(sieves, row)) for row in under]


@pytest.mark.parametrize("exponent", [1.5, 2.5, 4.0])
def test_open_ends_of_rrsb(exponent):
    """d32 of a sieved RRSB is x' / Γ(1 - 1/n) (psd sheet, recomputed), the pan closed by the best tail."""
    from scipy.special import gamma

    edges = np.array([32, 45, 63, 90, 125, 180, 250, 355, 500]) * 1e-6
    under = rrsb(edges, 120e-6, exponent)
    powder = with_open_ends(edges=edges, shares=np.diff(under), below=under[0], above=1 - under[-1])
    assert float(st.d32(powder)) == pytest.approx(120e-6 / gamma(1 - 1 / exponent), rel=0.02)


def test_fit_of_a_distribution_leaves_assumed_edges_out():
    edges = np.array([45, 63, 90, 125, 180]) * 1e-6
    under = log_normal(edges, 90e-6, 1.5)
    powder = with_open_ends(edges=edges, shares=np.diff(under), below=under[0], above=1 - under[-1])
    best = fit_distribution(powder)[0]
    assert best.key == "log-normal"
    assert (best.size, best.shape) == pytest.approx((90e-6, 1.5), rel=1e-6)


def test_one_point_is_refused():
    with pytest.raises(InputError, match="two or more points"):
        fit_models([1e-6, 2e-6], [0.0, 1.0])


FLUIDS = [("RR", (100.0, 2.2)), ("RR", (60.0, 1.3)), ("LN", (5e-5, 0.4)), ("LN", (2e-4, 0.9)), ("GGS", (2e-4, 1.6))]


@pytest.mark.parametrize(("kind", "parameters"), FLUIDS)
def test_undersize_is_that_of_fluids(kind, parameters):
    """Classes of the library fluids 1.3 that define the same curves (its RR is 1 - exp(-k x^m)): 1e-6."""
    from fluids import particle_size_distribution as theirs

    x = np.geomspace(2e-6, 8e-4, 15)
    if kind == "RR":
        micrometres, n = parameters
        other = theirs.PSDRosinRammler(k=(micrometres * 1e-6) ** -n, m=n)
        ours = rrsb(x, micrometres * 1e-6, n)
    elif kind == "LN":
        other = theirs.PSDLognormal(s=parameters[1], d_characteristic=parameters[0])
        ours = log_normal(x, parameters[0], float(np.exp(parameters[1])))
    else:
        other = theirs.PSDGatesGaudinSchuhman(d_characteristic=parameters[0], m=parameters[1])
        x = x[x < parameters[0]]
        ours = ggs(x, *parameters)
    assert ours == pytest.approx([other.cdf(float(v)) for v in x], abs=1e-6)


def test_means_of_a_discrete_distribution_are_those_of_fluids():
    """ParticleSizeDistribution of the library fluids 1.3, number basis, shares uniform in x inside a class as there: all
    moment means of ISO 9276-2 to 1e-6."""
    from fluids.particle_size_distribution import ParticleSizeDistribution

    edges = np.array([240, 360, 450, 562.5, 703, 878, 1097, 1371, 1713, 2141, 2676, 3345, 4181, 5226, 6532]) * 1e-6
    counts = np.array([65, 119, 232, 410, 629, 849, 990, 981, 825, 579, 297, 111, 21, 1], float)
    theirs = ParticleSizeDistribution(ds=list(edges), fractions=list(counts / counts.sum()), order=0)
    slices = 800
    fine = np.concatenate([np.linspace(a, b, slices, endpoint=False) for a, b in itertools.pairwise(edges)])
    ours = SizeDistribution.of(np.append(fine, edges[-1]), np.repeat(counts / slices, slices), quantity="number")
    for p, q in ((1, 0), (2, 0), (3, 0), (2, 1), (3, 1), (3, 2), (4, 3)):
        assert float(st.moment_mean(ours, p, q)) == pytest.approx(theirs.mean_size(p, q), rel=1e-6), (p, q)
