"""Repeated readings of one sample -> the report's own repeatability, and what a reader of it must know."""

import numpy as np
from numpy import float64
from numpy.typing import NDArray

from psdflow.reports.report import KindOfReport

# ISO 13320: accepted coefficient of variation at x10, x50, x90, doubled for a percentile below 10 µm (looked up in
# summaries; the editions differ in what is doubled).
ISO_13320_CV = {0.1: 0.05, 0.5: 0.03, 0.9: 0.05}
FINE = 10e-6
SIEVED_TWICE = (
    0.02  # cumulative values of two sievings usually agree within 1 to 2 % of the mass (common practice, no source)
)


def percentile_of_each(edges: NDArray[float64], readings: NDArray[float64], fraction: float) -> NDArray[float64]:
    """Size (m) under which ``fraction`` lies in each reading, NaN where that is in an open end.

    ``readings`` has shape (readings, classes + 2), below and above as first and last.
    """
    under = np.cumsum(readings, axis=1)[:, :-1]
    logs = [np.interp(fraction, row, np.log(edges), left=np.nan, right=np.nan) for row in under]
    return np.asarray(np.exp(logs))


def own_error(edges: NDArray[float64], readings: NDArray[float64], least: float = 0.01) -> tuple[float, float]:
    """Standard deviations of ln(size) by the readings: of the median, and added at x10 and x90; NaN if not to be had.

    Few readings know their own spread badly: it is widened by Student's t over the normal 1.96 (2 readings: 6.5 times,
    5: 1.4 times). It isn't divided by the root of their number, since readings of one filling don't see the next
    spoonful; and never under ``least``, since they don't see the instrument's trueness either. Judgement.
    """
    from scipy.special import stdtrit

    wider = float(stdtrit(len(readings) - 1, 0.975)) / 1.96
    low, median, high = (np.log(percentile_of_each(edges, readings, f)) for f in (0.1, 0.5, 0.9))
    return tuple(max(wider * float(v.std(ddof=1)), least) for v in (median, (high - low) / 2))  # type: ignore[return-value]


def spread_notes(kind: KindOfReport, edges: NDArray[float64], readings: NDArray[float64]) -> list[str]:
    """Warnings about readings that differ more than the standard or the trade accepts."""
    if kind == "sieve":
        under = np.cumsum(readings, axis=1)[:, :-1]
        apart = np.ptp(under, axis=0)
        worst = int(apart.argmax())
        if apart[worst] <= SIEVED_TWICE:
            return []
        return [
            f"repeated sievings differ by up to {apart[worst]:.1%} of the mass (at {edges[worst] * 1e6:.4g} µm); "
            "1 to 2 % is usual. Their spread goes into the intervals"
        ]
    said = []
    for fraction, accepted in ISO_13320_CV.items():
        sizes = percentile_of_each(edges, readings, fraction)
        if np.isnan(sizes).any():
            continue
        limit = accepted * (2 if sizes.mean() < FINE else 1)
        variation = float(sizes.std(ddof=1) / sizes.mean())
        if variation > limit:
            said.append(f"d{fraction * 100:.0f} by {variation:.1%} ({limit:.0%} accepted)")
    if not said:
        return []
    return [
        f"the {len(readings)} readings scatter more than ISO 13320 accepts: {', '.join(said)}; "
        "their spread goes into the intervals"
    ]
