"""Sizes and one quantity -> class edges and fractions. Shared by sieve and laser reports."""

from dataclasses import dataclass, field, replace

import numpy as np
from numpy import float64
from numpy.typing import NDArray

from psdflow.errors import InputError, shown
from psdflow.reports.apertures import Size
from psdflow.reports.edges import Sizes
from psdflow.reports.quantities import TOTAL_REFUSE, TOTAL_WARN, Quantity

_SAME = 2e-3  # upper edge of a class and lower edge of the next, as rounded in print
_ROUNDING = 5e-4  # a cumulative share this near to 100 % is 100 %


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
        raise InputError(f"{_place(quantity)}: {name} adds up to 0; at least one class must hold something")
    if quantity.role == "share":
        off = total / quantity.scale - 1
        if abs(off) > TOTAL_REFUSE:
            raise InputError(
                f"{_place(quantity)}: {name} adds up to {total / quantity.scale * 100:.2f} %; 100 % is expected (at most "
                f"{TOTAL_REFUSE:.0%} off). Is a row missing, or the column cumulative? Say so with --columns under=… or over=…"
            )
        if abs(off) > TOTAL_WARN:
            warnings.append(f"{name} adds up to {total / quantity.scale * 100:.2f} %; scaled to 100 %")
    edges, shares = _laid_out(sizes, [value / total for value in values], edge, quantity)
    return Classes(edges, float(shares[0]), shares[1:-1], float(shares[-1]), total, warnings)


def _place(quantity: Quantity) -> str:
    return quantity.table.grid.name


def _filled(sizes: Sizes, quantity: Quantity) -> list[float]:
    """Values with empty cells at either end taken as 0; an empty cell between numbers is refused."""
    known = [k for k, v in enumerate(quantity.values) if v is not None]
    if not known:
        raise InputError(f"{_place(quantity)}: {quantity.table.column_name(quantity.column)} holds no numbers")
    empty = [k for k, v in enumerate(quantity.values) if v is None]
    inside = [k for k in empty if known[0] < k < known[-1]]
    if inside:
        raise InputError(
            f"{quantity.where(sizes, inside[0])}: the cell is empty; a number is expected between numbers. "
            "Write 0 if the class was empty, or mark the row as a comment with #."
        )
    if any(sizes.cells[k].kind == "below" or sizes.cells[k].low == 0 for k in empty) and sizes.has_pan:
        quantity.notes.append("the pan row is empty and was taken as 0")
    elif empty and not all(v == 0 for v in (quantity.values[known[0]], quantity.values[known[-1]])):
        quantity.notes.append(f"{len(empty)} empty cells at the ends of {quantity.table.column_name(quantity.column)} were taken as 0")
    return [v if v is not None else 0.0 for v in quantity.values]


def _laid_out(sizes: Sizes, values: list[float], edge: str, quantity: Quantity) -> tuple[NDArray[float64], NDArray[float64]]:
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
        raise InputError(f"{_place(quantity)}: only one size; a distribution needs at least two")
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
            f"{_place(quantity)}: a pan row beside sizes that are upper edges: what lies between is not said. "
            "Say --kind sieve if each share was retained on its size"
        )
    if below:
        raise InputError(f"{_place(quantity)}: a share under size 0; remove the row or say --kind sieve if it is the pan")
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
            raise InputError(f"{where}: a single size among classes with two; write it as a class such as 45-63, <45 or >500")
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
        raise InputError(f"{_place(quantity)}: only one size; a distribution needs at least two")
    return np.array(edges), np.array([below, *inner, above])


def cumulative(sizes: Sizes, quantity: Quantity, full: float | None = None) -> Classes:
    """Classes from a cumulative column; each value belongs to the edge it stands beside.

    Parameters
    ----------
    full
        For masses: the mass that is everything.
    """
    under = quantity.role == "under"
    points: list[tuple[float, float, int]] = []
    everything: tuple[float, int] | None = None
    for k, (cell, value) in enumerate(zip(sizes.cells, quantity.values, strict=True)):
        edge = _cumulative_edge(cell, under, k, len(sizes.cells))
        if value is None:
            continue
        if edge == 0.0:
            everything = (value, k)  # the pan: nothing passes it, everything is coarser
        elif edge is None:
            everything = (value, k)
        else:
            points.append((edge, value, k))
    if len(points) < 2:
        raise InputError(f"{_place(quantity)}: {quantity.table.column_name(quantity.column)} holds fewer than two cumulative values")
    _no_gaps(sizes, quantity)
    _no_falls(sizes, quantity, points, under)
    edges = np.array([p[0] for p in points])
    if np.any(np.diff(edges) <= 0):
        raise InputError(f"{_place(quantity)}: the same edge twice in the cumulative column; each size once is expected")
    numbers = np.array([p[1] for p in points])
    scale, warnings = _full_scale(sizes, quantity, numbers, everything, full, under)
    fine = numbers / scale if under else 1 - numbers / scale
    fine = np.clip(fine, 0.0, 1.0)
    shares = np.diff(np.concatenate([[0.0], fine, [1.0]]))
    shares = np.where(shares < 1e-12, 0.0, shares)
    shares = shares / shares.sum()
    return Classes(edges, float(shares[0]), shares[1:-1], float(shares[-1]), scale, warnings)


def _cumulative_edge(cell: Size, under: bool, index: int, count: int) -> float | None:
    """The edge a cumulative value belongs to: 0 for the pan, None for a row that stands for everything."""
    if cell.kind == "edge":
        return cell.low or 0.0
    if cell.kind == "class":
        return cell.high if under else cell.low
    if cell.kind == "below":
        if cell.high is None:
            return 0.0
        return cell.high if under or count == index + 1 or index > 0 else 0.0
    return (None if index == count - 1 and index > 0 else cell.low) if under else cell.low


def _no_gaps(sizes: Sizes, quantity: Quantity) -> None:
    known = [k for k, v in enumerate(quantity.values) if v is not None]
    for k in range(known[0], known[-1]):
        if quantity.values[k] is None and sizes.cells[k].kind != "below":
            raise InputError(f"{quantity.where(sizes, k)}: the cell is empty; a cumulative share is expected. Mark the row as a comment with # to leave it out.")


def _no_falls(sizes: Sizes, quantity: Quantity, points: list[tuple[float, float, int]], under: bool) -> None:
    way = 1 if under else -1
    if (points[-1][1] - points[0][1]) * way < 0:
        words = ("finer", "rise") if under else ("coarser", "fall")
        raise InputError(
            f"{_place(quantity)}: {quantity.table.column_name(quantity.column)} is headed as cumulative {words[0]} but does not {words[1]} with size; "
            "is the heading right? Say --columns under=… or over=…"
        )
    for (_, before, _), (_, here, k) in zip(points, points[1:], strict=False):
        if (here - before) * way < -1e-9 * max(quantity.scale, 1.0):
            raise InputError(
                f"{quantity.where(sizes, k)}: cumulative share {here:g} after {before:g}; a cumulative {'undersize' if under else 'oversize'} "
                f"can't {'fall' if under else 'rise'} with size. Correct the number, or mark the row as a comment with #."
            )


def _full_scale(
    sizes: Sizes,
    quantity: Quantity,
    numbers: NDArray[float64],
    everything: tuple[float, int] | None,
    full: float | None,
    under: bool,
) -> tuple[float, list[str]]:
    """What 100 % is in a cumulative column, and warnings about it."""
    name = quantity.table.column_name(quantity.column)
    largest = float(numbers[-1] if under else numbers[0])
    if everything is not None and under and sizes.cells[everything[1]].kind != "above":
        if everything[0] > TOTAL_WARN * (quantity.scale or largest):
            raise InputError(f"{quantity.where(sizes, everything[1])}: {everything[0]:g} passes the pan; 0 is expected there")
        everything = None
    stated = everything[0] if everything else None
    if not quantity.scale:
        scale = full or stated or (largest if under else 0.0)
        if not scale:
            raise InputError(
                f"{_place(quantity)}: {name} holds cumulative masses but neither a pan row nor the charge weighed in says what everything is; add one"
            )
        if largest > scale * (1 + TOTAL_REFUSE):
            raise InputError(f"{_place(quantity)}: {name} goes up to {largest:g}, more than the charge of {scale:g}")
        warnings = [] if full or stated else [f"{name}: its largest value {largest:g} was taken as everything"]
        return max(scale, largest), warnings
    top = max(largest, stated or 0.0)
    off = (stated if stated is not None else top) / quantity.scale - 1
    if off > TOTAL_REFUSE or top / quantity.scale - 1 > TOTAL_REFUSE or (stated is not None and abs(off) > TOTAL_REFUSE):
        raise InputError(f"{_place(quantity)}: {name} goes up to {top / quantity.scale * 100:.2f} %; 100 % is expected at its end")
    reached = top if stated is not None or top > quantity.scale * (1 - _ROUNDING) else quantity.scale
    if abs(reached / quantity.scale - 1) > TOTAL_WARN:
        return reached, [f"{name} goes up to {top / quantity.scale * 100:.2f} %; scaled to 100 %"]
    return reached, []


def from_middles(sizes: Sizes, quantity: Quantity) -> Classes:
    """Edges midway (geometric) between class middles; the outer two mirror their neighbours."""
    middles = np.array([c.low or 0.0 for c in sizes.cells])
    if any(c.kind != "edge" for c in sizes.cells) or np.any(middles <= 0) or middles.size < 3:
        raise InputError(f"{quantity.table.grid.name}: class middles must be three or more plain sizes over 0")
    inner = np.sqrt(middles[1:] * middles[:-1])
    edges = np.concatenate([[middles[0] ** 2 / inner[0]], inner, [middles[-1] ** 2 / inner[-1]]])
    cells = [Size("class", float(a), float(b), "m") for a, b in zip(edges, edges[1:], strict=False)]
    classes = in_class(replace(sizes, cells=cells), quantity, "upper")
    steps = np.diff(np.log(middles))
    classes.warnings.append(
        "class edges were set midway (geometric mean) between class middles"
        + ("; the middles are unevenly spaced, so a class may be missing" if steps.max() > 1.3 * np.median(steps) else "")
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
