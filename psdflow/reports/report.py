"""A size report as read: classes in metres, shares as fractions, and everything that was said beside them."""

from dataclasses import dataclass, field
from typing import Literal

from numpy import float64
from numpy.typing import NDArray

from psdflow.distribution import Quantity, SizeDistribution

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
        )


@dataclass(frozen=True)
class Options:
    """What the user says instead of leaving it to recognition; None leaves it.

    ``loss_warn`` and ``loss_refuse`` are fractions of the charge weighed in.
    """

    columns: str | None = None
    kind: KindOfReport | None = None
    basis: Quantity | None = None
    decimal: Literal[",", "."] | None = None
    sample: str | None = None
    size_unit: str | None = None
    loss_warn: float = 0.005
    loss_refuse: float = 0.02
