"""Every file of files/ (invented contents) reads to the classes written out here by hand.

Edges in µm; % under the finest, between, and over the coarsest edge.
"""

import hashlib
import shutil
from pathlib import Path
from typing import NamedTuple

import numpy as np
import pytest

from psdflow.errors import InputError
from psdflow.reports import Report, read, read_folder

HERE = Path(__file__).parent
FILES, BAD = HERE / "files", HERE / "bad"


class Expected(NamedTuple):
    """One sample of one file; sizes in µm, shares in %."""

    file: str
    sample: str
    lot: str
    kind: str
    quantity: str
    edges: list[float]
    below: float
    shares: list[float]
    above: float


SIX = [45.0, 63, 90, 125, 180, 250]
SHARES = [7.0, 18, 32, 28, 10]
OCTAVES = [1.0, 2, 4, 8, 16, 32, 64, 128]
VOLUMES = [1.0, 4, 10, 25, 35, 20, 5]


def _sieve(file: str, name: str = "", sample: str = "") -> Expected:
    """3 % in the pan, 7 18 32 28 10 % up the sieves 45 to 250 µm, 2 % on the coarsest."""
    name = name or file.rsplit(".", 1)[0]
    return Expected(file, sample or name, name, "sieve", "mass", SIX, 3.0, SHARES, 2.0)


def _coarse(file: str) -> Expected:
    """As `_sieve`, with 9.5 % on 180 µm and 2.5 % on 250 µm."""
    return _sieve(file)._replace(shares=[7.0, 18, 32, 28, 9.5], above=2.5)


def _second(file: str, name: str) -> Expected:
    """1 % in the pan, 4 15 30 40 10 % up the sieves, nothing on the coarsest."""
    return _sieve(file, name)._replace(below=1.0, shares=[4.0, 15, 30, 40, 10], above=0.0)


def _laser(file: str, name: str = "") -> Expected:
    """1 4 10 25 35 20 5 % in the octaves from 1 to 128 µm."""
    name = name or file.rsplit(".", 1)[0]
    return Expected(file, name, name, "laser", "volume", OCTAVES, 0.0, VOLUMES, 0.0)


EXPECTED: list[Expected] = [
    _sieve("sieve_mass_um.csv", "SM-0412"),
    _sieve("sieve_mass_mm_ascending.csv"),
    _sieve("sieve_percent_retained.txt", "B-77"),
    _sieve("sieve_cumulative_passing.csv"),
    _sieve("sieve_cumulative_retained.csv"),
    _sieve("sieve_retained_is_cumulative.csv"),
    _sieve("sieve_three_columns.csv"),
    _sieve("sieve_german_latin1.csv", "K-2031"),
    _sieve("sieve_german_durchgang.csv"),
    _sieve("sieve_french_cp1252.csv", "F-118"),
    _sieve("sieve_french_refus_cumule.csv"),
    _sieve("sieve_french_passant.csv"),
    _sieve("sieve_french_three_columns.csv"),
    _sieve("sieve_spanish.csv", "E-9"),
    _sieve("sieve_spanish_pasante.csv"),
    _sieve("sieve_astm_numbers.csv"),
    _sieve("sieve_astm_hash.csv"),
    _sieve("sieve_astm_header.csv"),
    _coarse("sieve_astm_header_only.csv"),
    _coarse("sieve_astm_mesh_header.csv"),
    _sieve("sieve_classes_text.csv"),
    _sieve("sieve_minus_plus.csv"),
    _sieve("sieve_lower_upper.csv"),
    _sieve("sieve_passing_and_retained_on.csv"),
    _sieve("sieve_units_in_cells.csv"),
    _sieve("sieve_units_mixed_cells.csv")._replace(edges=[250.0, 355, 500, 710, 1000, 1400]),
    _sieve("sieve_unit_row.csv"),
    _sieve("sieve_spaces.txt"),
    _sieve("sieve_single_spaces.txt"),
    _sieve("sieve_single_spaces_units.txt"),
    _sieve("sieve_pipes.txt"),
    # 20 + 180 + 400 + 1279.5 + 100 + 20.5 g = 2000 g
    *[
        Expected(f, f[:-4], f[:-4], "sieve", "mass", [500.0, 710, 1000, 1400, 2000], 1.0, [9.0, 20, 63.975, 5], 1.025)
        for f in ("sieve_thousands_german.csv", "sieve_thousands_quoted.csv")
    ],
    _sieve("sieve_samples_side_by_side.csv", "A"),
    _second("sieve_samples_side_by_side.csv", "B"),
    _second("sieve_samples_side_by_side.csv", "C")._replace(shares=[4.0, 15, 30, 40, 9], above=1.0),
    _sieve("sieve_samples_named_by_numbers.csv", "1"),
    _sieve("sieve_samples_named_by_numbers.csv", "2")._replace(below=1.0, shares=[3.0, 6, 20, 50, 20], above=0.0),
    _sieve("sieve_samples_named_by_letters.csv", "X")._replace(edges=[45.0, 63, 90, 125, 180, 1000]),
    _sieve("sieve_samples_named_by_letters.csv", "Y")._replace(
        edges=[45.0, 63, 90, 125, 180, 1000], below=1.0, shares=[3.0, 6, 20, 50, 20], above=0.0
    ),
    _sieve("sieve_two_quantities_two_samples.csv", "North silo"),
    _second("sieve_two_quantities_two_samples.csv", "South silo"),
    _sieve("sieve_blocks_under_each_other.csv", "Feed"),
    # 50 + 80 + 50 + 20 + 0 g = 200 g
    Expected(
        "sieve_blocks_under_each_other.csv", "Cyclone dust", "Cyclone dust", "sieve", "mass", [45.0, 63, 90, 125], 25.0, [40.0, 25, 10], 0.0
    ),
    _sieve("sieve_transposed.csv", "T-5"),
    _sieve("sieve_lots_as_rows.csv", "Q-101"),
    _second("sieve_lots_as_rows.csv", "Q-102"),
    _sieve("sieve_gross_tare.csv"),
    _sieve("sieve_loss_warned.csv"),
    _sieve("sieve_loss_row.csv"),
    _sieve("sieve_sum_97.csv"),
    _sieve("sieve_fractions.csv"),
    _sieve("sieve_percent_cells.csv"),
    _sieve("sieve_below_detection.csv")._replace(edges=[*SIX, 355.0], shares=[7.0, 18, 32, 28, 11.9, 0.1], above=0.0),
    _sieve("sieve_no_pan.csv")._replace(below=0.0, shares=[10.0, 18, 32, 28, 10]),
    _sieve("sieve_old_apertures.csv")._replace(edges=[149.0, 210, 297, 420, 595, 841]),
    _sieve("sieve_odd_aperture.csv")._replace(edges=[45.0, 63, 90, 133, 180, 250]),
    _sieve("sieve_comments.csv"),
    _sieve("sieve_cumulative_mass.csv"),
    _coarse("sieve_no_unit.csv"),
    _sieve("sieve_footer_statistics.csv"),
    _coarse("sieve_statistics_beside.csv"),
    _sieve("sieve_mac_line_ends.csv"),
    _sieve("sieve_utf16_be_no_mark.csv"),
    _coarse("sieve_semicolon_hint.csv"),
    _sieve("sieve_multiline_header.csv"),
    _sieve("sieve_spec_columns.csv"),
    _coarse("sieve_row_numbers.csv"),
    _sieve("sieve_total_without_label.csv"),
    _sieve("sieve_header_names_standard.csv"),
    _sieve("sieve_blank_rows_between.csv"),
    _sieve("sieve_size_column_last.csv"),
    _sieve("sieve_ascending_pan_last.csv"),
    # 10 and 12 % on 180 µm, 28 and 26 % on 125 µm
    _sieve("sieve_two_runs.csv")._replace(shares=[7.0, 18, 32, 27, 11]),
    Expected(
        "sieve_pan_in_number_column.csv", "sieve_pan_in_number_column", "sieve_pan_in_number_column", "sieve", "mass", [125.0, 180, 250], 60.0, [28.0, 9.5], 2.5
    ),
    _sieve("under_sizes_with_signs.csv")._replace(edges=[*SIX, 355.0], shares=[7.0, 18, 32, 28, 10, 2], above=0.0),
    # phi = -log2(size / mm): -1 is 2 mm, 4 is 62.5 µm
    Expected("phi_sieve.csv", "phi_sieve", "phi_sieve", "sieve", "mass", [62.5, 125, 250, 500, 1000, 2000], 0.0, [5.0, 15, 40, 30, 9], 1.0),
    _laser("laser_upper_edges.csv", "L-1")._replace(edges=[*OCTAVES, 256.0], shares=[*VOLUMES, 0.0]),
    _laser("laser_single_size.csv")._replace(edges=[*OCTAVES, 256.0], shares=[*VOLUMES, 0.0]),
    _laser("laser_lower_edges.csv"),
    _laser("laser_lower_upper.csv"),
    _laser("laser_cumulative_under.txt"),
    _laser("laser_share_lower_by_cumulative.csv"),
    _laser("laser_oversize_mm.txt"),
    _laser("laser_under_and_share.csv")._replace(edges=OCTAVES[1:], below=1.0, shares=VOLUMES[1:]),
    _laser("laser_first_class_zero.csv")._replace(edges=OCTAVES[1:], below=1.0, shares=VOLUMES[1:]),
    _laser("laser_german_unten_oben.csv", "G-44"),
    _laser("laser_french.csv", "V-3"),
    Expected("laser_nanometre.csv", "laser_nanometre", "laser_nanometre", "laser", "volume", [0.5, 1, 2, 4, 8], 5.0, [20.0, 50, 20, 5], 0.0),
    # edges midway between 1.5, 3, 6, 12, 24 µm on a log axis: 3 / sqrt 2 and so on
    Expected(
        "laser_middles.csv", "laser_middles", "laser_middles", "laser", "volume",
        [1.0606602, 2.1213203, 4.2426407, 8.4852814, 16.9705627, 33.9411255], 0.0, [10.0, 20, 40, 20, 10], 0.0,
    ),
    Expected("laser_repeats.csv", "laser_repeats", "laser_repeats", "laser", "volume", [4.0, 8, 16, 32, 64, 128], 5.0, [10.0, 25, 35, 20, 5], 0.0),
    Expected("laser_number_basis.csv", "laser_number_basis", "laser_number_basis", "laser", "number", [1.0, 2, 4, 8, 16], 0.0, [50.0, 30, 15, 5], 0.0),
    Expected("laser_metres_exponent.csv", "laser_metres_exponent", "laser_metres_exponent", "laser", "volume", [1.0, 2, 4, 8], 0.0, [10.0, 40, 50], 0.0),
    Expected("laser_side_by_side_sizes.csv", "P-1", "P-1", "laser", "volume", [4.0, 8, 16, 32, 64, 128], 5.0, [10.0, 25, 35, 20, 5], 0.0),
    Expected("laser_side_by_side_sizes.csv", "P-2", "P-2", "laser", "volume", [5.0, 10, 20, 40, 80], 0.0, [10.0, 30, 40, 20], 0.0),
    *[
        Expected(file, name, name, "laser", "volume", [2.0, 4, 8, 16], below, [10.0 - below, 40, 50], 0.0)
        for file, name, below in (
            ("laser_lots_in_row_above.csv", "A", 1.0),
            ("laser_lots_in_row_above.csv", "B", 2.0),
            ("laser_lots_in_row_above.csv", "C", 3.0),
            ("laser_two_columns_a_lot.csv", "A", 1.0),
            ("laser_two_columns_a_lot.csv", "B", 2.0),
        )
    ],
    _sieve("workbook_one_sheet.xlsx", "X-7"),
    _sieve("workbook_sheet_each.xlsx", "Lot 11"),
    _sieve("workbook_sheet_each.xlsx", "Lot 12")._replace(below=1.0, shares=[3.0, 6, 20, 50, 20], above=0.0),
    _sieve("workbook_percent_format.xlsx"),
    _sieve("workbook_numbers_as_text.xlsx"),
    _sieve("workbook_merged_names.xlsx", "Line 1"),
    _second("workbook_merged_names.xlsx", "Line 2"),
]  # fmt: skip

# A warning each of these files must carry, by a part of its text.
WARNED: list[tuple[str, str]] = [
    ("sieve_loss_warned.csv", "101 weighed in, 100 found: 0.99% lost"),
    ("sieve_sum_97.csv", "adds up to 97.00 %"),
    ("sieve_below_detection.csv", '"<0.2" was taken as half of it, 0.1'),
    ("sieve_below_detection.csv", '"n.d." was taken as nothing found'),
    ("sieve_no_pan.csv", "no pan row"),
    ("sieve_odd_aperture.csv", "133 µm: no nominal aperture"),
    ("sieve_no_unit.csv", "has no unit; µm was assumed"),
    ("sieve_gross_tare.csv", "net mass = column C"),
    ("sieve_spec_columns.csv", 'not used: column C "Spec min", column D "Spec max"'),
    ("sieve_two_runs.csv", "2 readings of one sample were averaged"),
    ("laser_repeats.csv", "column of averages not used"),
    ("laser_single_size.csv", "was taken as the upper edge of each class"),
    ("laser_number_basis.csv", "converted to volume"),
    ("laser_middles.csv", "midway"),
    ("under_sizes_with_signs.csv", "nothing says how the sizes were measured; sieve was assumed"),
    ("workbook_one_sheet.xlsx", "hidden rows were read too: 8"),
]


def of(expected: Expected) -> Report:
    found = [r for r in read(FILES / expected.file) if r.sample == expected.sample]
    assert len(found) == 1, f"{expected.file} holds {[r.sample for r in read(FILES / expected.file)]}"
    return found[0]


@pytest.mark.parametrize("expected", EXPECTED, ids=lambda e: f"{e.file}-{e.sample}")
def test_file_reads_to_the_classes_written_by_hand(expected: Expected) -> None:
    report = of(expected)
    np.testing.assert_allclose(report.edges * 1e6, expected.edges, rtol=1e-7)
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


QUIET = [
    "sieve_mass_um.csv",
    "sieve_three_columns.csv",
    "sieve_german_latin1.csv",
    "laser_upper_edges.csv",
    "sieve_lower_upper.csv",
]


@pytest.mark.parametrize("file", QUIET)
def test_a_clean_file_has_no_warnings(file: str) -> None:
    assert [w for report in read(FILES / file) for w in report.warnings] == []


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
    empty = tmp_path / "empty"
    empty.mkdir()
    with pytest.raises(InputError, match="no size report"):
        read_folder(empty)
