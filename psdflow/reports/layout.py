"""Parts of a grid: tables with their headers, the text around them, and what a row is."""

import re
from dataclasses import dataclass, field

from psdflow.errors import InputError, shown
from psdflow.reports.apertures import ASTM_NUMBERS, size_of
from psdflow.reports.cells import Grid, letters
from psdflow.reports.numerals import Cell, Decimal, numeral, plain
from psdflow.reports.words import INPUT_MASS, LOSS, STATISTIC, TOTAL


@dataclass
class Table:
    """A block of rows with numbers, and the words over it.

    ``rows[i][j]`` is a cell of the table's row i and column j; on a table lying on its side (``across``) these
    are column and row of the file. ``place[i]`` and ``lines[j]`` lead back to the file, for messages.
    """

    grid: Grid
    headers: list[str]
    rows: list[list[Cell]]
    place: list[int]
    names: dict[int, str] = field(default_factory=dict)
    lots: dict[int, str] = field(default_factory=dict)
    title: str = ""
    across: bool = False
    lines: list[int] = field(default_factory=list)

    def where(self, row: int, column: int | None = None) -> str:
        """File, sheet, row and column of a cell of the table, for messages."""
        if self.across:
            line = self.lines[column if column is not None else 0]
            return self.grid.where(line, self.place[row])
        return self.grid.where(self.place[row], column)

    def column_name(self, column: int) -> str:
        """A column as a message names it: its letter (or row) and its header."""
        place = f"row {self.grid.numbers[self.lines[column]]}" if self.across else f"column {letters(column)}"
        header = " ".join(self.headers[column].split())[:50]
        return f'{place} "{header}"' if header else place


@dataclass
class SizeColumns:
    """Columns of a table that hold sizes: one of ``size`` or ``mid``, or ``lower`` and/or ``upper``."""

    size: int | None = None
    lower: int | None = None
    upper: int | None = None
    mid: int | None = None
    span: range = range(0)  # the columns of the file these sizes rule; empty: all

    @property
    def all(self) -> list[int]:
        """The columns in use."""
        return [c for c in (self.size, self.lower, self.upper, self.mid) if c is not None]

    @property
    def first(self) -> int:
        """The column a message names."""
        return self.all[0]

    @property
    def pair(self) -> bool:
        """Whether lower and upper edges stand in two columns."""
        return self.lower is not None and self.upper is not None


@dataclass
class Layout:
    """What was found in one grid: its tables, text fields, titles and rows nobody claimed."""

    tables: list[Table]
    fields: dict[str, str]
    titles: list[str]
    unclaimed: list[int]
    kinds: list[str]


def row_kinds(grid: Grid, decimal: Decimal) -> list[str]:
    """For each row: "blank", "comment", "data" (a size and a number), "single" (one number) or "text"."""
    hashes = sum(_hash_number(row) for row in grid.rows if row and str(row[0])[:1] == "#")
    plain_starts = (
        sum(bool(row) and isinstance(row[0], str) and row[0][:1].isdigit() for row in grid.rows) if hashes else 0
    )
    numbered = hashes > plain_starts
    kinds = []
    for row in grid.rows:
        filled = [cell for cell in row if cell != ""]
        if not filled:
            kinds.append("blank")
        elif str(filled[0])[:1] == "#" and filled[0] != "#" and not (numbered and _hash_number(row)):
            kinds.append("comment")
        else:
            kinds.append(_kind(filled, decimal))
    return kinds


def _hash_number(row: list[Cell]) -> bool:
    """Whether a row begins with "#200", a sieve number; otherwise # begins a comment."""
    match = re.match(r"#\s?(\d{1,3})$", row[0]) if row and isinstance(row[0], str) and row[0][:1] == "#" else None
    return bool(match and match[1] in ASTM_NUMBERS)


def _kind(filled: list[Cell], decimal: Decimal) -> str:
    numbers = 0
    for cell in filled:
        if isinstance(cell, float) or numeral(cell, decimal):
            numbers += 1
            if numbers == 2:
                return "data"
    if numbers == 1 and len(filled) > 1:
        others = [size_of(cell, decimal) for cell in filled if isinstance(cell, str)]
        return "data" if any(s is not None and (s.kind != "edge" or s.unit) for s in others) else "single"
    if numbers == 0 and len(filled) == 2 and all(size_of(c, decimal) for c in filled[:1]) and _missing(filled[1]):
        return "data"
    return "single" if numbers else "text"


def starts_with_size(grid: Grid, row: int, decimal: Decimal) -> bool:
    """Whether the first filled cell of a row is a size or the pan."""
    first = next((c for c in grid.rows[row] if c not in ("", "-")), "")
    return size_of(first, decimal) is not None


_MISSING = re.compile(
    r"(?:n\.? ?d\.?|n\.? ?a\.?|n/a|n\. ?b\.?|b\.?d\.?l\.?|< ?l\.?o\.?d\.?|-+|traces?|tr\.?|spuren|trazas|not detected|nil)"
)


def _missing(cell: Cell) -> bool:
    return isinstance(cell, str) and bool(_MISSING.fullmatch(plain(cell)))


def not_detected(cell: Cell) -> bool:
    """Whether a cell says that nothing was found: "n.d.", "-", "traces"."""
    return _missing(cell)


def is_footer(label: str) -> str:
    """What a row under the table is by its label: "total", "loss", "input", "statistic" or ""."""
    text = plain(label).strip(" :")
    if INPUT_MASS.match(text):
        return "input"
    if LOSS.match(text):
        return "loss"
    if TOTAL.match(text):
        return "total"
    return "statistic" if STATISTIC.fullmatch(text) else ""


def undecided(table: Table, why: str) -> InputError:
    """The refusal of a table: the columns seen and how to say which is which."""
    seen = []
    for j in range(len(table.headers)):
        if any(row[j] != "" for row in table.rows):
            values = [row[j] for row in table.rows[:3]]
            text = ", ".join(f"{v:g}" if isinstance(v, float) else " ".join(v.split())[:20] for v in values)
            header = " ".join(table.headers[j].split())[:40]
            where = f"row {table.grid.numbers[table.lines[j]]}" if table.across else letters(j)
            seen.append(f"{where} {shown(header) if header else '(no header)'}: {text}, …")
    listed = "; ".join(seen[:8]) + (f"; and {len(seen) - 8} more" if len(seen) > 8 else "")
    line = table.grid.numbers[table.lines[0] if table.across else table.place[0]]
    return InputError(
        f"{table.grid.name}, table at row {line}: {why}. Columns seen: {listed}. "
        "Say which is which: --columns size=A,share=B (roles: size or lower and upper or mid; mass, share, under, over; "
        "a column by header, number or letter)"
    )
