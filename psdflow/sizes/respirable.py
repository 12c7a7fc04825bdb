"""The ISO 7708 conventions: which share of airborne particles can be inhaled and how deep it goes."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

# Median (µm) and geometric standard deviation of the cumulative log-normals, ISO 7708:1995.
THORACIC_MEDIAN, RESPIRABLE_MEDIAN, SPREAD = 11.64, 4.25, 1.5
LARGEST_INHALED = 100e-6  # m; the inhalable convention says nothing of larger grains: they are left out of the shares


def aerodynamic_diameter(
    *, diameter: ArrayLike, particle_density: ArrayLike, shape_factor: ArrayLike = 1.0
) -> NDArray[np.float64]:
    """``d_v sqrt(ρ_p / (1000 χ))`` in m: the water-density sphere that settles as fast, Stokes range, no slip.

    ``shape_factor`` χ is the dynamic shape factor (sphere 1, quartz about 1.36; Hinds 1999, from memory). Good
    from 2 to 60 µm in air.
    """
    ratio = np.asarray(particle_density, float) / (1000.0 * np.asarray(shape_factor, float))
    return np.asarray(np.asarray(diameter, float) * np.sqrt(ratio))


def inhalable(aerodynamic: ArrayLike) -> NDArray[np.float64]:
    """``0.5 [1 + exp(-0.06 d)]``, d in µm up to 100; the size is given in m. Source: ISO 7708:1995 (from memory)."""
    return np.asarray(0.5 * (1 + np.exp(-0.06 * np.asarray(aerodynamic, float) * 1e6)))


def thoracic(aerodynamic: ArrayLike) -> NDArray[np.float64]:
    """Share that passes the larynx; 50 % at 10 µm. Source: ISO 7708:1995 (from memory, its 50 % point checked)."""
    return _passing(aerodynamic, THORACIC_MEDIAN)


def respirable(aerodynamic: ArrayLike) -> NDArray[np.float64]:
    """Share that reaches the alveoli; 50 % at 4 µm. Source: ISO 7708:1995 (median and spread looked up)."""
    return _passing(aerodynamic, RESPIRABLE_MEDIAN)


def _passing(aerodynamic: ArrayLike, median: float) -> NDArray[np.float64]:
    from scipy.special import ndtr

    size = np.asarray(aerodynamic, float)
    return np.asarray(inhalable(size) * ndtr(-np.log(size * 1e6 / median) / np.log(SPREAD)))
