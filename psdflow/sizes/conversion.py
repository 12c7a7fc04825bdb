"""From the size that was measured to the size a formula takes.

Sieve aperture, volume-equivalent and surface-volume diameters differ for grains that aren't spheres.
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.distribution import SizeDistribution

CRUSHED_RATIO, CRUSHED_SPHERICITY = 1.13, 0.77


def sieve_to_volume_ratio(sphericity: ArrayLike) -> NDArray[np.float64]:
    """Volume-equivalent diameter over sieve aperture, when it wasn't measured.

    1 for spheres and 1.13 for crushed solids of sphericity 0.77 (Abrahamsen & Geldart 1980, from memory),
    linear between and beyond, never above 1.3. The line is a judgement; flaky or needle-like
    grains need a measured ratio.
    """
    phi = np.asarray(sphericity, float)
    ratio = 1 + (CRUSHED_RATIO - 1) * (1 - phi) / (1 - CRUSHED_SPHERICITY)
    return np.asarray(np.clip(ratio, 1.0, 1.3))


def volume_equivalent(distribution: SizeDistribution, sieve_to_volume: ArrayLike) -> SizeDistribution:
    """The distribution of volume-equivalent diameters.

    ``sieve_to_volume`` (leading shape) multiplies sieve sizes; laser sizes are taken as
    volume-equivalent already, image and settling sizes too (state it beside the result).
    """
    return distribution.scaled(sieve_to_volume) if distribution.measured_by == "sieve" else distribution


def surface_volume(volume_diameter: ArrayLike, sphericity: ArrayLike) -> NDArray[np.float64]:
    """Surface-volume diameter ``d_sv = φ d_v`` (definition of Wadell's sphericity), m."""
    return np.asarray(volume_diameter, float) * np.asarray(sphericity, float)
