"""One cell -> a size: aperture, class "45-63", "<38", ">500", "No. 200", the pan. Also the nominal sieve series."""

import re
from bisect import bisect_left
from functools import lru_cache
from typing import Literal, NamedTuple

from psdflow.reports.numerals import LENGTHS, UNITS, Cell, Decimal, numeral, plain
from psdflow.reports.words import PAN

# ASTM E11 designations and apertures in µm (from memory, in the tests equal to the table in `fluids` 1.3).
ASTM_NUMBERS: dict[str, float] = {
    "3 1/2": 5600, "4": 4750, "5": 4000, "6": 3350, "7": 2800, "8": 2360, "10": 2000, "12": 1700, "14": 1400, "16": 1180,
    "18": 1000, "20": 850, "25": 710, "30": 600, "35": 500, "40": 425, "45": 355, "50": 300, "60": 250, "70": 212,
    "80": 180, "100": 150, "120": 125, "140": 106, "170": 90, "200": 75, "230": 63, "270": 53, "325": 45, "400": 38,
    "450": 32, "500": 25, "635": 20,
}  # fmt: skip
ASTM_INCHES: dict[str, float] = {
    "5": 125000, "4": 100000, "3 1/2": 90000, "3": 75000, "2 1/2": 63000, "2": 50000, "1 3/4": 45000, "1 1/2": 37500,
    "1 1/4": 31500, "1": 25000, "7/8": 22400, "3/4": 19000, "5/8": 16000, "1/2": 12500, "7/16": 11200, "3/8": 9500,
    "5/16": 8000, "1/4": 6300,
}  # fmt: skip

# Nominal apertures in µm: ISO 565 R20/3, R20 and R40/3 with the small sizes under 36 µm, and ASTM E11 (from memory, in the
# tests equal to the tables in `fluids` 1.3).
NOMINAL_UM: tuple[float, ...] = (
    20, 25, 32, 36, 38, 40, 45, 50, 53, 56, 63, 71, 75, 80, 90, 100, 106, 112, 125, 140, 150, 160, 180, 200, 212, 224, 250,
    280, 300, 315, 355, 400, 425, 450, 500, 560, 600, 630, 710, 800, 850, 900, 1000, 1120, 1180, 1250, 1400, 1600, 1700,
    1800, 2000, 2240, 2360, 2500, 2800, 3150, 3350, 3550, 4000, 4500, 4750, 5000, 5600, 6300, 6700, 7100, 8000, 9000, 9500,
    10000, 11200, 12500, 13200, 14000, 16000, 18000, 19000, 20000, 22400, 25000, 26500, 28000, 31500, 35500, 37500, 40000,
    45000, 50000, 53000, 56000, 63000, 71000, 75000, 80000, 90000, 100000, 106000, 112000, 125000,
)  # fmt: skip
SERIES_TOLERANCE = 0.025  # old and rounded apertures (847, 841, 833 for 850 µm) lie within this of a nominal one

# Metres in a unit as a divisor: 847 / 1e6 is the nearest number to 0.000847, 847 * 1e-6 isn't always.
PER_METRE = {"um": 1e6, "nm": 1e9, "mm": 1e3, "cm": 1e2, "m": 1.0}

Kind = Literal["edge", "class", "below", "above"]


class Size(NamedTuple):
    """What a size cell says, numbers as written.

    ``edge``: ``low`` is the number. ``class``: between ``low`` and ``high``. ``below``: under ``high`` (None: the
    pan). ``above``: over ``low``. ``unit`` is a length unit, "astm", "mesh" or "". ``minus`` marks "-38",
    which is a class of the trade's notation or a mistyped sign.
    """

    kind: Kind
    low: float | None
    high: float | None
    unit: str = ""
    minus: bool = False
    grouped: bool = False


_NUMBER = r"\d[\d.,']*(?:e[+-]?\d+)?"
_LENGTH_WORD = r"(?: ?(um|nm|mm|cm|m|microns?|in\.?|\"))?"
_RANGE = re.compile(
    rf"[\[(]?({_NUMBER}){_LENGTH_WORD} ?(?:-|\.\.\.?|/|to|bis|a|et|y|and|;|, | - )+ ?<? ?({_NUMBER}){_LENGTH_WORD} ?[\])]?"
)
_MINUS_PLUS = re.compile(rf"- ?({_NUMBER}){_LENGTH_WORD} ?[/,]? ?\+ ?({_NUMBER}){_LENGTH_WORD}")
_PLUS_MINUS = re.compile(rf"\+ ?({_NUMBER}){_LENGTH_WORD} ?[/,]? ?- ?({_NUMBER}){_LENGTH_WORD}")
_BETWEEN = re.compile(rf"({_NUMBER}){_LENGTH_WORD} ?< ?[xd] ?< ?({_NUMBER}){_LENGTH_WORD}")
_BELOW = re.compile(
    r"(?:<|under|below|less than|smaller than|finer than|minus|passing|through|undersize|unter|kleiner(?: als)?|bis|inferieure? a|inf\.? a|passant|moins de"
    rf"|menor(?: que| a)?|pasa|pasante|pan ?<?|fines? ?<?|boden ?<?|fond ?<?|fondo ?<?)(?: ?[xd] ?<)? ?\(?({_NUMBER}){_LENGTH_WORD}\)?"
)
_ABOVE = re.compile(
    r"(?:>|\+|over|above|greater than|larger than|coarser than|plus|oversize|uber|ueber|groesser(?: als)?|grosser(?: als)?|superieure? a|sup\.? a|plus de"
    rf"|mayor(?: que| a)?) ?({_NUMBER}){_LENGTH_WORD}"
)
_MINUS = re.compile(rf"- ?({_NUMBER}){_LENGTH_WORD}")
_ASTM = re.compile(
    r"(?:astm |us |u\.s\. )?(?:e ?11 )?(?:sieve )?(?:no\.?|nr\.?|n°|nº|#|num\.?) ?(\d{1,3}(?: 1/2)?)(?: ?(?:us|astm|\(astm\)|sieve))?"
)
_MESH = re.compile(r"(\d{1,3}) ?(?:mesh|#)|mesh ?(\d{1,3})")
_INCH = re.compile(r"(\d{1,2}|\d/\d{1,2}|\d \d/\d{1,2}) ?(?:in\.?|inch|\"|zoll|'')")


@lru_cache(maxsize=8192, typed=True)
def size_of(cell: Cell, decimal: Decimal) -> Size | None:
    """Read a size cell, or None if it says no size."""
    number = numeral(cell, decimal)
    if number is not None and (not number.unit or number.unit in LENGTHS):
        if isinstance(cell, str) and cell[:1] in "+-−–<>≤≥":
            if cell[0] == "+" or number.sign == ">":
                return Size("above", number.value, None, number.unit, grouped=number.grouped)
            if number.sign == "<":
                return Size("below", None, number.value, number.unit, grouped=number.grouped)
            if cell[0] in "-−–" and number.value < 0:
                return Size("below", None, -number.value, number.unit, minus=True, grouped=number.grouped)
        return Size("edge", number.value, None, number.unit, grouped=number.grouped)
    if not isinstance(cell, str) or not cell or len(cell) > 60 or number is not None:
        return None
    text = plain(cell)
    return _pan(text, decimal) or _numbered(text) or _open_or_class(text, decimal)


def _pan(text: str, decimal: Decimal) -> Size | None:
    match = PAN.match(text)  # one of the words for the pan, perhaps with more behind it
    rest = text[match.end() :].strip(" .:()[]-_") if match else ""
    if match and (not rest or PAN.fullmatch(rest) or rest in ("mm", "um", "0", "0 mm", "0 um")):
        return Size("below", None, None)
    # "pan (<38)", "pan < 38 µm": the pan with the size it lies under
    return _open_or_class(rest, decimal) if match and rest[:1] == "<" else None


def _numbered(text: str) -> Size | None:
    if match := _ASTM.fullmatch(text):
        value = ASTM_NUMBERS.get(match[1])
        return None if value is None else Size("edge", float(match[1].split()[0]), None, "astm")
    if match := _MESH.fullmatch(text):
        return Size("edge", float(match[1] or match[2]), None, "mesh")
    if (match := _INCH.fullmatch(text)) and match[1] in ASTM_INCHES:
        return Size("edge", ASTM_INCHES[match[1]], None, "um")
    return None


def _open_or_class(text: str, decimal: Decimal) -> Size | None:
    for pattern in (_MINUS_PLUS, _PLUS_MINUS, _BETWEEN, _RANGE):
        if match := pattern.fullmatch(text):
            one, other = numeral(match[1].rstrip("."), decimal), numeral(match[3].rstrip("."), decimal)
            if one is None or other is None:
                return None
            unit = UNITS.get((match[2] or match[4] or "").rstrip("."), "")
            if match[2] and match[4] and UNITS.get(match[2]) != UNITS.get(match[4]):
                return None
            return Size("class", min(one.value, other.value), max(one.value, other.value), unit)
    for kind, pattern in (("below", _BELOW), ("above", _ABOVE), ("minus", _MINUS)):
        if match := pattern.fullmatch(text):
            number = numeral(match[1], decimal)
            if number is None:
                return None
            unit = UNITS.get((match[2] or "").rstrip("."), "")
            if kind == "above":
                return Size("above", number.value, None, unit, grouped=number.grouped)
            return Size("below", None, number.value, unit, minus=kind == "minus", grouped=number.grouped)
    return None


def in_metres(value: float, unit: str) -> float:
    """A length in metres; ``unit`` is one of `LENGTHS` or "astm"; ValueError for an unknown ASTM number."""
    if unit == "astm":
        key = "3 1/2" if value in (3, 3.5) else f"{value:g}"
        if key not in ASTM_NUMBERS:
            raise ValueError(f"No. {value:g} is no sieve of ASTM E11")
        return ASTM_NUMBERS[key] / 1e6
    if unit == "phi":
        return float(2.0**-value) / 1e3 if -20 <= value <= 20 else float("nan")
    return value * 0.0254 if unit == "in" else value / PER_METRE[unit]


def nominal(aperture: float) -> float | None:
    """The nominal aperture (m) of ISO 565 or ASTM E11 nearest to ``aperture`` (m), None if none is within 2.5 %."""
    size = aperture * 1e6
    at = bisect_left(NOMINAL_UM, size)
    near = min(NOMINAL_UM[max(0, at - 1) : at + 1], key=lambda n: abs(n - size))
    return near / 1e6 if abs(near / size - 1) <= SERIES_TOLERANCE else None
