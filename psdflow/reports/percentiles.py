"""Reports that give percentiles and nothing else: d10, d50, d90 in rows, in columns or as fields -> one sample each."""

import re
from dataclasses import dataclass, field
from itertools import pairwise
from pathlib import Path
from typing import Literal

from psdflow.errors import InputError, shown
from psdflow.reports.apertures import in_metres
from psdflow.reports.cells import Grid
from psdflow.reports.layout import Layout
from psdflow.reports.meaning import field_of
from psdflow.reports.numerals import LENGTHS, Cell, Decimal, numeral, plain
from psdflow.reports.percentile_labels import counts_grains, field_split, no_sample, percentile_label, rejoined
from psdflow.reports.report import Options, Report
from psdflow.reports.samples import strip_word
from psdflow.reports.words import LASER, LOT, SAMPLE, SIEVE, heading, name_left


@dataclass
class Percentiles:
    """What one sample states: sizes in m by share 0..1, or by "d32" or "d43"; and where it stands."""

    name: str
    row: int
    column: int | None = None  # where the percentiles stand under one another
    stated: dict[float | str, float] = field(default_factory=dict)

    @property
    def sizes(self) -> dict[float, float]:
        """Sizes by share, the shares rising."""
        return dict(sorted((k, v) for k, v in self.stated.items() if isinstance(k, float)))

    @property
    def means(self) -> dict[str, float]:
        """Means by name."""
        return dict(sorted((k, v) for k, v in self.stated.items() if isinstance(k, str)))


def find_percentiles(grid: Grid, decimal: Decimal, size_unit: str | None) -> list[Percentiles]:
    """Every sample whose percentiles stand in a grid, in rows, columns or fields.

    Raises
    ------
    InputError
        If a size has no unit, or the percentiles are of numbers of grains.
    """
    found: list[Percentiles] = []
    heads: dict[int, float | str] = {}
    columns: dict[int, Percentiles] = {}
    above: list[Cell] = []
    counted = False
    named: int | None = None
    for i, cells in enumerate(grid.rows):
        row = field_split(rejoined(cells))
        labels = {j: label for j, cell in enumerate(row) if (label := percentile_label(cell)) is not None}
        counted |= counts_grains(row)
        if labels and ("number" in labels.values() or counted):
            raise InputError(
                f"{grid.where(i)}: percentiles of numbers of grains can't be turned into volume; "
                "ask for the table of classes, or for percentiles by volume"
            )
        filled = [j for j, cell in enumerate(row) if cell != ""]
        if len(labels) > 1:
            heads, columns, named = labels, {}, _name_column(row)
        elif heads and not labels and any(j in heads and numeral(row[j], decimal) for j in filled):
            name = str(row[named]) if named is not None and named < len(row) and named not in heads else ""
            if no_sample(name):
                continue
            sample = Percentiles(name, i)
            for j, label in heads.items():
                if j < len(row):
                    _take(sample, label, grid, i, j, row[j], str(_over(grid, i, j)), decimal, size_unit)
            found.append(sample)
            continue
        elif len(labels) == 1 and filled and filled[0] in labels:
            heads = {}
            for j in filled[1:]:
                if numeral(row[j], decimal) is None:
                    continue
                over = str(above[j]) if j < len(above) else ""
                if no_sample(over):
                    continue  # a specification or a spread beside the sizes
                if j not in columns:
                    columns[j] = Percentiles(strip_word(name_left(over))[0], i, j)
                    found.append(columns[j])
                head = f"{row[filled[0]]}\n{over}"
                _take(columns[j], labels[filled[0]], grid, i, j, row[j], head, decimal, size_unit)
            continue
        elif not filled:
            continue
        elif not all(_unit(str(row[j])) in LENGTHS for j in filled):  # a row of units leaves the headers standing
            heads = heads if labels else {}
            columns = columns if any(numeral(cell, decimal) for cell in row) else {}
        above = row
    return [sample for sample in found if len(sample.sizes) >= 2]


def _name_column(row: list[Cell]) -> int | None:
    """The column of lot or sample names beside headers of percentiles, else the first."""
    texts = [plain(str(cell)) for cell in row]
    return next((j for pattern in (LOT, SAMPLE) for j, text in enumerate(texts) if pattern.fullmatch(text)), 0)


def _over(grid: Grid, row: int, column: int) -> str:
    """The headers over a column: the row of labels and a row of units below it."""
    parts = []
    for i in range(max(row - 30, 0), row):
        cells = rejoined(grid.rows[i])
        text = str(cells[column]) if column < len(cells) else ""
        if text and not text[0].isdigit():
            parts.append(text)
    return "\n".join(parts[-2:])


def _take(
    sample: Percentiles,
    label: float | str,
    grid: Grid,
    row: int,
    column: int,
    cell: Cell,
    head: str,
    decimal: Decimal,
    size_unit: str | None,
) -> None:
    number = numeral(cell, decimal)
    if number is None or number.sign or number.value <= 0:
        raise InputError(f"{grid.where(row, column)}: found {shown(cell)} for a percentile; a size over 0 is expected")
    unit = size_unit or number.unit or next((u for line in head.split("\n") if (u := _unit(line)) in LENGTHS), "")
    if unit not in LENGTHS or unit == "phi":
        raise InputError(
            f"{grid.where(row, column)}: the size {shown(cell)} has no unit; write it into the header, like "
            '"d50 (µm)", or say --size-unit um'
        )
    size = in_metres(number.value, unit)
    if sample.stated.setdefault(label, size) != size:
        raise InputError(
            f"{grid.where(row, column)}: this percentile is stated twice, with other sizes; once is expected"
        )


def _unit(text: str) -> str:
    bare = plain(text).strip("[]() ")
    return heading(text).unit or {"um": "um", "mm": "mm", "nm": "nm"}.get(bare, "")


def percentile_reports(grid: Grid, decimal: Decimal, layout: Layout, options: Options) -> list[Report]:
    """A report, marked as reconstructed, for each sample whose percentiles stand in a grid.

    Raises
    ------
    InputError
        If the percentiles contradict each other, say nothing of one tail, or count grains.
    """
    samples = find_percentiles(grid, decimal, options.size_unit)
    if samples and options.basis in ("number", "area"):
        raise InputError(
            f"{grid.name}: percentiles by {options.basis} can't be turned into volume; ask for the classes"
        )
    words = plain(" ".join([*layout.titles, *layout.fields.values(), *map(str, layout.fields)]))
    kind = options.kind or ("sieve" if SIEVE.search(words) and not LASER.search(words) else "laser")
    lot = field_of(layout.fields, LOT) or _named(grid, LOT)
    stated_name = field_of(layout.fields, SAMPLE) or _named(grid, SAMPLE) or lot
    reports = []
    if len(samples) == 1 and samples[0].column is not None:
        samples[0].name = ""  # what stands over a single column is its unit or "value", no name
    for k, sample in enumerate(samples):
        shares, sizes = _checked(sample, grid)
        name = sample.name or stated_name or Path(grid.source).stem
        name = name if sample.name or len(samples) == 1 else f"{name} {k + 1}"
        reports.append(_reconstructed(sample, shares, sizes, grid, layout, name, "" if sample.name else lot, kind))
    return reports


def _named(grid: Grid, words: re.Pattern[str]) -> str:
    """The name beside "Lot:" or "Sample:" in a row that may have been taken for a header."""
    for row in grid.rows:
        filled = [str(cell) for cell in row if cell != ""]
        key, _, value = " ".join(filled[:2]).partition(":") if len(filled) == 2 else ("", "", "")
        if value and words.fullmatch(plain(key)):
            return value.strip()
    return ""


def _reconstructed(
    sample: Percentiles,
    shares: list[float],
    sizes: list[float],
    grid: Grid,
    layout: Layout,
    name: str,
    lot: str,
    kind: Literal["sieve", "laser"],
) -> Report:
    from psdflow.sizes.reconstruct import reconstructed

    means = sample.means
    made = reconstructed(shares, sizes, sauter=means.get("d32"), volume_mean=means.get("d43"))
    stated = {**{f"d{f * 100:g}": size for f, size in sample.sizes.items()}, **means}
    warnings = [
        *grid.notes,
        f"only {', '.join(stated)} were given: the classes were reconstructed ({made.curve}), and everything that follows "
        "from them is a reconstruction with wide intervals; ask for the table of classes",
    ]
    for key, value in means.items():
        off = getattr(made, key) / value - 1
        if abs(off) > 0.1:
            warnings.append(f"the stated {key} is {value * 1e6:.4g} µm, the reconstruction has {off:+.0%} of it")
    return Report(
        source=grid.source,
        sha256="",
        sheet=grid.sheet,
        sample=name,
        lot=lot or name,
        kind=kind,
        quantity="mass" if kind == "sieve" else "volume",
        edges=made.edges,
        shares=made.shares,
        below=made.below,
        above=made.above,
        fields=dict(layout.fields),
        understood={
            "kind": kind,
            "percentiles": ", ".join(f"{key} {size * 1e6:.4g} µm" for key, size in stated.items()),
        },
        warnings=tuple(warnings),
        reconstructed=True,
    )


def _checked(sample: Percentiles, grid: Grid) -> tuple[list[float], list[float]]:
    """Shares and sizes, rising.

    Raises
    ------
    InputError
        If sizes don't rise, or nothing is said of one of the tails.
    """
    fractions, sizes = list(sample.sizes), list(sample.sizes.values())
    where = grid.where(sample.row)
    if len(fractions) < 3 or fractions[0] > 0.3 or fractions[-1] < 0.7:
        stated = ", ".join(f"d{f * 100:g}" for f in fractions)
        raise InputError(f"{where}: only {stated}; at least three percentiles such as d10, d50 and d90 are expected")
    for (f, fine), (c, coarse) in pairwise(zip(fractions, sizes, strict=True)):
        if not fine * 1.0001 < coarse:
            raise InputError(
                f"{where}: d{f * 100:g} is {fine * 1e6:g} µm but d{c * 100:g} is {coarse * 1e6:g} µm; percentiles must rise"
            )
    return fractions, sizes
