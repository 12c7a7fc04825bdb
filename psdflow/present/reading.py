"""What was understood from a report, as a page."""

from rich.console import Group, RenderableType
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

from psdflow.present.numerals import digits
from psdflow.reports import Report


def understood(report: Report) -> RenderableType:
    """Where it came from, which column served as what, the classes, the warnings."""
    where = report.source + (f", sheet {report.sheet}" if report.sheet else "")
    head = Text.assemble((report.lot, "bold underline"), (f"  {where} · {report.kind} · {report.quantity}", "dim"))
    facts = [f"{key}: {value}" for key, value in {**report.understood, **report.fields}.items()]
    table = Table(box=None, pad_edge=False, padding=(0, 3, 0, 0), header_style="dim")
    for name in ("from µm", "to µm", "share %", "finer than, %"):
        table.add_column(name, justify="right")
    under = report.below
    if report.below > 0:
        table.add_row("pan", digits(report.edges[0] * 1e6), f"{report.below * 100:.3f}", f"{under * 100:.3f}")
    for low, high, share in zip(report.edges[:-1], report.edges[1:], report.shares, strict=True):
        under += share
        table.add_row(digits(low * 1e6, 4), digits(high * 1e6, 4), f"{share * 100:.3f}", f"{under * 100:.3f}")
    if report.above > 0:
        table.add_row(digits(report.edges[-1] * 1e6), "open", f"{report.above * 100:.3f}", "100.000")
    warnings = [Text(f"- {line}", style="yellow") for line in report.warnings]
    parts: list[RenderableType] = [head, *(Padding(Text(fact), (0, 0, 0, 2)) for fact in facts)]
    parts += [Padding(table, (0, 0, 0, 2)), *(Padding(line, (0, 0, 0, 2)) for line in warnings), Text("")]
    return Group(*parts)
