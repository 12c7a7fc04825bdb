"""How much the gas can carry at all: the choking flux of dilute transport, a ceiling to hold a flux against.

The two published laws differ by a factor of ten: a flux above the higher one is impossible, one above the lower one
doubtful. A warning, never a clamp.
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.numbers import GRAVITY

Array = NDArray[np.float64]

_HALVINGS = 60


def choking_flux(
    *,
    velocity: ArrayLike,
    terminal_velocity: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    bed_diameter: ArrayLike,
    law: str = "yang-1983",
) -> Array:
    """Solids flux (kg/m²/s) at which dilute upflow chokes; 0 where the gas is no faster than the grain falls.

    ``2 g D (ε^-4.7 - 1)/(U/ε - U_t)² = 6.81e5 (ρ_g/ρ_p)^2.2`` (Yang 1983) or ``= 2 g ρ_g^0.77 / 2250`` (Punwani et al.
    1976, SI), ``G = ρ_p (1-ε)(U/ε - U_t)``. Both from memory; solved by bisection in the voidage ε.
    """
    u, u_t, rho_p, rho_g, bed = (
        np.asarray(x, float) for x in (velocity, terminal_velocity, particle_density, fluid_density, bed_diameter)
    )
    right = 6.81e5 * (rho_g / rho_p) ** 2.2 if law == "yang-1983" else 2 * GRAVITY * rho_g**0.77 / 2250
    shape = np.broadcast_shapes(u.shape, u_t.shape, rho_p.shape, rho_g.shape, bed.shape)
    low, high = np.full(shape, 0.3), np.ones(shape)
    for _ in range(_HALVINGS):
        voidage = (low + high) / 2
        slip = np.maximum(u / voidage - u_t, 0.0)
        dense = 2 * GRAVITY * bed * (voidage**-4.7 - 1) > right * slip**2
        low, high = np.where(dense, voidage, low), np.where(dense, high, voidage)
    voidage = (low + high) / 2
    flux = rho_p * (1 - voidage) * np.maximum(u / voidage - u_t, 0.0)
    return np.asarray(np.where(u > u_t, flux, 0.0))
