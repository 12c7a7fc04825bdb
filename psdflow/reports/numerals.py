"""One cell -> a number: decimal comma or point, thousands separators, "<0.1", a unit written in the cell."""

import re
from collections.abc import Iterable, Sequence
from functools import lru_cache
from typing import Literal, NamedTuple

from psdflow.errors import InputError, shown

Decimal = Literal[",", "."]


class Percent(float):
    """A workbook number that is shown as a percentage: 0.12 is shown as 12 %."""


Cell = str | float
SMALLEST, LARGEST = 1e-12, 1e12

# Words for units, in plain form (see `plain`). Every spelling of micro becomes "u" there.
_UNITS = {
    "um": "um u um. micron microns micrometer micrometers micrometre micrometres mikrometer mikron micra micras "
    "micrometro micrometros microm aum",
    "nm": "nm nanometer nanometers nanometre nanometres nanometro nanometros",
    "mm": "mm mm. millimeter millimeters millimetre millimetres milimetro milimetros",
    "cm": "cm",
    "m": "m metre metres meter meters metro metros",
    "in": "in in. inch inches zoll \" ''",
    "phi": "phi",
    "%": "% percent prozent pct %vol vol% vol.% vol.-% %v/v wt% wt.% wt.-% %wt %mass mass% mass-% m% ma.-% gew.-% % pourcent",
    "mg": "mg",
    "g": "g g. gr gram grams gramm gramme grammes gramo gramos",
    "kg": "kg",
}
UNITS: dict[str, str] = {word: unit for unit, words in _UNITS.items() for word in words.split()}
LENGTHS = ("um", "nm", "mm", "cm", "m", "in", "phi")
MASSES = ("mg", "g", "kg")

_MARKS = str.maketrans(
    {
        "µ": "u",
        "μ": "u",
        "\ufffd": "u",
        "φ": "phi",
        "Φ": "phi",
        "ø": "o",
        "–": "-",
        "—": "-",
        "−": "-",
        "≤": "<",
        "≥": ">",
        "≦": "<",
        "≧": ">",
        "\u00a0": " ",
        "\u202f": " ",
        "\u2009": " ",
        "’": "'",
        "“": '"',
        "”": '"',
        "″": '"',
    }
)
# Letters with a mark become plain ones, by hand: unicodedata would also rewrite digits such as ² and ½.
_ACCENTS = str.maketrans("áàâäãåéèêëíìîïóòôöõúùûüçñ", "aaaaaaeeeeiiiiooooouuuucn")


def plain(text: str) -> str:
    """Lower case, no accents, one kind of dash, ``u`` for every micro sign, single spaces."""
    if text.isascii():
        return " ".join(text.lower().split())
    fixed = text.replace("Âµ", "µ").replace("Î¼", "µ").replace("ß", "ss").translate(_MARKS)
    return " ".join(fixed.lower().translate(_ACCENTS).split())


class Numeral(NamedTuple):
    """A number read from a cell.

    ``sign`` is "<", ">" or "" ("<0.1"); ``unit`` a word of `UNITS`' values or ""; ``grouped`` marks a
    thousands separator that could also be a decimal sign ("1,250").
    """

    value: float
    sign: str = ""
    unit: str = ""
    grouped: bool = False


_PLAIN = re.compile(r"[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:e[+-]?\d{1,3})?")
_FULL = {
    ".": re.compile(
        r"(?P<sign>[<>~]?) ?(?P<number>[+-]? ?(?:\d{1,3}(?:(?P<group>[ ',])\d{3})(?:(?P=group)\d{3})*(?:\.\d*)?|\d+(?:\.\d*)?|\.\d+)"
        r"(?:e[+-]?\d{1,3})?) ?(?P<unit>[^\d\s+-].{0,14})?"
    ),
    ",": re.compile(
        r"(?P<sign>[<>~]?) ?(?P<number>[+-]? ?(?:\d{1,3}(?:(?P<group>[ '.])\d{3})(?:(?P=group)\d{3})*(?:,\d*)?|\d+(?:,\d*)?|,\d+)"
        r"(?:e[+-]?\d{1,3})?) ?(?P<unit>[^\d\s+-].{0,14})?"
    ),
}


@lru_cache(maxsize=8192, typed=True)
def numeral(cell: Cell, decimal: Decimal) -> Numeral | None:
    """The number in a cell, or None if the cell is not a number with at most a unit behind it."""
    if isinstance(cell, float):
        return _bearable(Numeral(round(cell * 100, 12), unit="%") if isinstance(cell, Percent) else Numeral(cell))
    if not cell or len(cell) > 40:
        return None
    if decimal == "." and _PLAIN.fullmatch(cell):
        value = float(cell)
        return Numeral(value) if value == 0 or SMALLEST <= abs(value) <= LARGEST else None
    match = _FULL[decimal].fullmatch(plain(cell))
    if match is None:
        return None
    text, group = match["number"].replace(" ", ""), match["group"]
    unit = UNITS.get((match["unit"] or "").strip(" []()")) if match["unit"] else ""
    if unit is None or (group and text.lstrip("+-").startswith("0")):
        return None
    if group:
        text = text.replace(group, "")
    # "1,250" alone may be 1.250 typed the other way round; "1,250.5" and "1,250,000" can't.
    grouped = group in (",", ".") and decimal not in text and match["number"].count(group) == 1
    sign = "" if match["sign"] == "~" else match["sign"]
    return _bearable(Numeral(float(text.replace(decimal, ".")), sign, unit, grouped))


def _bearable(number: Numeral) -> Numeral | None:
    """The number, or None if it can't be on a size report (1e308 is a slip of the keyboard)."""
    return number if number.value == 0 or SMALLEST <= abs(number.value) <= LARGEST else None


_TOKEN = re.compile(r"(?<![\d.,])\d*(?:[.,]\d+)+(?![\d.,])")
_NUMBERISH = re.compile(
    r"[<>≤≥~+\-−(\[]?\s*[\d.,]*\d[\d.,]*(?:[eE][+-]?\d+)?\s*[^\d]{0,12}(?:[\d.,]*\d[\d.,]*\s*\D{0,10})?"
)
_AMBIGUOUS = re.compile(r"[1-9]\d{0,2}[.,]\d{3}")


def decimal_of(rows: Sequence[Sequence[Cell]], where: str) -> Decimal:
    """Whether a table writes its decimals with a comma or a point, from its numbers alone.

    Only rows with two or more numbers count, so that a version number or a date in the title block
    doesn't vote. "1,250" doesn't decide anything; "0,5", "12,34" and "1.250,0" do.

    Raises
    ------
    InputError
        If both are used, or if only numbers such as "1,250" are there.
    """
    votes: dict[str, str] = {}
    unclear: dict[str, str] = {}
    commas = any("," in cell for row in rows for cell in row if isinstance(cell, str))
    for row in rows:
        if votes and not commas:
            break  # without any comma there is nothing to weigh
        numbers = [c for c in row if not isinstance(c, str) or (0 < len(c) <= 40 and _NUMBERISH.fullmatch(c))]
        if len(numbers) < 2:
            continue
        for cell in numbers:
            if isinstance(cell, str) and ("," in cell or "." in cell):
                for token in _TOKEN.findall(cell):
                    _vote(token, votes, unclear)
    if len(votes) == 2:
        raise InputError(
            f"{where}: {shown(votes[','])} has a decimal comma and {shown(votes['.'])} a decimal point; "
            "use one of them, or say which with --decimal"
        )
    if votes:
        return "," if "," in votes else "."
    if "," in unclear:
        raise InputError(
            f"{where}: {shown(unclear[','])} can be a thousand or a decimal comma and no other number tells; "
            "say --decimal , or --decimal ."
        )
    if "." in unclear and _beside_integers(rows):
        raise InputError(
            f"{where}: {shown(unclear['.'])} stands among whole numbers and can be a thousand or a decimal point; "
            "say --decimal , or --decimal ."
        )
    return "."


def _vote(token: str, votes: dict[str, str], unclear: dict[str, str]) -> None:
    marks = [c for c in token if c in ",."]
    if len(set(marks)) == 2:
        votes.setdefault(marks[-1], token)
    elif len(marks) > 1:
        if re.fullmatch(r"\d{1,3}([.,]\d{3})+", token):
            votes.setdefault("." if marks[0] == "," else ",", token)
    elif _AMBIGUOUS.fullmatch(token):
        unclear.setdefault(marks[0], token)
    else:
        votes.setdefault(marks[0], token)


def _beside_integers(rows: Sequence[Sequence[Cell]]) -> bool:
    """Whether a column mixes "1.250" with whole numbers, so that the point may be a thousands sign."""
    width = max((len(row) for row in rows), default=0)
    for j in range(width):
        column = [row[j] for row in rows if j < len(row) and isinstance(row[j], str)]
        pointed = any(_AMBIGUOUS.fullmatch(str(c)) for c in column)
        if pointed and any(str(c).isdigit() and str(c) not in ("0", "100") for c in column):
            return True
    return False


def grouped_beside_decimals(numbers: Iterable[Numeral | None]) -> bool:
    """Whether a column holds "1,250" among numbers with decimals: then it may be a mistyped 1.250."""
    seen = [n for n in numbers if n is not None]
    return any(n.grouped for n in seen) and any(not n.value.is_integer() for n in seen)
