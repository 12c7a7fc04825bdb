"""Elutriation: the rate constant K*∞ of each published law, the rule that combines them, and its limits.

``K*∞`` (kg/m²/s) is the flux above the disengaging height that a bed of nothing but that size would give; the
flux of a class is ``K*∞ x share in the bed``. Classes with a terminal velocity at or above the gas velocity
have K* = 0 in every law here: some authors' formulas vanish there by themselves, the others are cut there.
All parameters are SI, keyword-only, and broadcast; sizes are volume-equivalent.
"""

from collections.abc import Callable
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.numbers import GRAVITY

Array = NDArray[np.float64]

CRITICAL_SIZE_CONSTANT = 10325.0  # µm (kg/m³)^0.725
LARGEST_CONSTANT = 1e4  # kg/m²/s; a law that gives more has left its physics, and the number is cut there
TURBULENT_FREEBOARD = 3000.0  # Reynolds number with the column diameter
# Laws whose combination is recommended, where their ranges cover the case; the others are shown beside them.
DEFAULT_LAWS = (
    "zenz-weil-1958",
    "geldart-1979",
    "tasirin-geldart-1998",
    "wen-chen-1982",
    "colakyan-levenspiel-1984",
    "wen-hashinger-1960",
)


def zenz_weil(
    *, diameter: ArrayLike, velocity: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike
) -> Array:
    """``X = U²/(g d ρ_p²)`` in m⁶/kg²; ``ρ_g U 1.26e7 X^1.88`` up to X = 3e-4, ``ρ_g U 4.31e4 X^1.18`` above.

    The exponents and coefficients belong together only in SI: the branches meet at X = 3.001e-4 there.
    Source: Zenz & Weil 1958 (looked up through worked examples it reproduces).
    """
    u, rho_p = np.asarray(velocity, float), np.asarray(particle_density, float)
    x = u**2 / (GRAVITY * np.asarray(diameter, float) * rho_p**2)
    branch = np.where(x <= 3e-4, 1.26e7 * x**1.88, 4.31e4 * x**1.18)
    return np.asarray(np.asarray(fluid_density, float) * u * branch)


def yagi_aochi(
    *,
    diameter: ArrayLike,
    terminal_velocity: ArrayLike,
    velocity: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
) -> Array:
    """``µ (U-U_t)²/(g d²) [0.0015 Re_t^0.5 + 0.01 Re_t^1.2]``. Source: Yagi & Aochi 1955 (looked up)."""
    d, mu, excess = (
        np.asarray(diameter, float),
        np.asarray(fluid_viscosity, float),
        _excess(velocity, terminal_velocity),
    )
    re = np.asarray(terminal_velocity, float) * d * np.asarray(fluid_density, float) / mu
    return np.asarray(mu * excess**2 / (GRAVITY * d**2) * (0.0015 * re**0.5 + 0.01 * re**1.2))


def wen_hashinger(
    *,
    diameter: ArrayLike,
    terminal_velocity: ArrayLike,
    velocity: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
) -> Array:
    """``1.52e-5 ρ_g (U-U_t) [(U-U_t)²/(g d)]^0.5 Re_t^0.725 [(ρ_p-ρ_g)/ρ_g]^1.15``.

    1.7e-5 is also quoted. Source: Wen & Hashinger 1960 (looked up).
    """
    return _froude_form(
        diameter, terminal_velocity, velocity, particle_density, fluid_density, fluid_viscosity, (1.52e-5, 0.725, 1.15)
    )


def tanaka(
    *,
    diameter: ArrayLike,
    terminal_velocity: ArrayLike,
    velocity: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
) -> Array:
    """``4.6e-2 ρ_g (U-U_t) [(U-U_t)²/(g d)]^0.5 Re_t^0.3 [(ρ_p-ρ_g)/ρ_g]^0.15``.

    Source: Tanaka et al. 1972 (from memory).
    """
    return _froude_form(
        diameter, terminal_velocity, velocity, particle_density, fluid_density, fluid_viscosity, (4.6e-2, 0.3, 0.15)
    )


def merrick_highley(
    *,
    terminal_velocity: ArrayLike,
    velocity: ArrayLike,
    fluid_density: ArrayLike,
    minimum_fluidization_velocity: ArrayLike,
) -> Array:
    """``ρ_g U {1e-4 + 130 exp[-10.4 (U_t/U)^0.5 (U_mf/(U-U_mf))^0.25]}``; grossly high for fines.

    Source: Merrick & Highley 1974 (looked up; 1e-3 is also quoted for the first term).
    """
    u, u_mf = np.asarray(velocity, float), np.asarray(minimum_fluidization_velocity, float)
    ratio = u_mf / np.maximum(u - u_mf, 1e-12)
    shape = np.exp(-10.4 * np.sqrt(np.asarray(terminal_velocity, float) / u) * ratio**0.25)
    return np.asarray(np.asarray(fluid_density, float) * u * (1e-4 + 130 * shape))


def geldart(*, terminal_velocity: ArrayLike, velocity: ArrayLike, fluid_density: ArrayLike) -> Array:
    """``23.7 ρ_g U exp(-5.4 U_t/U)``. Source: Geldart et al. 1979 (looked up)."""
    u = np.asarray(velocity, float)
    return np.asarray(23.7 * np.asarray(fluid_density, float) * u * np.exp(-5.4 * np.asarray(terminal_velocity) / u))


def colakyan_levenspiel(*, terminal_velocity: ArrayLike, velocity: ArrayLike, particle_density: ArrayLike) -> Array:
    """``0.011 ρ_p (1 - U_t/U)²``; no gas density in it. Source: Colakyan & Levenspiel 1984 (from memory)."""
    share = _excess(velocity, terminal_velocity) / np.asarray(velocity, float)
    return np.asarray(0.011 * np.asarray(particle_density, float) * share**2)


def wen_chen(
    *,
    diameter: ArrayLike,
    terminal_velocity: ArrayLike,
    velocity: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    bed_diameter: ArrayLike,
) -> Array:
    """``ρ_p (1-ε)(U-U_t)`` with ``ε = [1 + λ (U-U_t)²/(2 g D)]^(-1/4.7)``.

    ``λ = (d²/ρ_p)(ρ_g/µ)^2.5 x 5.17 Re^-1.5 D²`` up to Re = 2.38/D, else ``12.3 Re^-2.5 D``; Re with U-U_t.
    Source: Wen & Chen 1982 (from memory; the branches join exactly).
    """
    d, bed, excess = np.asarray(diameter, float), np.asarray(bed_diameter, float), _excess(velocity, terminal_velocity)
    rho_p, rho_g, mu = (np.asarray(x, float) for x in (particle_density, fluid_density, fluid_viscosity))
    re = np.maximum(rho_g * excess * d / mu, 1e-12)
    friction = np.where(re <= 2.38 / bed, 5.17 * re**-1.5 * bed**2, 12.3 * re**-2.5 * bed)
    term = d**2 / rho_p * (rho_g / mu) ** 2.5 * friction * excess**2 / (2 * GRAVITY * bed)
    solids = -np.expm1(-np.log1p(term) / 4.7)
    return np.asarray(rho_p * solids * excess)


def tasirin_geldart(
    *,
    terminal_velocity: ArrayLike,
    velocity: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    bed_diameter: ArrayLike,
) -> Array:
    """``23.7 ρ_g U^2.5 exp(-5.4 U_t/U)`` in a turbulent freeboard (Re_D > 3000), 14.5 in a laminar one.

    Dimensional: U in m/s. Two memories disagree on which constant is which.
    Source: Tasirin & Geldart 1998 (from memory).
    """
    u, rho = np.asarray(velocity, float), np.asarray(fluid_density, float)
    re = rho * u * np.asarray(bed_diameter, float) / np.asarray(fluid_viscosity, float)
    constant = np.where(re > TURBULENT_FREEBOARD, 23.7, 14.5)
    return np.asarray(constant * rho * u**2.5 * np.exp(-5.4 * np.asarray(terminal_velocity, float) / u))


def baeyens(*, terminal_velocity: ArrayLike, velocity: ArrayLike, particle_density: ArrayLike) -> Array:
    """``5.4e-5 ρ_p (U/0.2)^3.4 (1 - U_t/U)²``, for U below 0.7 m/s. Source: Baeyens et al. 1992 (from memory)."""
    u = np.asarray(velocity, float)
    share = _excess(u, terminal_velocity) / u
    return np.asarray(5.4e-5 * np.asarray(particle_density, float) * (u / 0.2) ** 3.4 * share**2)


def choi(
    *,
    diameter: ArrayLike,
    velocity: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
) -> Array:
    """``(µ/d) Ar^0.5 exp(6.92 - 2.11 F_g^0.303 - 13.1/F_d^0.902)``, ``F_g = g d (ρ_p-ρ_g)``, ``F_d = Cd ρ_g U²/2``.

    Cd is 24/Re up to 5.8, 10/Re^0.5 up to 540, 0.43 above; Re with U. Ignores forces between grains.
    Source: Choi et al. 1999 (from memory).
    """
    d, u = np.asarray(diameter, float), np.asarray(velocity, float)
    rho_p, rho_g, mu = (np.asarray(x, float) for x in (particle_density, fluid_density, fluid_viscosity))
    re = np.maximum(rho_g * u * d / mu, 1e-12)
    drag = np.where(re <= 5.8, 24 / re, np.where(re <= 540, 10 / np.sqrt(re), 0.43))
    weight, pull = GRAVITY * d * (rho_p - rho_g), drag * rho_g * u**2 / 2
    ar = GRAVITY * d**3 * rho_g * (rho_p - rho_g) / mu**2
    exponent = 6.92 - 2.11 * weight**0.303 - 13.1 / pull**0.902
    return np.asarray(mu / d * np.sqrt(ar) * np.exp(np.maximum(exponent, -500)))


def critical_size(*, particle_density: ArrayLike) -> Array:
    """Size (m) below which the flux no longer rises, ``10325 µm / ρ_p^0.725``: fines travel as clusters.

    Below it a law is evaluated at this size, an upper bound. 34.5 µm at 2600 kg/m³.
    Source: Baeyens, Geldart & Wu 1992, Powder Technol. 71:71 (from memory).
    """
    return np.asarray(CRITICAL_SIZE_CONSTANT / np.asarray(particle_density, float) ** 0.725 * 1e-6)


_LAWS: dict[str, tuple[Callable[..., Array], str]] = {
    "zenz-weil-1958": (zenz_weil, "d U rho_p rho_g"),
    "geldart-1979": (geldart, "Ut U rho_g"),
    "tasirin-geldart-1998": (tasirin_geldart, "Ut U rho_g mu D"),
    "wen-chen-1982": (wen_chen, "d Ut U rho_p rho_g mu D"),
    "colakyan-levenspiel-1984": (colakyan_levenspiel, "Ut U rho_p"),
    "wen-hashinger-1960": (wen_hashinger, "d Ut U rho_p rho_g mu"),
    "choi-1999": (choi, "d U rho_p rho_g mu"),
    "baeyens-1992": (baeyens, "Ut U rho_p"),
    "tanaka-1972": (tanaka, "d Ut U rho_p rho_g mu"),
    "merrick-highley-1974": (merrick_highley, "Ut U rho_g Umf"),
    "yagi-aochi-1955": (yagi_aochi, "d Ut U rho_g mu"),
}
LAWS = tuple(_LAWS)
_NAMES = {
    "d": "diameter", "Ut": "terminal_velocity", "U": "velocity", "rho_p": "particle_density", "rho_g": "fluid_density",
    "mu": "fluid_viscosity", "D": "bed_diameter", "Umf": "minimum_fluidization_velocity",
}  # fmt: skip


def rate_constants(laws: tuple[str, ...] = LAWS, **case: ArrayLike) -> dict[str, Array]:
    """K*∞ (kg/m²/s) by every law of ``laws``, 0 where the terminal velocity reaches the gas velocity.

    Parameters
    ----------
    laws
        Catalogue keys, of ``LAWS``.
    **case
        ``diameter``, ``terminal_velocity``, ``velocity``, ``particle_density``, ``fluid_density``,
        ``fluid_viscosity``, ``bed_diameter``, ``minimum_fluidization_velocity``; any broadcastable shapes.
    """
    carried = np.asarray(case["terminal_velocity"]) < np.asarray(case["velocity"])
    result: dict[str, Array] = {}
    with np.errstate(over="ignore", under="ignore", divide="ignore", invalid="ignore"):
        for key in laws:
            formula, takes = _LAWS[key]
            arguments: dict[str, Any] = {_NAMES[name]: case[_NAMES[name]] for name in takes.split()}
            value = np.minimum(np.nan_to_num(formula(**arguments), posinf=LARGEST_CONSTANT), LARGEST_CONSTANT)
            result[key] = np.asarray(np.where(carried, value, 0.0))
    return result


def combined_rate_constant(constants: dict[str, Array], usable: dict[str, NDArray[np.bool_]]) -> Array:
    """Geometric mean over the laws whose range covers the case: the recommended K*∞, last axis = classes.

    Parameters
    ----------
    constants
        K*∞ by law, (..., classes).
    usable
        Whether each law's published range covers the lot, leading shape (no class axis). Where none does, all
        laws given are taken and the caller must say so.
    """
    keys = list(constants)
    shape = np.broadcast_shapes(*(np.shape(value) for value in constants.values()))
    gates = np.stack([np.broadcast_to(usable[key], shape[:-1]) for key in keys])
    gates = np.where(gates.any(axis=0), gates, True)[..., None]
    values = np.stack([np.broadcast_to(constants[key], shape) for key in keys])
    with np.errstate(divide="ignore"):
        logs = np.where(gates, np.log(np.maximum(values, 1e-300)), 0.0)
    mean = np.exp(logs.sum(axis=0) / gates.sum(axis=0))
    return np.asarray(np.where((values > 0).any(axis=0), mean, 0.0))


def _excess(velocity: ArrayLike, terminal_velocity: ArrayLike) -> Array:
    return np.maximum(np.asarray(velocity, float) - np.asarray(terminal_velocity, float), 0.0)


def _froude_form(
    diameter: ArrayLike,
    terminal_velocity: ArrayLike,
    velocity: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    constants: tuple[float, float, float],
) -> Array:
    """``a ρ_g (U-U_t) Fr^0.5 Re_t^b (Δρ/ρ_g)^c``, the form Wen & Hashinger and Tanaka share."""
    a, b, c = constants
    d, rho_g, excess = (
        np.asarray(diameter, float),
        np.asarray(fluid_density, float),
        _excess(velocity, terminal_velocity),
    )
    re = np.asarray(terminal_velocity, float) * d * rho_g / np.asarray(fluid_viscosity, float)
    ratio = (np.asarray(particle_density, float) - rho_g) / rho_g
    return np.asarray(a * rho_g * excess**2 / np.sqrt(GRAVITY * d) * re**b * ratio**c)
