"""The pressure-drop curve of a bed as its gas is turned up and down: packed, let go, level, and packed again.

The packed branches have the shape of Ergun's equation and are anchored so that the loose bed carries its weight
at the u_mf that was chosen: curve and u_mf can't contradict each other.
"""

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.bed import packed_bed_pressure_gradient

Array = NDArray[np.float64]

COMPACTION = 0.02  # voidage below that at minimum fluidization of a settled, vibrated bed; assumed where not given
LET_GO = 1.25  # velocity over u_mf at which a compacted bed has wholly let go. Judgement; common practice shows a bump


class Curve(NamedTuple):
    """Pressure drop (Pa) with rising and with falling velocity."""

    rising: Array
    falling: Array


def pressure_drop_curve(
    *,
    velocity: ArrayLike,
    minimum_fluidization_velocity: ArrayLike,
    bed_weight: ArrayLike,
    voidage_mf: ArrayLike,
    compacted_voidage: ArrayLike,
    diameter_sv: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
) -> Curve:
    """Both branches of the curve.

    Parameters
    ----------
    velocity
        m/s, any shape that broadcasts with the others.
    minimum_fluidization_velocity, bed_weight
        m/s, and the buoyant weight per area in Pa.
    voidage_mf, compacted_voidage
        Voidage of the loose bed and of the bed before it is first loosened, not above the former.
    diameter_sv, fluid_density, fluid_viscosity
        Surface-volume mean (m), kg/m³, Pa·s.

    Returns
    -------
    Falling: Ergun up to u_mf, level above. Rising: Ergun at the compacted voidage up to u_mf, so above the
    weight there, then down to the weight at 1.25 u_mf; level above. A wide powder rounds the corner off.
    Source: Ergun 1952 for the shape; level and bump are common practice.
    """
    u, u_mf = np.asarray(velocity, float), np.asarray(minimum_fluidization_velocity, float)
    weight, loose, tight = (np.asarray(x, float) for x in (bed_weight, voidage_mf, compacted_voidage))

    def resistance(at: Array, voidage: Array) -> Array:
        """Pressure drop per solids in the bed, up to a factor."""
        gradient = packed_bed_pressure_gradient(
            velocity=at,
            diameter=diameter_sv,
            voidage=voidage,
            fluid_density=fluid_density,
            fluid_viscosity=fluid_viscosity,
        )
        return gradient / (1 - voidage)

    anchor = weight / resistance(u_mf, loose)
    falling = np.minimum(anchor * resistance(u, loose), weight)
    packed = anchor * resistance(np.minimum(u, u_mf), np.minimum(tight, loose))
    letting_go = np.clip((u / u_mf - 1) / (LET_GO - 1), 0, 1)
    return Curve(np.asarray(packed + letting_go * (weight - packed)), np.asarray(falling))
