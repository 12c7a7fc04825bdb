"""Where in a grid of cells the tables are: bodies, header rows, and tables lying on their side."""

from itertools import pairwise

from psdflow.errors import InputError, shown
from psdflow.reports.apertures import size_of
from psdflow.reports.around import text_around
from psdflow.reports.cells import Grid
from psdflow.reports.layout import Layout, Table, row_kinds, starts_with_size
from psdflow.reports.numerals import UNITS, Cell, Decimal, numeral, plain
from psdflow.reports.words import INPUT_MASS, LOSS, LOT, NAMES, SAMPLE, TOTAL, heading

HEADER_ROWS = 3  # how many rows over a table can be its header


def find_tables(grid: Grid, decimal: Decimal) -> Layout:
    """Split a grid into tables, header rows, fields ("Lot: A-17") and titles."""
    kinds = row_kinds(grid, decimal)
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
    fields, titles = text_around(grid, kinds, used, tables)
    unclaimed = [r for r, kind in enumerate(kinds) if kind == "data" and r not in used]
    return Layout(tables, fields, titles, unclaimed, kinds)


def _known_footer(row: list[Cell]) -> bool:
    label = plain(next((c for c in row if isinstance(c, str) and c), ""))
    return any(p.match(label) for p in (TOTAL, LOSS, INPUT_MASS))


def _standing_table(grid: Grid, start: int, kinds: list[str], used: set[int], decimal: Decimal) -> tuple[Table, int]:
    """A table with one size a row, beginning at row ``start``; and the row after it."""
    end, i = start, start
    while i < len(kinds) and (kinds[i] != "text" or _bad_row(grid, i, i == end, decimal)):
        if kinds[i] == "single" and i and kinds[i - 1] in ("blank", "comment") and not _known_footer(grid.rows[i]):
            break
        if kinds[i] in ("data", "single", "text"):
            if i > start and kinds[i] == "data" and _lying_table(grid, i, kinds, decimal):
                break
            end = i + 1
        i += 1
    first = start
    while first > 0 and (first - 1) not in used and _is_body(grid, first - 1, kinds, decimal):
        first -= 1
    body = [i for i in range(first, end) if kinds[i] not in ("blank", "comment")]
    if len(body) > 2 and _numbered_header(grid, body, decimal):
        kinds[body[0]] = "text"  # "size;1;2;3": samples named by numbers
        first, body = body[1], body[1:]
    header_rows = _header_rows(grid, first, kinds, used, decimal)
    width = max(len(grid.rows[i]) for i in body + header_rows[-1:])
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
    above = grid.rows[body[0] - 1] if body[0] else []
    headed = sum(cell != "" for cell in above) > 1 and not any(numeral(cell, decimal) for cell in above)
    if not is_label or not starts_with_size(grid, body[1], decimal) or (headed and heading(str(above[0])).size):
        return False
    numbers = [n for cell in row if (n := numeral(cell, decimal)) is not None]
    if any(n.unit or not n.value.is_integer() for n in numbers):
        return False
    return all(
        cell == "" or (j < len(grid.rows[body[1]]) and grid.rows[body[1]][j] != "") for j, cell in enumerate(row)
    )


def _no_overhang(grid: Grid, headers: list[str], body: list[int], decimal: Decimal) -> None:
    """Refuse rows with more numbers than headers: decimal commas were split there, or two lines became one."""
    headed = max((j + 1 for j, header in enumerate(headers) if header), default=0)
    if not headed:
        return
    filled = 0  # columns that any row fills
    for i in body:
        while any(cell != "" for cell in grid.rows[i][filled:]):
            filled += 1
    spare = [h.split("\n")[-1] for h in headers[filled:]]
    if spare[:1] != [""] and any(numeral(h, decimal) for h in spare[: [*spare, ""].index("")]):
        raise InputError(
            f"{grid.where(body[0])}: the header above goes on with numbers ({shown(' '.join(spare))}); one row a line is expected"
        )
    if filled <= headed:
        return
    over: dict[int, list[int]] = {}
    for i in body:
        for j in range(headed, len(grid.rows[i])):
            if numeral(grid.rows[i][j], decimal) and (grid.separator or grid.sheet is None or j == headed):
                over.setdefault(j, []).append(i)
    for rows in over.values():
        if grid.separator == "," or len(rows) < 0.6 * len(body):
            comma = (
                "; if they have decimal commas, separate the columns with semicolons or tabs"
                if grid.separator == ","
                else ""
            )
            raise InputError(
                f"{grid.where(rows[0])}: more numbers than the {headed} columns of the header; one row a line is expected{comma}"
            )


def _bad_row(grid: Grid, row: int, adjoins: bool, decimal: Decimal) -> bool:
    """Whether a row of text under a table is one of its rows with a bad number: "125;abc", or after a gap "Pan;abc"."""
    first = next((c for c in grid.rows[row] if c not in ("", "-")), "")
    size = size_of(first, decimal)
    return size is not None and (adjoins or size.kind != "edge")


def _is_body(grid: Grid, row: int, kinds: list[str], decimal: Decimal) -> bool:
    """Whether a row right over the numbers belongs to them, with a bad cell: "500;abc" or "5OO;12"."""
    if kinds[row] in ("single", "text") and starts_with_size(grid, row, decimal):
        return True
    head = heading(str(next((c for c in grid.rows[row] if c != ""), "")))
    return kinds[row] == "single" and not (head.size or head.role or head.unit)


def _header_rows(grid: Grid, first: int, kinds: list[str], used: set[int], decimal: Decimal) -> list[int]:
    """Rows over a table that head its columns, top to bottom."""
    rows: list[int] = []
    i = first - 1
    while i >= 0 and kinds[i] in ("comment", "blank") and first - i <= 2:
        i -= 1
    while i >= 0 and len(rows) < HEADER_ROWS and i not in used and kinds[i] in ("text", "single"):
        row = grid.rows[i]
        filled = [j for j, cell in enumerate(row) if cell != ""]
        if kinds[i] == "single" and (starts_with_size(grid, i, decimal) or len(filled) < 3):
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
    if filled[0] == 0 and (
        LOT.fullmatch(first) or SAMPLE.fullmatch(first) or NAMES.match(first) or first.endswith(":")
    ):
        return False
    lower_filled = [plain(str(c)) for c in lower if c != ""]
    units = lower_filled[0].strip("[]() ") in UNITS or all(c.strip("[]() ") in UNITS for c in lower_filled)
    repeated = len(filled) > 1 and len(set(lower_filled)) * len(filled) == len(lower_filled)
    gap = repeated or (bool(lower) and lower[0] == "" and upper[0] != "")
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
    if isinstance(row[0], float) or row[0][:1].isdigit():
        return None  # most rows: they begin with a number
    first = next(j for j, cell in enumerate(row) if cell != "")
    label = row[first]
    if not isinstance(label, str) or label[0].isdigit() or size_of(label, decimal) is not None:
        return None
    sizes = {j: size for j in range(first + 1, len(row)) if (size := size_of(row[j], decimal)) is not None}
    if len(sizes) < 3:
        return None
    values = [s.low if s.low is not None else (s.high or 0.0) / 2 for s in sizes.values()]
    rising = all(b > a for a, b in pairwise(values))
    falling = all(b < a for a, b in pairwise(values))
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
    last = max(len(grid.rows[i]) for i in lines)
    columns = [
        j
        for j in range(min(sizes), last)
        if j in sizes or any(j < len(grid.rows[i]) and numeral(grid.rows[i][j], decimal) for i in lines[1:])
    ]
    cells = [[grid.rows[i][j] if j < len(grid.rows[i]) else "" for i in lines] for j in columns]
    headers = [label] + [_line_label(grid.rows[i], columns[0]) for i in lines[1:]]
    return Table(grid, headers, cells, columns, across=True, lines=lines), end


def _line_label(row: list[Cell], before: int) -> str:
    return " ".join(f"{c:g}" if isinstance(c, float) else c for c in row[:before] if c != "")[:200]
