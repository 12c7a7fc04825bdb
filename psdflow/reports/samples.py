"""Which number columns belong to one sample: names, net and gross masses, repeated readings."""

import re
from dataclasses import dataclass, field

import numpy as np

from psdflow.errors import InputError
from psdflow.reports.edges import Sizes
from psdflow.reports.layout import Table, undecided
from psdflow.reports.numerals import plain
from psdflow.reports.quantities import Quantity
from psdflow.reports.words import AVERAGE, LOT, REPEAT, SAMPLE, heading, name_left


@dataclass
class Sample:
    """The columns of one sample: its sizes and one column for each role; repeats are further readings."""

    sizes: Sizes
    quantities: dict[str, Quantity]
    name: str
    lot: str = ""
    repeats: list["Sample"] = field(default_factory=list)
    notes: list[str] = field(default_factory=list)


def grouped(sizes: Sizes, quantities: list[Quantity], said: bool = False) -> list[Sample]:
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
        lot = next(
            (sizes.table.lots[quantities[k].column] for k in group if quantities[k].column in sizes.table.lots), ""
        )
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
            return [
                [ks[[names[k] for k in ks].index(name)] for ks in by_role.values()]
                for name in (names[k] for k in next(iter(by_role.values())))
            ]
        step = len(by_role)
        pattern = [quantities[k].role for k in range(step)]
        if all(quantities[k].role == pattern[k % step] for k in range(len(quantities))) and len(set(pattern)) == step:
            return [list(range(k, k + step)) for k in range(0, len(quantities), step)]
        if not any(names):
            ordered = list(by_role.values())
            return [[ks[i] for ks in ordered] for i in range(count)]
    raise undecided(table, "several columns of different kinds can't be told apart as samples")


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
                other.notes.append(
                    f"{one.table.column_name(one.column)} was read as gross mass (container included) and not used"
                )
    if gross and tare and not any(q.role in ("mass", "share", "under", "over") for q in rest):
        return [_net(sizes, g, t) for g, t in zip(gross, tare, strict=False)]
    if not rest:
        raise undecided(
            sizes.table, "only gross masses were recognised; the empty sieve or container masses are needed, too"
        )
    for q in gross + tare:
        rest[0].notes.append(
            f"{q.table.column_name(q.column)} was read as {'gross' if q.role == 'gross' else 'empty'} mass and not used"
        )
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
    averages = [
        s
        for s in samples
        if AVERAGE.fullmatch(plain(s.name)) or AVERAGE.search(plain(s.name).split(" ")[-1] if s.name else "")
    ]
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
