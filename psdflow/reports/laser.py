"""A laser-diffraction sample -> classes: volume (area, number) in classes or cumulative."""

import numpy as np

from psdflow.errors import InputError
from psdflow.reports.classes import Classes, from_middles, in_class
from psdflow.reports.cumulative import cumulative
from psdflow.reports.quantities import Quantity
from psdflow.reports.samples import Sample
from psdflow.reports.sieve import compare, stated_total


def laser_classes(sample: Sample) -> tuple[Classes, Quantity]:
    """Classes of one reading of a laser sample.

    A single size beside a share in class is the class's upper edge, unless the header says lower or
    middle, or a cumulative column beside it shows that it is the lower one.

    Raises
    ------
    InputError
        If columns contradict each other.
    """
    best = next(role for role in ("share", "mass", "under", "over") if role in sample.quantities)
    quantity = sample.quantities[best]
    others = [q for role, q in sample.quantities.items() if role != best and role in ("under", "over")]
    if best in ("under", "over"):
        if sample.sizes.edge == "mid":
            raise InputError(
                f"{quantity.table.grid.name}: {quantity.table.column_name(quantity.column)} is cumulative, but the sizes are class middles; "
                "a cumulative share belongs to an edge. Say --columns size=… if the sizes are edges"
            )
        classes = cumulative(sample.sizes, quantity)
        _joined_pairs(sample, quantity, classes)
        for other in others:
            compare(classes, cumulative(sample.sizes, other), quantity, other)
        return classes, quantity
    edge, notes = _edge(sample, quantity, others)
    if edge == "mid":
        classes = from_middles(sample.sizes, quantity)
    else:
        classes = in_class(sample.sizes, quantity, edge)
        for other in others:
            compare(classes, cumulative(sample.sizes, other), quantity, other)
    classes.warnings += notes + stated_total(sample, quantity, classes.total)
    return classes, quantity


def _edge(sample: Sample, quantity: Quantity, others: list[Quantity]) -> tuple[str, list[str]]:
    """Which edge a single size column holds, and how that is known."""
    sizes = sample.sizes
    if sizes.edge or sizes.columns.pair or not sizes.only_edges:
        return sizes.edge or "upper", []
    if any(c.kind == "below" and c.high is None for c in sizes.cells):
        return "lower", ["the row for what lies under all sizes makes each size the lower edge of its class"]
    for other in others:
        reference = cumulative(sizes, other)
        fine = np.cumsum(reference.all)[:-1]
        off = {}
        for edge in ("upper", "lower"):
            trial = in_class(sizes, quantity, edge)
            shared = np.searchsorted(trial.edges, reference.edges)
            off[edge] = float(np.max(np.abs(np.cumsum(trial.all)[:-1][shared] - fine)))
        return min(off, key=lambda e: off[e]), []
    return "upper", [f"{sizes.table.column_name(sizes.columns.first)} was taken as the upper edge of each class"]


def _joined_pairs(sample: Sample, quantity: Quantity, classes: Classes) -> None:
    """Cumulative beside lower and upper edges: finer belongs to the upper, coarser to the lower edge; say so."""
    if sample.sizes.columns.pair:
        edge = "upper" if quantity.role == "under" else "lower"
        classes.warnings.append(
            f"{quantity.table.column_name(quantity.column)} was taken to belong to the {edge} edge of each class"
        )
