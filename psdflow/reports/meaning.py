"""What the headers and the text around a table say of a sample: sieve or laser, basis, charge, names."""

import re
from pathlib import Path

import numpy as np

from psdflow.distribution import Quantity as Basis
from psdflow.errors import InputError
from psdflow.reports.apertures import nominal
from psdflow.reports.cells import Grid
from psdflow.reports.classes import Classes
from psdflow.reports.layout import Layout, Table
from psdflow.reports.numerals import MASSES, Decimal, numeral, plain
from psdflow.reports.quantities import Quantity
from psdflow.reports.report import KindOfReport, Options, amplified
from psdflow.reports.samples import Sample, strip_word
from psdflow.reports.words import BASIS, INPUT_MASS, LASER, LOT, RETAINED_OR_PASSING, SAMPLE, SIEVE, VOLUME

_MANY_CLASSES = 25  # more sizes than a stack of sieves has
_GRAMS = {"mg": 1e-3, "g": 1.0, "kg": 1e3}


def kind_of(
    layout: Layout, table: Table, sample: Sample, options: Options, grid: Grid
) -> tuple[KindOfReport, list[str]]:
    """Sieve or laser: from the user, the headers, the table, the text around, the sizes; in this order."""
    if options.kind:
        return options.kind, []
    headers = plain(" | ".join(table.headers))
    in_mass = any(q.role == "mass" and q.unit in MASSES for q in sample.quantities.values())
    sieve_table = bool(SIEVE.search(headers)) or in_mass or sample.sizes.unit == "astm"
    laser_table = bool(LASER.search(headers) or VOLUME.search(headers))
    if sieve_table != laser_table:
        return ("sieve" if sieve_table else "laser"), []
    around = plain(" | ".join([*layout.titles, *layout.fields, *layout.fields.values(), grid.sheet or "", table.title]))
    sieve_text, laser_text = bool(SIEVE.search(around)), bool(LASER.search(around))
    if sieve_text != laser_text:
        return ("sieve" if sieve_text else "laser"), []
    if RETAINED_OR_PASSING.search(headers) or any(c.kind == "below" and c.high is None for c in sample.sizes.cells):
        return "sieve", []
    edges = [c.low or c.high or 0.0 for c in sample.sizes.cells]
    on_sieves = np.mean([nominal(e) is not None for e in edges if e > 0]) > 0.9
    plain_shares = set(sample.quantities) <= {"share", "mass"} and sample.sizes.only_edges and not sample.sizes.edge
    guess: KindOfReport = "sieve" if on_sieves and len(edges) <= _MANY_CLASSES else "laser"
    if (guess == "sieve" and plain_shares) or (plain_shares and len(edges) <= _MANY_CLASSES):
        raise InputError(
            f"{grid.name}: nothing says whether {sample.sizes.table.column_name(sample.sizes.columns.first)} holds sieves (each share lies above its size) "
            "or upper edges of classes (each share lies below); say --kind sieve or --kind laser"
        )
    return guess, [f"nothing says how the sizes were measured; {guess} was assumed from the sizes"]


def basis_of(kind: KindOfReport, layout: Layout, table: Table, sample: Sample) -> Basis:
    if kind == "sieve":
        return "mass"
    columns = [plain(table.headers[q.column]) for q in sample.quantities.values()]
    around = [
        plain(f"{k} {v}")
        for k, v in layout.fields.items()
        if any(w in plain(k) for w in ("basis", "distribution", "verteilung", "weight", "quantity"))
    ]
    for text in [*columns, *around, *(plain(t) for t in layout.titles)]:
        for name in ("number", "area", "volume"):
            if BASIS[name].search(text):
                return name
    if any(
        q.unit in MASSES or BASIS["mass"].search(plain(table.headers[q.column])) for q in sample.quantities.values()
    ):
        return "mass"
    return "volume"


def basis_note(basis: Basis, classes: Classes) -> list[str]:
    """How much converting to volume amplifies an error of the coarse end against the fine one."""
    if basis not in ("number", "area"):
        return []
    held = classes.edges[np.flatnonzero(classes.shares > 0)] if np.any(classes.shares > 0) else classes.edges
    power = 3 if basis == "number" else 1
    factor = float((held.max() / held.min()) ** power)
    moved = amplified(basis, classes.edges, classes.shares, 0.05) if classes.shares.sum() > 0 else 0.0
    return [
        f"{basis} shares are converted to volume (size to the power {power}): an error in the coarsest class counts "
        f"{factor:.3g} times what it counts in the finest, and 5 % more width moves the median by {np.expm1(moved):.0%}; "
        "a volume or mass basis is better"
    ]


def charge_of(layout: Layout, sample: Sample, decimal: Decimal) -> float | None:
    """Mass weighed in, in the unit of the mass column, from a field or a row under the table."""
    quantity = next((q for q in sample.quantities.values() if q.unit in MASSES or q.role == "mass"), None)
    if quantity is None:
        return None
    into = _GRAMS.get(quantity.unit or "g", 1.0)
    for row, kind in sample.sizes.footers:
        number = numeral(sample.sizes.table.rows[row][quantity.column], decimal) if kind == "input" else None
        if number is not None:
            return number.value * _GRAMS.get(number.unit or quantity.unit, 1.0) / into
    field = _mass_field(layout, decimal)
    return None if field is None else field[0] * _GRAMS.get(field[1] or quantity.unit, 1.0) / into


def _mass_field(layout: Layout, decimal: Decimal) -> tuple[float, str] | None:
    """The mass weighed in as a field states it, and its unit or ""; a bare "charge" may be a lot number."""
    for key, value in layout.fields.items():
        name, _, unit = plain(key).replace("[", "(").partition("(")
        name, unit = name.strip(), unit.strip("]) ")
        number = numeral(value.strip(), decimal) or numeral(" ".join(value.split()[:2]), decimal)
        match = INPUT_MASS.match(name)
        if match and number and match.end() == len(name):
            unit = number.unit or unit
            if unit in MASSES or name != "charge":
                return number.value, unit if unit in MASSES else ""
    return None


def sample_mass_of(
    layout: Layout, decimal: Decimal, quantity: Quantity, charge: float | None, total: float
) -> float | None:
    """Mass of the sample in kg: what was weighed in, else what the fractions weigh, else a field with a unit."""
    if quantity.role == "mass" and quantity.unit in MASSES:
        return (charge or total) * _GRAMS[quantity.unit] / 1000
    field = _mass_field(layout, decimal)
    return None if field is None or not field[1] or field[0] <= 0 else field[0] * _GRAMS[field[1]] / 1000


def field_of(fields: dict[str, str], pattern: re.Pattern[str], masses: bool = False) -> str:
    """The value of the first field whose name is one of a pattern's words, or "".

    A mass ("Charge: 100 g") is no name, unless ``masses``.
    """
    for key, value in fields.items():
        name = plain(key).split("(")[0].split("[")[0].strip(" .:")
        if pattern.fullmatch(name):
            words = value.split()
            is_mass = len(words) == 2 and words[1] in MASSES
            if masses or not is_mass:
                return value
    return ""


def names_of(
    grid: Grid, layout: Layout, table: Table, sample: Sample, alone: bool, many_sheets: bool
) -> tuple[str, str]:
    """Sample and lot: column header, block title, fields, sheet, file name; the nearest to the numbers first."""
    stem = Path(grid.source).stem
    name, lot = strip_word(sample.name)
    title, title_lot = strip_word(table.title)
    field_name, field_lot = field_of(layout.fields, SAMPLE), field_of(layout.fields, LOT)
    sheet = grid.sheet if many_sheets and grid.sheet else ""
    if alone and not many_sheets:
        name = field_name or name or field_lot or stem
        return name, sample.lot or field_lot or lot or name
    own = name or title
    name = own or field_name or sheet or stem
    lot = sample.lot or lot or ("" if own else title_lot) or (field_lot if alone else "") or name
    return name, lot
