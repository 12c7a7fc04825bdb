"""Whatever the bytes: right numbers or an InputError, never another exception."""

from pathlib import Path
from tempfile import NamedTemporaryFile

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from psdflow.errors import InputError
from psdflow.reports import Report, read

HERE = Path(__file__).parent
TEXTS = sorted(p for f in ("files", "percentiles") for p in (HERE / f).iterdir() if p.suffix != ".xlsx")
BOOKS = sorted((HERE / "files").glob("*.xlsx"))
OPTIONS = settings(deadline=None, suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large])


def outcome(data: bytes, suffix: str = ".csv") -> list[Report] | None:
    """Reports with sound numbers, or None for an InputError of one line."""
    with NamedTemporaryFile(suffix=suffix) as file:
        file.write(data)
        file.flush()
        try:
            reports = read(file.name)
        except InputError as error:
            if "\n" in str(error):
                raise AssertionError("a message has one line") from error
            return None
    assert reports
    for report in reports:
        everything = np.concatenate([[report.below], report.shares, [report.above]])
        assert np.all(np.isfinite(everything))
        assert np.all(everything >= 0)
        assert abs(everything.sum() - 1) < 1e-9
        assert np.all(report.edges > 0)
        assert np.all(np.diff(report.edges) > 0)
        assert report.edges.size == report.shares.size + 1 >= 2
    return reports


@settings(OPTIONS, max_examples=150)
@given(st.binary(max_size=400))
def test_random_bytes(data: bytes) -> None:
    outcome(data)


@settings(OPTIONS, max_examples=150)
@given(st.text("0123456789.,;\t |<>-+%\"'#\nµmgPan()Sievsz", max_size=300))
def test_random_tables(text: str) -> None:
    outcome(text.encode())


@settings(OPTIONS, max_examples=150)
@given(st.data())
def test_files_with_changed_bytes(data: st.DataObject) -> None:
    content = bytearray(data.draw(st.sampled_from(TEXTS)).read_bytes())
    for _ in range(data.draw(st.integers(1, 4))):
        at = data.draw(st.integers(0, len(content) - 1))
        kind = data.draw(st.sampled_from(["change", "delete", "insert", "cut"]))
        if kind == "change":
            content[at] = data.draw(st.integers(0, 255))
        elif kind == "delete":
            del content[at : at + data.draw(st.integers(1, 5))]
        elif kind == "insert":
            content[at:at] = data.draw(st.binary(min_size=1, max_size=4))
        else:
            del content[max(1, at) :]
        if not content:
            content = bytearray(b" ")
    outcome(bytes(content))


@settings(OPTIONS, max_examples=40)
@given(st.data())
def test_workbooks_with_changed_bytes(data: st.DataObject) -> None:
    content = bytearray(data.draw(st.sampled_from(BOOKS)).read_bytes())
    for _ in range(data.draw(st.integers(1, 4))):
        content[data.draw(st.integers(0, len(content) - 1))] = data.draw(st.integers(0, 255))
    outcome(bytes(content), ".xlsx")


CELLS = st.sampled_from(
    [
        "",
        "0",
        "-1",
        "abc",
        "1e3",
        "12,5",
        "1.234,5",
        "<3",
        "n.d.",
        "100",
        "Pan",
        "45-63",
        "NaN",
        "#",
        '"',
        "=1+1",
        "2024-01-05",
        "%",
        "µm",
        "55",
    ]
)


@settings(OPTIONS, max_examples=300)
@given(st.data())
def test_redundant_table_with_a_changed_row_is_right_or_refused(data: st.DataObject) -> None:
    """Mass, % retained, % passing and a total say the same thing: no change can pass unnoticed by more than 2 %."""
    lines = (HERE / "files" / "sieve_three_columns.csv").read_text(encoding="utf-8").splitlines()
    original = read(HERE / "files" / "sieve_three_columns.csv")[0]
    body = range(1, len(lines) - 1)
    row = data.draw(st.sampled_from(body))
    kind = data.draw(st.sampled_from(["cell", "delete row", "repeat row", "swap rows", "text row", "blank cell"]))
    cells = lines[row].split(",")
    if kind in ("cell", "blank cell"):
        # A changed size can't be noticed where it stays in order, so sizes are left alone.
        cells[data.draw(st.integers(1, 3))] = data.draw(CELLS) if kind == "cell" else ""
        lines[row] = ",".join(cells)
    elif kind == "delete row":
        del lines[row]
    elif kind == "repeat row":
        lines.insert(row, lines[row])
    elif kind == "swap rows":
        other = data.draw(st.sampled_from(body))
        lines[row], lines[other] = lines[other], lines[row]
    else:
        lines.insert(row, data.draw(st.sampled_from(["abc,def,x,y", "checked by N. N.", "some,,,", ",,,"])))
    reports = outcome("\n".join(lines).encode())
    if reports is None:
        return
    assert len(reports) == 1
    fine = np.interp(
        np.log(original.edges),
        np.log(reports[0].edges),
        reports[0].below + np.concatenate([[0], np.cumsum(reports[0].shares)]),
    )
    expected = original.below + np.concatenate([[0], np.cumsum(original.shares)])
    kept = np.isin(original.edges, reports[0].edges)
    assert np.abs(fine - expected)[kept].max() < 0.021
    assert kept.sum() >= 5


GARBAGE = ["abc", "1.2.3", "NaN", "x1", "Pan", "45-63", "2024-01-05", "%", "µm", "1/2", "No. 200", "-1", "=1+1", "d50"]
PLAIN_TABLES = [
    "sieve_mass_um.csv",
    "sieve_cumulative_passing.csv",
    "sieve_cumulative_retained.csv",
    "sieve_astm_numbers.csv",
    "sieve_classes_text.csv",
    "sieve_units_in_cells.csv",
    "sieve_french_cp1252.csv",
    "sieve_no_pan.csv",
    "sieve_blank_rows_between.csv",
    "sieve_transposed.csv",
    "laser_upper_edges.csv",
    "laser_lower_edges.csv",
    "laser_lower_upper.csv",
    "laser_first_class_zero.csv",
    "laser_cumulative_under.txt",
]


def _rows(file: str) -> tuple[list[list[str]], str, list[int]]:
    """Cells of a file, its separator, and which rows begin with a size."""
    text = (HERE / "files" / file).read_bytes()
    decoded = text.decode("cp1252" if "cp1252" in file else "utf-8")
    separator = max(";,\t", key=decoded.count)
    rows = [line.split(separator) for line in decoded.splitlines()]
    data = [i for i, row in enumerate(rows) if len(row) > 1 and row[-1][:1].isdigit() and "Lot" not in row[0]]
    return rows, separator, data


@pytest.mark.parametrize("file", PLAIN_TABLES)
@pytest.mark.parametrize("garbage", GARBAGE)
def test_garbage_for_a_number_is_always_refused(file: str, garbage: str) -> None:
    rows, separator, data = _rows(file)
    for i in data:
        for j in range(1, len(rows[i])) if "transposed" in file else [len(rows[i]) - 1]:
            if file == "sieve_transposed.csv" and i == data[0]:
                continue  # the row of sizes
            changed = [list(row) for row in rows]
            changed[i][j] = garbage
            content = "\n".join(separator.join(row) for row in changed).encode()
            assert outcome(content) is None, (file, i + 1, j + 1, garbage)


@pytest.mark.parametrize("file", PLAIN_TABLES)
@pytest.mark.parametrize("line", ["abc", "abc{s}def", "page 2 of 3", "{s}{s}", "NaN{s}NaN", "Total pages{s}2", "{s}17"])
def test_a_line_between_rows_never_splits_or_shortens_a_table(file: str, line: str) -> None:
    """The numbers are the same as without the line, or the file is refused."""
    rows, separator, data = _rows(file)
    (original,) = read(HERE / "files" / file)
    for i in data[1:]:
        if file == "sieve_transposed.csv":
            continue
        lines = [separator.join(row) for row in rows]
        lines.insert(i, line.format(s=separator))
        reports = outcome("\n".join(lines).encode())
        if reports is not None:
            assert len(reports) == 1, (file, i + 1, line)
            np.testing.assert_allclose(reports[0].shares, original.shares)
            np.testing.assert_allclose(reports[0].edges, original.edges)


@pytest.mark.parametrize("file", PLAIN_TABLES)
def test_two_lines_that_became_one_are_refused(file: str) -> None:
    rows, separator, data = _rows(file)
    if file == "sieve_transposed.csv":
        return
    for i in (i for i in (data[0] - 1, *data[:-1]) if any(rows[i]) and any(rows[i + 1])):
        lines = [separator.join(row) for row in rows]
        lines[i : i + 2] = [separator.join(lines[i : i + 2])]
        assert outcome("\n".join(lines).encode()) is None, (file, i + 1)
