"""Dimensionless numbers, and the constant of gravity every formula shares."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

GRAVITY = 9.81  # m/s², the value the handbook examples use


def archimedes(
    *, diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """Archimedes number ``d³ ρ_f (ρ_p - ρ_f) g / µ²``.

    Parameters in m, kg/m³, kg/m³, Pa·s; any broadcastable shapes. Wen & Yu call this the Galileo
    number; some books use that name for a group without the density difference.
    """
    d, rho_p = np.asarray(diameter, float), np.asarray(particle_density, float)
    rho_f, mu = np.asarray(fluid_density, float), np.asarray(fluid_viscosity, float)
    return d**3 * rho_f * (rho_p - rho_f) * GRAVITY / mu**2


def reynolds(
    *, velocity: ArrayLike, length: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """Reynolds number ``U L ρ / µ`` (m/s, m, kg/m³, Pa·s)."""
    u, length_ = np.asarray(velocity, float), np.asarray(length, float)
    return u * length_ * np.asarray(fluid_density, float) / np.asarray(fluid_viscosity, float)


def velocity_scale(
    *, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """``[µ (ρ_p - ρ_f) g / ρ_f²]^(1/3)`` in m/s; a velocity divided by it is the dimensionless u*.

    Source: Grace 1986; Kunii & Levenspiel 1991, ch. 3 (looked up).
    """
    rho_p, rho_f = np.asarray(particle_density, float), np.asarray(fluid_density, float)
    scale: NDArray[np.float64] = np.cbrt(np.asarray(fluid_viscosity, float) * (rho_p - rho_f) * GRAVITY / rho_f**2)
    return scale
