"""The text around tables: fields ("Lot: A-17"), titles, names in a row of their own, and stray rows."""

from psdflow.reports.apertures import size_of
from psdflow.reports.cells import Grid
from psdflow.reports.layout import Layout, Table, is_footer
from psdflow.reports.numerals import Cell, Decimal, plain
from psdflow.reports.words import LOT, NAMES, SAMPLE, STATISTIC

TEXT_ROWS = 500  # rows of text around the tables that are kept


def text_around(grid: Grid, kinds: list[str], used: set[int], tables: list[Table]) -> tuple[dict[str, str], list[str]]:
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
        names.update(named)


def _text(cell: Cell) -> str:
    return f"{cell:.10g}" if isinstance(cell, float) else " ".join(cell.split())


def stray_rows(table: Table, layout: Layout, decimal: Decimal, no_pan: bool) -> list[int]:
    """Rows apart from any table that may belong to this one.

    A size and a number; under sizes that lie across, as many numbers; under sieves without a pan row, one
    number alone or with a word nobody knows.
    """
    rows, found = table.grid.rows, []
    for i in layout.unclaimed:
        above = [plain(str(c)) for c in rows[i - 1] if c != ""] if i else []
        filled = [c for c in rows[i] if c != ""]
        like_lines = table.across and i > table.lines[-1] and len(filled) >= len(table.rows)
        beside = size_of(filled[1], decimal) if len(filled) > 1 else None
        like_row = size_of(filled[0], decimal) or (beside is not None and beside.kind != "edge")
        if like_lines or (like_row and not (above and all(STATISTIC.fullmatch(c) for c in above))):
            found.append(i)
    if table.across or not no_pan:
        return found
    for i in range(table.place[-1] + 1, min(table.place[-1] + 4, len(rows))):
        filled = [c for c in rows[i] if c != ""]
        label = plain(str(filled[0])).strip(" :") if filled else ""
        known = any(p.search(label) for p in (LOT, SAMPLE, NAMES)) or is_footer(label) or str(filled[:1]).count(":")
        if ((layout.kinds[i] == "single" and len(filled) <= 2) or i in layout.unclaimed) and not known:
            found.append(i)
    return found
