"""A sweep as a page and as csv."""

import csv
from pathlib import Path

from rich.console import Group, RenderableType
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

from psdflow.present.numerals import SWEPT, digits
from psdflow.present.sheet import replacing
from psdflow.sweep import Point, Sweep


def sweep_page(swept: Sweep) -> RenderableType:
    """The operating window first, then the table; what left a method's range is named in every row."""
    _, unit, factor, offset = SWEPT[swept.over]
    table = Table(box=None, pad_edge=False, padding=(0, 2, 0, 0), header_style="dim")
    heads = (f"{swept.over}\n{unit}", "u / u_mf", "height\nm", "carried\nkg/h", "lost\nkg/h")
    for head in heads:
        table.add_column(head, justify="right", no_wrap=True)
    table.add_column("regime")
    table.add_column("outside its range")
    for point in swept.points:
        shown = digits(point.value * factor + offset)
        hourly = [digits(None if rate is None else rate * 3600) for rate in (point.carryover_rate, point.loss_rate)]
        outside = ", ".join(point.outside)
        table.add_row(shown, digits(point.velocity_ratio), digits(point.height), *hourly, point.regime, outside)
    parts: list[RenderableType] = [Text(swept.lot, style="bold underline")]
    if swept.window is not None:
        words = swept.window.words
        parts.append(Padding(Text(f"{words[0].upper()}{words[1:]}."), (0, 0, 1, 2)))
    held = "" if swept.over == "velocity" else "The superficial velocity at bed conditions is held."
    return Group(*parts, Padding(table, (0, 0, 0, 2)), Text(held, style="dim"))


def write_sweep_csv(swept: Sweep, path: Path) -> None:
    """One row a point, SI units; empty where the duty lacks what a column needs."""
    with replacing(path) as file:
        out = csv.writer(file, lineterminator="\n")
        out.writerow([swept.over, *Point._fields[1:]])
        for point in swept.points:
            out.writerow([*point[:-1], " ".join(point.outside)])
