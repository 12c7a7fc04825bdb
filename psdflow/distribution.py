"""The one data structure: how a size distribution is stored. Nothing else knows.

Edges in metres, ascending, and the volume (mass) share of each class, last axis = classes. Leading axes
are free: one lot is ``(classes,)``, a history ``(lots, classes)``, Monte Carlo ``(draws, classes)``, both
``(lots, draws, classes)``; edges and shares broadcast against each other. Inside a class the share is
spread evenly in ln(size), so every moment is an exact integral, not a guess at a midpoint.
"""

from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from typing import Literal, Self

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.errors import InputError
from psdflow.quality import Quality

MeasuredBy = Literal["sieve", "laser", "image", "settling"]
Quantity = Literal["mass", "volume", "number", "area"]
Convention = Literal["log-uniform", "geometric-midpoint", "arithmetic-midpoint"]

# Power of the size that turns a quantity into volume: number (r = 0) by x³, area (r = 2) by x (ISO 9276-2).
_TO_VOLUME: dict[str, int] = {"mass": 0, "volume": 0, "number": 3, "area": 1}


def class_means(edges: NDArray[np.float64], power: float, convention: Convention) -> NDArray[np.float64]:
    """Mean of ``x**power`` over each class, shape ``(..., classes)``.

    ``log-uniform`` is exact for a share spread evenly in ln x: ``(bᵏ - aᵏ) / (k ln(b/a))``
    (ISO 9276-2 moment of that density). The midpoint conventions reproduce hand calculations.
    """
    low, high = edges[..., :-1], edges[..., 1:]
    if convention == "geometric-midpoint":
        return np.asarray((low * high) ** (power / 2))
    if convention == "arithmetic-midpoint":
        return np.asarray(((low + high) / 2) ** power)
    # Centred form: <xᵏ> = Gᵏ sinh(h)/h with h = k ln(b/a)/2 stays exact for narrow classes.
    half = power * np.log(high / low) / 2
    small = np.abs(half) < 1e-4
    ratio = np.where(small, 1 + half**2 / 6, np.sinh(half) / np.where(small, 1.0, half))
    return np.asarray((low * high) ** (power / 2) * ratio)


@dataclass(frozen=True, eq=False)
class SizeDistribution:
    """Volume shares of size classes.

    Attributes
    ----------
    edges : (..., classes + 1)
        Class edges in metres, ascending along the last axis.
    shares : (..., classes)
        Volume (mass) share of each class, 0..1, summing to 1 along the last axis.
    measured_by
        Whose diameter the edges are: sieve aperture, laser volume-equivalent, image, settling.
    lower_open, upper_open
        The first (last) class is the pan (the oversize): its outer edge is an assumption, see
        `psdflow.sizes.open_ends`.
    quantity
        What the report counted; number and area were converted to volume on entry.
    quality
        How good the report is: its own repeats, sample mass and loss, whether it was reconstructed.

    Raises
    ------
    InputError
        If edges don't rise or aren't positive, shares are negative, or shapes don't fit.
    """

    edges: NDArray[np.float64]
    shares: NDArray[np.float64]
    measured_by: MeasuredBy = "sieve"
    lower_open: bool = False
    upper_open: bool = False
    quantity: Quantity = "mass"
    quality: Quality = field(default_factory=Quality)

    def __post_init__(self) -> None:
        edges, shares = np.asarray(self.edges, float), np.asarray(self.shares, float)
        if edges.shape[-1] != shares.shape[-1] + 1 or shares.shape[-1] < 1:
            raise InputError(
                f"a distribution of {shares.shape[-1]} classes needs {shares.shape[-1] + 1} edges, "
                f"{edges.shape[-1]} were given"
            )
        if not (np.all(edges[..., 0] > 0) and np.all(np.diff(edges, axis=-1) > 0) and np.all(np.isfinite(edges))):
            raise InputError("class edges must be positive, finite and rise from one to the next")
        total = shares.sum(axis=-1, keepdims=True)
        if not (np.all(shares >= 0) and np.all(total > 0) and np.all(np.isfinite(total))):
            raise InputError("class shares must be finite, none negative and not all zero")
        object.__setattr__(self, "edges", edges)
        object.__setattr__(self, "shares", shares / total)

    @classmethod
    def of(
        cls,
        edges: ArrayLike,
        shares: ArrayLike,
        *,
        quantity: Quantity = "mass",
        measured_by: MeasuredBy = "sieve",
        lower_open: bool = False,
        upper_open: bool = False,
        quality: Quality | None = None,
    ) -> Self:
        """Build from class shares of any quantity; number and area shares become volume shares.

        The conversion weights each class by ``<x^(3-r)>`` (ISO 9276-2), so it holds for one shape at
        all sizes; number data make the finest classes decide, whatever the report's error there.
        """
        edge_array, share_array = np.asarray(edges, float), np.asarray(shares, float)
        power = _TO_VOLUME[quantity]
        if power and np.all(edge_array > 0):
            # Inside a class a number share spread evenly in ln x has <x³> as its mean volume.
            share_array = share_array * class_means(edge_array, power, "log-uniform")
        return cls(edge_array, share_array, measured_by, lower_open, upper_open, quantity, quality or Quality())

    @classmethod
    def stack(cls, distributions: Sequence["SizeDistribution"]) -> "SizeDistribution":
        """Several lots with the same number of classes as one history, shape ``(lots, classes)``.

        Each lot keeps its own edges, so nothing is interpolated.

        Raises
        ------
        InputError
            If the lots differ in number of classes, in how they were measured or in which ends are open.
        """
        kinds = {(d.classes, d.measured_by, d.lower_open, d.upper_open) for d in distributions}
        if len(kinds) != 1:
            raise InputError(
                "lots stack into one table only with the same number of classes, the same measuring method and the "
                f"same open ends; found {len(kinds)} different kinds"
            )
        return replace(
            distributions[0],
            edges=np.stack([d.edges for d in distributions]),
            shares=np.stack([d.shares for d in distributions]),
            quality=Quality.stack([d.quality for d in distributions]),
        )

    @property
    def shape(self) -> tuple[int, ...]:
        """Leading shape: ``()`` for one lot, ``(lots,)`` for a history."""
        return np.broadcast_shapes(self.edges.shape[:-1], self.shares.shape[:-1])

    @property
    def classes(self) -> int:
        """Number of classes."""
        return int(self.shares.shape[-1])

    @property
    def cumulative(self) -> NDArray[np.float64]:
        """Share finer than each edge, shape ``(..., classes + 1)``, from 0 to 1."""
        total = np.cumsum(self.shares, axis=-1)
        zero = np.zeros((*total.shape[:-1], 1))
        return np.concatenate([zero, total / total[..., -1:]], axis=-1)

    def moment(self, power: float, convention: Convention = "log-uniform") -> NDArray[np.float64]:
        """Volume-weighted moment ``M_{k,3} = Σ share <x^k>``, shape of the leading axes, unit m^k."""
        means = class_means(self.edges, power, convention)
        total: NDArray[np.float64] = np.asarray((self.shares * means).sum(axis=-1))
        return total

    def undersize(self, size: ArrayLike) -> NDArray[np.float64]:
        """Share finer than ``size`` (m): the cumulative curve, linear in ln(size) between edges.

        ``size`` is a scalar or a 1-D array; the result has shape ``(..., sizes)`` or ``(...)``.
        """
        x = np.log(np.atleast_1d(np.asarray(size, float)))
        edges = np.broadcast_to(np.log(self.edges), (*self.shape, self.classes + 1))
        cumulative = np.broadcast_to(self.cumulative, edges.shape)
        # Position of each size inside each class, clipped: summing the filled part is the interpolation.
        low, width = edges[..., None, :-1], np.diff(edges, axis=-1)[..., None, :]
        filled = np.clip((x[:, None] - low) / width, 0, 1)
        result = (filled * np.diff(cumulative, axis=-1)[..., None, :]).sum(axis=-1)
        return np.asarray(result[..., 0] if np.ndim(size) == 0 else result)

    def percentile(self, fraction: float) -> NDArray[np.float64]:
        """Size (m) under which ``fraction`` (0..1) of the volume lies, shape of the leading axes.

        Log-linear between class edges; over an empty class, where it isn't unique, the lower edge.
        """
        cumulative = np.broadcast_to(self.cumulative, (*self.shape, self.classes + 1))
        edges = np.broadcast_to(np.log(self.edges), cumulative.shape)
        above = (cumulative < fraction).sum(axis=-1, keepdims=True).clip(1, self.classes)
        low, high = np.take_along_axis(edges, above - 1, -1), np.take_along_axis(edges, above, -1)
        under, over = np.take_along_axis(cumulative, above - 1, -1), np.take_along_axis(cumulative, above, -1)
        part = (fraction - under) / np.where(over > under, over - under, 1.0)
        return np.asarray(np.exp(low + (high - low) * part.clip(0, 1))[..., 0])

    def scaled(self, factor: ArrayLike) -> "SizeDistribution":
        """All sizes times ``factor``, which broadcasts over the leading axes."""
        return replace(self, edges=self.edges * np.asarray(factor, float)[..., None])

    def refined(self, parts: int) -> "SizeDistribution":
        """Every class split into ``parts`` equal parts in ln(size).

        Exact: the share is spread evenly in ln(size) already. Summing each run of ``parts`` values gives
        the old classes back.
        """
        logs = np.log(self.edges)
        step = np.arange(parts) / parts
        inner = logs[..., :-1, None] + step * np.diff(logs, axis=-1)[..., None]
        fine = np.concatenate([inner.reshape(*logs.shape[:-1], -1), logs[..., -1:]], axis=-1)
        return replace(self, edges=np.exp(fine), shares=np.repeat(self.shares, parts, axis=-1) / parts)

    def lot(self, index: int | slice) -> "SizeDistribution":
        """One lot of a history, or several by a slice, along leading axis 0."""
        edges = self.edges[index] if self.edges.ndim > 1 else self.edges
        shares = self.shares[index] if self.shares.ndim > 1 else self.shares
        return replace(self, edges=edges, shares=shares, quality=self.quality.lot(index))
