"""What the report's own error does to the drawn distribution: repeats, sieves, weighing, loss, sampling."""

import csv
from pathlib import Path

import numpy as np
import pytest

from psdflow import SizeDistribution
from psdflow.quality import Quality
from psdflow.reports import Report, read
from psdflow.reports.repeats import own_error, percentile_of_each
from psdflow.reports.report import amplified
from psdflow.sizes import statistics as st
from psdflow.sizes.open_ends import with_open_ends
from psdflow.uncertainty import APERTURE_TOLERANCE, Draws, aperture_tolerance, interval, redrawn_report

EDGES = np.array([45, 63, 90, 125, 180, 250]) * 1e-6
SHARES = np.array([0.07, 0.18, 0.32, 0.28, 0.10])


def sieved(**quality: float) -> SizeDistribution:
    return with_open_ends(edges=EDGES, shares=SHARES, below=0.03, above=0.02, quality=Quality(**quality))


def laser(median: float = 60e-6, **quality: float) -> SizeDistribution:
    edges = median * np.geomspace(0.1, 10, 41)
    shares = np.exp(-(np.log(edges[:-1] / median) ** 2) / 0.5)
    return SizeDistribution.of(edges, shares, measured_by="laser", quality=Quality(**quality))


def spread(distribution: SizeDistribution, fraction: float, density: float = 2500.0) -> float:
    """Standard deviation of ln(percentile) over the draws."""
    drawn = redrawn_report(distribution, Draws(2000, 3), particle_density=density)
    return float(np.log(drawn.percentile(fraction)).std())


def test_laser_repeatability_is_that_of_the_standard():
    """ISO 13320 (figures looked up in summaries): 3 % at x50, 5 % at x10 and x90; doubled where the median is below 10 µm."""
    assert spread(laser(), 0.5) == pytest.approx(0.03, rel=0.05)
    for fraction in (0.1, 0.9):
        assert spread(laser(), fraction) == pytest.approx(0.05, rel=0.08)
        assert spread(laser(median=5e-6), fraction) == pytest.approx(0.10, rel=0.08)


def test_the_reports_own_figures_replace_the_standards():
    assert spread(laser(size_sd=0.1, width_sd=0.02), 0.5) == pytest.approx(0.1, rel=0.05)
    assert spread(laser(size_sd=0.01, width_sd=0.01), 0.9) == pytest.approx(0.01 * 2**0.5, rel=0.08)


def test_stack_keeps_each_lots_quality():
    lots = [laser(size_sd=0.1, width_sd=0.02), laser(), laser(sample_mass=1e-4)]
    together = SizeDistribution.stack(lots)
    drawn = redrawn_report(together, Draws(200))
    for i, lot in enumerate(lots):
        assert np.allclose(redrawn_report(lot, Draws(200)).shares, drawn.lot(i).shares, rtol=1e-12)
        assert np.allclose(redrawn_report(lot, Draws(200)).edges, drawn.lot(i).edges, rtol=1e-12)
        assert np.array_equal(together.lot(i).quality.size_sd, lot.quality.size_sd, equal_nan=True)
    assert together.lot(slice(0, 2)).quality.size_sd.shape == (2,)
    assert together.refined(3).quality is together.quality


def test_aperture_tolerances_are_those_of_the_table():
    """ASTM E11 column Y (table of the library fluids, its units put right; reports/open/astm_e11_tolerances.csv)."""
    with (Path(__file__).parent / "reports" / "open" / "astm_e11_tolerances.csv").open(encoding="utf-8") as file:
        rows = [(float(r["aperture_um"]), float(r["Y_avg_variation_um"])) for r in csv.DictReader(file)]
    for aperture, deviation in rows:
        assert aperture_tolerance(aperture * 1e-6) == pytest.approx(deviation / aperture, abs=6e-4), aperture
    assert set(APERTURE_TOLERANCE) <= {a for a, _ in rows}


def test_sieves_move_within_their_tolerance_and_never_cross():
    close = np.array([36, 38, 40, 45, 50, 53, 56, 63]) * 1e-6
    for edges in (EDGES, close):
        powder = SizeDistribution.of(edges, np.ones(edges.size - 1), quality=Quality(size_sd=1e-9, width_sd=1e-9))
        drawn = redrawn_report(powder, Draws(2000))
        assert np.all(np.diff(drawn.edges, axis=-1) > 0)
        deviation = np.log(drawn.edges / edges)
        assert np.all(deviation.std(axis=0) <= aperture_tolerance(edges) / 1.96 * 1.03)
        if edges is EDGES:
            assert deviation.std(axis=0)[-1] == pytest.approx(aperture_tolerance(250e-6) / 1.96, rel=0.05)


def test_laser_part_of_a_merged_report_has_no_sieve_error():
    powder = sieved(size_sd=1e-9, width_sd=1e-9, sieved_from=90e-6)
    deviation = np.log(redrawn_report(powder, Draws(500)).edges[:, 1:-1] / EDGES).std(axis=0)
    assert np.all(deviation[:2] < 1e-6)
    assert np.all(deviation[2:] > 0.01)


def test_what_was_lost_may_be_dust():
    """Up to the 2 % that were lost belong in the pan of 3 %."""
    low, high = interval(st.pan_share(redrawn_report(sieved(loss=0.02), Draws(500))))
    assert float(low) == pytest.approx(0.03, abs=0.002)
    assert float(high) == pytest.approx(0.05 / 1.02, abs=0.002)
    still = interval(st.pan_share(redrawn_report(sieved(), Draws(500))))
    assert still[1] - still[0] < 0.004  # weighing alone


def test_sampling_error_is_gys():
    """Gy's formula for size classes (Pitard; numbers recomputed by simulation in the psd sheet): 2 g of 2650 kg/m³,
    shares 0.1 0.3 0.4 0.2 of 100-200-400-800-1600 µm, grains at the geometric middle: 1.649 1.664 1.786 5.719 %."""
    edges = np.array([100, 200, 400, 800, 1600]) * 1e-6
    narrow = np.sqrt(edges[:-1] * edges[1:])
    pairs = np.sort(np.concatenate([narrow * 0.9999, narrow * 1.0001]))
    shares = np.zeros(7)
    shares[::2] = [0.1, 0.3, 0.4, 0.2]
    powder = SizeDistribution.of(pairs, shares, measured_by="laser", quality=Quality(sample_mass=2e-3))
    drawn = redrawn_report(powder, Draws(40_000), particle_density=2650).shares[:, ::2]
    assert drawn.std(axis=0) / [0.1, 0.3, 0.4, 0.2] == pytest.approx([0.01649, 0.01664, 0.01786, 0.05719], rel=0.03)
    assert drawn.mean(axis=0) == pytest.approx([0.1, 0.3, 0.4, 0.2], rel=0.005)


def test_a_small_sample_widens_the_coarse_end_of_a_report():
    report = read(Path(__file__).parent / "reports" / "files" / "sieve_mass_um.csv", sample_mass=1e-4)[0]
    large = read(Path(__file__).parent / "reports" / "files" / "sieve_mass_um.csv")[0]
    assert report.sample_mass == 1e-4
    assert large.sample_mass == pytest.approx(0.1)
    assert spread(report.distribution, 0.9) > 1.05 * spread(large.distribution, 0.9)


def test_repeats_give_the_reports_own_error():
    """Five readings of one shape shifted by 5 % (s.d.): Student's t for four degrees of freedom is 2.776."""
    edges = 60e-6 * np.geomspace(0.05, 20, 121)
    from scipy.special import ndtr

    shifts = np.array([-1, -0.5, 0, 0.5, 1]) / np.std([-1, -0.5, 0, 0.5, 1], ddof=1) * 0.05
    under = ndtr((np.log(edges / 60e-6) - shifts[:, None]) / 0.5)
    readings = np.diff(under, axis=1, prepend=0, append=1)
    assert np.log(percentile_of_each(edges, readings, 0.5)).std(ddof=1) == pytest.approx(0.05, rel=0.01)
    size_sd, width_sd = own_error(edges, readings)
    assert size_sd == pytest.approx(0.05 * 2.776 / 1.96, rel=0.01)
    assert width_sd == 0.01  # the readings differ in no width; the least that is believed
    report = Report("r", "", None, "s", "s", "laser", "volume", edges, readings.mean(0)[1:-1],
                    float(readings.mean(0)[0]), float(readings.mean(0)[-1]), repeats=readings)  # fmt: skip
    assert float(report.distribution.quality.size_sd) == pytest.approx(size_sd)


def test_readings_that_scatter_more_than_the_standard_are_said(tmp_path):
    rows = ["Upper edge (µm),A run 1 (%),A run 2 (%),A run 3 (%)", "4,6,5,4", "8,10,10,10", "16,24,20,30", "32,35,40,31",
            "64,20,20,20", "128,5,5,5"]  # fmt: skip
    (tmp_path / "laser.csv").write_text("Laser diffraction\n" + "\n".join(rows) + "\n", encoding="utf-8")
    (report,) = read(tmp_path / "laser.csv")
    assert any("scatter more than ISO 13320 accepts: d50 by 6.3% (3% accepted)" in w for w in report.warnings)
    assert float(report.quality.size_sd) > 0.1  # 6.3 % of three readings, widened by Student's t


def test_number_basis_says_how_much_it_amplifies():
    """Hatch & Choate 1929: x50,3 = x50,0 exp(3 s²), so 5 % at x90 (ds = 0.05 / 1.2816) moves ln x50,3 by 6 s ds."""
    from scipy.special import ndtr

    edges = 10e-6 * np.geomspace(0.02, 50, 2001)
    shares = np.diff(ndtr(np.log(edges / 10e-6) / 0.4))
    assert amplified("number", edges, shares, 0.05) == pytest.approx(6 * 0.4 * 0.05 / 1.2816, rel=0.01)
    assert amplified("volume", edges, shares, 0.05) == 0
    (report,) = read(Path(__file__).parent / "reports" / "files" / "laser_number_basis.csv")
    assert any("5 % more width moves the median by" in w for w in report.warnings)
    assert float(report.quality.size_sd) > 0.03
