"""Real, openly licensed reports (open/README.md names origin and licence) read to their known numbers."""

import csv
from pathlib import Path

import numpy as np
import pytest

from psdflow.errors import InputError
from psdflow.reports import read

OPEN = Path(__file__).parent / "open"

# Sum of the net masses in g, pan in %, and net masses of the finest and the coarsest sieve; from the files themselves.
SIEVED = {
    "freshcat": (93.78, 4.052, [300, 355, 425, 500, 600, 847, 1000], [1.35, 4.88, 11.8, 13.62, 54.92, 3.41], 0.0),
    "usedcat": (75.48, 2.915, [300, 355, 425, 500, 600, 847, 1000], [1.23, 4.6, 9.25, 11.7, 44.0, 2.5], 0.0),
    "char2": (65.70, 11.644, [125, 212, 300, 355, 425, 500], [13.65, 1.72, 29.9, 9.6, 2.38], 0.8),
    "pineA": (30.71, 3.256, [125, 212, 300, 355, 425, 500], [4.55, 1.7, 1.98, 10.5, 5.08], 5.9),
}


@pytest.mark.parametrize("name", SIEVED)
def test_fluid_bed_sievings(name: str) -> None:
    """Hand sievings of a fluidized-bed catalyst, char and pine, 2018 CCPC (MIT): gross and net mass columns."""
    total, pan, edges, masses, coarsest = SIEVED[name]
    (report,) = read(OPEN / f"fluid_bed_sieve_{name}.csv")
    assert report.kind == "sieve"
    np.testing.assert_allclose(report.edges * 1e6, edges)
    np.testing.assert_allclose(report.shares, np.array(masses) / total, rtol=1e-12)
    assert report.below * 100 == pytest.approx(pan, abs=5e-4)
    assert report.above == pytest.approx(coarsest / total, rel=1e-12)
    assert any("gross mass" in warning for warning in report.warnings)


def _sediment() -> tuple[np.ndarray, dict[str, np.ndarray]]:
    with open(OPEN / "sediment_laser_classes_cc0.csv", encoding="utf-8", newline="") as file:
        rows = list(csv.reader(file))
    table = np.array(rows[1:], float)
    return table[:, 0], {name: table[:, k] for k, name in enumerate(rows[0]) if k}


def test_sediment_laser_classes() -> None:
    """60 laser measurements of 93 classes at their upper edges, Mackay et al. 2014 (CC0)."""
    edges, columns = _sediment()
    reports = read(OPEN / "sediment_laser_classes_cc0.csv")
    assert [r.sample for r in reports] == list(columns)
    for report in reports:
        values = columns[report.sample] / columns[report.sample].sum()
        assert report.kind == "laser"
        np.testing.assert_allclose(report.edges * 1e6, edges, rtol=1e-12)
        assert report.below == pytest.approx(values[0], abs=1e-15)
        np.testing.assert_allclose(report.shares, values[1:], atol=1e-15)
        assert report.above == 0


def test_same_numbers_in_a_german_layout() -> None:
    """Latin-1, CRLF, semicolons, decimal commas, a title block, names in a row of their own, a sum row."""
    originals = {r.sample: r for r in read(OPEN / "sediment_laser_classes_cc0.csv")}
    reports = read(OPEN / "messy_decimal_comma_semicolon.csv")
    assert [r.sample for r in reports] == ["PL1-C11-1-1", "PL1-C11-1-2", "PL1-C11-1-3"]
    for report in reports:
        np.testing.assert_allclose(report.edges, originals[report.sample].edges, rtol=1e-12)
        np.testing.assert_allclose(report.shares, originals[report.sample].shares, atol=1e-12)
        assert report.fields["Datum"] == "14.03.2014"


def test_same_numbers_as_oversize_in_millimetres_coarse_first() -> None:
    """Cumulative values rounded to 0.001 %: classes agree within that."""
    original = read(OPEN / "sediment_laser_classes_cc0.csv")[0]
    (report,) = read(OPEN / "messy_oversize_mm_descending.txt")
    np.testing.assert_allclose(report.edges, original.edges, rtol=1e-9)
    np.testing.assert_allclose(report.shares, original.shares, atol=3e-5)


def test_river_sand_middles_need_a_word_from_the_user() -> None:
    """Class middles without a header, 2018 A. Moodie (MIT); 9 of 10 classes, one is missing."""
    file = OPEN / "river_sand_midpoints_mit.csv"
    with pytest.raises(InputError, match=r"Columns seen: A \(no header\): 41.7584195"):
        read(file)
    (report,) = read(file, columns="mid=1,share=2", size_unit="um", kind="laser")
    np.testing.assert_allclose(report.shares, np.array([0.7, 1.5, 9, 19, 28, 24, 12, 5, 0.8]) / 100, rtol=1e-12)
    # Edges lie between the middles: sqrt(41.7584195 × 51.8469785) = 46.5297…
    assert report.edges[1] * 1e6 == pytest.approx((41.7584195 * 51.8469785) ** 0.5, rel=1e-12)
    assert any("midway" in w and "unevenly spaced" in w for w in report.warnings)


def test_percentiles_of_the_sediment_follow() -> None:
    """d10, d50, d90 as published with the data (PL1-C11-1-1: 10.29624, 93.96205, 216.01678 µm), log-linear at the edges."""
    distribution = read(OPEN / "sediment_laser_classes_cc0.csv")[0].distribution
    for fraction, size in ((0.1, 10.29624), (0.5, 93.96205), (0.9, 216.01678)):
        assert float(distribution.percentile(fraction)) * 1e6 == pytest.approx(size, rel=3e-4)
