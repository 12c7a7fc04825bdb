"""What was understood from a report, as a page."""

from collections.abc import Sequence

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


def fitted(report: Report) -> RenderableType:
    """The published distributions fitted to a report, the best first."""
    from psdflow.sizes.fits import fit_distribution

    table = Table(box=None, pad_edge=False, padding=(0, 2, 0, 0), header_style="dim")
    for name in ("fitted model", "size", "shape", "max miss %", "r²"):
        table.add_column(name, no_wrap=True)
    for fit in fit_distribution(report.distribution):
        model = fit.model
        table.add_row(
            model.name,
            f"{model.size_name} = {digits(fit.size * 1e6)} µm",
            f"{model.shape_name} = {digits(fit.shape)}",
            f"{fit.max_error * 100:.1f}",
            f"{fit.r_squared:.4f}",
        )
    return Group(Padding(table, (0, 0, 0, 2)), Text(""))


def failed(failures: Sequence[tuple[str, str]]) -> RenderableType:
    """The files of a folder that couldn't be read, and why."""
    table = Table(box=None, pad_edge=False, padding=(0, 3, 0, 0), header_style="bold")
    table.add_column(f"not read ({len(failures)})", no_wrap=True)
    table.add_column("why", overflow="fold")
    for name, why in failures:
        table.add_row(Text(name), Text(why.removeprefix(f"{name}: ").removeprefix(f"{name}, ")))
    return table
