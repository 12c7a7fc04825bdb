"""The freeboard: transport disengaging height by every law, and how the flux decays up to it."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.numbers import GRAVITY

Array = NDArray[np.float64]

DECAY = 4.0  # 1/m, Wen & Chen 1982 when it isn't known (3.5 to 6.4; from memory)
FOURNOL_LIMIT = 0.2  # m/s, above which his form runs away


def tdh_zenz_weil(*, velocity: ArrayLike, bed_diameter: ArrayLike) -> Array:
    """``D (2.7 D^-0.36 - 0.7) exp(0.74 U D^-0.23)`` (m): the chart of Zenz & Weil as Horio fitted it.

    Group A in bubbling beds, U below about 1.5 m/s. Source: Horio 1980 (form from memory, confirmed by a number
    looked up: D 0.05, U 0.3 gives 0.563 m).
    """
    u, bed = np.asarray(velocity, float), np.asarray(bed_diameter, float)
    return np.asarray(bed * (2.7 * bed**-0.36 - 0.7) * np.exp(0.74 * u * bed**-0.23))


def tdh_horio(*, bubble_diameter: ArrayLike) -> Array:
    """``4.47 D_b^0.5`` (m), bubble at the surface. Source: Horio 1980 (from memory)."""
    return np.asarray(4.47 * np.sqrt(np.asarray(bubble_diameter, float)))


def tdh_amitin(*, velocity: ArrayLike) -> Array:
    """``0.85 U^1.2 (7.33 - 1.2 log10 U)`` (m). Source: Amitin et al. 1968 (looked up; log10 taken, ln is also met)."""
    u = np.asarray(velocity, float)
    return np.asarray(0.85 * u**1.2 * (7.33 - 1.2 * np.log10(u)))


def tdh_george_grace(*, bubble_diameter: ArrayLike) -> Array:
    """``18.2 D_b`` (m). Source: George & Grace 1978 (from memory)."""
    return np.asarray(18.2 * np.asarray(bubble_diameter, float))


def tdh_fung_hamdullahpur(*, bubble_diameter: ArrayLike) -> Array:
    """``13.8 D_b`` (m). Source: Fung & Hamdullahpur 1993 (from memory)."""
    return np.asarray(13.8 * np.asarray(bubble_diameter, float))


def tdh_smolders_baeyens(
    *, velocity: ArrayLike, minimum_fluidization_velocity: ArrayLike, bubble_diameter: ArrayLike
) -> Array:
    """``6 [(U-U_mf) D_b]^0.6`` (m). Source: Smolders & Baeyens 2001 (from memory)."""
    excess = np.maximum(np.asarray(velocity, float) - np.asarray(minimum_fluidization_velocity, float), 0.0)
    return np.asarray(6.0 * (excess * np.asarray(bubble_diameter, float)) ** 0.6)


def tdh_fournol(*, velocity: ArrayLike) -> Array:
    """``1000 U²/g`` (m), cracking catalyst fines below 0.2 m/s; NaN above. Source: Fournol et al. 1973 (from memory)."""
    u = np.asarray(velocity, float)
    return np.asarray(np.where(u <= FOURNOL_LIMIT, 1000.0 * u**2 / GRAVITY, np.nan))


def disengaging_heights(
    *,
    velocity: ArrayLike,
    minimum_fluidization_velocity: ArrayLike,
    bed_diameter: ArrayLike,
    bubble_diameter: ArrayLike | None = None,
) -> dict[str, Array]:
    """Transport disengaging height (m) by every law that can be evaluated; they spread by a factor of three."""
    every = {
        "zenz-weil-tdh": tdh_zenz_weil(velocity=velocity, bed_diameter=bed_diameter),
        "amitin-1968": tdh_amitin(velocity=velocity),
        "fournol-1973": tdh_fournol(velocity=velocity),
    }
    if bubble_diameter is not None:
        every |= {
            "horio-1980-tdh": tdh_horio(bubble_diameter=bubble_diameter),
            "george-grace-1978": tdh_george_grace(bubble_diameter=bubble_diameter),
            "fung-hamdullahpur-1993": tdh_fung_hamdullahpur(bubble_diameter=bubble_diameter),
            "smolders-baeyens-2001": tdh_smolders_baeyens(
                velocity=velocity,
                minimum_fluidization_velocity=minimum_fluidization_velocity,
                bubble_diameter=bubble_diameter,
            ),
        }
    return every


def surface_flux(
    *,
    velocity: ArrayLike,
    minimum_fluidization_velocity: ArrayLike,
    bubble_diameter: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
) -> Array:
    """Flux thrown up at the bed surface, ``3.07e-9 D_b ρ_g^3.5 g^0.5 (U-U_mf)^2.5 / µ^2.5`` (kg/m²/s).

    An order of magnitude: very steep in density and viscosity. Source: Wen & Chen 1982 (from memory).
    """
    excess = np.maximum(np.asarray(velocity, float) - np.asarray(minimum_fluidization_velocity, float), 0.0)
    gas = np.asarray(fluid_density, float) ** 3.5 / np.asarray(fluid_viscosity, float) ** 2.5
    return np.asarray(3.07e-9 * np.asarray(bubble_diameter, float) * gas * np.sqrt(GRAVITY) * excess**2.5)


def flux_at_height(
    *, far_flux: ArrayLike, surface_flux: ArrayLike, height: ArrayLike, decay: ArrayLike = DECAY
) -> Array:
    """``E∞ + (E_0 - E∞) exp(-a h)`` at ``height`` h (m) above the bed; ``decay`` a in 1/m.

    Source: Wen & Chen 1982; Kunii & Levenspiel 1991, ch. 7 (looked up).
    """
    far = np.asarray(far_flux, float)
    thrown = np.maximum(np.asarray(surface_flux, float) - far, 0.0)
    return np.asarray(far + thrown * np.exp(-np.asarray(decay, float) * np.asarray(height, float)))
