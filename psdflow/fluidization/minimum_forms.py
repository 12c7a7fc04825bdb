"""Minimum fluidization, the formulas outside the two-constant family. All take the four plain inputs.

Every function returns U_mf in m/s from ``diameter`` (m; surface-volume or volume-equivalent as its
docstring says), ``particle_density`` and ``fluid_density`` (kg/m³) and ``fluid_viscosity`` (Pa·s), any
broadcastable shapes; 0 for size 0, ``nan`` where the grain is lighter than the fluid. Ranges: catalogue.
"""

from collections.abc import Callable
from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.numbers import GRAVITY, archimedes
from psdflow.fluidization.numerics import floats, sinking, solve_log


class Case(NamedTuple):
    """The four inputs as arrays, with the density difference and the Archimedes number."""

    diameter: NDArray[np.float64]
    particle_density: NDArray[np.float64]
    fluid_density: NDArray[np.float64]
    fluid_viscosity: NDArray[np.float64]
    density_difference: NDArray[np.float64]
    archimedes: NDArray[np.float64]

    def velocity(self, reynolds: NDArray[np.float64]) -> NDArray[np.float64]:
        """Superficial velocity (m/s) at a grain Reynolds number; 0 where that is 0."""
        with np.errstate(divide="ignore", invalid="ignore"):
            u = reynolds * self.fluid_viscosity / (self.fluid_density * self.diameter)
        return np.where(reynolds == 0.0, 0.0, u)


def case(
    diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> Case:
    """Collect the inputs of one or many cases."""
    d, rho_p = floats(diameter), sinking(particle_density, fluid_density)
    rho_f, mu = floats(fluid_density), floats(fluid_viscosity)
    ar = archimedes(diameter=d, particle_density=rho_p, fluid_density=rho_f, fluid_viscosity=mu)
    return Case(d, rho_p, rho_f, mu, rho_p - rho_f, ar)


def baeyens_geldart_1974(
    *, diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """``(Δρ g)^0.934 d^1.8 / (1110 µ^0.87 ρ_g^0.066)``, surface-volume size up to 150 µm and Re_mf < 1.

    A power law without a turbulent limit: 2.6 times too high for 1 mm glass at 20 bar.
    Source: Baeyens & Geldart 1974 (looked up in two codes).
    """
    c = case(diameter, particle_density, fluid_density, fluid_viscosity)
    top = (c.density_difference * GRAVITY) ** 0.934 * c.diameter**1.8
    return top / (1110.0 * c.fluid_viscosity**0.87 * c.fluid_density**0.066)


def baeyens_geldart_1974_implicit(
    *, diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """``Ar = 1823 Re^1.07 + 21.27 Re²``, surface-volume, all sizes.

    Source: Baeyens & Geldart 1974 (from memory; 21.7 is also met).
    """
    c = case(diameter, particle_density, fluid_density, fluid_viscosity)
    with np.errstate(divide="ignore", invalid="ignore"):
        target = np.log(c.archimedes)
        start = np.log(c.archimedes / (1823.0 + np.sqrt(21.27 * c.archimedes)))
        ln_re = solve_log(lambda y: np.log(1823.0 * np.exp(1.07 * y) + 21.27 * np.exp(2.0 * y)) - target, start)
        return c.velocity(np.where(c.archimedes == 0.0, 0.0, np.exp(ln_re)))


def davies_richardson_1966(
    *, diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """``8e-4 g d² Δρ/µ``, surface-volume, laminar, group A.

    Source: Davies & Richardson 1966 as quoted by Geldart 1973, eq. 3 (looked up); 7.8e-4 is also met.
    """
    c = case(diameter, particle_density, fluid_density, fluid_viscosity)
    return 8e-4 * GRAVITY * c.diameter**2 * c.density_difference / c.fluid_viscosity


def leva_1959(
    *, diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """``0.0093 d^1.82 Δρ^0.94 / (µ^0.88 ρ_g^0.06)``, Re_mf < 10.

    The SI constant follows from 688 in lb, ft, h, in, cP. Source: Leva 1959 (from memory).
    """
    c = case(diameter, particle_density, fluid_density, fluid_viscosity)
    top = 0.0093 * c.diameter**1.82 * c.density_difference**0.94
    return top / (c.fluid_viscosity**0.88 * c.fluid_density**0.06)


def goroshko_1958(
    *, diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """``Re = Ar/(1400 + 5.22 sqrt(Ar))``, spheres at voidage 0.40.

    Source: Goroshko, Rozenbaum & Todes 1958 (constants looked up in a forum post).
    """
    c = case(diameter, particle_density, fluid_density, fluid_viscosity)
    return c.velocity(c.archimedes / (1400.0 + 5.22 * np.sqrt(c.archimedes)))


def pillai_raja_rao_1971(
    *, diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """``7.01e-4 d² Δρ g/µ``, Re_mf < 20. Source: Pillai & Raja Rao 1971 (from memory)."""
    c = case(diameter, particle_density, fluid_density, fluid_viscosity)
    return 7.01e-4 * c.diameter**2 * c.density_difference * GRAVITY / c.fluid_viscosity


def miller_logwinuk_1951(
    *, diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """``1.25e-3 d² Δρ^0.9 ρ_g^0.1 g/µ``, laminar. Source: Miller & Logwinuk 1951 (from memory)."""
    c = case(diameter, particle_density, fluid_density, fluid_viscosity)
    top = 1.25e-3 * c.diameter**2 * c.density_difference**0.9 * c.fluid_density**0.1
    return top * GRAVITY / c.fluid_viscosity


def rowe_henwood_1961(
    *, diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """``Re = 8.1e-4 Ar``, laminar. Source: Rowe & Henwood 1961 (from memory)."""
    c = case(diameter, particle_density, fluid_density, fluid_viscosity)
    return c.velocity(8.1e-4 * c.archimedes)


def doichev_akhmakov_1979(
    *, diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """``Re = 1.08e-3 Ar^0.947``. Source: Doichev & Akhmakov 1979 (from memory)."""
    c = case(diameter, particle_density, fluid_density, fluid_viscosity)
    return c.velocity(1.08e-3 * c.archimedes**0.947)


def broadhurst_becker_1975(
    *, diameter: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """``Re² = Ar / [2.42e5 Ar^-0.85 (ρ_p/ρ_g)^0.13 + 37.7]``. Source: Broadhurst & Becker 1975 (from memory)."""
    c = case(diameter, particle_density, fluid_density, fluid_viscosity)
    fine = 2.42e5 * (c.particle_density / c.fluid_density) ** 0.13
    squared = c.archimedes**1.85 / (fine + 37.7 * c.archimedes**0.85)
    return c.velocity(np.sqrt(squared))


EXPLICIT: dict[str, Callable[..., NDArray[np.float64]]] = {
    "baeyens-geldart-1974": baeyens_geldart_1974,
    "baeyens-geldart-1974-implicit": baeyens_geldart_1974_implicit,
    "davies-richardson-1966": davies_richardson_1966,
    "leva-1959": leva_1959,
    "goroshko-1958": goroshko_1958,
    "pillai-raja-rao-1971": pillai_raja_rao_1971,
    "miller-logwinuk-1951": miller_logwinuk_1951,
    "rowe-henwood-1961": rowe_henwood_1961,
    "doichev-akhmakov-1979": doichev_akhmakov_1979,
    "broadhurst-becker-1975": broadhurst_becker_1975,
}
