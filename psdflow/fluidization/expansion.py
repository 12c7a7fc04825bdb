"""Height of a bubbling bed, as a ratio to its height at minimum fluidization."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.bubbling import (
    bubble_diameter_darton,
    bubble_fraction,
    bubble_rise_velocity,
    capped_bubble_diameter,
)
from psdflow.fluidization.numerics import floats

# Gauss-Legendre points on 0..1: the bubble share is averaged over the height of the bed.
_POINTS, _WEIGHTS = np.polynomial.legendre.leggauss(8)
_POINTS, _WEIGHTS = (_POINTS + 1.0) / 2.0, _WEIGHTS / 2.0

BABU_SMALLEST_BED = 0.0635  # m


def bed_expansion_two_phase(
    *,
    velocity: ArrayLike,
    minimum_fluidization_velocity: ArrayLike,
    bed_height_mf: ArrayLike,
    bed_diameter: ArrayLike,
    visible_flow_share: ArrayLike,
    orifice_area: ArrayLike | None = None,
    largest_stable: ArrayLike = np.inf,
) -> NDArray[np.float64]:
    """``H/H_mf``: the mean over the height of ``1/(1 - δ)``, δ the bubble share with Darton's bubbles.

    Parameters
    ----------
    velocity, minimum_fluidization_velocity
        m/s.
    bed_height_mf, bed_diameter
        m.
    visible_flow_share
        Y, see ``bubbling.bubble_fraction``; ``nan`` (group C) gives ``nan``.
    orifice_area
        Plate area per orifice, m²; ``None`` for a porous plate.
    largest_stable
        Cap on the bubble diameter, m (group A). Bubbles are also held to 0.8 of the bed diameter.

    Source: two-phase theory, Davidson & Harrison 1963; Darton et al. 1977.
    """

    def spread(value: ArrayLike) -> NDArray[np.float64]:
        return floats(value)[..., np.newaxis]

    u, u_mf, bed = spread(velocity), spread(minimum_fluidization_velocity), spread(bed_diameter)
    size = bubble_diameter_darton(
        velocity=u,
        minimum_fluidization_velocity=u_mf,
        height=spread(bed_height_mf) * _POINTS,
        orifice_area=None if orifice_area is None else spread(orifice_area),
    )
    size = capped_bubble_diameter(bubble_diameter=size, bed_diameter=bed, largest_stable=spread(largest_stable))
    share = bubble_fraction(
        velocity=u,
        minimum_fluidization_velocity=u_mf,
        bubble_rise=bubble_rise_velocity(bubble_diameter=size, bed_diameter=bed),
        visible_flow_share=spread(visible_flow_share),
    )
    ratio: NDArray[np.float64] = np.sum(_WEIGHTS / (1.0 - share), axis=-1)
    return ratio


def bed_expansion_babu(
    *,
    velocity: ArrayLike,
    minimum_fluidization_velocity: ArrayLike,
    diameter: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    bed_diameter: ArrayLike,
) -> NDArray[np.float64]:
    """``H/H_mf = 1 + 14.314 (U-U_mf)^0.738 d^1.006 ρ_p^0.376/(ρ_g^0.126 U_mf^0.937)`` in beds of 6.35 cm and up.

    In smaller ones ``1 + 1.032 (U-U_mf)^0.57 ρ_g^0.083/(ρ_p^0.166 U_mf^0.063 D^0.445)``. SI throughout.
    One textbook figure of 10.978 for the constant does not fit the cgs constant 1.957 of the same law.
    Source: Babu, Shah & Talwalkar 1978 in de Souza-Santos 2010, eq. 14.7-14.8 (looked up in code citing them).
    """
    u_mf, rho_f = floats(minimum_fluidization_velocity), floats(fluid_density)
    rho_p, bed = floats(particle_density), floats(bed_diameter)
    excess = np.maximum(floats(velocity) - u_mf, 0.0)
    wide = 14.314 * excess**0.738 * floats(diameter) ** 1.006 * rho_p**0.376 / (rho_f**0.126 * u_mf**0.937)
    narrow = 1.032 * excess**0.57 * rho_f**0.083 / (rho_p**0.166 * u_mf**0.063 * bed**0.445)
    return 1.0 + np.where(bed >= BABU_SMALLEST_BED, wide, narrow)


def bed_expansions(
    *,
    velocity: ArrayLike,
    minimum_fluidization_velocity: ArrayLike,
    bed_height_mf: ArrayLike,
    bed_diameter: ArrayLike,
    visible_flow_share: ArrayLike,
    diameter: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    orifice_area: ArrayLike | None = None,
    largest_stable: ArrayLike = np.inf,
) -> dict[str, NDArray[np.float64]]:
    """``H/H_mf`` of a bubbling bed by every method."""
    return {
        "two-phase": bed_expansion_two_phase(
            velocity=velocity,
            minimum_fluidization_velocity=minimum_fluidization_velocity,
            bed_height_mf=bed_height_mf,
            bed_diameter=bed_diameter,
            visible_flow_share=visible_flow_share,
            orifice_area=orifice_area,
            largest_stable=largest_stable,
        ),
        "babu-1978-expansion": bed_expansion_babu(
            velocity=velocity,
            minimum_fluidization_velocity=minimum_fluidization_velocity,
            diameter=diameter,
            particle_density=particle_density,
            fluid_density=fluid_density,
            bed_diameter=bed_diameter,
        ),
    }
