"""Reports written as a canonical csv that reads back to the same numbers, exactly."""

import csv
import io
from collections.abc import Iterable, Sequence
from typing import Literal, cast, get_args

import numpy as np

from psdflow.distribution import Quantity
from psdflow.errors import InputError, shown
from psdflow.reports.report import KindOfReport, Report

FIRST_LINE = "# psdflow size table 1"
_PLAIN = ("source", "sha256", "sheet", "sample", "lot", "kind", "quantity")
_IF_KNOWN = ("sample_mass", "loss", "sieved_from")  # kg, share of the charge, m


def canonical_text(reports: Report | Iterable[Report]) -> str:
    """One or several reports as canonical csv: sizes in m and fractions, every digit kept."""
    out = io.StringIO()
    write = csv.writer(out, lineterminator="\n")
    for report in [reports] if isinstance(reports, Report) else reports:
        out.write(FIRST_LINE + "\n")
        for key in _PLAIN:
            write.writerow([key, _one_line(getattr(report, key) or "")])
        for key in _IF_KNOWN:
            if getattr(report, key) is not None:
                write.writerow([key, repr(float(getattr(report, key)))])
        if report.reconstructed:
            write.writerow(["reconstructed", "yes"])
        for name, pairs in (("field", report.fields), ("understood", report.understood)):
            for key, value in pairs.items():
                write.writerow([name, _one_line(key), _one_line(value)])
        for warning in report.warnings:
            write.writerow(["warning", _one_line(warning)])
        readings = [] if report.repeats is None else list(np.asarray(report.repeats, float))
        write.writerow(["lower [m]", "upper [m]", "share", *(f"reading {k + 1}" for k in range(len(readings)))])
        bounds = ["", *(repr(float(edge)) for edge in report.edges), ""]
        shares = [report.below, *report.shares, report.above]
        for k, share in enumerate(shares):
            write.writerow([bounds[k], bounds[k + 1], repr(float(share)), *(repr(float(r[k])) for r in readings)])
    return out.getvalue()


def _one_line(text: object) -> str:
    return " ".join(str(text).split())


def is_canonical(data: bytes) -> bool:
    """Whether a file begins as `canonical_text` does."""
    return data.removeprefix(b"\xef\xbb\xbf").startswith(FIRST_LINE.encode())


def read_canonical(data: bytes, source: str) -> list[Report]:
    """Read canonical csv back.

    Raises
    ------
    InputError
        If the file was changed so that it is no longer a whole table.
    """
    try:
        text = data.decode("utf-8-sig")
        rows = list(csv.reader(io.StringIO(text, newline=""), strict=True))
    except (UnicodeDecodeError, csv.Error):
        raise InputError(f"{source}: the canonical table is damaged; write it anew with psdflow read --out") from None
    starts = [i for i, row in enumerate(rows) if row and ",".join(row).strip() == FIRST_LINE]
    if not starts or starts[0] != 0:
        raise InputError(
            f"{source}: the first line is not {FIRST_LINE!r}; write the table anew with psdflow read --out"
        )
    return [_report(rows[a:b], a, source) for a, b in zip(starts, [*starts[1:], len(rows)], strict=True)]


def _report(rows: list[list[str]], offset: int, source: str) -> Report:
    plain: dict[str, str] = {}
    fields: dict[str, str] = {}
    understood: dict[str, str] = {}
    warnings: list[str] = []
    table: list[list[float]] = []
    width = 0
    for k, row in enumerate(rows[1:], start=offset + 2):
        where = f"{source}, row {k}"
        if not any(row):
            continue
        if width:
            table.append(_numbers(row, width, where))
        elif row[0] == "lower [m]":
            width = len(row)
        elif len(row) == 2 and row[0] in (*_PLAIN, *_IF_KNOWN, "reconstructed"):
            plain[row[0]] = row[1]
        elif len(row) == 3 and row[0] in ("field", "understood"):
            (fields if row[0] == "field" else understood)[row[1]] = row[2]
        elif len(row) == 2 and row[0] == "warning":
            warnings.append(row[1])
        else:
            raise InputError(f"{where}: found {shown(','.join(row))}; a line of the canonical table is expected")
    return _checked(plain, fields, understood, warnings, table, f"{source}, row {offset + 1}")


def _numbers(row: list[str], width: int, where: str) -> list[float]:
    try:
        values = [float(cell) if cell else float("nan") for cell in row]
    except ValueError:
        values = []
    if len(values) != width or width < 3 or any(not np.isfinite(v) or v < 0 for v in values[2:]):
        raise InputError(f"{where}: found {shown(','.join(row))}; two sizes in m and fractions are expected")
    return values


def _checked(
    plain: dict[str, str],
    fields: dict[str, str],
    understood: dict[str, str],
    warnings: Sequence[str],
    table: list[list[float]],
    where: str,
) -> Report:
    missing = [key for key in _PLAIN if key not in plain]
    if missing or len(table) < 3:
        raise InputError(
            f"{where}: the canonical table lacks {', '.join(missing) or 'its classes'}; write it anew with psdflow read --out"
        )
    if plain["kind"] not in get_args(KindOfReport) or plain["quantity"] not in get_args(Quantity):
        raise InputError(
            f"{where}: kind {shown(plain['kind'])} or quantity {shown(plain['quantity'])} is unknown; "
            "sieve or laser and mass, volume, number or area are expected"
        )
    numbers = np.array(table)
    edges = numbers[1:, 0]
    joined = np.isnan(numbers[0, 0]) and np.isnan(numbers[-1, 1]) and np.array_equal(numbers[:-1, 1], edges)
    if not joined or not np.all(np.isfinite(edges)) or edges[0] <= 0 or np.any(np.diff(edges) <= 0):
        raise InputError(f"{where}: sizes must be over 0, rise, and each class join the next")
    shares = numbers[:, 2:]
    if np.any(np.abs(shares.sum(axis=0) - 1) > 1e-9):
        raise InputError(f"{where}: the fractions add up to {shares[:, 0].sum():.6f}; 1 is expected")
    known = {key: _known(key, plain[key], where) for key in _IF_KNOWN if key in plain}
    return Report(
        source=plain["source"],
        sha256=plain["sha256"],
        sheet=plain["sheet"] or None,
        sample=plain["sample"],
        lot=plain["lot"],
        kind=cast("Literal['sieve', 'laser']", plain["kind"]),
        quantity=cast("Quantity", plain["quantity"]),
        edges=edges,
        shares=shares[1:-1, 0],
        below=float(shares[0, 0]),
        above=float(shares[-1, 0]),
        fields=fields,
        understood=understood,
        warnings=tuple(warnings),
        repeats=shares[:, 1:].T.copy() if shares.shape[1] > 1 else None,
        reconstructed=plain.get("reconstructed") == "yes",
        **known,
    )


def _known(key: str, text: str, where: str) -> float:
    try:
        value = float(text)
    except ValueError:
        value = float("nan")
    if not np.isfinite(value) or (key != "loss" and value <= 0) or abs(value) > 1e6:
        raise InputError(f"{where}: {key} is {shown(text)}; a number {'' if key == 'loss' else 'over 0 '}is expected")
    return value
