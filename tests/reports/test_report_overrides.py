"""What the user says beats recognition: columns, kind, basis, decimal, sample, size unit, loss limits."""

from pathlib import Path

import numpy as np
import pytest

from psdflow.errors import InputError
from psdflow.reports import read

HERE = Path(__file__).parent
FILES, BAD = HERE / "files", HERE / "bad"


def test_columns_by_number_letter_and_header() -> None:
    expected = read(FILES / "sieve_three_columns.csv")[0]
    for columns in (
        "size=1,share=3",
        "size=A,share=C",
        "size=Sieve size (µm),share=% retained",
        "size=sieve size,mass=Mass",
    ):
        (report,) = read(FILES / "sieve_three_columns.csv", columns=columns)
        np.testing.assert_allclose(report.shares, expected.shares, atol=1e-12)


def test_several_columns_of_one_role_are_samples() -> None:
    reports = read(FILES / "sieve_samples_side_by_side.csv", columns="size=1,mass=2,mass=4")
    assert [r.sample for r in reports] == ["A", "C"]


def test_headerless_table_with_columns_and_unit(tmp_path: Path) -> None:
    (tmp_path / "bare.csv").write_text("250,98\n180,88\n125,60\n90,28\n63,10\n", encoding="utf-8")
    (report,) = read(tmp_path / "bare.csv", columns="size=1,under=2", size_unit="um", kind="sieve")
    np.testing.assert_allclose(report.edges * 1e6, [63, 90, 125, 180, 250])
    np.testing.assert_allclose(report.shares * 100, [18, 32, 28, 10])
    assert (report.below * 100, report.above * 100) == pytest.approx((10, 2))


@pytest.mark.parametrize(
    "columns",
    [
        "size",
        "size=1",
        "share=2",
        "size=1,weight=2",
        "size=1,share=9",
        "size=1,share=nobody",
        "size=1,lower=2,share=3",
        ",",
        "size=,share=2",
    ],
)
def test_wrong_columns_are_refused(columns: str) -> None:
    with pytest.raises(InputError, match=r"--columns|no column"):
        read(FILES / "sieve_three_columns.csv", columns=columns)


def test_kind_moves_the_class_of_a_single_size() -> None:
    """kind_unknown.csv: 3 7 18 32 28 12 % at 45 to 250 µm: retained on the size, or the class up to it."""
    (sieve,) = read(BAD / "kind_unknown.csv", kind="sieve")
    np.testing.assert_allclose(
        [sieve.below, *sieve.shares, sieve.above], np.array([0, 3, 7, 18, 32, 28, 12]) / 100, atol=1e-12
    )
    (laser,) = read(BAD / "kind_unknown.csv", kind="laser")
    np.testing.assert_allclose(
        [laser.below, *laser.shares, laser.above], np.array([3, 7, 18, 32, 28, 12, 0]) / 100, atol=1e-12
    )


def test_basis() -> None:
    (report,) = read(FILES / "laser_upper_edges.csv", basis="number")
    assert report.quantity == "number"
    assert any("converted to volume" in w for w in report.warnings)
    assert report.distribution.quantity == "number"


def test_decimal_settles_what_the_numbers_leave_open() -> None:
    """thousand_or_decimal.csv: 1,250 2,125 3,375 1,125 on 500, 355, 250 µm and in the pan."""
    (comma,) = read(BAD / "thousand_or_decimal.csv", decimal=",")
    np.testing.assert_allclose([comma.below, *comma.shares, comma.above], np.array([1.125, 3.375, 2.125, 1.25]) / 7.875)
    (point,) = read(BAD / "thousand_or_decimal.csv", decimal=".")
    np.testing.assert_allclose(point.shares, comma.shares)
    assert point.understood["decimal"] == "point"


def test_sample_by_name() -> None:
    (report,) = read(FILES / "sieve_samples_side_by_side.csv", sample="b")
    assert report.sample == "B"
    with pytest.raises(InputError, match='no sample "D"; the file holds "A", "B", "C"'):
        read(FILES / "sieve_samples_side_by_side.csv", sample="D")


def test_size_unit() -> None:
    (astm,) = read(BAD / "sieve_numbers_unnamed.csv", size_unit="astm")
    np.testing.assert_allclose(astm.edges * 1e6, [45, 63, 90, 125, 180, 250])
    (micro,) = read(BAD / "no_unit_small.csv", size_unit="um")
    np.testing.assert_allclose(micro.edges * 1e6, [1, 2, 4, 8])


def test_loss_limits() -> None:
    with pytest.raises(InputError, match=r"4\.76% lost"):
        read(BAD / "loss_too_high.csv")
    (report,) = read(BAD / "loss_too_high.csv", loss_refuse=0.05)
    assert any("4.76% lost" in w for w in report.warnings)
    (quiet,) = read(FILES / "sieve_loss_warned.csv", loss_warn=0.01)
    assert quiet.warnings == ()


@pytest.mark.parametrize("option", [{"kind": "image"}, {"basis": "length"}, {"decimal": ";"}, {"size_unit": "yard"}])
def test_unknown_option_is_refused(option: dict[str, str]) -> None:
    with pytest.raises(InputError, match="is unknown; one of"):
        read(FILES / "sieve_mass_um.csv", **option)  # type: ignore[arg-type]
