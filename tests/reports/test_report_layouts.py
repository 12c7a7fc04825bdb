"""One distribution rendered in every layout × separator × encoding × decimal × unit reads back to the same numbers."""

import io
import itertools
from pathlib import Path

import numpy as np
import openpyxl
import pytest

from psdflow.reports import Report, read

EDGES_UM = np.array([45.0, 63, 90, 125, 180, 250])  # sieves
BELOW, SHARES, ABOVE = 3.25, np.array([7.0, 18.125, 32.5, 28.0, 9.125]), 2.0  # %, sum 100

# Header of (size, quantity) and the word for the pan, by language and by what is tabulated.
WORDS = {
    "english": {"size": "Aperture", "mass": "Mass retained", "share": "Retained", "under": "Passing", "over": "Cumulative retained", "pan": "Pan"},
    "german": {"size": "Maschenweite", "mass": "Rückstand", "share": "Rückstand", "under": "Durchgang", "over": "Rückstandssumme", "pan": "Boden"},
    "french": {"size": "Ouverture", "mass": "Refus", "share": "Refus partiel", "under": "Passant", "over": "Refus cumulé", "pan": "Fond"},
    "spanish": {"size": "Luz de malla", "mass": "Masa retenida", "share": "Retenido parcial", "under": "Pasante", "over": "Retenido acumulado", "pan": "Fondo"},
}  # fmt: skip
UNITS = {"µm": 1.0, "um": 1.0, "μm": 1.0, "microns": 1.0, "mm": 1e-3}
ENCODINGS = ["utf-8", "utf-8-sig", "utf-16", "utf-16-le", "cp1252", "latin-1"]
SEPARATORS = [";", "\t", "|", ",", "   "]
QUANTITIES = ["mass", "share", "under", "over"]


def _numbers(quantity: str) -> tuple[list[float], float | None]:
    """Values by sieve, fine to coarse, and the pan's."""
    inner = np.array([*SHARES, ABOVE])
    if quantity == "mass":
        return list(inner * 2), BELOW * 2
    if quantity == "share":
        return list(inner), BELOW
    under = BELOW + np.concatenate([[0.0], np.cumsum(SHARES)])
    return (list(under), None) if quantity == "under" else (list(100 - under), 100.0)


def _table(language: str, quantity: str, unit: str, decimal: str, coarse_first: bool) -> list[list[str]]:
    words = WORDS[language]
    values, pan = _numbers(quantity)
    rows = [[f"{size * UNITS[unit]:.10g}", f"{value:.6g}"] for size, value in zip(EDGES_UM, values, strict=True)]
    rows = [[*(cell.replace(".", decimal) for cell in row)] for row in rows]
    if pan is not None:
        rows.insert(0, [words["pan"], f"{pan:.6g}".replace(".", decimal)])
    if coarse_first:
        rows.reverse()
    return [[f"{words['size']} ({unit})", f"{words[quantity]} ({'g' if quantity == 'mass' else '%'})"], *rows]


def _check(report: Report) -> None:
    np.testing.assert_allclose(report.edges * 1e6, EDGES_UM, rtol=1e-12)
    np.testing.assert_allclose(report.shares * 100, SHARES, atol=1e-9)
    assert (report.below * 100, report.above * 100) == pytest.approx((BELOW, ABOVE), abs=1e-9)
    assert report.kind == "sieve"


@pytest.mark.parametrize("language", WORDS)
@pytest.mark.parametrize("quantity", QUANTITIES)
def test_every_layout_reads_back(language: str, quantity: str, tmp_path: Path) -> None:
    count = 0
    for unit, separator, decimal, coarse_first in itertools.product(UNITS, SEPARATORS, ".,", (True, False)):
        if separator == "," and decimal == ",":
            continue  # can't be told apart by anybody; refused, see bad/comma_both.csv
        text = "\n".join(separator.join(row) for row in _table(language, quantity, unit, decimal, coarse_first))
        for encoding in ENCODINGS:
            try:
                data = text.encode(encoding)
            except UnicodeEncodeError:
                continue  # the Greek letter isn't in Latin-1
            file = tmp_path / "report.csv"
            file.write_bytes(data.replace(b"\n", b"\r\n") if encoding == "cp1252" else data)
            (report,) = read(file)
            _check(report)
            count += 1
    assert count > 450


@pytest.mark.parametrize("quantity", QUANTITIES)
@pytest.mark.parametrize("title", ["", "Lot: 7{s}\nDate: 2024-03-05{s}\n\n", "Sieve report 17{s}\n\n\n"])
@pytest.mark.parametrize("footer", ["", "\nOperator: N. N.{s}\nPage 1 of 1{s}\n"])
@pytest.mark.parametrize("across", [False, True])
def test_title_footer_and_direction(quantity: str, title: str, footer: str, across: bool, tmp_path: Path) -> None:
    for separator, decimal in ((";", ","), (",", "."), ("\t", ",")):
        table = _table("english", quantity, "µm", decimal, True)
        if across:
            table = [list(row) for row in zip(*table, strict=True)]
        body = "\n".join(separator.join(row) for row in table) + "\n"
        file = tmp_path / "report.txt"
        file.write_text(title.format(s=separator) + body + footer.format(s=separator), encoding="utf-8")
        (report,) = read(file)
        _check(report)


@pytest.mark.parametrize("quantity", QUANTITIES)
@pytest.mark.parametrize("as_text", [False, True])
def test_workbook_reads_back(quantity: str, as_text: bool, tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    sheet = book.active
    for k, row in enumerate(_table("german", quantity, "mm", "," if as_text else ".", False)):
        numbers = [c if as_text or k == 0 or not c[0].isdigit() else float(c) for c in row]
        sheet.append(["", *numbers])
    book.save(tmp_path / "report.xlsx")
    (report,) = read(tmp_path / "report.xlsx")
    _check(report)
    assert report.sheet == "Sheet"


def test_samples_side_by_side_and_underneath_read_the_same(tmp_path: Path) -> None:
    beside = io.StringIO()
    beside.write("Aperture (µm);East;West\n")
    for size, value in zip([*EDGES_UM[::-1]], [ABOVE, *SHARES[::-1]], strict=True):
        beside.write(f"{size:g};{value:g};{value * 2:g}\n")
    beside.write(f"Pan;{BELOW:g};{BELOW * 2:g}\n")
    (tmp_path / "beside.csv").write_text(
        beside.getvalue().replace("East", "East (g)").replace("West", "West (g)"), encoding="utf-8"
    )
    under = "\n\n".join(
        f"Sample: {name}\nAperture (µm);Mass retained (g)\n"
        + "\n".join(f"{s:g};{v * k:g}" for s, v in zip(EDGES_UM[::-1], [ABOVE, *SHARES[::-1]], strict=True))
        + f"\nPan;{BELOW * k:g}"
        for name, k in (("East", 1), ("West", 2))
    )
    (tmp_path / "under.csv").write_text(under, encoding="utf-8")
    for file in ("beside.csv", "under.csv"):
        reports = read(tmp_path / file)
        assert [r.sample for r in reports] == ["East", "West"]
        for report in reports:
            _check(report)


LASER_EDGES = np.array([0.5, 1, 2, 4, 8, 16, 31.5])  # µm
LASER_SHARES = np.array([2.5, 9.125, 30.375, 38.0, 15.0, 5.0])  # % between them
LASER_WORDS = {
    "english": ("Lower edge", "Upper edge", "Volume in class", "Cumulative undersize", "Cumulative oversize"),
    "german": ("Klasse von", "Klasse bis", "Volumenanteil", "Durchgangssumme", "Rückstandssumme"),
    "french": ("Borne inférieure", "Borne supérieure", "% volume", "Cumulé inférieur", "Cumulé supérieur"),
}


@pytest.mark.parametrize("language", LASER_WORDS)
@pytest.mark.parametrize("layout", ["upper", "lower", "both", "under", "over", "share and under"])
def test_every_laser_layout_reads_back(language: str, layout: str, tmp_path: Path) -> None:
    lower, upper, share, under, over = LASER_WORDS[language]
    fine = np.concatenate([[0.0], np.cumsum(LASER_SHARES)])
    columns = {
        "upper": [(upper, "µm", LASER_EDGES), (share, "%", np.array([0, *LASER_SHARES]))],
        "lower": [(lower, "µm", LASER_EDGES), (share, "%", np.array([*LASER_SHARES, 0]))],
        "both": [(lower, "µm", LASER_EDGES[:-1]), (upper, "µm", LASER_EDGES[1:]), (share, "%", LASER_SHARES)],
        "under": [("x", "µm", LASER_EDGES), (under, "%", fine)],
        "over": [("x", "µm", LASER_EDGES), (over, "%", 100 - fine)],
        "share and under": [("x", "µm", LASER_EDGES), (share, "%", np.array([*LASER_SHARES, 0])), (under, "%", fine)],
    }[layout]
    for factor, unit in ((1.0, "µm"), (1e-3, "mm"), (1e3, "nm")):
        for separator, decimal, reverse in itertools.product((";", "\t", "   "), ".,", (False, True)):
            heads = [f"{name} ({unit if u == 'µm' else u})" for name, u, _ in columns]
            values = [v * (factor if u == "µm" else 1.0) for _, u, v in columns]
            rows = [[f"{x:.9g}".replace(".", decimal) for x in row] for row in zip(*values, strict=True)]
            lines = [separator.join(row) for row in (rows[::-1] if reverse else rows)]
            file = tmp_path / "laser.txt"
            file.write_text("\n".join(["Laser diffraction", "", separator.join(heads), *lines]), encoding="utf-8")
            (report,) = read(file)
            assert (report.kind, report.quantity) == ("laser", "volume")
            np.testing.assert_allclose(report.edges * 1e6, LASER_EDGES, rtol=1e-9)
            np.testing.assert_allclose(report.shares * 100, LASER_SHARES, atol=1e-7)
            assert (report.below, report.above) == pytest.approx((0, 0), abs=1e-9)
