"""The pipeline of reading, as one page: file -> grids -> tables -> samples -> reports."""

from collections.abc import Callable, Iterable
from dataclasses import replace
from pathlib import Path
from typing import Any, Literal, cast, get_args

import numpy as np

from psdflow.distribution import Quantity as Basis
from psdflow.errors import InputError, shown
from psdflow.reports.around import stray_rows
from psdflow.reports.canonical import is_canonical, read_canonical
from psdflow.reports.cells import Grid, read_bytes, read_grids
from psdflow.reports.classes import averaged
from psdflow.reports.continued import inherit_headers, no_broken_table
from psdflow.reports.laser import laser_classes
from psdflow.reports.layout import Layout, Table
from psdflow.reports.meaning import basis_note, basis_of, charge_of, kind_of, names_of, sample_mass_of
from psdflow.reports.numerals import LENGTHS, Decimal, decimal_of, plain
from psdflow.reports.percentiles import percentile_reports
from psdflow.reports.recognise import only_percentiles, recognise
from psdflow.reports.repeats import spread_notes
from psdflow.reports.report import KindOfReport, Options, Report
from psdflow.reports.samples import Sample
from psdflow.reports.sieve import sieve_classes
from psdflow.reports.tables import find_tables
from psdflow.reports.words import STATISTIC

SUFFIXES = (".csv", ".txt", ".tsv", ".dat", ".asc", ".xlsx", ".xlsm")


def read(
    path: str | Path,
    *,
    columns: str | None = None,
    kind: str | None = None,
    basis: str | None = None,
    decimal: str | None = None,
    sample: str | None = None,
    size_unit: str | None = None,
    loss_warn: float = 0.005,
    loss_refuse: float = 0.02,
    sample_mass: float | None = None,
) -> list[Report]:
    """Read a size report: csv, semicolon, tab, pipe or spaced text, xlsx, or a canonical table.

    Parameters
    ----------
    path
        The file.
    columns
        What the columns are, if recognition fails: "size=A,share=3" or by header; roles ``size`` or ``lower`` and
        ``upper`` or ``mid``; ``mass``, ``share``, ``under``, ``over``.
    kind, basis, decimal, sample, size_unit
        "sieve" or "laser"; "mass", "volume", "number" or "area"; "," or "."; one sample's name; "um", "mm", "nm",
        "cm", "m", "in", "phi" or "astm".
    loss_warn, loss_refuse
        Sieve loss as a fraction of the charge weighed in that is said, and that is refused.
    sample_mass
        Mass of the sample measured, kg, where the report doesn't say it; gives the sampling error of coarse grains.

    Returns
    -------
    list of Report
        One for each sample, in the file's order; at least one.

    Raises
    ------
    InputError
        If the file can't be read with certainty; never another exception, whatever the bytes.
    """
    options = _options(columns, kind, basis, decimal, sample, size_unit, loss_warn, loss_refuse, sample_mass)
    data, sha256 = read_bytes(path)
    source = Path(path).name
    if is_canonical(data):
        reports = read_canonical(data, source)
    else:
        reports = [replace(report, sha256=sha256) for report in _read_grids(read_grids(data, source), source, options)]
    if sample is not None:
        chosen = [r for r in reports if plain(sample) in (plain(r.sample), plain(r.lot))]
        if not chosen:
            names = ", ".join(shown(r.sample) for r in reports[:10])
            raise InputError(f"{source}: no sample {shown(sample)}; the file holds {names}")
        return chosen
    return reports


def read_folder(
    folder: str | Path, *, on_progress: Callable[[int, int, str], None] | None = None, **how: Any
) -> tuple[list[Report], list[tuple[str, str]]]:
    """Read every report of a folder, going on past bad files.

    Parameters
    ----------
    on_progress
        Called with (files done, files in all, name) before each file and at the end.
    how
        Options of `read`, for every file.

    Returns
    -------
    reports, failures
        Failures are (file name, reason).
    """
    place = Path(folder)
    if not place.is_dir():
        raise InputError(f"{place}: is no folder; a folder of size reports is expected")
    files = sorted(
        p for p in place.iterdir() if p.suffix.lower() in (*SUFFIXES, ".xls") and not p.name.startswith((".", "~$"))
    )
    if not files:
        raise InputError(f"{place}: holds no size report ({', '.join(SUFFIXES)})")
    reports: list[Report] = []
    failures: list[tuple[str, str]] = []
    for k, file in enumerate(files):
        if on_progress:
            on_progress(k, len(files), file.name)
        try:
            reports += read(file, **how)
        except InputError as error:
            failures.append((file.name, str(error)))
    if on_progress:
        on_progress(len(files), len(files), "")
    return reports, failures


def _options(
    columns: str | None,
    kind: str | None,
    basis: str | None,
    decimal: str | None,
    sample: str | None,
    size_unit: str | None,
    loss_warn: float,
    loss_refuse: float,
    sample_mass: float | None,
) -> Options:
    for name, value, allowed in (
        ("kind", kind, get_args(KindOfReport)),
        ("basis", basis, get_args(Basis)),
        ("decimal", decimal, (",", ".")),
        ("size-unit", size_unit, (*LENGTHS, "astm")),
    ):
        if value is not None and value not in allowed:
            raise InputError(f"--{name} {shown(value)} is unknown; one of {', '.join(allowed)} is expected")
    if not 0 <= loss_warn <= loss_refuse <= 1:
        raise InputError(
            f"--loss-warn {loss_warn:g} and --loss-refuse {loss_refuse:g}: fractions of the charge from 0 to 1 are "
            "expected, the first not over the second"
        )
    if sample_mass is not None and not 0 < sample_mass < 1e6:
        raise InputError(f"--sample-mass {sample_mass:g} kg: a mass over 0 is expected")
    return Options(
        columns,
        cast("KindOfReport | None", kind),
        cast("Basis | None", basis),
        cast("Literal[',', '.'] | None", decimal),
        sample,
        size_unit,
        loss_warn,
        loss_refuse,
        sample_mass,
    )


def _read_grids(grids: Iterable[Grid], source: str, options: Options) -> list[Report]:
    layouts: list[tuple[Grid, Decimal, Layout]] = []
    for grid in grids:
        decimal = options.decimal or decimal_of(grid.rows, grid.name)
        layouts.append((grid, decimal, find_tables(grid, decimal)))
    shared = {k: v for _, _, layout in layouts if not layout.tables for k, v in layout.fields.items()}
    shared_titles = [t for _, _, layout in layouts if not layout.tables for t in layout.titles]
    reports: list[Report] = []
    percentiles = False
    for grid, decimal, layout in layouts:
        tables = [t for t in layout.tables if options.columns or not only_percentiles(t, decimal)]
        percentiles |= (
            len(tables) < len(layout.tables) or sum(bool(STATISTIC.fullmatch(plain(k))) for k in layout.fields) > 1
        )
        inherit_headers(tables)
        found: list[tuple[Table, Sample]] = [(t, s) for t in tables for s in recognise(t, options, decimal)]
        no_broken_table(found)
        layout.fields = {**shared, **layout.fields}
        layout.titles += shared_titles
        many_sheets = sum(bool(other.tables) for _, _, other in layouts) > 1
        for table, sample in found:
            reports.append(
                _report(grid, layout, table, sample, decimal, options, alone=len(found) == 1, many_sheets=many_sheets)
            )
    if not reports:
        reports = [report for layout in layouts for report in percentile_reports(*layout, options)]
    if not reports:
        what = (
            "only percentiles and means were found, no classes"
            if percentiles
            else "no table of sizes and shares was found"
        )
        raise InputError(
            f"{source}: {what}; a column of sizes and a column of masses, shares or cumulative shares are expected, "
            "under a header that names them with units"
        )
    return _distinct(reports)


def _report(
    grid: Grid,
    layout: Layout,
    table: Table,
    sample: Sample,
    decimal: Decimal,
    options: Options,
    *,
    alone: bool,
    many_sheets: bool,
) -> Report:
    kind, notes = kind_of(layout, table, sample, options, grid)
    no_pan = kind == "sieve" and not sample.sizes.has_pan and set(sample.quantities) <= {"mass", "share"}
    for i in stray_rows(table, layout, decimal, no_pan):
        raise InputError(
            f"{grid.where(i)}: found {_row_text(grid, i)} apart from the table; if it is a row of the table (the pan is called "
            '"pan"), remove what stands between, else put a # before it'
        )
    charge = charge_of(layout, sample, decimal) if kind == "sieve" else None
    readings = [
        sieve_classes(one, options, charge) if kind == "sieve" else laser_classes(one)
        for one in (sample, *sample.repeats)
    ]
    quantity = readings[0][1]
    classes, repeats = averaged([one for one, _ in readings], grid.name)
    basis = options.basis or basis_of(kind, layout, table, sample)
    warnings = [*grid.notes, *notes, *sample.sizes.notes, *sample.notes, *classes.warnings]
    for reading in (sample, *sample.repeats):
        for column in reading.quantities.values():
            warnings += [note for note in column.notes if note not in warnings]
    warnings += basis_note(basis, classes)
    if repeats is not None:
        warnings += spread_notes(kind, classes.edges, repeats)
    start = table.lines[0] if table.across else table.place[0]
    warnings += [f"row {grid.numbers[i]} was not used: {_row_text(grid, i)}" for i in layout.unclaimed[:9] if i > start]
    name, lot = names_of(grid, layout, table, sample, alone, many_sheets)
    understood = {"kind": kind, "quantity": basis, "size": sample.sizes.described}
    understood |= {role: q.described for role, q in sample.quantities.items()}
    understood |= {"used": quantity.described, "decimal": "comma" if decimal == "," else "point"}
    return Report(
        source=grid.source,
        sha256="",
        sheet=grid.sheet,
        sample=name,
        lot=lot,
        kind=kind,
        quantity=basis,
        edges=classes.edges,
        shares=classes.shares,
        below=classes.below,
        above=classes.above,
        fields=dict(layout.fields),
        understood=understood,
        warnings=tuple(dict.fromkeys(warnings)),
        repeats=repeats,
        sample_mass=options.sample_mass or sample_mass_of(layout, decimal, quantity, charge, classes.total),
        loss=1 - classes.total / charge if charge and quantity.role == "mass" else None,
    )


def _row_text(grid: Grid, row: int) -> str:
    return shown(" ".join(f"{c:g}" if isinstance(c, float) else c for c in grid.rows[row] if c != ""))


def _distinct(reports: list[Report]) -> list[Report]:
    """Equal names get a number; equal numbers are said."""
    seen: dict[tuple[str | None, str], int] = {}
    out: list[Report] = []
    for report in reports:
        count = seen[(report.sheet, report.sample)] = seen.get((report.sheet, report.sample), 0) + 1
        if count > 1:
            report = replace(
                report,
                sample=f"{report.sample} ({count})",
                lot=f"{report.lot} ({count})" if report.lot == report.sample else report.lot,
            )
        twin = next(
            (o for o in out if np.array_equal(o.shares, report.shares) and np.array_equal(o.edges, report.edges)), None
        )
        if twin is not None:
            report = replace(report, warnings=(*report.warnings, f"the same numbers as sample {shown(twin.sample)}"))
        out.append(report)
    return out
