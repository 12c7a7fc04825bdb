"""Pressure drop of fluidized and packed beds, expansion in liquids, and how smoothly a bed will fluidize."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.numbers import GRAVITY
from psdflow.fluidization.numerics import floats


def bed_pressure_drop(
    *, bed_height: ArrayLike, voidage: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike
) -> NDArray[np.float64]:
    """Pressure drop (Pa) of a fluidized bed, its weight less buoyancy: ``(1-ε)(ρ_p - ρ_f) g H``.

    Height (m) and voidage taken in the same state, settled or expanded. Constant above U_mf. The fluid's
    own hydrostatic head is not in it. Common practice, no source.
    """
    solids = (1.0 - floats(voidage)) * floats(bed_height)
    return solids * (floats(particle_density) - floats(fluid_density)) * GRAVITY


def bed_pressure_drop_of_mass(
    *, bed_mass: ArrayLike, bed_diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike
) -> NDArray[np.float64]:
    """Pressure drop (Pa) of a fluidized bed of known mass (kg): ``(M g/A)(1 - ρ_f/ρ_p)``."""
    area = np.pi / 4.0 * floats(bed_diameter) ** 2
    buoyancy = 1.0 - floats(fluid_density) / floats(particle_density)
    return floats(bed_mass) * GRAVITY / area * buoyancy


def packed_bed_pressure_gradient(
    *,
    velocity: ArrayLike,
    diameter: ArrayLike,
    voidage: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    sphericity: ArrayLike = 1.0,
) -> NDArray[np.float64]:
    """Pressure gradient (Pa/m) of a fixed bed.

    ``150 (1-ε)² µ U/(ε³ (φd)²) + 1.75 (1-ε) ρ U²/(ε³ φd)`` on the volume-equivalent diameter; with the
    surface-volume diameter leave ``sphericity`` at 1. Source: Ergun 1952 (looked up).
    """
    u, e = floats(velocity), floats(voidage)
    size = floats(sphericity) * floats(diameter)
    viscous = 150.0 * (1.0 - e) ** 2 * floats(fluid_viscosity) * u / (e**3 * size**2)
    inertial = 1.75 * (1.0 - e) * floats(fluid_density) * u**2 / (e**3 * size)
    return viscous + inertial


def richardson_zaki_exponent(*, reynolds_t: ArrayLike) -> NDArray[np.float64]:
    """Exponent n of ``U = U_i ε^n`` without walls, ``(4.7 - n)/(n - 2.35) = 0.175 Re_t^0.75``.

    ``reynolds_t`` is that of the terminal velocity. Within 0.1 of Richardson & Zaki's table VI.
    Source: Rowe 1987 (from memory).
    """
    x = 0.175 * floats(reynolds_t) ** 0.75
    return (4.7 + 2.35 * x) / (1.0 + x)


def richardson_zaki_exponent_piecewise(
    *, reynolds_t: ArrayLike, diameter_ratio: ArrayLike = 0.0
) -> NDArray[np.float64]:
    """Exponent n in the original pieces, with the wall (``diameter_ratio`` = d/D).

    Source: Richardson & Zaki 1954 (from memory, within 0.1 of their table VI; the pieces don't quite meet).
    """
    re, wall = np.broadcast_arrays(floats(reynolds_t), floats(diameter_ratio))
    safe = np.maximum(re, 0.2)
    conditions = [re < 0.2, re < 1.0, re < 200.0, re < 500.0]
    pieces = [
        4.65 + 19.5 * wall,
        (4.35 + 17.5 * wall) * safe**-0.03,
        (4.45 + 18.0 * wall) * safe**-0.1,
        4.45 * safe**-0.1,
    ]
    n: NDArray[np.float64] = np.select(conditions, pieces, 2.39)
    return n


def liquid_bed_voidage(
    *,
    velocity: ArrayLike,
    terminal_velocity: ArrayLike,
    exponent: ArrayLike,
    voidage_mf: ArrayLike,
    diameter_ratio: ArrayLike = 0.0,
) -> NDArray[np.float64]:
    """Voidage of a smoothly fluidized bed, ``(U/U_i)^(1/n)`` with ``log10 U_i = log10 U_t - d/D``.

    Held between ``voidage_mf`` (the bed is fixed below) and 1 (carried out).
    Source: Richardson & Zaki 1954 (from memory).
    """
    reach = floats(terminal_velocity) * 10.0 ** -floats(diameter_ratio)
    free = (floats(velocity) / reach) ** (1.0 / floats(exponent))
    return np.clip(free, floats(voidage_mf), 1.0)


def expanded_height(*, bed_height_mf: ArrayLike, voidage_mf: ArrayLike, voidage: ArrayLike) -> NDArray[np.float64]:
    """Height (m) of the same solids at another voidage, ``H_mf (1-ε_mf)/(1-ε)``; ``inf`` at voidage 1."""
    solids = floats(bed_height_mf) * (1.0 - floats(voidage_mf))
    with np.errstate(divide="ignore"):
        return solids / (1.0 - floats(voidage))


SMOOTH_FROUDE, BUBBLING_FROUDE = 0.13, 1.3


def froude_mf(*, minimum_fluidization_velocity: ArrayLike, diameter: ArrayLike) -> NDArray[np.float64]:
    """``U_mf²/(g d)``: below 0.13 the bed is smooth (particulate), above 1.3 it bubbles.

    Source: Wilhelm & Kwauk 1948 (looked up in a table of criteria).
    """
    return floats(minimum_fluidization_velocity) ** 2 / (GRAVITY * floats(diameter))


SMOOTH_STABILITY = 100.0


def stability_group(
    *,
    minimum_fluidization_velocity: ArrayLike,
    diameter: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    height_ratio: ArrayLike,
) -> NDArray[np.float64]:
    """``Fr_mf Re_mf (Δρ/ρ_f)(H/D)``: below 100 the bed is smooth. ``height_ratio`` is H_mf/D.

    Source: Romero & Johanson 1962 (looked up in a table of criteria).
    """
    u, rho_f = floats(minimum_fluidization_velocity), floats(fluid_density)
    re = u * floats(diameter) * rho_f / floats(fluid_viscosity)
    ratio = (floats(particle_density) - rho_f) / rho_f
    froude = froude_mf(minimum_fluidization_velocity=u, diameter=diameter)
    return froude * re * ratio * floats(height_ratio)
