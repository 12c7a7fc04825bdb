"""Every file of files/ reads to the classes written out by hand; every file of bad/ is refused with a reason."""

import hashlib
import shutil
import sys
from pathlib import Path

import numpy as np
import pytest

from psdflow.errors import InputError
from psdflow.reports import Report, read, read_folder

sys.path.insert(0, str(Path(__file__).parent))

from expected import EXPECTED, REFUSED, WARNED, Expected

HERE = Path(__file__).parent
FILES, BAD = HERE / "files", HERE / "bad"


def of(expected: Expected) -> Report:
    found = [r for r in read(FILES / expected.file) if r.sample == expected.sample]
    assert len(found) == 1, f"{expected.file} holds {[r.sample for r in read(FILES / expected.file)]}"
    return found[0]


@pytest.mark.parametrize("expected", EXPECTED, ids=lambda e: f"{e.file}-{e.sample}")
def test_file_reads_to_the_classes_written_by_hand(expected: Expected) -> None:
    report = of(expected)
    np.testing.assert_allclose(report.edges * 1e6, expected.edges, rtol=1e-8)
    np.testing.assert_allclose(report.shares * 100, expected.shares, atol=1e-9)
    assert report.below * 100 == pytest.approx(expected.below, abs=1e-9)
    assert report.above * 100 == pytest.approx(expected.above, abs=1e-9)
    assert (report.kind, report.quantity, report.lot) == (expected.kind, expected.quantity, expected.lot)


def test_every_file_is_expected_and_holds_no_other_sample() -> None:
    for path in sorted(FILES.iterdir()):
        names = {e.sample for e in EXPECTED if e.file == path.name}
        assert {r.sample for r in read(path)} == names, path.name


@pytest.mark.parametrize(("file", "part"), WARNED)
def test_what_a_reader_must_know_is_warned(file: str, part: str) -> None:
    assert any(part in warning for report in read(FILES / file) for warning in report.warnings)


QUIET = ["sieve_mass_um.csv", "sieve_three_columns.csv", "sieve_german_latin1.csv", "laser_upper_edges.csv", "sieve_lower_upper.csv"]


@pytest.mark.parametrize("file", QUIET)
def test_a_clean_file_has_no_warnings(file: str) -> None:
    assert [w for report in read(FILES / file) for w in report.warnings] == []


@pytest.mark.parametrize("path", sorted(BAD.iterdir()), ids=lambda p: p.name)
def test_bad_file_is_refused_in_one_line_that_says_why(path: Path) -> None:
    with pytest.raises(InputError) as caught:
        read(path)
    message = str(caught.value)
    assert message.startswith(path.name)
    assert "\n" not in message
    for part in REFUSED[path.name]:
        assert part in message


def test_report_keeps_hash_fields_and_what_was_understood() -> None:
    (report,) = read(FILES / "sieve_mass_um.csv")
    assert report.sha256 == hashlib.sha256((FILES / "sieve_mass_um.csv").read_bytes()).hexdigest()
    assert report.fields == {"Lot": "SM-0412", "Supplier": "Spring Mill Minerals", "Date": "2024-04-12"}
    assert report.understood["size"] == 'column A "Aperture (µm)" (µm)'
    assert report.understood["mass"] == 'column B "Mass retained (g)" (amount in each class, g)'
    (laser,) = read(FILES / "laser_german_unten_oben.csv")
    assert laser.fields == {"Probe": "G-44"}
    assert laser.understood["decimal"] == "comma"


def test_cover_sheet_fields_reach_every_sheet() -> None:
    reports = read(FILES / "workbook_sheet_each.xlsx")
    assert [r.sheet for r in reports] == ["Lot 11", "Lot 12"]
    assert all(r.fields["Laboratory"] == "Dry Bench" for r in reports)


def test_repeats_are_kept_with_their_spread() -> None:
    """Three runs with 6, 5, 4 % under 4 µm and 24, 25, 26 % in 8..16 µm."""
    (report,) = read(FILES / "laser_repeats.csv")
    assert report.repeats is not None
    assert report.repeats.shape == (3, 7)
    np.testing.assert_allclose(report.repeats[:, 0] * 100, [6, 5, 4])
    np.testing.assert_allclose(report.repeats[:, 2] * 100, [24, 25, 26])
    np.testing.assert_allclose(report.repeats.sum(axis=1), 1)


def test_fractions_add_up_to_one_and_make_a_distribution() -> None:
    for path in sorted(FILES.iterdir()):
        for report in read(path):
            assert report.below + report.shares.sum() + report.above == pytest.approx(1, abs=1e-12)
            distribution = report.distribution
            assert distribution.lower_open == (report.below > 0)
            assert distribution.upper_open == (report.above > 0)
            assert distribution.measured_by == report.kind


def test_folder_goes_on_past_bad_files(tmp_path: Path) -> None:
    for file in ("sieve_mass_um.csv", "sieve_samples_side_by_side.csv"):
        shutil.copy(FILES / file, tmp_path)
    shutil.copy(BAD / "negative_share.csv", tmp_path)
    shutil.copy(BAD / "old_workbook.xls", tmp_path)
    seen: list[tuple[int, int, str]] = []
    reports, failures = read_folder(tmp_path, on_progress=lambda done, of_all, name: seen.append((done, of_all, name)))
    assert [r.sample for r in reports] == ["SM-0412", "A", "B", "C"]
    assert [name for name, _ in failures] == ["negative_share.csv", "old_workbook.xls"]
    assert seen[-1] == (4, 4, "")
    with pytest.raises(InputError, match="no size report"):
        read_folder(tmp_path.joinpath("empty_folder_here") if tmp_path.joinpath("empty_folder_here").mkdir() else tmp_path / "empty_folder_here")
