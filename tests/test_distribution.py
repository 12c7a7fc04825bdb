"""The data structure: shapes, exactness, refusals."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from psdflow import InputError, SizeDistribution
from psdflow.sizes import statistics
from psdflow.sizes.open_ends import with_open_ends
from psdflow.uncertainty import Draws, interval, redrawn_report

shares = arrays(float, st.integers(2, 12), elements=st.floats(0, 1)).filter(lambda a: a.sum() > 0.01)


def powder(values) -> SizeDistribution:
    return SizeDistribution.of(1e-5 * 1.4 ** np.arange(len(values) + 1), values)


@given(shares)
def test_shares_sum_to_one(values):
    assert powder(values).shares.sum() == pytest.approx(1)


@given(shares, st.floats(0.01, 100))
def test_means_scale_with_size(values, factor):
    small, big = powder(values), powder(values).scaled(factor)
    for p, q in statistics.NAMED_MEANS.values():
        assert statistics.moment_mean(big, p, q) == pytest.approx(factor * statistics.moment_mean(small, p, q))


@given(shares, st.integers(2, 9))
def test_splitting_classes_changes_nothing(values, parts):
    whole, fine = powder(values), powder(values).refined(parts)
    assert statistics.d32(fine) == pytest.approx(statistics.d32(whole))
    assert fine.percentile(0.37) == pytest.approx(whole.percentile(0.37))
    assert fine.undersize(3e-5) == pytest.approx(whole.undersize(3e-5))


@given(shares)
def test_means_lie_between_the_edges(values):
    d = powder(values)
    for p, q in statistics.NAMED_MEANS.values():
        assert d.edges[0] <= statistics.moment_mean(d, p, q) * (1 + 1e-9)
        assert statistics.moment_mean(d, p, q) <= d.edges[-1] * (1 + 1e-9)


@given(shares.filter(lambda a: (a > 1e-6).all()), st.floats(0.001, 0.999))
def test_percentile_inverts_undersize(values, fraction):
    d = powder(values)
    assert d.undersize(float(d.percentile(fraction))) == pytest.approx(fraction, abs=1e-9)


def test_leading_axes_broadcast():
    rng = np.random.default_rng(1)
    table = rng.random((5, 7, 9))
    many = powder(np.ones(9)).__class__.of(1e-5 * 1.4 ** np.arange(10), table)
    assert many.shape == (5, 7)
    single = SizeDistribution.of(many.edges, table[3, 2])
    for function in (statistics.d32, statistics.span, statistics.geometric_sd):
        assert function(many)[3, 2] == pytest.approx(float(function(single)), rel=1e-12)
    assert many.undersize([2e-5, 6e-5])[3, 2] == pytest.approx(single.undersize([2e-5, 6e-5]), rel=1e-12)


def test_midpoint_conventions_differ_as_they_should():
    d = SizeDistribution.of([100e-6, 200e-6], [1.0])
    assert statistics.d32(d, "geometric-midpoint") == pytest.approx(100e-6 * 2**0.5)
    assert statistics.d32(d, "arithmetic-midpoint") == pytest.approx(150e-6)
    assert statistics.d32(d) == pytest.approx(200e-6 * np.log(2))


def test_stack_keeps_each_lot():
    lots = [powder([1, 2, 3]), powder([3, 2, 1]).scaled(1.1)]
    stacked = SizeDistribution.stack(lots)
    assert statistics.d32(stacked) == pytest.approx([float(statistics.d32(lot)) for lot in lots])
    assert statistics.d32(stacked.lot(1)) == statistics.d32(lots[1])


@pytest.mark.parametrize(
    ("edges", "values", "message"),
    [
        ([1e-5, 2e-5], [0.5, 0.5], "needs 3 edges"),
        ([2e-5, 1e-5], [1.0], "rise"),
        ([0.0, 1e-5], [1.0], "positive"),
        ([1e-5, 2e-5, 3e-5], [0.5, -0.1], "negative"),
        ([1e-5, 2e-5], [0.0], "all zero"),
        ([1e-5, 2e-5], [np.nan], "finite"),
    ],
)
def test_refused(edges, values, message):
    with pytest.raises(InputError, match=message):
        SizeDistribution.of(edges, values)


def test_stack_refuses_different_tables():
    with pytest.raises(InputError, match="stack into one table"):
        SizeDistribution.stack([powder([1, 2, 3]), powder([1, 2])])


def test_open_ends_are_marked():
    d = with_open_ends(edges=[38e-6, 75e-6, 150e-6], shares=[0.4, 0.5], below=0.07, above=0.03)
    assert d.lower_open
    assert d.upper_open
    assert statistics.pan_share(d) == pytest.approx(0.07)
    assert statistics.in_open_end(d, 0.05)
    assert not statistics.in_open_end(d, 0.5)
    assert statistics.in_open_end(d, 0.98)
    assert d.undersize(38e-6) == pytest.approx(0.07)


@settings(deadline=None)
@given(st.integers(0, 1000))
def test_redrawn_reports_surround_the_report(seed):
    d = with_open_ends(edges=[38e-6, 75e-6, 150e-6], shares=[0.4, 0.5], below=0.07, above=0.03)
    drawn = redrawn_report(d, Draws(400, seed))
    assert drawn.shape == (400,)
    low, high = interval(drawn.percentile(0.5))
    assert low < d.percentile(0.5) < high
    assert np.all(np.diff(drawn.edges, axis=-1) > 0)


def test_draws_are_named_streams():
    one, two = Draws(200, 7), Draws(200, 7)
    assert np.array_equal(one.normal("a"), two.normal("a"))
    assert not np.array_equal(one.normal("a"), one.normal("b"))
    assert abs(np.corrcoef(one.normal("a"), one.normal("b"))[0, 1]) < 0.25


def test_interval_of_a_normal():
    """The 95 % interval of a standard normal is ±1.96 (mathematics)."""
    low, high = interval(Draws(4000, 3).normal("x"))
    assert (float(low), float(high)) == pytest.approx((-1.96, 1.96), abs=0.02)


def test_interval_leaves_nan_out():
    low, high = interval(np.array([[1.0, np.nan, 2.0, 3.0], [np.nan] * 4]))
    assert 1.0 <= low[0] <= high[0] <= 3.0
    assert np.isnan(low[1])
