"""A laser-diffraction sample -> classes: volume (area, number) in classes or cumulative; repeats averaged."""

from dataclasses import replace

import numpy as np
from numpy import float64
from numpy.typing import NDArray

from psdflow.errors import InputError
from psdflow.reports.apertures import Size
from psdflow.reports.classes import Classes, cumulative, in_class
from psdflow.reports.quantities import Quantity
from psdflow.reports.recognise import Sample
from psdflow.reports.sieve import compare, stated_total


def laser_classes(sample: Sample) -> tuple[Classes, Quantity, NDArray[float64] | None]:
    """Classes of a laser sample, and the shares of its repeated readings if there are several.

    A single size beside a share in class is the class's upper edge, unless the header says lower or
    middle, or a cumulative column beside it shows that it is the lower one.

    Raises
    ------
    InputError
        If columns contradict each other, or repeats don't have the same classes.
    """
    classes, quantity = _reading(sample)
    if not sample.repeats:
        return classes, quantity, None
    others = []
    for reading in sample.repeats:
        other, _ = _reading(reading)
        if other.edges.shape != classes.edges.shape or not np.allclose(other.edges, classes.edges, rtol=1e-9):
            raise InputError(f"{quantity.table.grid.name}: repeated readings of {sample.name or 'the sample'} have other classes; the same are expected")
        others.append(other)
        classes.warnings += [w for w in other.warnings if w not in classes.warnings]
    repeats = np.stack([classes.all, *(o.all for o in others)])
    mean = repeats.mean(axis=0)
    mean /= mean.sum()
    return (
        replace(classes, below=float(mean[0]), shares=mean[1:-1], above=float(mean[-1])),
        quantity,
        repeats,
    )


def _reading(sample: Sample) -> tuple[Classes, Quantity]:
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
        classes = _from_middles(sample, quantity)
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
        classes.warnings.append(f"{quantity.table.column_name(quantity.column)} was taken to belong to the {edge} edge of each class")


def _from_middles(sample: Sample, quantity: Quantity) -> Classes:
    """Edges midway (geometric) between class middles; the outer two mirror their neighbours."""
    middles = np.array([c.low or 0.0 for c in sample.sizes.cells])
    if any(c.kind != "edge" for c in sample.sizes.cells) or np.any(middles <= 0) or middles.size < 3:
        raise InputError(f"{quantity.table.grid.name}: class middles must be three or more plain sizes over 0")
    inner = np.sqrt(middles[1:] * middles[:-1])
    edges = np.concatenate([[middles[0] ** 2 / inner[0]], inner, [middles[-1] ** 2 / inner[-1]]])
    cells = [Size("class", float(a), float(b), "m") for a, b in zip(edges, edges[1:], strict=False)]
    classes = in_class(replace(sample.sizes, cells=cells), quantity, "upper")
    steps = np.diff(np.log(middles))
    classes.warnings.append(
        "class edges were set midway (geometric mean) between class middles"
        + ("; the middles are unevenly spaced, so a class may be missing" if steps.max() > 1.3 * np.median(steps) else "")
    )
    return classes
