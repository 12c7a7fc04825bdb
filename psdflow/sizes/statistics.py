"""Statistics of a distribution: means, percentiles, spread, fines, specific surface.

Every function takes a `SizeDistribution` of any leading shape and returns arrays of that shape, in SI
units. Source of the definitions: ISO 9276-1:1998 and ISO 9276-2:2014 (formulas from memory, checked
against worked examples in tests/published).
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.distribution import Convention, SizeDistribution


def moment_mean(
    distribution: SizeDistribution, p: int, q: int, convention: Convention = "log-uniform"
) -> NDArray[np.float64]:
    """Moment-ratio mean ``D[p, q] = (M_{p,0} / M_{q,0})^(1/(p-q))`` in m.

    From volume moments ``M_{k,0} ∝ M_{k-3,3}``; ``p = q`` gives the geometric mean of that weighting.
    D[3,2] is the Sauter (surface-volume) mean, D[4,3] the volume mean, D[1,0] the number mean. Means with
    q below 2 weight the finest classes by up to x⁻³ and are only as good as those classes.
    Source: ISO 9276-2:2014.
    """
    if p == q:
        means = np.log(distribution.edges[..., :-1] * distribution.edges[..., 1:]) / 2
        if p == 3:
            return np.asarray(np.exp((distribution.shares * means).sum(axis=-1)))
        step = 1e-4  # D[p, p] is the limit of D[p + h, p - h]
        ratio = distribution.moment(p - 3 + step, convention) / distribution.moment(p - 3 - step, convention)
        return np.asarray(ratio ** (1 / (2 * step)))
    ratio = distribution.moment(p - 3, convention) / distribution.moment(q - 3, convention)
    return np.asarray(ratio ** (1 / (p - q)))


# The named means a report may ask for, as (p, q).
NAMED_MEANS: dict[str, tuple[int, int]] = {
    "d10_number": (1, 0),
    "d20_number": (2, 0),
    "d30_number": (3, 0),
    "d21": (2, 1),
    "d31": (3, 1),
    "d32": (3, 2),
    "d33": (3, 3),
    "d43": (4, 3),
}


def d32(distribution: SizeDistribution, convention: Convention = "log-uniform") -> NDArray[np.float64]:
    """Sauter mean ``1 / Σ(share <1/x>)`` in m: the size with the powder's surface per volume."""
    return moment_mean(distribution, 3, 2, convention)


def d43(distribution: SizeDistribution, convention: Convention = "log-uniform") -> NDArray[np.float64]:
    """Volume-weighted mean size in m."""
    return moment_mean(distribution, 4, 3, convention)


def span(distribution: SizeDistribution) -> NDArray[np.float64]:
    """``(d90 - d10) / d50``, dimensionless."""
    low, mid, high = (distribution.percentile(f) for f in (0.10, 0.50, 0.90))
    return (high - low) / mid


def geometric_sd(distribution: SizeDistribution) -> NDArray[np.float64]:
    """Geometric standard deviation ``sqrt(d84.13 / d15.87)``, dimensionless, 1 for one size."""
    return np.asarray(np.sqrt(distribution.percentile(0.8413) / distribution.percentile(0.1587)))


def specific_surface(
    distribution: SizeDistribution, *, particle_density: ArrayLike, sphericity: ArrayLike
) -> NDArray[np.float64]:
    """External surface per mass ``6 / (φ ρ_p d32)`` in m²/kg, d32 being of volume-equivalent sizes.

    ``sphericity`` (Wadell) 0..1, ``particle_density`` the envelope density in kg/m³: inner pores don't
    count, so a gas-adsorption surface may be thousands of times larger.
    """
    return np.asarray(6 / (np.asarray(sphericity, float) * np.asarray(particle_density, float) * d32(distribution)))


def pan_share(distribution: SizeDistribution) -> NDArray[np.float64]:
    """Share below the finest measured edge, 0 where the lower end is closed."""
    share = np.broadcast_to(distribution.shares, (*distribution.shape, distribution.classes))[..., 0]
    return share if distribution.lower_open else np.zeros_like(share)


def pan_surface_share(distribution: SizeDistribution) -> NDArray[np.float64]:
    """Share of the powder's surface that the pan holds under its assumed size: how far d32 is a guess."""
    first = SizeDistribution(distribution.edges[..., :2], np.ones(1))
    return pan_share(distribution) * first.moment(-1) / distribution.moment(-1)


def in_open_end(distribution: SizeDistribution, fraction: float) -> NDArray[np.bool_]:
    """Whether the percentile ``fraction`` lies inside the pan or the oversize, hence is an assumption."""
    cumulative = distribution.cumulative
    below = distribution.lower_open & (cumulative[..., 1] > fraction)
    above = distribution.upper_open & (cumulative[..., -2] < fraction)
    return np.broadcast_to(below | above, distribution.shape)
