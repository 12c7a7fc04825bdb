"""The pan below the finest sieve and the share above the coarsest size: assumed bounds, never hidden.

The pan has no lower edge, yet ``share / size`` of the pan can rule d32. Its size is estimated from the straightest of
three lines (log-normal, Rosin–Rammler–Sperling–Bennett, Gates–Gaudin–Schuhmann) through the finest measured edges
and held inside bounds that sieved powders were found to respect; the bounds themselves travel into every interval.
"""

from collections.abc import Callable
from dataclasses import replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.distribution import MeasuredBy, Quantity, SizeDistribution
from psdflow.errors import InputError
from psdflow.quality import Quality

Array = NDArray[np.float64]

# Plausible surface-mean size of the pan, as a fraction of the finest aperture a. A steep tail leaves the pan just
# under the aperture (0.8 to 0.9 a for sieved log-normal powders of geometric s.d. 1.4 to 1.8, recomputed in the
# tests); a/4 is a pan with a tail of dust. Judgement.
PAN_MEAN_SIZE = (0.25, 0.9)
# Plausible upper edge of the oversize class, as a ratio to the coarsest aperture: one narrow sieve step to one
# octave; the next coarser sieve of a sqrt(2) series is the point value.
OVERSIZE_RATIO = (2**0.25, np.sqrt(2), 2.0)
TAIL_EDGES = 8  # finest edges the tail is fitted to: a stack of sieves, but not a whole laser curve


def mean_size_ratio(ratio: ArrayLike) -> Array:
    """Surface-mean size of a log-uniform class over its upper edge, for edge ratio ``ratio`` > 1.

    ``d / b = ln R / (R - 1)``, from ``<1/x> = (1/a - 1/b) / ln(b/a)`` with ``a = b/R``.
    """
    r = np.asarray(ratio, float)
    return np.asarray(np.log(r) / (r - 1))


def ratio_for_mean_size(mean: ArrayLike) -> Array:
    """Edge ratio R of a log-uniform class whose surface-mean size is ``mean`` x its upper edge.

    Inverse of `mean_size_ratio`, by Newton in ln R; ``mean`` in (0.05, 0.99).
    """
    target = np.asarray(mean, float)
    log_r = np.full(target.shape, 1.0)
    for _ in range(30):
        r = np.exp(log_r)
        value = np.log(log_r / (r - 1)) - np.log(target)
        slope = 1 / log_r - r / (r - 1)
        log_r = np.clip(log_r - value / slope, 1e-3, 8.0)
    return np.asarray(np.exp(log_r))


def tail_mean_size(edges: Array, undersize: Array) -> Array:
    """Surface-mean size of what lies below ``edges[..., 0]``, over that edge, from the best of three tails.

    Log-normal, RRSB and GGS are straight lines in ln(size) against Φ⁻¹(Q), ln(-ln(1-Q)) and ln Q. Each goes through the
    `TAIL_EDGES` finest edges by weighted least squares (weights of a counted share, by the delta method); the one
    nearest to Q serves. Closed forms, so a thousand lots cost no more than one; against the full nonlinear fits of
    `psdflow.sizes.fits` d32 differs by 0.1 % at the median (tests/benchmarks/test_pan_size.py).

    Parameters
    ----------
    edges, undersize : (..., edges)
        Ascending edges in m and the share finer than each; at least two edges.

    Returns
    -------
    Shape of the leading axes; NaN where the pan is empty or no line rises.
    """
    from scipy.special import ndtr, ndtri

    q, x = undersize[..., :TAIL_EDGES], np.log(edges[..., :TAIL_EDGES])
    x = x - x[..., :1]  # sizes in units of the finest edge
    usable = (q > 1e-9) & (q < 1 - 1e-9)
    q = np.where(usable, q, 0.5)
    variance = np.maximum(q * (1 - q), 0.01)
    hazard = -np.log1p(-q)
    probit = ndtri(q)
    lines: list[tuple[Array, Callable[[Array], Array], Array, Callable[[Array, Array], Array]]]
    lines = [  # ordinate, its inverse, dQ/d(ordinate), the tail of a line
        (probit, ndtr, np.exp(-(probit**2) / 2) / np.sqrt(2 * np.pi), _lognormal_tail),
        (np.log(hazard), lambda y: -np.expm1(-np.exp(y)), (1 - q) * hazard, _rrsb_tail),
        (np.log(q), lambda y: np.exp(np.minimum(y, 0.0)), q, _ggs_tail),
    ]
    misses, means = [], []
    with np.errstate(all="ignore"):
        for ordinate, inverse, derivative, tail in lines:
            weight = usable * derivative**2 / variance
            total = weight.sum(-1)
            x0, y0 = (weight * x).sum(-1) / total, (weight * ordinate).sum(-1) / total
            slope = (weight * (x - x0[..., None]) * (ordinate - y0[..., None])).sum(-1)
            slope = slope / (weight * (x - x0[..., None]) ** 2).sum(-1)
            start = y0 - slope * x0  # the line at the finest edge
            miss = (usable * (inverse(start[..., None] + slope[..., None] * x) - q) ** 2 / variance).sum(-1)
            misses.append(np.where(slope > 0, np.round(miss, 12), np.inf))
            means.append(tail(start, slope))
    best = np.stack(misses).argmin(axis=0)  # the first, log-normal, on a tie
    mean = np.take_along_axis(np.stack(means), best[None], 0)[0]
    found = (usable.sum(-1) >= 2) & usable[..., 0] & np.isfinite(np.stack(misses).min(axis=0))
    return np.asarray(np.where(found, mean, np.nan))


def _lognormal_tail(start: Array, slope: Array) -> Array:
    """``E[1/x; x<a] = exp(-mu + s²/2) Φ((ln a - mu + s²)/s)``, ISO 9276-5 log-normal; mean size of the tail over a."""
    from scipy.special import log_ndtr

    s = 1 / slope
    return np.asarray(np.exp(-start * s - s**2 / 2 - log_ndtr(start + s) + log_ndtr(start)))


def _rrsb_tail(start: Array, slope: Array) -> Array:
    """``Q(a) x' / (a γ(1 - 1/n, (a/x')^n))``; 0 for n <= 1, where the surface is infinite."""
    from scipy.special import gamma, gammainc

    order = np.where(slope > 1, 1 - 1 / slope, 0.5)
    lower = np.exp(start)  # (a/x')^n
    mean = -np.expm1(-lower) * np.exp(-start / slope) / (gamma(order) * gammainc(order, lower))
    return np.asarray(np.where(slope > 1, mean, 0.0))


def _ggs_tail(start: Array, slope: Array) -> Array:
    """``(m - 1) / m``; 0 for m <= 1, where the surface is infinite."""
    return np.asarray(np.where(slope > 1, 1 - 1 / slope, 0.0)) + 0 * start


def pan_ratio(edges: Array, undersize: Array) -> Array:
    """Assumed edge ratio of the pan class, from the best tail held inside the plausible bounds.

    Half the aperture is the mean size where there is no tail to follow.
    """
    tail = tail_mean_size(edges, undersize)
    return ratio_for_mean_size(np.clip(np.where(np.isnan(tail), 0.5, tail), *PAN_MEAN_SIZE))


def with_open_ends(
    *,
    edges: ArrayLike,
    shares: ArrayLike,
    below: float = 0.0,
    above: float = 0.0,
    measured_by: MeasuredBy = "sieve",
    quantity: Quantity = "mass",
    quality: Quality | None = None,
) -> SizeDistribution:
    """A distribution from measured edges, closing a pan (``below``) and an oversize (``above``) share.

    Parameters
    ----------
    edges : (n + 1,)
        Measured edges in m, ascending; at least one.
    shares : (n,)
        Shares between them; empty if only one sieve was used.
    below, above
        Shares under the first and over the last edge, 0 if closed.
    quality
        How good the report is.
    """
    edge_array, share_array = np.asarray(edges, float), np.asarray(shares, float)
    if edge_array.size < 2 and not (below > 0 and above > 0):
        raise InputError("a distribution needs at least one class between two sizes; only one size was given")
    if below > 0:
        undersize = below + np.concatenate([[0.0], np.cumsum(share_array)])
        ratio = pan_ratio(edge_array, undersize / (share_array.sum() + below + above))
        edge_array = np.concatenate([[edge_array[0] / ratio], edge_array])
        share_array = np.concatenate([[below], share_array])
    if above > 0:
        edge_array = np.concatenate([edge_array, [edge_array[-1] * OVERSIZE_RATIO[1]]])
        share_array = np.concatenate([share_array, [above]])
    return SizeDistribution.of(
        edge_array,
        share_array,
        quantity=quantity,
        measured_by=measured_by,
        lower_open=below > 0,
        upper_open=above > 0,
        quality=quality,
    )


def moved_ends(distribution: SizeDistribution, pan_position: Array, oversize_position: Array) -> SizeDistribution:
    """The same distribution with its assumed outer edges moved inside their plausible bounds.

    Parameters
    ----------
    pan_position, oversize_position : (draws,)
        Probabilities 0..1 of a triangular distribution in ln(size) between the plausible bounds, peaked
        at the assumed value: 0 is the finest pan (the lowest upper edge), 1 the coarsest.

    Returns
    -------
    Distribution of leading shape ``(..., draws)``; a closed end stays where it was measured.
    """
    edges = distribution.edges[..., None, :] + np.zeros((pan_position.size, 1))
    if distribution.lower_open:
        assumed = mean_size_ratio(edges[..., 1] / edges[..., 0])
        mean = _triangular(pan_position, np.log(PAN_MEAN_SIZE[0]), np.log(assumed), np.log(PAN_MEAN_SIZE[1]))
        edges[..., 0] = edges[..., 1] / ratio_for_mean_size(np.exp(mean))
    if distribution.upper_open:
        low, _, high = (np.log(ratio) for ratio in OVERSIZE_RATIO)
        assumed = np.log(edges[..., -1] / edges[..., -2])
        edges[..., -1] = edges[..., -2] * np.exp(_triangular(oversize_position, low, assumed, high))
    shares = distribution.shares
    return replace(distribution, edges=edges, shares=shares[..., None, :] if shares.ndim > 1 else shares)


def _triangular(probability: Array, low: float, mode: Array, high: float) -> Array:
    """Quantile of the triangular distribution on ``low``..``high`` peaked at ``mode`` (clipped inside)."""
    peak = np.clip(mode, low, high)
    rising = low + np.sqrt(probability * (high - low) * (peak - low))
    falling = high - np.sqrt((1 - probability) * (high - low) * (high - peak))
    return np.asarray(np.where(probability * (high - low) < peak - low, rising, falling))
