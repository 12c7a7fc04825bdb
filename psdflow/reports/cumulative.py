"""Sizes and a cumulative column -> class edges and fractions: each value belongs to the edge beside it."""

from itertools import pairwise

import numpy as np
from numpy import float64
from numpy.typing import NDArray

from psdflow.errors import InputError
from psdflow.reports.apertures import Size
from psdflow.reports.classes import Classes
from psdflow.reports.edges import Sizes
from psdflow.reports.quantities import TOTAL_REFUSE, TOTAL_WARN, Quantity

_ROUNDING = 5e-4  # a cumulative share this near to 100 % is 100 %


def cumulative(sizes: Sizes, quantity: Quantity, full: float | None = None) -> Classes:
    """Classes from a cumulative column; each value belongs to the edge it stands beside.

    Parameters
    ----------
    full
        For masses: the mass that is everything.
    """
    under = quantity.role == "under"
    kinds = [cell.kind for cell in sizes.cells]
    if "class" in kinds and "edge" in kinds:
        k = kinds.index("edge" if kinds.count("edge") < kinds.count("class") else "class")
        raise InputError(
            f"{sizes.table.where(sizes.rows[k], sizes.columns.first)}: single sizes and classes with two sizes are mixed; "
            "a cumulative share belongs to one edge. Write single sizes"
        )
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
        raise InputError(
            f"{quantity.table.grid.name}: {quantity.table.column_name(quantity.column)} holds fewer than two cumulative values"
        )
    _no_gaps(sizes, quantity)
    _no_falls(sizes, quantity, points, under)
    edges = np.array([p[0] for p in points])
    if np.any(np.diff(edges) <= 0):
        raise InputError(
            f"{quantity.table.grid.name}: the same edge twice in the cumulative column; each size once is expected"
        )
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
            raise InputError(
                f"{quantity.where(sizes, k)}: the cell is empty; a cumulative share is expected. Mark the row as a comment with # to leave it out."
            )


def _no_falls(sizes: Sizes, quantity: Quantity, points: list[tuple[float, float, int]], under: bool) -> None:
    way = 1 if under else -1
    if (points[-1][1] - points[0][1]) * way < 0:
        words = ("finer", "rise") if under else ("coarser", "fall")
        raise InputError(
            f"{quantity.table.grid.name}: {quantity.table.column_name(quantity.column)} is headed as cumulative {words[0]} but does not {words[1]} with size; "
            "is the heading right? Say --columns under=… or over=…"
        )
    for (_, before, _), (_, here, k) in pairwise(points):
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
            raise InputError(
                f"{quantity.where(sizes, everything[1])}: {everything[0]:g} passes the pan; 0 is expected there"
            )
        everything = None
    stated = everything[0] if everything else None
    if not quantity.scale:
        scale = full or stated or (largest if under else 0.0)
        if not scale:
            raise InputError(
                f"{quantity.table.grid.name}: {name} holds cumulative masses but neither a pan row nor the charge weighed in says what everything is; add one"
            )
        if largest > scale * (1 + TOTAL_REFUSE):
            raise InputError(
                f"{quantity.table.grid.name}: {name} goes up to {largest:g}, more than the charge of {scale:g}"
            )
        warnings = [] if full or stated else [f"{name}: its largest value {largest:g} was taken as everything"]
        return max(scale, largest), warnings
    top = max(largest, stated or 0.0)
    off = (stated if stated is not None else top) / quantity.scale - 1
    if (
        off > TOTAL_REFUSE
        or top / quantity.scale - 1 > TOTAL_REFUSE
        or (stated is not None and abs(off) > TOTAL_REFUSE)
    ):
        raise InputError(
            f"{quantity.table.grid.name}: {name} goes up to {top / quantity.scale * 100:.2f} %; 100 % is expected at its end"
        )
    reached = top if stated is not None or top > quantity.scale * (1 - _ROUNDING) else quantity.scale
    if abs(reached / quantity.scale - 1) > TOTAL_WARN:
        return reached, [f"{name} goes up to {top / quantity.scale * 100:.2f} %; scaled to 100 %"]
    return reached, []
