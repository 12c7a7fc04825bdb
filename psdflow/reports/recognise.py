"""Which columns of a table are sizes and which are quantities, and which quantities belong to one sample."""

import re
from dataclasses import dataclass, field
from typing import NoReturn

import numpy as np

from psdflow.errors import InputError, shown
from psdflow.reports.cells import letters
from psdflow.reports.edges import SizeColumns, Sizes, looks_like_sizes, read_sizes
from psdflow.reports.numerals import LENGTHS, Decimal, Numeral, numeral, plain
from psdflow.reports.quantities import Quantity, read_quantity
from psdflow.reports.report import Options
from psdflow.reports.tables import Table
from psdflow.reports.words import AVERAGE, LOT, REPEAT, SAMPLE, STATISTIC, heading, name_left

SIZE_ROLES = ("size", "lower", "upper", "mid")
QUANTITY_ROLES = ("mass", "share", "under", "over")


@dataclass
class Sample:
    """The columns of one sample: its sizes and one column for each role; repeats are further readings."""

    sizes: Sizes
    quantities: dict[str, Quantity]
    name: str
    lot: str = ""
    repeats: list["Sample"] = field(default_factory=list)
    notes: list[str] = field(default_factory=list)


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
        return _grouped(chosen, found, said=True)
    units = _size_columns(table, decimal, options)
    samples: list[Sample] = []
    taken = {c for unit in units for c in unit.all}
    for columns_of_size in units:
        chosen = read_sizes(table, columns_of_size, decimal, options.size_unit)
        quantities, unused, unsure = [], [], []
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
            _undecided(table, "no column could be recognised as a mass, a share or a cumulative share")
        for j in unsure:
            head = heading(table.headers[j])
            if head.unit or head.role or any(not heading(table.headers[q.column]).unit + heading(table.headers[q.column]).role for q in quantities):
                _undecided(table, f"{table.column_name(j)} is neither a share that adds up to 100 % nor cumulative")
            unused.append(j)
        unused.sort()
        new = _grouped(chosen, quantities)
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


def _undecided(table: Table, why: str) -> NoReturn:
    seen = []
    for j in range(len(table.headers)):
        if not _is_blank(table, j):
            values = [row[j] for row in table.rows[:3]]
            text = ", ".join(f"{v:g}" if isinstance(v, float) else " ".join(v.split())[:20] for v in values)
            header = " ".join(table.headers[j].split())[:40]
            where = f"row {table.grid.numbers[table.lines[j]]}" if table.across else letters(j)
            seen.append(f"{where} {shown(header) if header else '(no header)'}: {text}, …")
    listed = "; ".join(seen[:8]) + (f"; and {len(seen) - 8} more" if len(seen) > 8 else "")
    line = table.grid.numbers[table.lines[0] if table.across else table.place[0]]
    raise InputError(
        f"{table.grid.name}, table at row {line}: {why}. Columns seen: {listed}. "
        "Say which is which: --columns size=A,share=B (roles: size or lower and upper or mid; mass, share, under, over; "
        "a column by header, number or letter)"
    )


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
            _undecided(table, "no column could be recognised as the sizes")
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
    _undecided(table, "several columns may be the sizes")


def _joining(columns: list[int], numbers: dict[int, list[Numeral | None]]) -> tuple[int, int] | None:
    """Two columns where each class ends at the next one's beginning, whatever their headers."""
    for a, b in zip(columns, columns[1:], strict=False):
        one = np.array([getattr(n, "value", np.nan) for n in numbers[a]])
        two = np.array([getattr(n, "value", np.nan) for n in numbers[b]])
        if len(one) < 3:
            continue
        for x, y, order in ((one, two, (a, b)), (two, one, (b, a))):
            down, up = np.abs(y[1:] - x[:-1]), np.abs(y[:-1] - x[1:])
            for gap in (down, up):
                known = np.isfinite(gap)
                if known.sum() >= 2 and np.all(gap[known] <= 2e-3 * np.abs(np.where(np.isfinite(x), x, 0)).max() * 0.05) and np.all(
                    (y - x)[np.isfinite(y - x)] > 0
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


def _grouped(sizes: Sizes, quantities: list[Quantity], said: bool = False) -> list[Sample]:
    """Quantities that belong together become one sample; readings of one sample become its repeats."""
    if not said:
        quantities = _without_gross(sizes, quantities)
    names = [_name(sizes.table, q.column) for q in quantities]
    by_role: dict[str, list[int]] = {}
    for k, quantity in enumerate(quantities):
        by_role.setdefault(quantity.role, []).append(k)
    most = max(len(ks) for ks in by_role.values())
    if most == 1:
        groups = [list(range(len(quantities)))]
    elif len(by_role) == 1:
        groups = [[k] for k in range(len(quantities))]
    else:
        groups = _groups_of_several(sizes.table, quantities, names, by_role)
    samples = []
    for group in groups:
        columns = {quantities[k].role: quantities[k] for k in group}
        name = next((names[k] for k in group if names[k]), "")
        lot = next((sizes.table.lots[quantities[k].column] for k in group if quantities[k].column in sizes.table.lots), "")
        if len(groups) == 1 and not lot and not any(_all_name(sizes.table, quantities[k].column) for k in group):
            name = ""
        samples.append(Sample(sizes, columns, name, lot))
    return _repeats(samples)


def _name(table: Table, column: int) -> str:
    if column in table.names:
        return table.names[column]
    lines = table.headers[column].split("\n")
    names = [left for line in lines if (left := name_left(line))]
    return names[-1] if names else ""


def _all_name(table: Table, column: int) -> bool:
    """Whether a header is a name (and a unit) with no word for a quantity in it."""
    head = heading(table.headers[column])
    return column in table.names or (head.role in ("", "mass") and bool(name_left(table.headers[column])))


def _groups_of_several(
    table: Table, quantities: list[Quantity], names: list[str], by_role: dict[str, list[int]]
) -> list[list[int]]:
    count = len(next(iter(by_role.values())))
    if all(len(ks) == count for ks in by_role.values()):
        named = {(quantities[k].role, names[k]) for k in range(len(names))}
        sets = {frozenset(names[k] for k in ks) for ks in by_role.values()}
        if len(named) == len(names) and len(sets) == 1 and all(names):
            return [[ks[[names[k] for k in ks].index(name)] for ks in by_role.values()] for name in (names[k] for k in next(iter(by_role.values())))]
        step = len(by_role)
        pattern = [quantities[k].role for k in range(step)]
        if all(quantities[k].role == pattern[k % step] for k in range(len(quantities))) and len(set(pattern)) == step:
            return [list(range(k, k + step)) for k in range(0, len(quantities), step)]
        if not any(names):
            ordered = list(by_role.values())
            return [[ks[i] for ks in ordered] for i in range(count)]
    _undecided(table, "several columns of different kinds can't be told apart as samples")


def _without_gross(sizes: Sizes, quantities: list[Quantity]) -> list[Quantity]:
    """Net masses: gross columns (container included) are left out, or turned to net with the empty mass."""
    gross = [q for q in quantities if q.role == "gross"]
    tare = [q for q in quantities if q.role == "tare"]
    rest = [q for q in quantities if q.role not in ("gross", "tare")]
    masses = [q for q in rest if q.role == "mass"]
    for one in list(masses):
        for other in masses:
            if one is not other and one in rest and _contains(one, other):
                rest.remove(one)
                other.notes.append(f"{one.table.column_name(one.column)} was read as gross mass (container included) and not used")
    if gross and tare and not any(q.role in ("mass", "share", "under", "over") for q in rest):
        return [_net(sizes, g, t) for g, t in zip(gross, tare, strict=False)]
    if not rest:
        _undecided(sizes.table, "only gross masses were recognised; the empty sieve or container masses are needed, too")
    for q in gross + tare:
        rest[0].notes.append(f"{q.table.column_name(q.column)} was read as {'gross' if q.role == 'gross' else 'empty'} mass and not used")
    return rest


def _contains(gross: Quantity, net: Quantity) -> bool:
    """Whether one mass column is the other plus a container that stays the same over several rows."""
    pairs = [(g, n) for g, n in zip(gross.values, net.values, strict=True) if g and n]
    if len(pairs) < 3:
        return False
    difference = np.array([g - n for g, n in pairs])
    if np.any(difference <= 0) or difference.min() < 0.2 * max(n for _, n in pairs):
        return False
    groups = len(np.unique(np.round(difference, 1)))
    return groups <= max(1, len(pairs) // 3)


def _net(sizes: Sizes, gross: Quantity, tare: Quantity) -> Quantity:
    values: list[float | None] = []
    for k, (full, empty) in enumerate(zip(gross.values, tare.values, strict=True)):
        if full is None or empty is None:
            values.append(None)
            continue
        if full < empty:
            raise InputError(
                f"{gross.where(sizes, k)}: gross mass {full:g} is under the empty mass {empty:g}; a net mass can't be negative. Check both masses."
            )
        values.append(full - empty)
    notes = [f"net mass = {gross.table.column_name(gross.column)} less {tare.table.column_name(tare.column)}"]
    return Quantity(gross.table, gross.column, "mass", 0.0, gross.unit, values, [*gross.notes, *tare.notes, *notes])


def _repeats(samples: list[Sample]) -> list[Sample]:
    """Put "A run 1", "A run 2" together; leave out columns of averages and of summary words."""
    if len(samples) < 2:
        return samples
    kept: list[Sample] = []
    by_base: dict[str, list[Sample]] = {}
    averages = [s for s in samples if AVERAGE.fullmatch(plain(s.name)) or AVERAGE.search(plain(s.name).split(" ")[-1] if s.name else "")]
    others = [s for s in samples if s not in averages]
    if not others:
        return samples
    for sample in others:
        match = REPEAT.fullmatch(plain(sample.name))
        base = match[1].strip() if match else None
        if base is None:
            kept.append(sample)
        elif base in by_base:
            by_base[base].append(sample)
        else:
            by_base[base] = [sample]
            kept.append(sample)
    for base, readings in by_base.items():
        if len(readings) > 1:
            readings[0].repeats = readings[1:]
            readings[0].notes.append(f"{len(readings)} readings of one sample were averaged")
            readings[0].name = readings[0].name[: len(base)].strip(" -_(,") if base else ""
    for average in averages:
        kept[0].notes.append(f"column of averages not used: {average.name}")
    return kept


def strip_word(name: str) -> tuple[str, str]:
    """("B", "B") for "Lot B", ("B", "") for "Sample B": name without its leading word, and the lot if it is one."""
    match = re.match(r"(\S+)[\s:.#]+(.+)", name)
    if match and LOT.fullmatch(plain(match[1])):
        return match[2], match[2]
    if match and SAMPLE.fullmatch(plain(match[1])):
        return match[2], ""
    return name, ""


def only_percentiles(table: Table) -> bool:
    """Whether a table lists percentiles and means rather than classes."""
    labels = [plain(str(row[0])) for row in table.rows if row[0] != ""]
    in_rows = sum(bool(STATISTIC.fullmatch(label)) for label in labels)
    in_head = sum(bool(STATISTIC.fullmatch(plain(h))) for h in table.headers if h)
    return in_rows >= max(2, 0.6 * len(labels)) or in_head >= 2
