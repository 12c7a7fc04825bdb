"""The pan below the finest sieve and the share above the coarsest size: assumed bounds, never hidden.

The pan has no lower edge, yet ``share / size`` of the pan can rule d32. Its size is estimated from the
log-normal line through the finest measured edges and held inside bounds that sieved log-normal
powders were found to respect; the bounds themselves travel into every interval.
"""

from dataclasses import replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.distribution import MeasuredBy, Quantity, SizeDistribution
from psdflow.errors import InputError

# Plausible surface-mean size of the pan, as a fraction of the finest aperture a. A steep tail leaves the pan just
# under the aperture (0.8 to 0.9 a for sieved log-normal powders of geometric s.d. 1.4 to 1.8, recomputed in the
# tests); a/4 is a pan with a tail of dust. Judgement.
PAN_MEAN_SIZE = (0.25, 0.9)
# Plausible upper edge of the oversize class, as a ratio to the coarsest aperture: one narrow sieve step to one
# octave; the next coarser sieve of a sqrt(2) series is the point value.
OVERSIZE_RATIO = (2**0.25, np.sqrt(2), 2.0)


def mean_size_ratio(ratio: ArrayLike) -> NDArray[np.float64]:
    """Surface-mean size of a log-uniform class over its upper edge, for edge ratio ``ratio`` > 1.

    ``d / b = ln R / (R - 1)``, from ``<1/x> = (1/a - 1/b) / ln(b/a)`` with ``a = b/R``.
    """
    r = np.asarray(ratio, float)
    return np.asarray(np.log(r) / (r - 1))


def ratio_for_mean_size(mean: ArrayLike) -> NDArray[np.float64]:
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


def tail_mean_size(edges: NDArray[np.float64], undersize: NDArray[np.float64]) -> NDArray[np.float64]:
    """Surface-mean size of what lies below ``edges[..., 0]``, over that edge, from a log-normal tail.

    A line through the probits of the three finest edges gives ln x50 and ln sigma_g; the truncated
    mean is ``E[1/x; x<a] = exp(-mu + s²/2) Phi((ln a - mu + s²)/s)`` (ISO 9276-5 log-normal).

    Parameters
    ----------
    edges, undersize : (..., edges)
        Ascending edges in m and the share finer than each; at least two edges.

    Returns
    -------
    Shape of the leading axes; NaN where the pan is empty or the line doesn't rise.
    """
    from scipy.special import log_ndtr, ndtri

    q = undersize[..., :3]
    x = np.log(edges[..., :3])
    usable = (q > 1e-9) & (q < 1 - 1e-9)
    z = ndtri(np.where(usable, q, 0.5))
    n = usable.sum(axis=-1)
    with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
        mean_x = (x * usable).sum(-1) / n
        mean_z = (z * usable).sum(-1) / n
        sxx = (usable * (x - mean_x[..., None]) ** 2).sum(-1)
        slope = (usable * (x - mean_x[..., None]) * (z - mean_z[..., None])).sum(-1) / sxx
        s = 1 / slope
        mu = mean_x - s * mean_z
        a = x[..., 0]
        inverse = np.exp(-mu + s**2 / 2 + log_ndtr((a - mu + s**2) / s) - log_ndtr((a - mu) / s))
        mean = 1 / (inverse * np.exp(a))
    return np.asarray(np.where((n >= 2) & (slope > 0) & usable[..., 0], mean, np.nan))


def pan_ratio(edges: NDArray[np.float64], undersize: NDArray[np.float64]) -> NDArray[np.float64]:
    """Assumed edge ratio of the pan class, from the log-normal tail held inside the plausible bounds.

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
    )


def moved_ends(
    distribution: SizeDistribution, pan_position: NDArray[np.float64], oversize_position: NDArray[np.float64]
) -> SizeDistribution:
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


def _triangular(
    probability: NDArray[np.float64], low: float, mode: NDArray[np.float64], high: float
) -> NDArray[np.float64]:
    """Quantile of the triangular distribution on ``low``..``high`` peaked at ``mode`` (clipped inside)."""
    peak = np.clip(mode, low, high)
    rising = low + np.sqrt(probability * (high - low) * (peak - low))
    falling = high - np.sqrt((1 - probability) * (high - low) * (high - peak))
    return np.asarray(np.where(probability * (high - low) < peak - low, rising, falling))
