"""A size report as read: classes in metres, shares as fractions, and everything that was said beside them."""

from dataclasses import dataclass, field
from typing import Literal

import numpy as np
from numpy import float64
from numpy.typing import NDArray

from psdflow.distribution import Quantity, SizeDistribution
from psdflow.quality import Quality

KindOfReport = Literal["sieve", "laser"]


@dataclass(frozen=True, eq=False)
class Report:
    """One sample of one size report.

    Attributes
    ----------
    source, sha256
        File name and hash of its bytes.
    sheet, sample, lot
        Sheet of a workbook (None for text); names as found, or the file's name.
    kind, quantity
        "sieve" or "laser"; what the shares count.
    edges : (n + 1,)
        Measured class edges in m, ascending.
    shares : (n,)
        Fractions between them.
    below, above
        Fractions under the first edge (the pan) and over the last one. All fractions together are 1.
    fields
        Laboratory text found around the table.
    understood
        Which column served as what, in words.
    warnings
        What a reader of the numbers must know.
    repeats : (readings, n + 2), optional
        Shares of each repeated reading, below and above as first and last; ``shares`` are their mean.
    sample_mass
        Mass of the sample measured, kg, if it is known.
    loss
        Share of the sieved charge that wasn't found again; negative for a gain.
    sieved_from
        Finest edge (m) that is a sieve, where sieve and laser parts were merged.
    reconstructed
        Whether the classes were made from percentiles alone.
    """

    source: str
    sha256: str
    sheet: str | None
    sample: str
    lot: str
    kind: KindOfReport
    quantity: Quantity
    edges: NDArray[float64]
    shares: NDArray[float64]
    below: float = 0.0
    above: float = 0.0
    fields: dict[str, str] = field(default_factory=dict)
    understood: dict[str, str] = field(default_factory=dict)
    warnings: tuple[str, ...] = ()
    repeats: NDArray[float64] | None = None
    sample_mass: float | None = None
    loss: float | None = None
    sieved_from: float | None = None
    reconstructed: bool = False

    @property
    def quality(self) -> Quality:
        """How good the numbers are: the spread of the report's own repeats, and what widens it."""
        from psdflow.uncertainty import REPORT_ERROR

        merged = self.sieved_from is not None  # the laser part decides how good the fines are
        size_sd, width_sd = REPORT_ERROR["laser" if merged else self.kind]
        if self.repeats is not None:
            from psdflow.reports.repeats import own_error

            own = own_error(self.edges, self.repeats)
            size_sd, width_sd = (o if np.isfinite(o) else sd for o, sd in zip(own, (size_sd, width_sd), strict=True))
        if self.reconstructed:
            from psdflow.sizes.reconstruct import SIZE_SD, WIDTH_SD

            size_sd, width_sd = max(size_sd, SIZE_SD), max(width_sd, WIDTH_SD)
        if self.quantity in ("number", "area"):
            size_sd = float(np.hypot(size_sd, amplified(self.quantity, self.edges, self.shares, width_sd)))
        own_figures = self.repeats is not None or merged or self.reconstructed or self.quantity in ("number", "area")
        return Quality(
            size_sd=size_sd if own_figures else np.nan,
            width_sd=width_sd if own_figures else np.nan,
            sample_mass=_or_nan(self.sample_mass),
            loss=_or_nan(self.loss),
            sieved_from=_or_nan(self.sieved_from),
            reconstructed=self.reconstructed,
        )

    @property
    def distribution(self) -> SizeDistribution:
        """The size distribution, open ends closed by an assumed bound; number and area become volume."""
        from psdflow.sizes.open_ends import with_open_ends

        return with_open_ends(
            edges=self.edges,
            shares=self.shares,
            below=self.below,
            above=self.above,
            measured_by=self.kind,
            quantity=self.quantity,
            quality=self.quality,
        )


def _or_nan(value: float | None) -> float:
    return np.nan if value is None else value


def amplified(basis: str, edges: NDArray[float64], shares: NDArray[float64], width_sd: float) -> float:
    """How far ln(x50) by volume moves when ln(x90) and ln(x10) of a number or area basis move by ``width_sd``.

    ``x50,3 = x50,r exp((3 - r) s²)`` (Hatch & Choate 1929) moves by ``2 (3 - r) s ds`` with ``ds = width_sd / 1.2816``.
    """
    power = {"number": 3, "area": 1}.get(basis, 0)
    under = np.cumsum(shares) / shares.sum()
    low, high = np.interp([0.1587, 0.8413], np.concatenate([[0.0], under]), np.log(edges))
    return float(power * (high - low) * width_sd / 1.2816)


@dataclass(frozen=True)
class Options:
    """What the user says instead of leaving it to recognition; None leaves it.

    ``loss_warn`` and ``loss_refuse`` are fractions of the charge weighed in; ``sample_mass`` is in kg.
    """

    columns: str | None = None
    kind: KindOfReport | None = None
    basis: Quantity | None = None
    decimal: Literal[",", "."] | None = None
    sample: str | None = None
    size_unit: str | None = None
    loss_warn: float = 0.005
    loss_refuse: float = 0.02
    sample_mass: float | None = None
