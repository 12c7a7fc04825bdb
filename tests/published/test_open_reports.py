"""Real laboratory reports with published statistics, read and evaluated end to end."""

import csv
from pathlib import Path

import numpy as np
import pytest

import psdflow
from psdflow.distribution import SizeDistribution
from psdflow.sizes import statistics as st

OPEN = Path(__file__).parents[1] / "reports" / "open"


def test_sixty_laser_measurements():
    """Putslaagte sediment, Mackay et al. 2014 (CC0): 60 measurements of 93 classes. Percentiles as the instrument
    reported them within 1e-3 (the table's sizes have 3 decimals), volume mean within 2e-4 by geometric class sizes, span within 1e-3."""
    summary = {
        row["measurement"]: row
        for row in csv.DictReader((OPEN / "sediment_laser_summary_cc0.csv").read_text().splitlines())
    }
    reports = psdflow.read(OPEN / "sediment_laser_classes_cc0.csv")
    assert len(reports) == 60
    for report in reports:
        published, powder = summary[report.sample], report.distribution
        for fraction, key in ((0.1, "x10_um"), (0.5, "x50_um"), (0.9, "x90_um")):
            assert powder.percentile(fraction) * 1e6 == pytest.approx(float(published[key]), rel=1e-3), report.sample
        assert st.d43(powder, "geometric-midpoint") * 1e6 == pytest.approx(float(published["mean_um"]), rel=2e-4)
        assert st.span(powder) == pytest.approx(float(published["span"]), rel=1e-3)


# Computed by hand from the tables (pan size half the finest aperture, open top times sqrt 2, geometric class sizes):
# D32, D43, then d25, d50, d75 in µm.
SIEVED = {
    "freshcat": (541.32, 619.49, 510.93, 644.68, 746.90),
    "usedcat": (554.42, 620.80, 512.54, 642.63, 745.03),
    "char2": (195.58, 276.92, 175.55, 317.07, 347.79),
    "pineA": (293.22, 384.45, 311.10, 394.30, 472.36),
}


@pytest.mark.parametrize("name", SIEVED)
def test_fluid_bed_sievings(name):
    """Hand sieving of a fluidized-bed catalyst, char and pine, CCPC 2018 (MIT): percentiles inside the sieves exactly, means
    when the pan and the top are closed as the hand calculation closed them."""
    expected = SIEVED[name]
    powder = psdflow.read(OPEN / f"fluid_bed_sieve_{name}.csv")[0].distribution
    for fraction, value in zip((0.25, 0.5, 0.75), expected[2:], strict=True):
        assert powder.percentile(fraction) * 1e6 == pytest.approx(value, rel=1e-4)
    edges = powder.edges.copy()
    edges[0] = edges[1] / 4  # geometric mean of a/4 and a is half the aperture
    by_hand = SizeDistribution(edges, powder.shares)
    assert st.d32(by_hand, "geometric-midpoint") * 1e6 == pytest.approx(expected[0], rel=2e-4)
    assert st.d43(by_hand, "geometric-midpoint") * 1e6 == pytest.approx(expected[1], rel=2e-4)


def test_a_laser_report_reads_the_same_in_three_layouts():
    """The same measurement as a class table, in a German decimal-comma layout and as oversize in mm: same d50."""
    plain = psdflow.read(OPEN / "sediment_laser_classes_cc0.csv", sample="PL1-C11-1-1")[0]
    german = psdflow.read(OPEN / "messy_decimal_comma_semicolon.csv")[0]
    oversize = psdflow.read(OPEN / "messy_oversize_mm_descending.txt")[0]
    sizes = [float(report.distribution.percentile(0.5)) for report in (plain, german, oversize)]
    assert np.ptp(sizes) / sizes[0] < 5e-4
