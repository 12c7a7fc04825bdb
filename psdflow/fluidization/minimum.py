"""Minimum fluidization: the published correlations, the rule that chooses one, and complete fluidization.

The same formulas hold in gas and in liquid. ``TWO_CONSTANTS`` is the large family
``Re = sqrt(C1² + C2 Ar) - C1``; the others are in ``minimum_forms``. Which size a method takes
(surface-volume or volume-equivalent) is said by its catalogue entry and honoured by
``minimum_fluidization_velocities``.
"""

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.minimum_forms import EXPLICIT, case
from psdflow.fluidization.numbers import GRAVITY
from psdflow.fluidization.numerics import floats
from psdflow.methods.fluidization import METHODS

TWO_CONSTANTS: dict[str, tuple[float, float]] = {
    "wen-yu-1966": (33.7, 0.0408),
    "bourgeois-grenier-1968": (25.46, 0.0382),
    "richardson-1971": (25.7, 0.0365),
    "saxena-vogel-1977": (25.28, 0.0571),
    "babu-1978": (25.25, 0.0651),
    "vaid-sen-gupta-1978": (24.0, 0.0546),
    "grace-1982": (27.2, 0.0408),
    "chitester-1984": (28.7, 0.0494),
    "thonglimp-1984": (31.6, 0.0425),
    "nakamura-1985": (33.95, 0.0465),
    "zheng-1985": (18.75, 0.03125),
    "lucas-1986-round": (29.5, 0.0357),
    "lucas-1986-sharp": (32.1, 0.0571),
    "lucas-1986-other": (25.2, 0.0672),
    "bin-1993": (27.31, 0.0386),
    "tannous-1994": (25.83, 0.043),
    "reina-2001": (48.0, 0.045),
}
CHYANG_HUANG_1988 = (33.3, 0.033)  # complete fluidization, not onset

# Bounds of the rule in recommended_u_mf: a judgement of this project.
FINE_SIZE, COARSE_SIZE = 100e-6, 500e-6  # m
HIGH_PRESSURE = 5e5  # Pa
GAS_DENSITY_LIMIT = 200.0  # kg/m³; a denser fluid is a liquid here

_SIZE_TAKEN = {entry.key: entry.diameter for entry in METHODS if entry.quantity == "u_mf"}


class Recommended(NamedTuple):
    """A value and the catalogue key of the method it came from, element by element."""

    value: NDArray[np.float64]
    method: NDArray[np.str_]


def reynolds_two_constants(
    *, archimedes: ArrayLike, constant_1: ArrayLike, constant_2: ArrayLike
) -> NDArray[np.float64]:
    """``Re_mf = sqrt(C1² + C2 Ar) - C1``, written so that nothing cancels at small Ar."""
    c1, c2_ar = floats(constant_1), floats(constant_2) * floats(archimedes)
    return c2_ar / (np.sqrt(c1**2 + c2_ar) + c1)


def minimum_fluidization_two_constants(
    *,
    diameter: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    constant_1: ArrayLike,
    constant_2: ArrayLike,
) -> NDArray[np.float64]:
    """U_mf (m/s) of the two-constant family; ``diameter`` is volume-equivalent (m).

    Constants: ``TWO_CONSTANTS``; sources and ranges: the catalogue. Densities in kg/m³, viscosity in
    Pa·s, any broadcastable shapes. 0 for size 0, ``nan`` where the grain is lighter than the fluid.
    """
    c = case(diameter, particle_density, fluid_density, fluid_viscosity)
    return c.velocity(reynolds_two_constants(archimedes=c.archimedes, constant_1=constant_1, constant_2=constant_2))


def minimum_fluidization_ergun(
    *,
    diameter: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    voidage: ArrayLike,
    sphericity: ArrayLike,
) -> NDArray[np.float64]:
    """U_mf (m/s) where Ergun's pressure drop carries the bed: the method when voidage and shape are measured.

    ``1.75/(ε³φ) Re² + 150(1-ε)/(ε³φ²) Re = Ar`` on the volume-equivalent diameter (m); ``voidage`` is
    that at minimum fluidization. With a surface-volume diameter set ``sphericity=1``: never both.
    Source: Ergun 1952; Kunii & Levenspiel 1991, eq. 3.18-3.21 (looked up).
    """
    e, phi = floats(voidage), floats(sphericity)
    return minimum_fluidization_two_constants(
        diameter=diameter,
        particle_density=particle_density,
        fluid_density=fluid_density,
        fluid_viscosity=fluid_viscosity,
        constant_1=150.0 * (1.0 - e) / (3.5 * phi),
        constant_2=e**3 * phi / 1.75,
    )


def minimum_fluidization_carman_kozeny(
    *,
    diameter: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    voidage: ArrayLike,
    sphericity: ArrayLike,
) -> NDArray[np.float64]:
    """U_mf (m/s) of fine grains, ``(φ d)² Δρ g ε³/[180 µ (1-ε)]``, Re_mf < 1; volume-equivalent size.

    Source: Carman 1937 with his 180 (looked up in a course notebook).
    """
    e, phi = floats(voidage), floats(sphericity)
    c = case(diameter, particle_density, fluid_density, fluid_viscosity)
    weight = (phi * c.diameter) ** 2 * c.density_difference * GRAVITY
    return weight * e**3 / (180.0 * c.fluid_viscosity * (1.0 - e))


def minimum_fluidization_todes(
    *,
    diameter: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    voidage: ArrayLike,
) -> NDArray[np.float64]:
    """U_mf (m/s) at a known voidage, ``Re = Ar ε^4.75/(18 + 0.61 sqrt(Ar ε^4.75))``; volume-equivalent size.

    With voidage 0.4 close to ``goroshko_1958``. Source: Todes (from memory).
    """
    c = case(diameter, particle_density, fluid_density, fluid_viscosity)
    x = c.archimedes * floats(voidage) ** 4.75
    return c.velocity(x / (18.0 + 0.61 * np.sqrt(x)))


def voidage_mf_wen_yu(*, sphericity: ArrayLike) -> NDArray[np.float64]:
    """Voidage at minimum fluidization, ``(14 φ)^(-1/3)``. Source: Wen & Yu 1966 (looked up)."""
    return (14.0 * floats(sphericity)) ** (-1.0 / 3.0)


def voidage_mf_broadhurst_becker(
    *, sphericity: ArrayLike, archimedes: ArrayLike, density_ratio: ArrayLike
) -> NDArray[np.float64]:
    """Voidage at minimum fluidization, ``0.586 φ^-0.72 Ar^-0.029 (ρ_f/ρ_p)^0.021``.

    ``density_ratio`` is ρ_p/ρ_f, 500..5e4; 0.85 < φ < 1; 1 < Ar < 1e5.
    Source: Broadhurst & Becker 1975 (from memory).
    """
    shape = 0.586 * floats(sphericity) ** -0.72
    return shape * floats(archimedes) ** -0.029 * floats(density_ratio) ** -0.021


def minimum_fluidization_velocities(
    *,
    diameter_sv: ArrayLike,
    diameter_v: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    sphericity: ArrayLike | None = None,
    voidage: ArrayLike | None = None,
) -> dict[str, NDArray[np.float64]]:
    """U_mf (m/s) by every method that can be evaluated, in or out of its range (ask the catalogue).

    Parameters
    ----------
    diameter_sv, diameter_v
        Surface-volume and volume-equivalent mean diameters, m; each method gets the one it was fitted to.
    particle_density, fluid_density, fluid_viscosity
        kg/m³, kg/m³, Pa·s at the bed's conditions; any broadcastable shapes.
    sphericity, voidage
        Shape and voidage at minimum fluidization. Ergun and Carman & Kozeny need both, Todes the voidage.

    Returns
    -------
    ``{method key: array}``; 0 for size 0, ``nan`` where the grain is lighter than the fluid.
    """
    fluid = {
        "particle_density": particle_density,
        "fluid_density": fluid_density,
        "fluid_viscosity": fluid_viscosity,
    }
    size = {"sv": diameter_sv, "v": diameter_v}
    values = {
        key: minimum_fluidization_two_constants(diameter=size[_SIZE_TAKEN[key]], constant_1=c1, constant_2=c2, **fluid)
        for key, (c1, c2) in TWO_CONSTANTS.items()
    }
    for key, formula in EXPLICIT.items():
        values[key] = formula(diameter=size[_SIZE_TAKEN[key]], **fluid)
    if voidage is not None:
        values["todes"] = minimum_fluidization_todes(diameter=diameter_v, voidage=voidage, **fluid)
        if sphericity is not None:
            bed = {"voidage": voidage, "sphericity": sphericity}
            values["ergun-1952"] = minimum_fluidization_ergun(diameter=diameter_v, **bed, **fluid)
            values["carman-kozeny-1937"] = minimum_fluidization_carman_kozeny(diameter=diameter_v, **bed, **fluid)
    return values


def recommended_u_mf(
    *,
    diameter_sv: ArrayLike,
    diameter_v: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    pressure: ArrayLike | None = None,
    sphericity: ArrayLike | None = None,
    voidage: ArrayLike | None = None,
    measured: ArrayLike = False,
) -> Recommended:
    """U_mf (m/s) by one stated rule, and which method gave it.

    The rule, in this order (d_sv is the surface-volume diameter; a judgement of this project):

    1. voidage at minimum fluidization and sphericity both ``measured``: Ergun 1952;
    2. d_sv below 100 µm in a gas: Baeyens & Geldart 1974, which was fitted to gases;
    3. d_sv above 500 µm, or from 100 µm up at a pressure above 5 bar: geometric mean of Wen & Yu 1966
       and Chitester 1984;
    4. otherwise, and fine grains in liquids: Grace 1982.

    Where the rule changes method the value steps: 4 % at 500 µm; at 100 µm mostly less than 15 %, but 22 %
    for light grains at 850 °C and 28 % for dense ones at 20 bar. That is inside the methods' scatter.

    Parameters
    ----------
    pressure
        Absolute, Pa; ``None`` counts as below 5 bar.
    measured
        True where ``sphericity`` and ``voidage`` were both measured, not assumed. Others as
        ``minimum_fluidization_velocities``.

    Raises
    ------
    ValueError
        If ``measured`` is true anywhere while sphericity or voidage is missing.
    """
    by_ergun = np.asarray(measured, bool)
    if np.any(by_ergun) and (sphericity is None or voidage is None):
        raise ValueError("measured=True needs both sphericity and voidage")
    fluid = {
        "particle_density": particle_density,
        "fluid_density": fluid_density,
        "fluid_viscosity": fluid_viscosity,
    }

    def two_constants(key: str) -> NDArray[np.float64]:
        c1, c2 = TWO_CONSTANTS[key]
        return minimum_fluidization_two_constants(diameter=diameter_v, constant_1=c1, constant_2=c2, **fluid)

    ergun = floats(np.nan)
    if sphericity is not None and voidage is not None:
        ergun = minimum_fluidization_ergun(diameter=diameter_v, voidage=voidage, sphericity=sphericity, **fluid)
    d, absolute = floats(diameter_sv), floats(0.0 if pressure is None else pressure)
    rule = {
        "ergun-1952": (by_ergun, ergun),
        "baeyens-geldart-1974": (
            (d < FINE_SIZE) & (floats(fluid_density) < GAS_DENSITY_LIMIT),
            EXPLICIT["baeyens-geldart-1974"](diameter=d, **fluid),
        ),
        "wen-yu-chitester-mean": (
            (d > COARSE_SIZE) | ((d >= FINE_SIZE) & (absolute > HIGH_PRESSURE)),
            np.sqrt(two_constants("wen-yu-1966") * two_constants("chitester-1984")),
        ),
        "grace-1982": (np.array(True), two_constants("grace-1982")),
    }
    arrays = np.broadcast_arrays(*(array for pair in rule.values() for array in pair))
    conditions, results = arrays[0::2], arrays[1::2]
    place = np.select(conditions, range(len(rule)))
    return Recommended(np.select(conditions, results), np.array(list(rule))[place])


def complete_fluidization_knowlton(
    *, class_minimum_fluidization_velocity: ArrayLike, class_share: ArrayLike
) -> NDArray[np.float64]:
    """U_cf (m/s) at which the whole of a wide powder is carried: mass-weighted mean of the classes' U_mf.

    Last axis is the size classes, leading axes free; shares need not add to 1.
    Source: Knowlton 1977 (from memory).
    """
    u, share = floats(class_minimum_fluidization_velocity), floats(class_share)
    total: NDArray[np.float64] = np.sum(u * share, axis=-1) / np.sum(share, axis=-1)
    return total


def complete_fluidization_chyang_huang(
    *, diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """U_cf (m/s) from one mean size (volume-equivalent, m), ``Re = sqrt(33.3² + 0.033 Ar) - 33.3``.

    Source: Chyang & Huang 1988 (from memory). It lies below Wen & Yu's onset for the same size, so it
    can't be right for narrow powders: take the larger of it and U_mf.
    """
    c1, c2 = CHYANG_HUANG_1988
    return minimum_fluidization_two_constants(
        diameter=diameter,
        particle_density=particle_density,
        fluid_density=fluid_density,
        fluid_viscosity=fluid_viscosity,
        constant_1=c1,
        constant_2=c2,
    )
