"""Drag laws, the terminal velocity of a single grain, and the size that has a given terminal velocity.

Sizes are volume-equivalent diameters. The laws are ``Cd(Re)``; the balance of weight, buoyancy and
drag is solved for each element: ``Cd Re² = 4/3 Ar`` for the velocity, ``Cd/Re = 4/3 g Δρ µ/(ρ_f² u³)``
for the size.
"""

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.numbers import GRAVITY, archimedes, velocity_scale
from psdflow.fluidization.numerics import floats, sinking, solve_log

DEFAULT_LAW = "haider-levenspiel-1989"


def drag_schiller_naumann(*, reynolds: ArrayLike, sphericity: ArrayLike = 1.0) -> NDArray[np.float64]:
    """Sphere, ``24/Re (1 + 0.15 Re^0.687)``, and 0.44 once the curve has fallen to it (Re about 990).

    The source switches to 0.44 at Re 1000, where the curve reads 0.438; taking the larger of the two
    keeps the law continuous. Source: Schiller & Naumann 1933/35 (looked up in code quoting it).
    """
    re = floats(reynolds) + 0.0 * floats(sphericity)
    return np.maximum(24.0 / re * (1.0 + 0.15 * re**0.687), 0.44)


def drag_clift_gauvin(*, reynolds: ArrayLike, sphericity: ArrayLike = 1.0) -> NDArray[np.float64]:
    """Sphere, Re < 3e5. Source: Clift & Gauvin 1970/71 (looked up in a page quoting it)."""
    re = floats(reynolds) + 0.0 * floats(sphericity)
    return 24.0 / re * (1.0 + 0.15 * re**0.687) + 0.42 / (1.0 + 4.25e4 * re**-1.16)


def drag_haider_levenspiel(*, reynolds: ArrayLike, sphericity: ArrayLike = 1.0) -> NDArray[np.float64]:
    """Any sphericity 0.5..1, Re < 2.5e4 (spheres 2.6e5).

    At a sphericity of exactly 1 the authors' own sphere constants are used; their general fit carried
    to 1 reads up to 5 % higher. Source: Haider & Levenspiel 1989, eq. 4 and the sphere fit (looked up
    in two independent codes).
    """
    re, phi = floats(reynolds), floats(sphericity)
    sphere = phi == 1.0
    a = np.where(sphere, 0.1806, np.exp(2.3288 - 6.4581 * phi + 2.4486 * phi**2))
    b = np.where(sphere, 0.6459, 0.0964 + 0.5565 * phi)
    c = np.where(sphere, 0.4251, np.exp(4.9050 - 13.8944 * phi + 18.4222 * phi**2 - 10.2599 * phi**3))
    e = np.where(sphere, 6880.95, np.exp(1.4681 + 12.2584 * phi - 20.7322 * phi**2 + 15.8855 * phi**3))
    return 24.0 / re * (1.0 + a * re**b) + c / (1.0 + e / re)


def drag_ganser(*, reynolds: ArrayLike, sphericity: ArrayLike = 1.0) -> NDArray[np.float64]:
    """Isometric grains, Re K1 K2 <= 1e5. Not for spheres: up to 26 % low in Cd at sphericity 1.

    Source: Ganser 1993, eq. 18 and table 7 (looked up in two codes; the logarithm is to base 10 and
    the constant 1.8148, both often misprinted).
    """
    re, phi = floats(reynolds), floats(sphericity)
    stokes_shape = 1.0 / (1.0 / 3.0 + 2.0 / 3.0 * phi**-0.5)
    newton_shape = 10.0 ** (1.8148 * np.abs(np.log10(phi)) ** 0.5743)  # log10(phi) <= 0
    x = re * stokes_shape * newton_shape
    return newton_shape * (24.0 / x * (1.0 + 0.1118 * x**0.6567) + 0.4305 / (1.0 + 3305.0 / x))


DRAG_LAWS: dict[str, Callable[..., NDArray[np.float64]]] = {
    "haider-levenspiel-1989": drag_haider_levenspiel,
    "clift-gauvin-1971": drag_clift_gauvin,
    "schiller-naumann-1935": drag_schiller_naumann,
    "ganser-1993": drag_ganser,
}


def slip_correction(*, diameter: ArrayLike, mean_free_path: ArrayLike) -> NDArray[np.float64]:
    """Cunningham factor by which a gas grips a fine grain less, ``1 + Kn [1.257 + 0.4 exp(-1.1/Kn)]``.

    Parameters in m, ``Kn = 2 λ/d``. Matters below about 5 µm at 1 atm.
    Source: Davies 1945 (looked up in two articles).
    """
    knudsen = 2.0 * floats(mean_free_path) / floats(diameter)
    with np.errstate(divide="ignore", over="ignore"):
        return 1.0 + knudsen * (1.257 + 0.400 * np.exp(-1.10 / knudsen))


def terminal_velocity(
    *,
    diameter: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    sphericity: ArrayLike = 1.0,
    mean_free_path: ArrayLike | None = None,
    law: str = DEFAULT_LAW,
) -> NDArray[np.float64]:
    """Terminal velocity (m/s) of single grains, by the full force balance.

    Parameters
    ----------
    diameter
        Volume-equivalent diameter, m; any broadcastable shape, as all others.
    particle_density, fluid_density
        kg/m³; the particle density is the envelope density, open pores included.
    fluid_viscosity
        Pa·s.
    sphericity
        0 < sphericity <= 1; sphere laws ignore it.
    mean_free_path
        Of the gas, m; when given the drag is divided by the slip correction of Davies 1945.
    law
        Key of ``DRAG_LAWS``.

    Returns
    -------
    Array of the broadcast shape; relative error of the solution below 1e-10. 0 for size 0, ``nan``
    where the grain is lighter than the fluid. Tends to Stokes' law as the size goes to 0.

    Raises
    ------
    ValueError
        For a sphericity outside (0, 1]. ``KeyError`` for an unknown law.
    """
    drag, phi = DRAG_LAWS[law], _checked(sphericity)
    rho_p = sinking(particle_density, fluid_density)
    d, rho_f, mu = floats(diameter), floats(fluid_density), floats(fluid_viscosity)
    weight = archimedes(diameter=d, particle_density=rho_p, fluid_density=rho_f, fluid_viscosity=mu)
    with np.errstate(divide="ignore", invalid="ignore"):
        slip = 1.0 if mean_free_path is None else slip_correction(diameter=d, mean_free_path=mean_free_path)
        target = np.log(4.0 / 3.0 * weight * slip)  # Cd Re², and Cd is divided by the slip factor
        start = np.log(_explicit_reynolds(floats(weight * slip), phi))
        ln_re = solve_log(lambda y: np.log(drag(reynolds=np.exp(y), sphericity=phi)) + 2.0 * y - target, start)
        return np.where(weight == 0.0, 0.0, np.exp(ln_re) * mu / (rho_f * d))


def size_with_terminal_velocity(
    *,
    terminal_velocity: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    sphericity: ArrayLike = 1.0,
    mean_free_path: ArrayLike | None = None,
    law: str = DEFAULT_LAW,
) -> NDArray[np.float64]:
    """Volume-equivalent diameter (m) whose terminal velocity is ``terminal_velocity`` (m/s).

    The inverse of ``terminal_velocity``, with the same parameters and errors. 0 for velocity 0, ``nan``
    where the velocity is negative or the grain no heavier than the fluid.
    """
    drag, phi = DRAG_LAWS[law], _checked(sphericity)
    rho_p = sinking(particle_density, fluid_density)
    u, rho_f, mu = floats(terminal_velocity), floats(fluid_density), floats(fluid_viscosity)
    with np.errstate(divide="ignore", invalid="ignore"):
        group = 4.0 / 3.0 * GRAVITY * (rho_p - rho_f) * mu / (rho_f**2 * u**3)  # Cd/Re
        start = np.log(np.sqrt(24.0 / group) + 0.44 / group + 0.0 * phi)
        viscous_length = np.log(mu / (rho_f * u))  # d = Re µ/(ρ u)

        def residual(y: NDArray[np.float64]) -> NDArray[np.float64]:
            cd = drag(reynolds=np.exp(y), sphericity=phi)
            if mean_free_path is not None:
                cd = cd / slip_correction(diameter=np.exp(y + viscous_length), mean_free_path=mean_free_path)
            return np.log(group) - np.log(cd) + y

        if mean_free_path is not None:
            start = start + 0.0 * floats(mean_free_path)
        size = np.exp(solve_log(residual, start) + viscous_length)
        return np.where((u == 0.0) & np.isfinite(rho_p), 0.0, size)


def terminal_velocity_explicit(
    *,
    diameter: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    sphericity: ArrayLike = 1.0,
) -> NDArray[np.float64]:
    """Terminal velocity (m/s) without a solve, ``u* = [18/d*² + (2.3348 - 1.7439 φ)/d*^0.5]^-1``.

    For hand checks: up to 18 % above the full balance near Re 30. Sphericity 0.5..1, shapes, units and
    errors as ``terminal_velocity``. Source: Haider & Levenspiel 1989 (looked up, 4th digit from memory).
    """
    phi, rho_p = _checked(sphericity), sinking(particle_density, fluid_density)
    weight = archimedes(
        diameter=diameter, particle_density=rho_p, fluid_density=fluid_density, fluid_viscosity=fluid_viscosity
    )
    scale = velocity_scale(particle_density=rho_p, fluid_density=fluid_density, fluid_viscosity=fluid_viscosity)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(weight == 0.0, 0.0, _explicit_reynolds(weight, phi) / np.cbrt(weight) * scale)


def terminal_velocity_stokes(
    *, diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """Creeping flow, ``g d² Δρ/(18 µ)`` (m/s); 2 % high at Re 0.1, 13 % at Re 1. Source: Stokes 1851."""
    difference = sinking(particle_density, fluid_density) - floats(fluid_density)
    return GRAVITY * floats(diameter) ** 2 * difference / (18.0 * floats(fluid_viscosity))


def _explicit_reynolds(weight: NDArray[np.float64], phi: NDArray[np.float64]) -> NDArray[np.float64]:
    """Re of the explicit Haider & Levenspiel form at Archimedes number ``weight``."""
    d_star = np.cbrt(weight)
    return d_star / (18.0 / d_star**2 + (2.3348 - 1.7439 * phi) / np.sqrt(d_star))


def _checked(sphericity: ArrayLike) -> NDArray[np.float64]:
    phi = floats(sphericity)
    if np.any((phi <= 0.0) | (phi > 1.0)):
        raise ValueError("sphericity must lie above 0 and not above 1")
    return phi
