"""Which columns of a table are sizes and which are quantities, from the user, the headers and the numbers."""

import re
from itertools import pairwise

import numpy as np

from psdflow.errors import InputError, shown
from psdflow.reports.apertures import size_of
from psdflow.reports.cells import letters
from psdflow.reports.edges import Sizes, looks_like_sizes, read_sizes
from psdflow.reports.layout import SizeColumns, Table, undecided
from psdflow.reports.numerals import LENGTHS, Decimal, Numeral, numeral, plain
from psdflow.reports.quantities import Quantity, read_quantity
from psdflow.reports.report import Options
from psdflow.reports.samples import Sample, grouped
from psdflow.reports.words import STATISTIC, heading

SIZE_ROLES = ("size", "lower", "upper", "mid")
QUANTITY_ROLES = ("mass", "share", "under", "over")


def recognise(table: Table, options: Options, decimal: Decimal) -> list[Sample]:
    """Samples of one table.

    Raises
    ------
    InputError
        If no size column or no quantity column can be told; the message lists what was seen.
    """
    if options.columns:
        sizes, columns = _said(table, options.columns)
        chosen = read_sizes(table, sizes, decimal, options.size_unit)
        found = [_said_quantity(chosen, j, decimal, role) for role, j in columns]
        return grouped(chosen, found, said=True)
    units = _size_columns(table, decimal, options)
    samples: list[Sample] = []
    taken = {c for unit in units for c in unit.all}
    for columns_of_size in units:
        chosen = read_sizes(table, columns_of_size, decimal, options.size_unit)
        quantities: list[Quantity] = []
        unused: list[int] = []
        unsure: list[int] = []
        for j in columns_of_size.span:
            if j in taken or _is_blank(table, j):
                continue
            head = heading(table.headers[j])
            if head.size and head.unit:
                continue  # another size, such as a class middle
            if head.unused and not head.role:
                unused.append(j)
                continue
            quantity = read_quantity(chosen, j, decimal)
            if quantity is not None and (head.text or _mostly_numbers(table, j, decimal, of_all=True)):
                quantities.append(quantity)
            elif _mostly_numbers(table, j, decimal):
                (unsure if head.unit or head.role or head.text else unused).append(j)
        if not quantities:
            raise undecided(table, "no column could be recognised as a mass, a share or a cumulative share")
        for j in unsure:
            head = heading(table.headers[j])
            if (
                head.unit
                or head.role
                or any(
                    not heading(table.headers[q.column]).unit + heading(table.headers[q.column]).role
                    for q in quantities
                )
            ):
                raise undecided(
                    table, f"{table.column_name(j)} is neither a share that adds up to 100 % nor cumulative"
                )
            unused.append(j)
        unused.sort()
        new = grouped(chosen, quantities)
        if unused:
            names = ", ".join(table.column_name(j) for j in unused[:6])
            for sample in new:
                sample.notes.append(f"not used: {names}")
        samples += new
    return samples


def _is_blank(table: Table, column: int) -> bool:
    return all(row[column] == "" for row in table.rows)


def _mostly_numbers(table: Table, column: int, decimal: Decimal, of_all: bool = False) -> bool:
    """Whether most filled cells (or, ``of_all``, most cells) of a column are numbers."""
    cells = [row[column] for row in table.rows if of_all or row[column] != ""]
    return sum(numeral(c, decimal) is not None for c in cells) >= 0.6 * len(cells)


def _size_columns(table: Table, decimal: Decimal, options: Options) -> list[SizeColumns]:
    """Size columns, each with the range of columns it rules: one set, or several side by side."""
    width = len(table.headers)
    named: list[int] = []
    unnamed: list[int] = []
    for j in range(width):
        if _is_blank(table, j):
            continue
        head = heading(table.headers[j])
        if head.role or head.unit in ("%", "g", "mg", "kg", "1"):
            continue
        mostly, strict, explicit = looks_like_sizes(table, j, decimal)
        if mostly and (explicit or (head.size and (j == 0 or head.unit in LENGTHS or head.edge or strict))):
            named.append(j)
        elif mostly and strict:
            unnamed.append(j)
    if not named:
        if options.size_unit and unnamed:
            named = unnamed[:1]
        else:
            raise undecided(table, "no column could be recognised as the sizes")
    groups: list[list[int]] = []
    for j in named:
        between = range(groups[-1][-1] + 1, j) if groups else range(0)
        if groups and all(_is_blank(table, b) or not _mostly_numbers(table, b, decimal) for b in between):
            groups[-1].append(j)
        else:
            groups.append([j])
    starts = [g[0] for g in groups] + [width]
    sets = []
    for k, group in enumerate(groups):
        columns = _one_set(table, group, decimal)
        columns.span = range(starts[k] if k else 0, starts[k + 1])
        sets.append(columns)
    return sets


def _one_set(table: Table, columns: list[int], decimal: Decimal) -> SizeColumns:
    """What neighbouring size columns are to each other: lower and upper edges, or the same size twice."""
    heads = {j: heading(table.headers[j]) for j in columns}
    by_edge: dict[str, list[int]] = {"upper": [], "lower": [], "mid": [], "": []}
    for j in columns:
        by_edge[heads[j].edge].append(j)
    lowers, uppers = by_edge["lower"], by_edge["upper"]
    if len(lowers) == 1 and len(uppers) == 1:
        return SizeColumns(lower=lowers[0], upper=uppers[0])
    if len(columns) == 1:
        only = columns[0]
        return SizeColumns(mid=only) if heads[only].edge == "mid" else SizeColumns(size=only)
    numbers = {j: [numeral(row[j], decimal) for row in table.rows] for j in columns}
    pair = _joining(columns, numbers)
    if pair:
        return SizeColumns(lower=pair[0], upper=pair[1])
    with_unit = [j for j in columns if heads[j].unit in LENGTHS]
    if len(with_unit) == 1:
        return SizeColumns(size=with_unit[0])
    rest = with_unit or columns
    if len(rest) > 1 and all(_proportional(numbers[rest[0]], numbers[j]) for j in rest[1:]):
        return SizeColumns(size=rest[0])
    if len(lowers) + len(uppers) == 1:
        return SizeColumns(size=(lowers + uppers)[0])
    raise undecided(table, "several columns may be the sizes")


def _joining(columns: list[int], numbers: dict[int, list[Numeral | None]]) -> tuple[int, int] | None:
    """Two columns where each class ends at the next one's beginning, whatever their headers."""
    for a, b in pairwise(columns):
        one = np.array([getattr(n, "value", np.nan) for n in numbers[a]])
        two = np.array([getattr(n, "value", np.nan) for n in numbers[b]])
        if len(one) < 3:
            continue
        for x, y, order in ((one, two, (a, b)), (two, one, (b, a))):
            down, up = np.abs(y[1:] - x[:-1]), np.abs(y[:-1] - x[1:])
            for gap in (down, up):
                known = np.isfinite(gap)
                if (
                    known.sum() >= 2
                    and np.all(gap[known] <= 2e-3 * np.abs(np.where(np.isfinite(x), x, 0)).max() * 0.05)
                    and np.all((y - x)[np.isfinite(y - x)] > 0)
                ):
                    return order
    return None


def _proportional(one: list[Numeral | None], two: list[Numeral | None]) -> bool:
    a = np.array([getattr(n, "value", np.nan) for n in one])
    b = np.array([getattr(n, "value", np.nan) for n in two])
    known = np.isfinite(a) & np.isfinite(b) & (a > 0) & (b > 0)
    ratio = a[known] / b[known]
    return bool(known.sum() > 1 and np.ptp(ratio) <= 0.02 * ratio.mean())


def _said(table: Table, text: str) -> tuple[SizeColumns, list[tuple[str, int]]]:
    """Columns as the user says: "size=1,share=C" or by header."""
    sizes, quantities = SizeColumns(), []
    parts = re.split(r",(?=\s*(?:size|lower|upper|mid|mass|share|under|over)\s*=)", text)
    for part in parts:
        role, equals, value = part.partition("=")
        role, value = role.strip().lower(), value.strip()
        if not equals or role not in (*SIZE_ROLES, *QUANTITY_ROLES) or not value:
            raise InputError(
                f"--columns {shown(text)}: {shown(part)} is not understood; write role=column with the roles "
                f"{', '.join((*SIZE_ROLES, *QUANTITY_ROLES))}, such as size=A,share=B"
            )
        column = _column(table, value)
        if role in SIZE_ROLES:
            setattr(sizes, role, column)
        else:
            quantities.append((role, column))
    if not sizes.all or not quantities:
        raise InputError(
            f"--columns {shown(text)}: at least one of {', '.join(SIZE_ROLES)} and one of {', '.join(QUANTITY_ROLES)} is expected"
        )
    if len(sizes.all) > 1 and not (sizes.pair and len(sizes.all) == 2):
        raise InputError(f"--columns {shown(text)}: sizes are one column (size or mid), or lower and upper")
    return sizes, quantities


def _column(table: Table, value: str) -> int:
    wanted = plain(value)
    headers = [plain(h) for h in table.headers]
    for test in (lambda h: h == wanted, lambda h: bool(h) and wanted in h):
        matches = [j for j, h in enumerate(headers) if test(h)]
        if len(matches) == 1:
            return matches[0]
        if len(matches) > 1 and not re.fullmatch(r"\d{1,3}|[a-z]{1,2}", wanted):
            raise InputError(
                f"{table.grid.name}: {shown(value)} fits {len(matches)} headers; name the column by number or letter"
            )
        if re.fullmatch(r"\d{1,3}|[a-z]{1,2}", wanted):
            break
    index = -1
    if re.fullmatch(r"\d{1,3}", wanted):
        index = int(wanted) - 1
    elif re.fullmatch(r"[a-z]{1,2}", wanted):
        index = sum((ord(c) - 96) * 26**k for k, c in enumerate(reversed(wanted))) - 1
    if 0 <= index < len(headers):
        return index
    names = ", ".join(f"{letters(j)} {shown(h)}" for j, h in enumerate(table.headers[:12]))
    raise InputError(f"{table.grid.name}: no column {shown(value)}; the table has {names}")


def _said_quantity(sizes: Sizes, column: int, decimal: Decimal, role: str) -> Quantity:
    quantity = read_quantity(sizes, column, decimal, role)
    if quantity is None:
        raise InputError(
            f"{sizes.table.grid.name}: {sizes.table.column_name(column)} holds no numbers beside the sizes; choose another column for {role}"
        )
    return quantity


def only_percentiles(table: Table, decimal: Decimal) -> bool:
    """Whether a table lists percentiles and means rather than classes."""
    labels = [str(row[0]) for row in table.rows if row[0] != ""]
    in_rows = sum(not label[0].isdigit() and bool(STATISTIC.fullmatch(plain(label))) for label in labels)
    in_head = sum(bool(STATISTIC.fullmatch(plain(h))) for h in table.headers if h)
    if in_rows < max(2, 0.6 * len(labels)) and in_head < 2:
        return False
    sizes = [size_of(row[0], decimal) for row in table.rows if row[0] != ""]
    return not any(size is not None and size.kind != "edge" for size in sizes)
