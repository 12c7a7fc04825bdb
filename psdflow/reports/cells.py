"""A file -> grids of cells: text is split, a workbook gives one grid a sheet. Nothing is interpreted yet."""

import hashlib
from dataclasses import dataclass, field
from pathlib import Path

from psdflow.errors import InputError
from psdflow.reports.numerals import Cell

MAX_BYTES = 20_000_000
MAX_CELLS = 400_000

# First bytes of what is no size table, and what to say about it.
_SIGNATURES: tuple[tuple[bytes, str], ...] = (
    (b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1", "an old binary workbook (.xls); save it as .xlsx or csv"),
    (b"\x89PNG", "a picture (PNG); export the table as csv or xlsx"),
    (b"\xff\xd8\xff", "a picture (JPEG); export the table as csv or xlsx"),
    (b"GIF8", "a picture (GIF); export the table as csv or xlsx"),
    (b"II*\x00", "a picture (TIFF); export the table as csv or xlsx"),
    (b"MM\x00*", "a picture (TIFF); export the table as csv or xlsx"),
    (b"BM", "a picture (BMP); export the table as csv or xlsx"),
    (b"%PDF", "a PDF; export the table as csv or xlsx"),
    (b"\x1f\x8b", "a compressed file (gzip); unpack it first"),
    (b"{\\rtf", "a formatted text document (RTF); export the table as csv or xlsx"),
)


@dataclass(frozen=True)
class Grid:
    """Cells of one sheet (or text file), rows and columns as in the file.

    ``rows[i]`` is row ``numbers[i]`` (1-based) of the file; an empty cell is "". ``notes`` are warnings about
    the sheet itself, such as hidden rows.
    """

    source: str
    sheet: str | None
    rows: list[list[Cell]]
    numbers: list[int]
    separator: str = ""
    notes: tuple[str, ...] = field(default=())

    @property
    def name(self) -> str:
        """File and sheet, for messages."""
        return f"{self.source}, sheet {self.sheet}" if self.sheet else self.source

    def where(self, row: int, column: int | None = None) -> str:
        """File, sheet, row and column of a cell (0-based indices into ``rows``), for messages."""
        place = f"{self.name}, row {self.numbers[row]}"
        return place if column is None else f"{place}, column {letters(column)}"


def letters(column: int) -> str:
    """Column letters of a 0-based index: A, B, …, Z, AA, …."""
    text, number = "", column + 1
    while number:
        number, rest = divmod(number - 1, 26)
        text = chr(65 + rest) + text
    return text


def read_bytes(path: str | Path) -> tuple[bytes, str]:
    """Content and SHA-256 of a file of bearable size.

    Raises
    ------
    InputError
        If the file isn't there, can't be read, is empty or is larger than `MAX_BYTES`.
    """
    file = Path(path)
    try:
        if not file.is_file():
            what = "is a folder" if file.is_dir() else "is no file"
            raise InputError(f"{file}: {what}; a size report (csv, txt or xlsx) is expected")
        if file.stat().st_size > MAX_BYTES:
            raise InputError(
                f"{file.name}: {file.stat().st_size / 1e6:.0f} MB; a size report has less than {MAX_BYTES / 1e6:.0f} MB"
            )
        data = file.read_bytes()
    except (OSError, ValueError) as error:
        if isinstance(error, InputError):
            raise
        raise InputError(f"{path}: can't be read ({getattr(error, 'strerror', None) or error})") from None
    if not data.strip(b"\x00\xff\xfe\xef\xbb\xbf \t\r\n"):
        raise InputError(f"{file.name}: the file is empty; a table of sizes and shares is expected")
    return data, hashlib.sha256(data).hexdigest()


def read_grids(data: bytes, source: str) -> list[Grid]:
    """Grids of cells in the bytes of a file; ``source`` is its name, for messages.

    Raises
    ------
    InputError
        If the bytes are no text and no workbook, or more than can be a size report.
    """
    for signature, what in _SIGNATURES:
        if data.startswith(signature) and (signature != b"BM" or b"\x00" in data[:20]):
            raise InputError(f"{source}: the file is {what}")
    if data.startswith(b"PK\x03\x04"):
        from psdflow.reports.workbook import workbook_grids

        return workbook_grids(data, source)
    from psdflow.reports.text import text_grid

    return [text_grid(data, source)]
