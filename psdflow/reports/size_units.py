"""Which unit a size column is in: from the user, its header, its cells, or (with a warning) its numbers."""

from psdflow.errors import InputError
from psdflow.reports.apertures import ASTM_NUMBERS, Size
from psdflow.reports.layout import SizeColumns, Table
from psdflow.reports.numerals import LENGTHS
from psdflow.reports.words import Heading, heading

UNIT_NAMES = {"um": "µm", "astm": "ASTM E11 number", "in": "inch"}
MICROMETRES_FROM = 20.0  # a size column without a unit is in µm if it goes at least this far: 20 mm is no powder


def unit_of(table: Table, columns: SizeColumns, sizes: list[Size], size_unit: str | None) -> tuple[str, list[str]]:
    """Unit of a size column and what to warn of.

    Raises
    ------
    InputError
        If mesh numbers don't name their series, or nothing tells the unit.
    """
    headings = [heading(table.headers[c]) for c in columns.all]
    header_unit = next((h.unit for h in headings if h.unit in LENGTHS), "")
    bare = [s for s in sizes if not s.unit and (s.low or s.high)]
    cell_units = {s.unit for s in sizes if s.unit}
    if size_unit:
        return size_unit, []
    if "mesh" in cell_units:
        if any("astm" in h.text or "us " in h.text or "u.s." in h.text for h in headings):
            return "astm", []
        raise InputError(
            f"{table.where(0, columns.first)}: sizes are mesh numbers, which mean other apertures in each series; "
            "give apertures, or say --size-unit astm if they are ASTM E11 numbers"
        )
    if header_unit:
        return header_unit, []
    if not bare:
        return next(iter(cell_units), "um"), []
    if any(_astm_heading(h) for h in headings):
        if all(s.low is None or s.low in (0, 3.5) or f"{s.low:g}" in ASTM_NUMBERS for s in bare):
            return "astm", []
    elif len(cell_units) == 1 and len(bare) < len(sizes) / 2:
        return next(iter(cell_units)), []
    largest = max(max(s.low or 0.0, s.high or 0.0) for s in bare)
    numbered = any(
        w in h.text.replace(".", " ").split() for h in headings for w in ("no", "nr", "mesh", "number", "nummer", "#")
    )
    if largest >= MICROMETRES_FROM and not numbered and not any(_astm_heading(h) for h in headings):
        return "um", [
            f"{table.column_name(columns.first)} has no unit; µm was assumed, since {largest:g} mm would be no powder"
        ]
    raise InputError(
        f"{table.where(0, columns.first)}: {table.column_name(columns.first)} has no unit (sizes up to {largest:g}); "
        'write it into the header, like "size (µm)", or say --size-unit um, mm, nm or astm'
    )


def _astm_heading(h: Heading) -> bool:
    return "astm" in h.text or h.text.startswith(("us ", "u.s."))
