"""Where in a grid of cells the tables are: bodies, header rows, tables lying on their side, and the text around."""

import re
from dataclasses import dataclass, field

from psdflow.errors import InputError
from psdflow.reports.apertures import ASTM_NUMBERS, size_of
from psdflow.reports.cells import Grid, letters
from psdflow.reports.numerals import UNITS, Cell, Decimal, numeral, plain
from psdflow.reports.words import INPUT_MASS, LOSS, LOT, NAMES, SAMPLE, STATISTIC, TOTAL, heading

TEXT_ROWS = 500  # rows of text around the tables that are kept
HEADER_ROWS = 3  # how many rows over a table can be its header


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
class Layout:
    """What was found in one grid: its tables, text fields, titles and rows nobody claimed."""

    tables: list[Table]
    fields: dict[str, str]
    titles: list[str]
    unclaimed: list[int]
    kinds: list[str]


def find_tables(grid: Grid, decimal: Decimal) -> Layout:
    """Split a grid into tables, header rows, fields ("Lot: A-17") and titles."""
    kinds = _row_kinds(grid, decimal)
    used: set[int] = set()
    tables: list[Table] = []
    i = 0
    while i < len(kinds):
        if kinds[i] == "data":
            table, end = _lying_table(grid, i, kinds, decimal) or _standing_table(grid, i, kinds, used, decimal)
            if len(table.rows) >= 2 and len(table.headers) >= 2:
                tables.append(table)
                used.update(range(i, end))
            else:
                used.difference_update(range(i, end))
            i = end
        else:
            i += 1
    fields, titles = _fields(grid, kinds, used, tables)
    unclaimed = [r for r, kind in enumerate(kinds) if kind == "data" and r not in used]
    return Layout(tables, fields, titles, unclaimed, kinds)


def _row_kinds(grid: Grid, decimal: Decimal) -> list[str]:
    """For each row: "blank", "comment", "data" (a size and a number), "single" (one number) or "text"."""
    hashes = sum(_hash_number(row) for row in grid.rows)
    plain_starts = sum(bool(row) and isinstance(row[0], str) and row[0][:1].isdigit() for row in grid.rows)
    kinds = []
    for row in grid.rows:
        filled = [cell for cell in row if cell != ""]
        first = filled[0] if filled else ""
        if not filled:
            kinds.append("blank")
        elif isinstance(first, str) and first[:1] == "#" and first != "#" and not (hashes > plain_starts and _hash_number(row)):
            kinds.append("comment")
        else:
            kinds.append(_kind(filled, decimal))
    return kinds


def _hash_number(row: list[Cell]) -> bool:
    """Whether a row begins with "#200", a sieve number; otherwise # begins a comment."""
    match = re.match(r"#\s?(\d{1,3})$", row[0]) if row and isinstance(row[0], str) else None
    return bool(match and match[1] in ASTM_NUMBERS)


def _kind(filled: list[Cell], decimal: Decimal) -> str:
    numbers = 0
    for cell in filled:
        if not isinstance(cell, str) or (any(c.isdigit() for c in cell) and numeral(cell, decimal)):
            numbers += 1
            if numbers == 2:
                return "data"
    if numbers == 1 and len(filled) > 1:
        label = filled[0] if isinstance(filled[0], str) else filled[-1]
        other = size_of(label, decimal)
        if other is not None and (other.kind != "edge" or other.unit):
            return "data"
        return "single"
    if numbers == 0 and len(filled) == 2 and all(size_of(c, decimal) for c in filled[:1]) and _missing(filled[1]):
        return "data"
    return "single" if numbers else "text"


_MISSING = re.compile(
    r"(?:n\.? ?d\.?|n\.? ?a\.?|n/a|n\. ?b\.?|b\.?d\.?l\.?|< ?l\.?o\.?d\.?|-+|traces?|tr\.?|spuren|trazas|not detected|nil)"
)


def _missing(cell: Cell) -> bool:
    return isinstance(cell, str) and bool(_MISSING.fullmatch(plain(cell)))


def not_detected(cell: Cell) -> bool:
    """Whether a cell says that nothing was found: "n.d.", "-", "traces"."""
    return _missing(cell)


def _known_footer(row: list[Cell]) -> bool:
    label = plain(next((c for c in row if isinstance(c, str) and c), ""))
    return any(p.match(label) for p in (TOTAL, LOSS, INPUT_MASS))


def _standing_table(grid: Grid, start: int, kinds: list[str], used: set[int], decimal: Decimal) -> tuple[Table, int]:
    """A table with one size a row, beginning at row ``start``; and the row after it."""
    end, i = start, start
    while i < len(kinds) and kinds[i] != "text":
        if kinds[i] == "single" and i and kinds[i - 1] in ("blank", "comment") and not _known_footer(grid.rows[i]):
            break
        if kinds[i] in ("data", "single"):
            if i > start and kinds[i] == "data" and _lying_table(grid, i, kinds, decimal):
                break
            end = i + 1
        i += 1
    first = start
    # "500;abc" right above: a row of the table with a bad cell, no header.
    while (
        first > 0
        and (first - 1) not in used
        and kinds[first - 1] == "single"
        and _starts_with_size(grid, first - 1, decimal)
    ):
        first -= 1
    body = [i for i in range(first, end) if kinds[i] in ("data", "single")]
    if len(body) > 2 and _numbered_header(grid, body, decimal):
        kinds[body[0]] = "text"  # "size;1;2;3": samples named by numbers
        first, body = body[1], body[1:]
    width = max(len(grid.rows[i]) for i in body)
    header_rows = _header_rows(grid, first, kinds, used, decimal)
    headers = _join_headers(grid, header_rows, width)
    used.update(header_rows)
    used.update(range(first, end))
    _no_overhang(grid, headers, body, decimal)
    rows = [list(grid.rows[i]) + [""] * (width - len(grid.rows[i])) for i in body]
    return Table(grid, headers, rows, body), end


def _numbered_header(grid: Grid, body: list[int], decimal: Decimal) -> bool:
    """Whether the first row is a header such as "size;1;2;3": a size word, then numbers over filled columns."""
    row = grid.rows[body[0]]
    label = next((c for c in row if c != ""), "")
    is_label = isinstance(label, str) and size_of(label, decimal) is None and heading(label).size
    if not is_label or not _starts_with_size(grid, body[1], decimal):
        return False
    return all(cell == "" or (j < len(grid.rows[body[1]]) and grid.rows[body[1]][j] != "") for j, cell in enumerate(row))


def _no_overhang(grid: Grid, headers: list[str], body: list[int], decimal: Decimal) -> None:
    """Refuse rows with more numbers than headers: decimal commas were split there, or two lines became one."""
    headed = max((j + 1 for j, header in enumerate(headers) if header), default=0)
    over = [i for i in body if headed < len(grid.rows[i]) and numeral(grid.rows[i][headed], decimal)]
    if headed and over and (grid.separator == "," or len(over) < 0.6 * len(body)):
        comma = "; if they have decimal commas, separate the columns with semicolons or tabs" if grid.separator == "," else ""
        raise InputError(f"{grid.where(over[0])}: more numbers than the {headed} columns of the header; one row a line is expected{comma}")


def _starts_with_size(grid: Grid, row: int, decimal: Decimal) -> bool:
    first = next((c for c in grid.rows[row] if c != ""), "")
    return size_of(first, decimal) is not None


def _header_rows(grid: Grid, first: int, kinds: list[str], used: set[int], decimal: Decimal) -> list[int]:
    """Rows over a table that head its columns, top to bottom."""
    rows: list[int] = []
    i = first - 1
    while i >= 0 and kinds[i] in ("comment", "blank") and first - i <= 2:
        i -= 1
    while i >= 0 and len(rows) < HEADER_ROWS and i not in used and kinds[i] in ("text", "single"):
        row = grid.rows[i]
        filled = [j for j, cell in enumerate(row) if cell != ""]
        if kinds[i] == "single" and (_starts_with_size(grid, i, decimal) or len(filled) < 3):
            break
        if len(filled) < 2 and not (rows and filled and filled[0] > 0):
            break
        if rows and not _may_stack(row, filled, grid.rows[rows[0]]):
            break
        rows.insert(0, i)
        i -= 1
    return rows


def _may_stack(upper: list[Cell], filled: list[int], lower: list[Cell]) -> bool:
    """Whether a row over a header row is part of the header: units below it, or words over a gap."""
    if len({str(c) for c in upper if c != ""}) == 1 and len(filled) > 2:
        return False  # a title merged over the whole width
    first = plain(str(upper[filled[0]])).strip(" :")
    if filled[0] == 0 and (LOT.fullmatch(first) or NAMES.match(first) or first.endswith(":")):
        return False
    lower_filled = [plain(str(c)) for c in lower if c != ""]
    units = all(c.strip("[]() ") in UNITS for c in lower_filled)
    repeated = len(filled) > 1 and len(set(lower_filled)) * len(filled) == len(lower_filled)
    gap = repeated or bool(lower) and lower[0] == "" and upper[0] != ""
    return units or gap or filled[0] > 0 or len(lower_filled) < len(filled)


def _join_headers(grid: Grid, header_rows: list[int], width: int) -> list[str]:
    parts: list[list[str]] = [[] for _ in range(width)]
    for depth, i in enumerate(header_rows):
        row = [str(c) for c in grid.rows[i]] + [""] * width
        carried = ""
        for j in range(width):
            text = row[j]
            last = depth == len(header_rows) - 1
            if not last and not text and j and any(str(c) for c in grid.rows[header_rows[-1]][j : j + 1]):
                text = carried  # a heading written once over several columns
            carried = text
            if text and text not in parts[j]:
                parts[j].append(text[:200])
    return ["\n".join(p) for p in parts]


def _lying_table(grid: Grid, start: int, kinds: list[str], decimal: Decimal) -> tuple[Table, int] | None:
    """A table with the sizes across the top, if row ``start`` is its row of sizes; and the row after it."""
    row = grid.rows[start]
    first = next(j for j, cell in enumerate(row) if cell != "")
    label = row[first]
    if not isinstance(label, str) or size_of(label, decimal) is not None:
        return None
    sizes = {j: size for j in range(first + 1, len(row)) if (size := size_of(row[j], decimal)) is not None}
    if len(sizes) < 3:
        return None
    values = [s.low if s.low is not None else (s.high or 0.0) / 2 for s in sizes.values()]
    rising = all(b > a for a, b in zip(values, values[1:], strict=False))
    falling = all(b < a for a, b in zip(values, values[1:], strict=False))
    explicit = sum(s.kind != "edge" or bool(s.unit) for s in sizes.values()) >= 0.6 * len(sizes)
    if not (rising or falling) or not (explicit or heading(label).size):
        return None
    lines, end = [start], start + 1
    while end < len(kinds) and kinds[end] in ("data", "single", "comment", "blank"):
        if kinds[end] == "data":
            beginning = grid.rows[end][first] if first < len(grid.rows[end]) else ""
            if not explicit and size_of(beginning, decimal) is not None:
                return None  # sizes go down the first column after all
            lines.append(end)
        elif kinds[end] == "single" or (kinds[end] == "blank" and len(lines) > 1):
            break
        end += 1
    if len(lines) < 2:
        return None
    columns = list(sizes)
    cells = [[grid.rows[i][j] if j < len(grid.rows[i]) else "" for i in lines] for j in columns]
    headers = [label] + [_line_label(grid.rows[i], columns[0]) for i in lines[1:]]
    return Table(grid, headers, cells, columns, across=True, lines=lines), end


def _line_label(row: list[Cell], before: int) -> str:
    return " ".join(f"{c:g}" if isinstance(c, float) else c for c in row[:before] if c != "")[:200]


def _fields(grid: Grid, kinds: list[str], used: set[int], tables: list[Table]) -> tuple[dict[str, str], list[str]]:
    """Text fields and titles; names given to a table's columns in a row of their own go to the table."""
    fields: dict[str, str] = {}
    titles: list[str] = []
    for i, row in enumerate(grid.rows):
        if i in used or kinds[i] == "blank" or len(titles) + len(fields) > TEXT_ROWS:
            continue
        filled = [(j, _text(cell)) for j, cell in enumerate(row) if cell != ""]
        filled = [(j, text) for k, (j, text) in enumerate(filled) if not k or text != filled[k - 1][1]]
        if kinds[i] == "comment":
            if ":" not in filled[0][1]:
                titles.append(" ".join(text for _, text in filled).lstrip("# ")[:200])
                continue
            filled[0] = (filled[0][0], filled[0][1].lstrip("# "))
        key, colon, value = filled[0][1].partition(":")
        key = key.strip()
        rest = " ".join(text for _, text in filled[1:])
        if len(filled) > 2 and (SAMPLE.fullmatch(plain(key)) or LOT.fullmatch(plain(key))):
            _name_columns(tables, i, key, filled[1:])
            continue
        value = f"{value} {rest}".strip()
        if value and key and (colon or len(filled) > 1) and len(key) <= 60:
            # A second block's "Lot" must not overwrite the first's: it belongs to the table below it.
            below = next((t for t in tables if not t.across and t.place[0] > i), None)
            if tables and below is not tables[0] and below is not None and _names(key):
                below.title = below.title or value
            else:
                fields.setdefault(key[:60], value[:200])
        elif key or value:
            text = " ".join(t for _, t in filled)[:200]
            below = next((t for t in tables if (t.place[0] if not t.across else t.lines[0]) > i), None)
            if below is not None and (below is not tables[0] or len(tables) > 1) and len(text) <= 60:
                below.title = text  # the nearest line over a block
            titles.append(text)
    return fields, titles


def _names(key: str) -> bool:
    return bool(SAMPLE.fullmatch(plain(key)) or LOT.fullmatch(plain(key)))


def _name_columns(tables: list[Table], row: int, key: str, named: list[tuple[int, str]]) -> None:
    target = next((t for t in tables if not t.across and t.place[0] > row), None)
    if target is not None:
        names = target.lots if LOT.fullmatch(plain(key)) else target.names
        names.update({j: text for j, text in named})


def _text(cell: Cell) -> str:
    return f"{cell:.10g}" if isinstance(cell, float) else " ".join(cell.split())


def stray_rows(table: Table, layout: Layout, decimal: Decimal, no_pan: bool) -> list[int]:
    """Rows apart from any table that may belong to this one: a size and a number, or a word nobody knows and a number."""
    if table.across:
        return []
    rows, found = table.grid.rows, []
    for i in layout.unclaimed:
        above = [plain(str(c)) for c in rows[i - 1] if c != ""] if i else []
        if _starts_with_size(table.grid, i, decimal) and not (above and all(STATISTIC.fullmatch(c) for c in above)):
            found.append(i)
    for i in range(table.place[-1] + 1, min(table.place[-1] + 4, len(rows))):
        filled = [c for c in rows[i] if c != ""]
        label = plain(str(filled[0])).strip(" :") if filled else ""
        known = any(p.search(label) for p in (LOT, SAMPLE, NAMES)) or is_footer(label) or str(filled[:1]).count(":")
        if no_pan and layout.kinds[i] == "single" and len(filled) == 2 and not known:
            found.append(i)
    return found


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
