"""A sieved coarse part and a laser measurement of the fines as one distribution."""

import numpy as np
import pytest

from psdflow import InputError, SizeDistribution
from psdflow.reports import Report, canonical_text, merged_report, read
from psdflow.sizes import statistics as st
from psdflow.sizes.fits import log_normal
from psdflow.sizes.merge import merge_overlapping, merge_passing
from psdflow.sizes.open_ends import with_open_ends

SIEVES = np.array([63, 90, 125, 180, 250, 355]) * 1e-6
CHANNELS = np.geomspace(1e-6, 700e-6, 80)
MEDIAN, SPREAD = 120e-6, 1.8


def sieved() -> SizeDistribution:
    under = log_normal(SIEVES, MEDIAN, SPREAD)
    return with_open_ends(edges=SIEVES, shares=np.diff(under), below=under[0], above=1 - under[-1])


def laser(factor: float = 1.0, passed: float | None = None) -> SizeDistribution:
    """The same powder by laser, sizes ``factor`` larger; what passed a sieve alone if ``passed`` is given."""
    under = log_normal(CHANNELS / factor, MEDIAN, SPREAD)
    if passed is not None:
        under = np.minimum(under / log_normal(passed, MEDIAN, SPREAD), 1.0)
    return SizeDistribution.of(CHANNELS, np.diff(under), measured_by="laser")


def report(distribution: SizeDistribution, kind: str) -> Report:
    edges, shares = distribution.edges, distribution.shares
    low, high = distribution.lower_open, distribution.upper_open
    inner = slice(int(low), -1 if high else None)
    return Report(f"{kind}.csv", "0" * 64, None, kind, kind, kind, "mass" if kind == "sieve" else "volume",  # type: ignore[arg-type]
                  edges[inner], shares[inner], float(shares[0]) if low else 0.0, float(shares[-1]) if high else 0.0)  # fmt: skip


def test_fines_that_passed_the_finest_sieve():
    made = merge_passing(sieved(), laser(passed=63e-6), cut=63e-6)
    assert made.join == 63e-6
    assert made.under == pytest.approx(log_normal(made.edges, MEDIAN, SPREAD), abs=0.01)
    assert any("1.00" in w for w in made.warnings)


@pytest.mark.parametrize("factor", [0.9, 1.0, 1.25, 1.5])
def test_overlapping_curves_give_the_shape_factor(factor):
    made = merge_overlapping(sieved(), laser(factor))
    assert made.shape_factor == pytest.approx(factor, rel=0.02)
    assert made.under == pytest.approx(log_normal(made.edges, MEDIAN, SPREAD), abs=0.01)
    assert 63e-6 < made.join <= 125e-6
    assert len(made.warnings) == 1


def test_a_factor_out_of_bounds_stands_at_its_bound_and_is_said():
    made = merge_overlapping(sieved(), laser(1.75))
    assert made.shape_factor == pytest.approx(1.6)
    assert any("stands at its bound" in w for w in made.warnings)


def test_other_powders_are_refused():
    with pytest.raises(InputError, match="can't be of one sample"):
        merge_overlapping(sieved(), laser(3.0))
    with pytest.raises(InputError, match="didn't measure what passed"):
        merge_passing(sieved(), laser(), cut=63e-6)
    with pytest.raises(InputError, match="no sieve of the coarse part"):
        merge_passing(sieved(), laser(passed=63e-6), cut=75e-6)
    with pytest.raises(InputError, match=r"0\.8 to 1\.6"):
        merge_passing(sieved(), laser(passed=63e-6), cut=63e-6, shape_factor=2)


def test_a_jump_at_the_join_is_said():
    finer = log_normal(CHANNELS, 8e-6, 1.4)
    odd = SizeDistribution.of(CHANNELS, np.diff(finer), measured_by="laser")
    made = merge_passing(sieved(), odd, cut=125e-6)
    assert any("density jumps" in w for w in made.warnings)


def test_long_grains_beyond_the_cut_are_said():
    made = merge_passing(sieved(), laser(passed=66e-6), cut=63e-6)
    assert any("coarser than the sieve" in w for w in made.warnings)
    assert made.under[-len(SIEVES)] == pytest.approx(log_normal(63e-6, MEDIAN, SPREAD))


def test_merged_report_knows_what_the_laser_measured(tmp_path):
    one = merged_report(report(sieved(), "sieve"), report(laser(passed=63e-6), "laser"))
    other = merged_report(report(sieved(), "sieve"), report(laser(1.2), "laser"))
    truth = MEDIAN * np.exp(-(np.log(SPREAD) ** 2) / 2)
    for made in (one, other):
        assert float(st.d32(made.distribution)) == pytest.approx(truth, rel=0.02)
        assert made.kind == "sieve"
        assert made.sieved_from is not None
        (tmp_path / "merged.csv").write_text(canonical_text(made), encoding="utf-8")
        (back,) = read(tmp_path / "merged.csv")
        assert back.sieved_from == made.sieved_from
        assert np.array_equal(back.edges, made.edges)
    assert any("say --shape-factor" in w for w in one.warnings)
    assert "1.20" in other.understood["fines"]


def test_merged_report_refuses_what_it_can_not_tell():
    half = laser(passed=70e-6)
    with pytest.raises(InputError, match="--fines-of passing or --fines-of all"):
        merged_report(report(sieved(), "sieve"), report(half, "laser"))
    with pytest.raises(InputError, match="a sieve report and"):
        merged_report(report(laser(), "laser"), report(sieved(), "sieve"))
