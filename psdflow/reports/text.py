"""Text of any usual encoding and separator -> a grid of cells."""

import csv
import re

from psdflow.errors import InputError
from psdflow.reports.cells import MAX_CELLS, Grid
from psdflow.reports.numerals import Cell

_SEPARATORS = ("\t", ";", "|", ",")
_LINES_LOOKED_AT = 24
_CONTROL = re.compile(r"[\x00-\x08\x0e-\x1a\x1c-\x1f]")

# A cell that is a size or a number: what is left after digits, signs and unit words are taken away is nothing.
_NUMBERISH = re.compile(
    r"(?:no|nr|n°|nº|astm|us)?\.?[\s<>≤≥#+\-−–.,'\d%°µμu\ufffdmngk\[\]()/\"]*(?:micr[oa]n?s?|mesh|inch|to|bis|wt|vol|x)?"
    r"[\s<>≤≥+\-−–.,\d%°µμu\ufffdmngk\[\]()/\"]*",
    re.IGNORECASE,
)
_TWO_NUMBERS = re.compile(r"\d\s+[\d.,]")
_HAS_DIGIT = re.compile(r"\d")
# "500 µm  12.5 %" split at single spaces: units and signs go back to their number.
_GLUE_UNIT = re.compile(r"(?<=\d) (?=(?:[µμu\ufffd]m|mm|nm|microns?|g|mg|kg|%)(?:\s|$))", re.IGNORECASE)
_GLUE_SIGN = re.compile(r"(?:(?<=[<>≤≥#])|(?<=\bNo\.)|(?<=\bNr\.)) (?=\d)", re.IGNORECASE)
_GLUE_RANGE = re.compile(r"(?<=\d) ([-–]) (?=\d)")


def decode(data: bytes, source: str) -> str:
    """Text of a file: UTF-8 and UTF-16 (with or without mark), else Windows-1252, else Latin-1.

    Raises
    ------
    InputError
        If the bytes are no text.
    """
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        encodings = ["utf-16"]
    elif data[:2000].count(0) * 4 > len(data[:2000]):
        # Every second byte of Western text in UTF-16 is 0.
        encodings = ["utf-16-le" if data[1:2000:2].count(0) > data[0:2000:2].count(0) else "utf-16-be"]
    else:
        encodings = ["utf-8-sig", "cp1252", "latin-1"]
    for encoding in encodings:
        try:
            text = data.decode(encoding)
            break
        except UnicodeDecodeError:
            continue
    else:
        raise InputError(
            f"{source}: the bytes are no text in UTF-8, UTF-16 or Latin-1; export the table as csv or xlsx"
        )
    text = text.replace("\r\n", "\n").replace("\r", "\n").rstrip("\x00\x1a")
    if len(_CONTROL.findall(text[:20_000])) > max(2, len(text[:20_000]) // 500) or "\x00" in text:
        raise InputError(f"{source}: the file is no text table (binary content); export the table as csv or xlsx")
    return text


def text_grid(data: bytes, source: str) -> Grid:
    """The grid of cells of a text file."""
    text = decode(data, source)
    forced = re.match(r'"?sep=(.)"?[ \t]*\n', text, re.IGNORECASE)
    lines = text.split("\n")
    separator = forced[1] if forced else separator_of(lines)
    if text.count(separator or " ") + len(lines) > MAX_CELLS:
        raise InputError(f"{source}: more than {MAX_CELLS} cells; a size report is expected")
    rows, numbers = _split(text, lines, separator)
    if forced:
        rows, numbers = rows[1:], numbers[1:]
    return Grid(source, None, rows, numbers, separator)


def separator_of(lines: list[str]) -> str:
    """The character between cells: tab, semicolon, pipe or comma; "" for runs of spaces.

    Each candidate is judged by the lines it splits wholly into sizes and numbers.
    """
    with_digits = [line for line in lines if _HAS_DIGIT.search(line)]
    with_digits = with_digits[:: len(with_digits) // _LINES_LOOKED_AT + 1]
    scores: dict[str, float] = {}
    for separator in _SEPARATORS:
        if any(separator in line for line in with_digits):
            scores[separator] = sum(_score(line.split(separator)) for line in with_digits)
    scores[""] = sum(_score(line.split()) for line in with_digits)
    best = max(scores.values())
    if best > 0:
        # On a tie the first wins: "500;0,5" splits into numbers at the comma, too.
        return next(s for s in (*_SEPARATORS, "") if scores.get(s, -1.0) > best * 0.999)
    counts = {s: sum(s in line for line in with_digits) for s in _SEPARATORS}
    most = max(counts.values(), default=0)
    return next((s for s in _SEPARATORS if counts[s] == most), "") if most else ""


def _numberish(cell: str) -> bool:
    return len(cell) <= 40 and bool(_HAS_DIGIT.search(cell)) and bool(_NUMBERISH.fullmatch(cell))


def _score(cells: list[str]) -> float:
    filled = [c for c in (cell.strip(" \"'") for cell in cells) if c]
    if len(filled) < 2:
        return 0.0
    good = sum(_numberish(c) and not _TWO_NUMBERS.search(c) for c in filled)
    return good / len(filled) if good >= 2 else 0.0


def _split(text: str, lines: list[str], separator: str) -> tuple[list[list[Cell]], list[int]]:
    if not separator:
        spaced = [_split_spaces(line) for line in lines]
        widths = [len(cells) for cells in spaced if len(cells) > 1]
        usual = max(set(widths), key=widths.count) if widths else 0
        for k, cells in enumerate(spaced):
            # A header with single spaces: "Sieve (um) Retained (g)".
            if len(cells) == 1 and len(words := re.sub(r" (?=[\[(])", "", cells[0]).split()) == usual:
                spaced[k] = words
        return [list(cells) for cells in spaced], list(range(1, len(lines) + 1))
    if '"' not in text:
        return [[cell.strip() for cell in line.split(separator)] for line in lines], list(range(1, len(lines) + 1))
    try:
        return _split_quoted(lines, separator)
    except csv.Error:
        pass  # quote marks not in pairs (inches, for example): they are no quotes then
    rows: list[list[Cell]] = [[cell.strip().strip('"').strip() for cell in line.split(separator)] for line in lines]
    return rows, list(range(1, len(lines) + 1))


def _split_quoted(lines: list[str], separator: str) -> tuple[list[list[Cell]], list[int]]:
    reader = csv.reader((line + "\n" for line in lines), delimiter=separator, strict=True)
    rows: list[list[Cell]] = []
    numbers: list[int] = []
    start = 1
    for row in reader:
        rows.append([cell.strip() for cell in row])
        numbers.append(start)
        start = reader.line_num + 1
    return rows, numbers


def _split_spaces(line: str) -> list[str]:
    """Cells of a line in columns: two spaces or more part cells; single spaces do if all parts are numbers."""
    line = line.strip()
    wide = re.split(r"\s{2,}|\t", line)
    glued = _GLUE_RANGE.sub(r"\1", _GLUE_SIGN.sub("", _GLUE_UNIT.sub("", line)))
    narrow = glued.split()
    numbers = sum(_numberish(cell) for cell in narrow)
    if numbers and numbers >= len(narrow) - 1 and len(narrow) > 1:
        return narrow
    return wide
