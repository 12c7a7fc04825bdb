"""Sizes and amounts in class -> class edges and fractions. Shared by sieve and laser reports."""

from dataclasses import dataclass, field, replace
from itertools import pairwise

import numpy as np
from numpy import float64
from numpy.typing import NDArray

from psdflow.errors import InputError, shown
from psdflow.reports.apertures import Size
from psdflow.reports.edges import Sizes
from psdflow.reports.quantities import TOTAL_REFUSE, TOTAL_WARN, Quantity

_SAME = 2e-3  # upper edge of a class and lower edge of the next, as rounded in print


@dataclass
class Classes:
    """Edges in m (ascending), fractions between, under and over them; ``total`` is what they add up to before scaling."""

    edges: NDArray[float64]
    below: float
    shares: NDArray[float64]
    above: float
    total: float
    warnings: list[str] = field(default_factory=list)

    @property
    def all(self) -> NDArray[float64]:
        """Below, shares and above in one row."""
        return np.concatenate([[self.below], self.shares, [self.above]])


def in_class(sizes: Sizes, quantity: Quantity, edge: str) -> Classes:
    """Classes from amounts or shares in each class.

    Parameters
    ----------
    edge
        "lower": a plain size is the lower edge of its class (what a sieve retained); "upper": its upper edge.
    """
    values = _filled(sizes, quantity)
    total = sum(values)
    warnings: list[str] = []
    name = quantity.table.column_name(quantity.column)
    if total <= 0:
        raise InputError(f"{quantity.table.grid.name}: {name} adds up to 0; at least one class must hold something")
    if quantity.role == "share":
        off = total / quantity.scale - 1
        if abs(off) > TOTAL_REFUSE:
            raise InputError(
                f"{quantity.table.grid.name}: {name} adds up to {total / quantity.scale * 100:.2f} %; 100 % is expected (at most "
                f"{TOTAL_REFUSE:.0%} off). Is a row missing, or the column cumulative? Say so with --columns under=… or over=…"
            )
        if abs(off) > TOTAL_WARN:
            warnings.append(f"{name} adds up to {total / quantity.scale * 100:.2f} %; scaled to 100 %")
    edges, shares = _laid_out(sizes, [value / total for value in values], edge, quantity)
    return Classes(edges, float(shares[0]), shares[1:-1], float(shares[-1]), total, warnings)


def _filled(sizes: Sizes, quantity: Quantity) -> list[float]:
    """Values with empty cells at either end taken as 0; an empty cell between numbers is refused."""
    known = [k for k, v in enumerate(quantity.values) if v is not None]
    if not known:
        raise InputError(f"{quantity.table.grid.name}: {quantity.table.column_name(quantity.column)} holds no numbers")
    empty = [k for k, v in enumerate(quantity.values) if v is None]
    inside = [k for k in empty if known[0] < k < known[-1]]
    if inside:
        raise InputError(
            f"{quantity.where(sizes, inside[0])}: the cell is empty; a number is expected between numbers. "
            "Write 0 if the class was empty, or mark the row as a comment with #."
        )
    pan = next((k for k in empty if sizes.cells[k].kind == "below" or sizes.cells[k].low == 0), None)
    if pan is not None:
        raise InputError(
            f"{quantity.where(sizes, pan)}: the pan row is empty; a number is expected. Write 0 if nothing passed."
        )
    if empty and not all(v == 0 for v in (quantity.values[known[0]], quantity.values[known[-1]])):
        quantity.notes.append(
            f"{len(empty)} empty cells at the ends of {quantity.table.column_name(quantity.column)} were taken as 0"
        )
    return [v if v is not None else 0.0 for v in quantity.values]


def _laid_out(
    sizes: Sizes, values: list[float], edge: str, quantity: Quantity
) -> tuple[NDArray[float64], NDArray[float64]]:
    cells = list(sizes.cells)
    if all(c.kind == "below" and c.high is not None for c in cells):
        cells, edge = [Size("edge", c.high, None, c.unit) for c in cells], "upper"
    elif edge == "lower" and not any(c.kind == "class" for c in cells):
        cells = [Size("edge", c.low, None, c.unit) if c.kind == "above" else c for c in cells]
    if any(c.kind == "class" for c in cells):
        return _from_ranges(sizes, cells, values, edge, quantity)
    plain = [(c.low or 0.0, v) for c, v in zip(cells, values, strict=True) if c.kind == "edge" and c.low]
    below = sum(v for c, v in zip(cells, values, strict=True) if c.kind == "below" or (c.kind == "edge" and c.low == 0))
    above = sum(v for c, v in zip(cells, values, strict=True) if c.kind == "above")
    edges = np.array([size for size, _ in plain])
    shares = np.array([value for _, value in plain])
    if edges.size < 2:
        raise InputError(f"{quantity.table.grid.name}: only one size; a distribution needs at least two")
    for cell, row in zip(cells, sizes.rows, strict=True):
        limit = edges[0] if cell.kind == "below" else edges[-1]
        stated = cell.high if cell.kind == "below" else cell.low
        if cell.kind in ("below", "above") and stated is not None and abs(stated / limit - 1) > _SAME:
            raise InputError(
                f"{sizes.table.where(row, sizes.columns.first)}: {shown(sizes.table.rows[row][sizes.columns.first])} does not join "
                f"the {'finest' if cell.kind == 'below' else 'coarsest'} size {limit * 1e6:g} µm; a row is missing or the size is wrong"
            )
    if edge == "lower":
        return edges, np.concatenate([[below], shares[:-1], [shares[-1] + above]])
    if below and any(c.kind == "below" for c in cells):
        raise InputError(
            f"{quantity.table.grid.name}: a pan row beside sizes that are upper edges: what lies between is not said. "
            "Say --kind sieve if each share was retained on its size"
        )
    if below:
        raise InputError(
            f"{quantity.table.grid.name}: a share under size 0; remove the row or say --kind sieve if it is the pan"
        )
    return edges, np.concatenate([[shares[0]], shares[1:], [above]])


def _from_ranges(
    sizes: Sizes, cells: list[Size], values: list[float], edge: str, quantity: Quantity
) -> tuple[NDArray[float64], NDArray[float64]]:
    """Edges from classes "45-63", each joining the next."""
    edges: list[float] = []
    inner: list[float] = []
    below = above = 0.0
    for k, (cell, value) in enumerate(zip(cells, values, strict=True)):
        where = sizes.table.where(sizes.rows[k], sizes.columns.first)
        if cell.kind == "below":
            if k:
                raise InputError(
                    f"{where}: this class begins at 0 but finer classes stand beside it; classes must join. Correct its lower edge"
                )
            below += value
            if cell.high is not None:
                edges.append(cell.high)
            continue
        top = cell.kind in ("above", "edge")
        if top and (k != len(cells) - 1 or (cell.kind == "edge" and (edge != "lower" or not cell.low))):
            raise InputError(
                f"{where}: a single size among classes with two; write it as a class such as 45-63, <45 or >500"
            )
        low = cell.low or 0.0
        if not edges:
            edges.append(low)
        elif abs(low / edges[-1] - 1) > _SAME:
            raise InputError(
                f"{where}: the class begins at {low * 1e6:g} µm but the one before ends at {edges[-1] * 1e6:g} µm; "
                "classes must join. Correct the edge, or add the missing class"
            )
        if top:
            above += value
        else:
            edges.append(cell.high or 0.0)
            inner.append(value)
    if len(edges) < 2:
        raise InputError(f"{quantity.table.grid.name}: only one size; a distribution needs at least two")
    return np.array(edges), np.array([below, *inner, above])


def from_middles(sizes: Sizes, quantity: Quantity) -> Classes:
    """Edges midway (geometric) between class middles; the outer two mirror their neighbours."""
    middles = np.array([c.low or 0.0 for c in sizes.cells])
    if any(c.kind != "edge" for c in sizes.cells) or np.any(middles <= 0) or middles.size < 3:
        raise InputError(f"{quantity.table.grid.name}: class middles must be three or more plain sizes over 0")
    inner = np.sqrt(middles[1:] * middles[:-1])
    edges = np.concatenate([[middles[0] ** 2 / inner[0]], inner, [middles[-1] ** 2 / inner[-1]]])
    cells = [Size("class", float(a), float(b), "m") for a, b in pairwise(edges)]
    classes = in_class(replace(sizes, cells=cells), quantity, "upper")
    steps = np.diff(np.log(middles))
    classes.warnings.append(
        "class edges were set midway (geometric mean) between class middles"
        + (
            "; the middles are unevenly spaced, so a class may be missing"
            if steps.max() > 1.3 * np.median(steps)
            else ""
        )
    )
    return classes


def averaged(readings: list[Classes], place: str) -> tuple[Classes, NDArray[float64] | None]:
    """The mean of repeated readings, and all of them, shape (readings, n + 2); one reading has no repeats.

    Raises
    ------
    InputError
        If the readings don't have the same classes.
    """
    first = readings[0]
    if len(readings) == 1:
        return first, None
    for other in readings[1:]:
        if other.edges.shape != first.edges.shape or not np.allclose(other.edges, first.edges, rtol=1e-9):
            raise InputError(f"{place}: repeated readings of a sample have other classes; the same are expected")
    repeats = np.stack([reading.all for reading in readings])
    mean = repeats.mean(axis=0)
    mean /= mean.sum()
    warnings = list(dict.fromkeys(w for reading in readings for w in reading.warnings))
    return replace(first, below=float(mean[0]), shares=mean[1:-1], above=float(mean[-1]), warnings=warnings), repeats
