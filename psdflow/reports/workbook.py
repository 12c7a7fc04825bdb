"""A workbook (.xlsx) -> one grid of cells for each visible sheet."""

import io
import re
import warnings
import zipfile
from datetime import date, datetime, time
from typing import Any

from psdflow.errors import InputError
from psdflow.reports.cells import MAX_CELLS, Grid
from psdflow.reports.numerals import Cell, Percent

MAX_UNPACKED = 60_000_000  # bytes; more is no size report, or a bomb
_MAX_RATIO = 200  # unpacked over packed, above 1 MB


def workbook_grids(data: bytes, source: str) -> list[Grid]:
    """Grids of the visible sheets, values only (formulas as last computed).

    Raises
    ------
    InputError
        If the bytes are no workbook, or unpack to more than `MAX_UNPACKED`.
    """
    formulas = _check_archive(data, source)
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # about styles and validation, which don't matter here
            import openpyxl

            book = openpyxl.load_workbook(io.BytesIO(data), data_only=True)
            written = openpyxl.load_workbook(io.BytesIO(data)) if formulas else None
            return [_grid(sheet, written, source) for sheet in book.worksheets if sheet.sheet_state == "visible"]
    except InputError:
        raise
    except (MemoryError, RecursionError):
        raise InputError(f"{source}: the workbook is too large to read; export the table as csv") from None
    except Exception as error:  # a damaged workbook fails anywhere in the library, with any exception
        raise InputError(
            f"{source}: the workbook can't be read ({type(error).__name__}); open and save it again, or export csv"
        ) from None


def _check_archive(data: bytes, source: str) -> bool:
    """Refuse bombs by the archive's own list of contents; return whether any sheet holds formulas."""
    try:
        with zipfile.ZipFile(io.BytesIO(data)) as archive:
            entries = archive.infolist()
            unpacked = sum(entry.file_size for entry in entries)
            packed = sum(entry.compress_size for entry in entries) or 1
            if (
                unpacked > MAX_UNPACKED
                or (unpacked > 1_000_000 and unpacked / packed > _MAX_RATIO)
                or len(entries) > 2000
            ):
                raise InputError(
                    f"{source}: the workbook unpacks to {unpacked / 1e6:.0f} MB; a size report is expected, export the table as csv"
                )
            names = {entry.filename for entry in entries}
            if "xl/workbook.xml" not in names:
                raise InputError(
                    f"{source}: the archive holds no workbook; a size report (csv, txt or xlsx) is expected"
                )
            sheets = [entry for entry in entries if re.fullmatch(r"xl/worksheets/[^/]+\.xml", entry.filename)]
            contents = [archive.read(entry) for entry in sheets]
    except (zipfile.BadZipFile, NotImplementedError, RuntimeError, OSError, EOFError, ValueError, KeyError) as error:
        if isinstance(error, InputError):
            raise
        raise InputError(f"{source}: the workbook is damaged; open and save it again, or export csv") from None
    except Exception:  # zlib.error and the like
        raise InputError(f"{source}: the workbook is damaged; open and save it again, or export csv") from None
    for content in contents:
        # A far-away used cell makes the library lay out the whole rectangle between.
        rows = max((int(n) for n in re.findall(rb'<(?:x:)?row [^>]{0,200}?r="(\d{1,8})"', content)), default=0)
        if rows > 50_000 or content.count(b"<c ") > MAX_CELLS:
            raise InputError(f"{source}: the sheet has {rows} rows; a size report is expected")
    return any(b"<f" in content for content in contents)


def _grid(sheet: Any, written: Any, source: str) -> Grid:
    if sheet.max_row * min(sheet.max_column, 1000) > 4 * MAX_CELLS:
        raise InputError(f"{source}, sheet {sheet.title}: more cells than a size report can have")
    originals = written[sheet.title] if written is not None else None
    rows: list[list[Cell]] = []
    for row in sheet.iter_rows(max_col=min(sheet.max_column, 1000)):
        cells = [_value(cell) for cell in row]
        if originals is not None:
            for j, cell in enumerate(row):
                if cells[j] == "" and isinstance(text := originals.cell(cell.row, cell.column).value, str):
                    cells[j] = text  # a formula never computed: shown as it is, so that it is not taken for empty
        rows.append(cells)
    for area in sheet.merged_cells.ranges:
        # A title over several columns belongs to each of them; numbers are not spread.
        if area.min_row == area.max_row and isinstance(rows[area.min_row - 1][area.min_col - 1], str):
            for j in range(area.min_col, min(area.max_col, len(rows[0]))):
                rows[area.min_row - 1][j] = rows[area.min_row - 1][area.min_col - 1]
    notes = []
    hidden = [i for i, dimension in sheet.row_dimensions.items() if dimension.hidden and i <= len(rows)]
    if hidden:
        notes.append(f"sheet {sheet.title}: hidden rows were read too: {', '.join(map(str, sorted(hidden)[:10]))}")
    columns = [name for name, dimension in sheet.column_dimensions.items() if dimension.hidden]
    if columns:
        notes.append(f"sheet {sheet.title}: hidden columns were read too: {', '.join(sorted(columns)[:10])}")
    return Grid(source, str(sheet.title), rows, list(range(1, len(rows) + 1)), "", tuple(notes))


def _value(cell: Any) -> Cell:
    value = cell.value
    if value is None:
        return ""
    if isinstance(value, bool):
        return str(value)
    if isinstance(value, int | float):
        number = float(value) if abs(value) < 1e300 else float("nan")
        return Percent(number) if "%" in str(cell.number_format) else number
    if isinstance(value, datetime):
        return value.date().isoformat() if value.time() == time() else value.isoformat(" ")
    if isinstance(value, date | time):
        return value.isoformat()
    return str(value).strip()
