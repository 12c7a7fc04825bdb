"""Number columns of a table: their values, checked, and what they count, from the header and the numbers."""

from dataclasses import dataclass

import numpy as np

from psdflow.errors import InputError, shown
from psdflow.reports.edges import Sizes
from psdflow.reports.layout import Table, not_detected
from psdflow.reports.numerals import MASSES, Decimal, Numeral, grouped_beside_decimals, numeral
from psdflow.reports.words import Heading, heading

TOTAL_WARN = 0.005  # how far a total may be from 100 % before it is said …
TOTAL_REFUSE = 0.05  # … and before the table is refused
_MASS_IN_GRAMS = {"mg": 1e-3, "g": 1.0, "kg": 1e3}


@dataclass
class Quantity:
    """A column of numbers, fine to coarse along its sizes.

    ``role`` is "mass", "share", "under", "over", "gross" or "tare"; ``scale`` the number that means everything
    (100, 1, or 0 where the total of the masses does). A value is None where the cell is empty.
    """

    table: Table
    column: int
    role: str
    scale: float
    unit: str
    values: list[float | None]
    notes: list[str]

    @property
    def described(self) -> str:
        """Column and reading in words."""
        words = {
            "mass": "amount in each class",
            "share": "share in each class",
            "under": "cumulative, finer",
            "over": "cumulative, coarser",
            "gross": "gross mass",
            "tare": "empty mass",
        }[self.role]
        scale = {100.0: ", %", 1.0: ", fraction"}.get(self.scale, f", {self.unit}" if self.unit in MASSES else "")
        return f"{self.table.column_name(self.column)} ({words}{scale})"

    def where(self, sizes: Sizes, index: int) -> str:
        """File, row and column of a value, for messages."""
        return self.table.where(sizes.rows[index], self.column)


_WORD = {
    "mass": "mass",
    "share": "share",
    "under": "cumulative share",
    "over": "cumulative share",
    "gross": "gross mass",
    "tare": "empty mass",
}


def read_quantity(sizes: Sizes, column: int, decimal: Decimal, role: str | None = None) -> Quantity | None:
    """Read a column and find what it counts; None if neither the header nor the numbers tell.

    ``role`` is the user's own word for it.

    Raises
    ------
    InputError
        Where the header says what the column is and a value can't be that.
    """
    head = heading(sizes.table.headers[column])
    cells = [sizes.table.rows[i][column] for i in sizes.rows]
    numbers = [numeral(cell, decimal) for cell in cells]
    if not any(numbers):
        return None
    cell_units = {n.unit for n in numbers if n and n.unit}
    unit = head.unit or (next(iter(cell_units)) if len(cell_units) == 1 else "")
    if len(cell_units) > 1 and not cell_units <= set(MASSES):
        return None
    found = (role, _scale(numbers, unit)) if role in ("under", "over", "share") else _reading(head, numbers, unit)
    if role in ("mass", "gross", "tare"):
        found = (role, 0.0)
    if found is None or found[0] is None:
        return None
    result = Quantity(sizes.table, column, found[0], found[1], unit, [], [])
    if found[0] == "mass" and not unit and role is None and head.role == "retained":
        result.notes.append(f"{sizes.table.column_name(column)} has no unit and was read as masses")
    result.values = _values(result, sizes, cells, numbers)
    if result.role in ("under", "over", "share"):
        _check_scale(result)
    return result


def _reading(head: Heading, numbers: list[Numeral | None], unit: str) -> tuple[str, float] | None:
    """Role and scale of a column from its header's words and its numbers (fine to coarse)."""
    values = np.array([n.value for n in numbers if n is not None])
    in_mass = unit in MASSES
    if head.role in ("mass", "gross", "tare"):
        return (head.role, 0.0) if unit not in ("%", "1") or head.role != "mass" else ("share", _scale(numbers, unit))
    if in_mass and head.role in ("", "share", "retained"):
        return "mass", 0.0
    scale = 0.0 if in_mass else _scale(numbers, unit)
    # Fine classes can each hold under 1 %: what they add up to tells a percentage from a fraction.
    share_scale = 100.0 if scale == 1.0 and unit != "1" and values.sum() > 10 else scale
    rising, falling = bool(np.all(np.diff(values) >= 0)), bool(np.all(np.diff(values) <= 0))
    total = float(values.sum())
    if head.role in ("under", "over", "share"):
        return head.role, share_scale if head.role == "share" else scale
    if head.role == "cumulative":
        # Which way it runs: most steps decide, so that one wrong number is found as a fall later.
        return ("under" if values[-1] >= values[0] else "over"), scale
    defects = {"share": abs(total / share_scale - 1)} if scale else {}
    if scale and rising and values[-1] > values[0] and head.role != "retained":
        defects["under"] = abs(float(values[-1]) / scale - 1)
    if scale and falling and values[0] > values[-1]:
        defects["over"] = abs(float(values[0]) / scale - 1)
    best = min(defects, key=lambda k: defects[k], default="")
    if best and defects[best] <= TOTAL_REFUSE:
        return best, share_scale if best == "share" else scale
    if head.role == "retained":
        if unit in ("%", "1"):
            return ("over" if falling and total > scale else "share"), scale
        return ("over", scale) if falling and total > 1.5 * scale and max(values) <= scale * 1.005 else ("mass", 0.0)
    return ("share", scale) if unit in ("%", "1") and not rising and not falling else None


def _scale(numbers: list[Numeral | None], unit: str) -> float:
    """100 or 1: what everything is in this column."""
    if unit in ("%", "1"):
        return 100.0 if unit == "%" else 1.0
    values = [n.value for n in numbers if n is not None]
    return 1.0 if max(values) <= 1.005 and sum(values) > 0 else 100.0


def _values(
    quantity: Quantity, sizes: Sizes, cells: list[str | float], numbers: list[Numeral | None]
) -> list[float | None]:
    word = _WORD[quantity.role]
    if grouped_beside_decimals(numbers):
        k = next(k for k, n in enumerate(numbers) if n is not None and n.grouped)
        raise InputError(
            f"{quantity.where(sizes, k)}: {word} {shown(cells[k])} may be a thousand or a decimal; write it without a thousands separator"
        )
    values: list[float | None] = []
    for k, (cell, number) in enumerate(zip(cells, numbers, strict=True)):
        if number is not None and not number.sign and not number.unit and number.value >= 0:
            values.append(number.value)
            continue
        where = quantity.where(sizes, k)
        if number is None:
            values.append(_no_number(quantity, where, word, cell))
            continue
        if number.value < 0 or number.sign == ">":
            raise InputError(
                f"{where}: {word} is {shown(cell)}; a {word} can't be {'negative' if number.value < 0 else 'open upwards'}. "
                f"Check the {'sign' if number.value < 0 else 'number'}, or mark the row as a comment with #."
            )
        value = number.value
        if number.unit and quantity.unit and (number.unit in MASSES) != (quantity.unit in MASSES):
            raise InputError(
                f"{where}: {word} is {shown(cell)} in a column in {quantity.unit}; the same unit is expected"
            )
        if number.unit in MASSES:
            value *= _MASS_IN_GRAMS[number.unit] / _MASS_IN_GRAMS.get(quantity.unit, 1.0)
        elif number.unit and number.unit != "%":
            raise InputError(f"{where}: {word} is {shown(cell)}; a {word} with the unit {number.unit} is not expected")
        if number.sign == "<":
            value /= 2
            quantity.notes.append(f"{where.split(', ', 1)[-1]}: {shown(cell)} was taken as half of it, {value:g}")
        values.append(value)
    return values


def _no_number(quantity: Quantity, where: str, word: str, cell: str | float) -> float | None:
    if cell == "":
        return None
    if not_detected(cell):
        quantity.notes.append(f"{where.split(', ', 1)[-1]}: {shown(cell)} was taken as nothing found")
        return 0.0 if quantity.role in ("mass", "share") else None
    reason = f"a {word} must be a number"
    if isinstance(cell, str) and len(cell) >= 8 and cell[4:5] == "-" and cell[:4].isdigit():
        reason = "it is a date, probably a mistyped number"
    elif isinstance(cell, str) and cell.startswith("="):
        reason = "the formula was never computed; open and save the workbook first"
    raise InputError(f"{where}: {word} is {shown(cell)}; {reason}. Correct it, or mark the row as a comment with #.")


def _check_scale(quantity: Quantity) -> None:
    """Refuse percentages that are fractions and the reverse, where the header (or cells) say which."""
    known = [v for v in quantity.values if v is not None]
    everything = sum(known) if quantity.role == "share" else max(known, default=0.0)
    where = f"{quantity.table.where(0).rsplit(', row', 1)[0]}: {quantity.table.column_name(quantity.column)}"
    if quantity.unit == "%" and 0.9 <= everything <= 1.1:
        raise InputError(
            f"{where} is in % but {'adds up' if quantity.role == 'share' else 'goes up'} to {everything:.4g}; "
            "write percentages, or head the column with [-] if they are fractions"
        )
    if quantity.unit == "1" and 90 <= everything <= 110:
        raise InputError(
            f"{where} is headed as a fraction but {'adds up' if quantity.role == 'share' else 'goes up'} to {everything:.4g}; "
            "write fractions, or head the column with %"
        )
    if (
        quantity.unit == ""
        and quantity.scale == 1.0
        and quantity.role == "share"
        and everything < 0.9
        and len(known) > 1
    ):
        raise InputError(f"{where} adds up to {everything:.4g}; 100 (percent) or 1 (fractions) is expected")
