"""Spouting of coarse grains (group D): least velocity and greatest depth. For gases and liquids.

A spouted bed throws a central jet through the bed from one inlet; stable when the inlet is smaller
than about 25 grains and 0.35 of the column, in grains of about 1 mm and up (common practice).
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.numbers import GRAVITY, archimedes
from psdflow.fluidization.numerics import floats, sinking

LARGE_COLUMN = 0.5  # m, from here on Fane & Mitchell's factor
SPOUT_TO_MF_RATIO = 1.11  # velocity at the greatest depth over U_mf
LARGEST_INLET_IN_GRAINS, LARGEST_INLET_IN_COLUMNS = 25.0, 0.35


def minimum_spouting_velocity(
    *,
    diameter: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    column_diameter: ArrayLike,
    inlet_diameter: ArrayLike,
    bed_height: ArrayLike,
) -> NDArray[np.float64]:
    """Least superficial velocity (m/s), ``(d/D)(D_i/D)^(1/3) sqrt(2 g H Δρ/ρ_f)``.

    Columns wider than 0.5 m: times 2 D (D in m), which is an extrapolation. Sizes in m.
    Source: Mathur & Gishler 1955; Fane & Mitchell 1984 for the factor (from memory).
    """
    column, rho_f = floats(column_diameter), floats(fluid_density)
    ratio = (sinking(particle_density, rho_f) - rho_f) / rho_f
    small = (
        floats(diameter)
        / column
        * np.cbrt(floats(inlet_diameter) / column)
        * np.sqrt(2.0 * GRAVITY * floats(bed_height) * ratio)
    )
    return small * np.where(column > LARGE_COLUMN, 2.0 * column, 1.0)


def maximum_spoutable_height(
    *,
    diameter: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    column_diameter: ArrayLike,
    inlet_diameter: ArrayLike,
    velocity_ratio: ArrayLike = SPOUT_TO_MF_RATIO,
) -> NDArray[np.float64]:
    """Depth (m) up to which the whole bed spouts; a deeper one fluidizes on top.

    ``(D²/d)(D/D_i)^(2/3)(568 b²/Ar)[sqrt(1 + 35.9e-6 Ar) - 1]²``, b = U_m/U_mf = ``velocity_ratio``.
    Source: McNab & Bridgwater 1977 (from memory).
    """
    d, column = floats(diameter), floats(column_diameter)
    ar = archimedes(
        diameter=d,
        particle_density=sinking(particle_density, fluid_density),
        fluid_density=fluid_density,
        fluid_viscosity=fluid_viscosity,
    )
    x = 35.9e-6 * ar
    bracket = x / (np.sqrt(1.0 + x) + 1.0)  # sqrt(1 + x) - 1 without cancellation
    geometry = column**2 / d * (column / floats(inlet_diameter)) ** (2.0 / 3.0)
    return geometry * 568.0 * floats(velocity_ratio) ** 2 * bracket * (bracket / ar)


def stable_inlet(*, diameter: ArrayLike, column_diameter: ArrayLike, inlet_diameter: ArrayLike) -> NDArray[np.bool_]:
    """Whether the inlet is narrow enough: below 25 grains and 0.35 of the column (common practice, no source)."""
    inlet = floats(inlet_diameter)
    in_grains = inlet < LARGEST_INLET_IN_GRAINS * floats(diameter)
    in_columns: NDArray[np.bool_] = inlet < LARGEST_INLET_IN_COLUMNS * floats(column_diameter)
    return in_grains & in_columns
