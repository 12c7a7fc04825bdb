"""Percentiles alone -> a distribution: what d10, d50 and d90 leave open is chosen by a fit, and is a guess."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.distribution import SizeDistribution
from psdflow.sizes.fits import MODELS, fit_models
from psdflow.sizes.statistics import d32, d43

# Standard deviations of ln(size) of a reconstructed report, of all sizes and added at x10 and x90. Measured on 60 laser
# curves of river sediment reduced to d10, d50, d90 (tests/reports/test_report_percentiles.py): the 95 % intervals then hold
# at least nine of ten true d32, d43 and shares below 10, 20 and 45 µm; with the laser figures they held a quarter of the d32.
SIZE_SD, WIDTH_SD = 0.06, 0.15
CLASSES = 24
TAIL = 0.002  # share left beyond each end of the classes, as an open end
THROUGH = "a log-normal piece between each two percentiles"


@dataclass(frozen=True)
class Reconstruction:
    """Classes (edges in m, shares between, below, above), the curve they were taken from, and its d32 and d43."""

    edges: NDArray[np.float64]
    shares: NDArray[np.float64]
    below: float
    above: float
    curve: str
    d32: float
    d43: float


def reconstructed(
    fractions: ArrayLike, sizes: ArrayLike, *, sauter: float | None = None, volume_mean: float | None = None
) -> Reconstruction:
    """A distribution through percentiles.

    Candidates are the log-normal pieces through each percentile, which go on beyond the outermost ones, and those fitted
    models that miss no percentile by more than 1 % of the powder. A stated d32 (else d43) chooses between them;
    without one the pieces are taken.

    Parameters
    ----------
    fractions, sizes : (n,)
        Rising shares 0..1 and sizes in m, at least three.
    sauter, volume_mean
        Stated d32 and d43, m.
    """
    q, x = np.asarray(fractions, float), np.asarray(sizes, float)
    candidates = {THROUGH: _through(q, x)}
    for fit in fit_models(x, q):
        if fit.max_error <= 0.01:
            candidates[MODELS[fit.key].name] = _of_fit(fit.size, fit.shape, fit.key)
    found = {name: _closed(name, *grid) for name, grid in candidates.items()}
    if sauter is not None:
        return min(found.values(), key=lambda r: abs(np.log(r.d32 / sauter)))
    if volume_mean is not None:
        return min(found.values(), key=lambda r: abs(np.log(r.d43 / volume_mean)))
    return found[THROUGH]


def _through(q: NDArray[np.float64], x: NDArray[np.float64]) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Edges and undersize of the pieces: probit of the share linear in ln(size) between and beyond the percentiles."""
    from scipy.special import ndtr, ndtri

    z, log_x = ndtri(q), np.log(x)
    ends = ndtri([TAIL, 1 - TAIL])
    slopes = np.diff(log_x) / np.diff(z)
    z_all = np.concatenate([[ends[0]], z, [ends[1]]])
    log_all = np.concatenate(
        [[log_x[0] + slopes[0] * (ends[0] - z[0])], log_x, [log_x[-1] + slopes[-1] * (ends[1] - z[-1])]]
    )
    logs = np.unique(np.concatenate([np.linspace(log_all[0], log_all[-1], CLASSES + 1), log_x]))
    return np.exp(logs), ndtr(np.interp(logs, log_all, z_all))


def _of_fit(size: float, shape: float, key: str) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Edges and undersize of a fitted model between its outer shares."""
    fine = np.geomspace(size / 1e4, size * 1e2, 4001)
    under = MODELS[key].undersize(fine, size, shape)
    low, high = np.searchsorted(under, [TAIL, 1 - TAIL])
    edges = np.geomspace(fine[max(low - 1, 0)], fine[min(high, fine.size - 1)], CLASSES + 1)
    return edges, MODELS[key].undersize(edges, size, shape)


def _closed(name: str, edges: NDArray[np.float64], under: NDArray[np.float64]) -> Reconstruction:
    whole = SizeDistribution.of(
        np.concatenate([[edges[0] / 2], edges, [edges[-1] * 1.5]]), np.diff(np.concatenate([[0.0], under, [1.0]]))
    )
    return Reconstruction(
        edges, np.diff(under), float(under[0]), float(1 - under[-1]), name, float(d32(whole)), float(d43(whole))
    )
