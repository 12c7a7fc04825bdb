"""Blocks of numbers under one another: further samples, or one table broken by a line of text."""

from itertools import pairwise

from psdflow.errors import InputError
from psdflow.reports.layout import Table
from psdflow.reports.samples import Sample


def inherit_headers(tables: list[Table]) -> None:
    """A further block without headers of its own has those of the block above, if it is as wide."""
    for before, table in pairwise(tables):
        wordless = not any(table.headers)
        if wordless and not table.across and not before.across and len(before.headers) == len(table.headers):
            table.headers = list(before.headers)


def no_broken_table(found: list[tuple[Table, Sample]]) -> None:
    """Refuse a table that goes on below a line of text as if it were another sample."""
    for (table, one), (below, two) in pairwise(found):
        if table is below or table.across or below.across or one.sizes.has_pan:
            continue
        sizes = [[c.low or c.high or 0.0 for c in s.sizes.cells if c.low or c.high] for s in (one, two)]
        finer, coarser = (two, one) if max(sizes[1]) <= min(sizes[0]) else (one, two)
        apart = max(sizes[1]) <= min(sizes[0]) or min(sizes[1]) >= max(sizes[0])
        if apart and (not below.title or below.headers == table.headers) and _goes_on(finer, coarser):
            raise InputError(
                f"{below.where(0)}: these sizes go on from the table above; remove the lines between if it is one table, "
                "else give each table its own pan row"
            )


def _goes_on(finer: Sample, coarser: Sample) -> bool:
    """Whether two tables can be one: shares in class, or cumulative values that run on from one to the other."""
    for role in ("under", "over"):
        if role in finer.quantities and role in coarser.quantities:
            last = [v for v in finer.quantities[role].values if v is not None]
            first = [v for v in coarser.quantities[role].values if v is not None]
            return bool(last and first) and (last[-1] <= first[0] if role == "under" else last[-1] >= first[0])
    return True
