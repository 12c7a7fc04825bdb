"""Slugging: bubbles as wide as the column, their onset, and the beds too shallow or too fine to slug."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.numbers import GRAVITY
from psdflow.fluidization.numerics import floats


def slugging_stewart_davidson(
    *, minimum_fluidization_velocity: ArrayLike, bed_diameter: ArrayLike
) -> NDArray[np.float64]:
    """Onset (m/s) in a deep bed, ``U_mf + 0.07 sqrt(g D)``. Source: Stewart & Davidson 1967 (from memory)."""
    rise = np.sqrt(GRAVITY * floats(bed_diameter))
    return floats(minimum_fluidization_velocity) + 0.07 * rise


def slugging_baeyens_geldart(
    *, minimum_fluidization_velocity: ArrayLike, bed_diameter: ArrayLike, bed_height_mf: ArrayLike
) -> NDArray[np.float64]:
    """Onset (m/s), the deep-bed value plus ``0.16 (1.34 D^0.175 - H_mf)²`` in a bed shallower than that depth.

    Sizes in m. Source: Baeyens & Geldart 1974 (from memory).
    """
    missing = np.maximum(deep_bed_height(bed_diameter=bed_diameter) - floats(bed_height_mf), 0.0)
    deep = slugging_stewart_davidson(
        minimum_fluidization_velocity=minimum_fluidization_velocity, bed_diameter=bed_diameter
    )
    return deep + 0.16 * missing**2


def slugging_velocities(
    *, minimum_fluidization_velocity: ArrayLike, bed_diameter: ArrayLike, bed_height_mf: ArrayLike
) -> dict[str, NDArray[np.float64]]:
    """Slugging onset (m/s) by every method; whether the bed slugs at all is told by ``can_slug``."""
    return {
        "baeyens-geldart-1974-slugging": slugging_baeyens_geldart(
            minimum_fluidization_velocity=minimum_fluidization_velocity,
            bed_diameter=bed_diameter,
            bed_height_mf=bed_height_mf,
        ),
        "stewart-davidson-1967": slugging_stewart_davidson(
            minimum_fluidization_velocity=minimum_fluidization_velocity, bed_diameter=bed_diameter
        ),
    }


def deep_bed_height(*, bed_diameter: ArrayLike) -> NDArray[np.float64]:
    """Height (m) from which slugs are fully grown, ``1.34 D^0.175``. Source: Baeyens & Geldart 1974 (from memory)."""
    return 1.34 * floats(bed_diameter) ** 0.175


def slug_free_height_ratio(*, diameter: ArrayLike, particle_density: ArrayLike) -> NDArray[np.float64]:
    """``H_mf/D`` up to which no slugs form, ``1.9/(ρ_p d)^0.3`` (SI). Source: Yagi & Muchi 1952 (from memory)."""
    return 1.9 / (floats(particle_density) * floats(diameter)) ** 0.3


def can_slug(
    *,
    diameter: ArrayLike,
    particle_density: ArrayLike,
    bed_diameter: ArrayLike,
    bed_height_mf: ArrayLike,
    largest_stable: ArrayLike = np.inf,
) -> NDArray[np.bool_]:
    """Whether the bed can slug: deeper than Yagi & Muchi's limit, and bubbles can reach 0.6 of the diameter.

    ``largest_stable`` is the largest stable bubble, m (``bubbling.largest_stable_bubble`` in group A).
    """
    bed = floats(bed_diameter)
    deep = floats(bed_height_mf) / bed > slug_free_height_ratio(diameter=diameter, particle_density=particle_density)
    wide: NDArray[np.bool_] = floats(largest_stable) >= 0.6 * bed
    return deep & wide


WALL_SLUG_GRAIN, WALL_SLUG_COLUMN = 500e-6, 0.10  # m


def slug_kind(*, diameter: ArrayLike, bed_diameter: ArrayLike) -> NDArray[np.str_]:
    """``axial`` in columns up to 0.1 m with grains up to 500 µm, else ``wall``. Common practice, no source.

    Fine grains in narrow smooth columns make round-nosed slugs on the axis; coarse or angular grains and wider
    columns send them up one side. Sizes in m.
    """
    narrow = np.asarray(bed_diameter, float) <= WALL_SLUG_COLUMN
    fine = np.asarray(diameter, float) <= WALL_SLUG_GRAIN
    return np.where(narrow & fine, "axial", "wall")


def slugging_bed_height_ratio(
    *, velocity: ArrayLike, minimum_fluidization_velocity: ArrayLike, bed_diameter: ArrayLike
) -> NDArray[np.float64]:
    """Highest level of a slugging bed over H_mf, ``1 + (U-U_mf)/(0.35 sqrt(g D))`` (from memory, after Stewart)."""
    excess = floats(velocity) - floats(minimum_fluidization_velocity)
    return 1.0 + np.maximum(excess, 0.0) / (0.35 * np.sqrt(GRAVITY * floats(bed_diameter)))
