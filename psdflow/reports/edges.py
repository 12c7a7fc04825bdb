"""A table's size column (or lower and upper columns) -> sizes in metres, fine to coarse, checked for order."""

from dataclasses import dataclass
from typing import NoReturn

import numpy as np

from psdflow.errors import InputError, shown
from psdflow.reports.apertures import PER_METRE, Size, in_metres, size_of
from psdflow.reports.layout import SizeColumns, Table, is_footer
from psdflow.reports.numerals import Cell, Decimal, plain
from psdflow.reports.size_units import UNIT_NAMES, unit_of
from psdflow.reports.words import heading

_ENDLESS = ("", "-", "inf", "infinity", "∞", "max", "none")


@dataclass
class Sizes:
    """Sizes in metres, fine to coarse, and the table rows they stand in."""

    table: Table
    columns: SizeColumns
    cells: list[Size]
    rows: list[int]
    footers: list[tuple[int, str]]
    edge: str  # "upper", "lower", "mid" or "": what the header says the number is
    unit: str
    notes: list[str]

    @property
    def only_edges(self) -> bool:
        """Whether all cells but the pan, "<a" and ">b" are plain numbers."""
        return all(cell.kind != "class" for cell in self.cells)

    @property
    def has_pan(self) -> bool:
        """Whether a row stands for everything under the finest sieve."""
        return any(c.kind == "below" or (c.kind == "edge" and c.low == 0) for c in self.cells)

    @property
    def described(self) -> str:
        """Columns and unit in words."""
        names = [self.table.column_name(c) for c in self.columns.all]
        edge = {"upper": "upper edge, ", "lower": "lower edge, ", "mid": "class middle, "}.get(self.edge, "")
        return f"{' and '.join(names)} ({edge}{UNIT_NAMES.get(self.unit, self.unit)})"


def read_sizes(table: Table, columns: SizeColumns, decimal: Decimal, size_unit: str | None) -> Sizes:
    """Sizes of a table, fine to coarse.

    Raises
    ------
    InputError
        If a row has no size, a size is negative, sizes repeat or don't rise or fall throughout, or
        no unit is given and can't be told.
    """
    raw: list[tuple[int, Size]] = []
    footers: list[tuple[int, str]] = []
    single = None if columns.pair else columns.first
    for i, row in enumerate(table.rows):
        size = _pair_size(row, columns, decimal) if single is None else size_of(row[single], decimal)
        if size is not None:
            raw.append((i, size))
            continue
        own = row[columns.span.start : columns.span.stop] if columns.span else row
        if all(_blank(row[c]) for c in columns.all) and (label := _label(own)):
            named = size_of(label, decimal)  # "Pan" in a column beside the apertures
            size = named if named is not None and named.kind == "below" and named.high is None else None
        if size is not None:
            raw.append((i, size))
        elif all(row[c] == "" for c in columns.all) and not _label(own):
            if any(cell != "" for cell in own):
                footers.append((i, "unlabelled"))
        else:
            footers.append((i, is_footer(_label(own)) or "unknown"))
    if len(raw) < 2:
        _fail_few(table, columns, len(raw))
    unit, notes = unit_of(table, columns, [size for _, size in raw], size_unit)
    _no_unknown_rows(table, columns, footers, raw)
    if any(s.grouped for _, s in raw) and any(not float(s.low or s.high or 0.0).is_integer() for _, s in raw):
        i = next(i for i, s in raw if s.grouped)
        raise InputError(
            f"{table.where(i, columns.first)}: size {shown(table.rows[i][columns.first])} may be a thousand or a decimal; "
            "write it without a thousands separator"
        )
    column = columns.first
    converted = [(i, _converted(table, i, column, size, unit)) for i, size in raw]
    ordered = _ordered(table, columns, converted)
    edge = heading(table.headers[columns.first]).edge
    edge = "" if columns.pair else ("mid" if columns.mid is not None else edge)
    edge = "lower" if columns.lower is not None and not columns.pair else edge
    edge = "upper" if columns.upper is not None and not columns.pair else edge
    return Sizes(table, columns, [s for _, s in ordered], [i for i, _ in ordered], footers, edge, unit, notes)


def _blank(cell: Cell) -> bool:
    return isinstance(cell, str) and plain(cell) in ("", "-", "--")


def _label(row: list[Cell]) -> str:
    return next((cell for cell in row if isinstance(cell, str) and any(c.isalpha() for c in cell)), "")


def _pair_size(row: list[Cell], columns: SizeColumns, decimal: Decimal) -> Size | None:
    """The class (or open end) that lower and upper edge of a row say."""
    assert columns.lower is not None
    assert columns.upper is not None
    low, high = size_of(row[columns.lower], decimal), size_of(row[columns.upper], decimal)
    low_open = isinstance(row[columns.lower], str) and plain(str(row[columns.lower])) in _ENDLESS
    high_open = isinstance(row[columns.upper], str) and plain(str(row[columns.upper])) in _ENDLESS
    if low is not None and low.kind == "below" and low.high is None and high_open:
        return low  # "pan" in the lower column
    low_value = low.low if low is not None and low.kind in ("edge", "above") else None
    high_value = None if high is None else (high.low if high.kind == "edge" else high.high)
    if low_value is None and low is not None and low.kind == "below":
        low_value = 0.0
    unit = (low.unit if low else "") or (high.unit if high else "")
    if low_value is not None and high_value is not None:
        return Size("class", low_value, high_value, unit)
    if high_value is not None and (low_open or low is not None):
        return Size("below", None, high_value, unit)
    if low_value is not None and high_open:
        return Size("above", low_value, None, unit)
    return None


def _fail_few(table: Table, columns: SizeColumns, found: int) -> NoReturn:
    raise InputError(
        f"{table.where(0)}: {table.column_name(columns.first)} holds {found} size{'' if found == 1 else 's'}; "
        "a size report has at least two"
    )


def _no_unknown_rows(
    table: Table, columns: SizeColumns, footers: list[tuple[int, str]], raw: list[tuple[int, Size]]
) -> None:
    first, last = raw[0][0], raw[-1][0]
    for i, kind in footers:
        if kind == "unknown" or first < i < last or (kind == "unlabelled" and i < last):
            cell = table.rows[i][columns.first]
            found = (
                shown(cell) if cell != "" else (shown(_label(table.rows[i])) if _label(table.rows[i]) else "nothing")
            )
            raise InputError(
                f"{table.where(i, columns.first)}: size is {found}; expected a number, a class such as 45-63, "
                "or the pan. Correct it, or mark the row as a comment with #."
            )


def _converted(table: Table, row: int, column: int, size: Size, unit: str) -> Size:
    use = size.unit if size.unit and size.unit != "mesh" else unit
    if size.kind == "edge" and use in PER_METRE and 1e-10 <= (metres := (size.low or 0.0) / PER_METRE[use]) < 10:
        return Size("edge", metres, None, use, size.minus, size.grouped)  # nearly all sizes
    if use == "phi" and size.minus:
        size = Size("edge", -(size.high or 0.0), None, size.unit)
    values: list[float | None] = []
    for value in (size.low, size.high):
        if value is None:
            values.append(None)
            continue
        if value < 0 and use != "phi":
            raise InputError(
                f"{table.where(row, column)}: size is {shown(table.rows[row][column])}; a size can't be negative. "
                "Check the sign, or mark the row as a comment with #."
            )
        try:
            metres = 0.0 if value == 0 and use != "phi" else in_metres(value, use)
        except ValueError as error:
            raise InputError(f"{table.where(row, column)}: {error}; give the aperture in µm or mm") from None
        if not 0 <= metres < 10 or (metres < 1e-10 and value != 0):
            raise InputError(
                f"{table.where(row, column)}: size {value:g} {UNIT_NAMES.get(use, use)} is no particle size; "
                "check the number and its unit"
            )
        values.append(metres)
    low, high = values
    if size.kind == "class":
        assert low is not None
        assert high is not None
        if low > high and use == "phi":
            low, high = high, low
        if not low < high:
            raise InputError(
                f"{table.where(row, column)}: lower edge {size.low:g} is not under upper edge {size.high:g}; swap or correct them"
            )
        if low == 0:
            return Size("below", None, high, use)
    return size._replace(low=low, high=high, unit=use)


def _position(size: Size) -> float:
    """Where a row stands in the order of sizes: the pan first, then edges, ``>b`` just over b."""
    if size.kind == "below":
        return -1.0 if size.high is None else size.high * (1 - 1e-9)
    if size.kind == "class":
        return float(np.sqrt((size.low or 0.0) * (size.high or 0.0)))
    return (size.low or 0.0) * (1 + 1e-9 if size.kind == "above" else 1)


def _ordered(table: Table, columns: SizeColumns, sizes: list[tuple[int, Size]]) -> list[tuple[int, Size]]:
    """Rows fine to coarse; refuses sizes that repeat, change direction, or carry a doubtful sign."""
    column = columns.first
    pans = [(i, s) for i, s in sizes if s.kind == "below" and s.high is None]
    if len(pans) > 1:
        raise InputError(f"{table.where(pans[1][0], column)}: a second pan row; one is expected. Remove or rename one.")
    named = [(i, s) for i, s in sizes if s.kind != "below" or s.high is not None]
    inner = [(i, s) for i, s in named if not (s.kind == "edge" and s.low == 0)]
    if len(named) - len(inner) + len(pans) > 1:
        raise InputError(
            f"{table.where(pans[0][0] if pans else sizes[-1][0], column)}: two rows for the pan; one is expected"
        )
    zero = [(i, s) for i, s in named if s.kind == "edge" and s.low == 0]
    if not inner:
        raise InputError(f"{table.where(0, column)}: no size in {table.column_name(column)}; sizes over 0 are expected")
    positions = [_position(s) for _, s in inner]
    rising = positions[-1] > positions[0]
    for (i, _), before, here in zip(inner[1:], positions, positions[1:], strict=False):
        if abs(here - before) <= 1e-12 * abs(before):
            raise InputError(
                f"{table.where(i, column)}: size {shown(table.rows[i][column])} stands twice; each size once is expected"
            )
        if (here > before) != rising:
            raise InputError(
                f"{table.where(i, column)}: size {shown(table.rows[i][column])} is out of order; sizes must {'rise' if rising else 'fall'} "
                "from row to row. Correct the size, or mark the row as a comment with #."
            )
    for i, _ in pans:
        if i != sizes[-1][0] and not (rising and i == sizes[0][0]):
            raise InputError(
                f"{table.where(i, column)}: the pan row stands among the sizes; it belongs at the end, after the finest sieve"
            )
    _doubtful_signs(table, column, inner)
    ordered = inner if rising else inner[::-1]
    return [*pans, *zero, *ordered]


def _doubtful_signs(table: Table, column: int, sizes: list[tuple[int, Size]]) -> None:
    """ "-38" is the class under 38 if 38 is the finest sieve, or if others are written "-63+45"."""
    if not any(s.minus for _, s in sizes):
        return
    written_so = any(s.kind in ("class", "above") for _, s in sizes)
    finest = min((s.low for _, s in sizes if s.kind in ("edge", "above") and s.low), default=None)
    for i, size in sizes:
        if size.minus and not written_so and (finest is None or not np.isclose(size.high or 0.0, finest)):
            raise InputError(
                f"{table.where(i, column)}: size is {shown(table.rows[i][column])}; a size can't be negative. "
                "Check the sign, or mark the row as a comment with #."
            )


def looks_like_sizes(table: Table, column: int, decimal: Decimal) -> tuple[bool, bool, bool]:
    """Whether a column may hold sizes: (mostly size-like, strictly rising or falling, says so in its cells)."""
    cells = [row[column] for row in table.rows]
    sizes = [s for c in cells if (s := size_of(c, decimal)) is not None]
    filled = sum(cell != "" for cell in cells)
    mostly = len(sizes) >= 2 and len(sizes) >= 0.6 * filled
    values = [_position(s) for s in sizes if not (s.kind == "below" and s.high is None) and s.low != 0]
    steps = np.diff(values) if len(values) > 1 else np.zeros(1)
    strict = bool(np.all(steps > 0) or np.all(steps < 0))
    explicit = sum(bool(s.unit) or s.kind != "edge" for s in sizes) >= max(1, 0.6 * len(sizes))
    return mostly, strict, explicit
