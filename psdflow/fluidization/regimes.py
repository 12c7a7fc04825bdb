"""From bubbling to transport: the transition velocities by every author, and which regime a velocity is in.

The published lines differ by a factor of two for the same powder; a single number without that spread
is misleading. All lines here take the surface-volume diameter.
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.numbers import GRAVITY, archimedes
from psdflow.fluidization.numerics import floats, sinking

# Re = a Ar^b: (a, b) by quantity and method.
POWER_LAWS: dict[str, dict[str, tuple[float, float]]] = {
    "u_c": {
        "bi-grace-1995-uc": (1.24, 0.45),
        "bi-grace-1995-uc-absolute": (0.565, 0.461),
        "horio-1986-uc": (0.936, 0.472),
        "nakajima-1991-uc": (0.663, 0.467),
        "lee-kim-1990-uc": (0.700, 0.485),
    },
    "u_k": {"perales-1990-uk": (1.95, 0.453)},
    "u_se": {"bi-grace-1995-use": (1.53, 0.50)},
    "u_tr": {
        "bi-fan-1991-utr": (2.28, 0.419),
        "lee-kim-1990-utr": (2.916, 0.354),
        "perales-1990-utr": (1.41, 0.483),
        "adanez-1993-utr": (2.078, 0.463),
        "tsukada-1993-utr": (1.806, 0.458),
    },
}
# The method shown first; the others are alternatives. A judgement of this project.
RECOMMENDED = {
    "u_c": "bi-grace-1995-uc",
    "u_k": "perales-1990-uk",
    "u_se": "bi-grace-1995-use",
    "u_tr": "bi-fan-1991-utr",
}
ENTRAINMENT_ARCHIMEDES_LIMIT = 4e6  # above it U_se is the terminal velocity (Bi & Grace 1995)
AIR_20C_DENSITY, AIR_20C_VISCOSITY = 1.2046, 1.8206e-5  # kg/m³, Pa·s at 1 atm

REGIMES = (
    "fixed bed",
    "partly fluidized",
    "smooth fluidization",
    "bubbling",
    "slugging",
    "turbulent",
    "fast fluidization or transport",
)
# What each condition of ``regime`` names, in the order they are tried.
_ORDER = (
    "fixed bed",
    "fast fluidization or transport",
    "turbulent",
    "partly fluidized",
    "smooth fluidization",
    "slugging",
)
LIQUID_REGIMES = ("fixed bed", "smooth fluidization", "hydraulic transport")


def horio_uk_reynolds(*, archimedes: ArrayLike) -> NDArray[np.float64]:
    """``Re_k = 1.41 Ar^0.56`` below Ar 1e4, ``1.46 Ar^0.472`` above.

    The published pieces differ by a factor of 2.2 at 1e4, so U_k falls there: see the catalogue.
    Source: Horio 1986 (from memory).
    """
    ar = floats(archimedes)
    return np.where(ar < 1e4, 1.41 * ar**0.56, 1.46 * ar**0.472)


def transition_cai(
    *,
    diameter_sv: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    bed_diameter: ArrayLike,
    reference_density: ArrayLike = AIR_20C_DENSITY,
    reference_viscosity: ArrayLike = AIR_20C_VISCOSITY,
) -> NDArray[np.float64]:
    """U_c (m/s) in an empty column of ``bed_diameter`` D (m).

    ``U_c/sqrt(g d) = (µ20/µ)^0.2 {[0.211/D^0.27 + 0.00242/D^1.27]^(1/0.27) (ρ20/ρ)(Δρ/ρ)(D/d)}^0.27``;
    the reference properties are those of the same gas at 20 °C and 1 atm (default: air).
    Source: Cai et al. 1989 (from memory).
    """
    d, bed, rho = floats(diameter_sv), floats(bed_diameter), floats(fluid_density)
    column = 0.211 / bed**0.27 + 0.00242 / bed**1.27
    ratio = floats(reference_density) / rho * (sinking(particle_density, rho) - rho) / rho
    viscosity = (floats(reference_viscosity) / floats(fluid_viscosity)) ** 0.2
    return np.sqrt(GRAVITY * d) * viscosity * column * (ratio * bed / d) ** 0.27


def transition_velocities(
    *,
    diameter_sv: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    bed_diameter: ArrayLike | None = None,
    terminal_velocity: ArrayLike | None = None,
    reference_density: ArrayLike = AIR_20C_DENSITY,
    reference_viscosity: ArrayLike = AIR_20C_VISCOSITY,
) -> dict[str, dict[str, NDArray[np.float64]]]:
    """Transition velocities (m/s) by every method.

    Parameters
    ----------
    diameter_sv
        Surface-volume mean diameter, m, above 0; any broadcastable shapes.
    particle_density, fluid_density, fluid_viscosity
        kg/m³, kg/m³, Pa·s, at the bed's conditions.
    bed_diameter
        m; adds Cai's U_c.
    terminal_velocity
        Of the mean grain, m/s; U_se where Ar is above 4e6.
    reference_density, reference_viscosity
        Of the same gas at 20 °C and 1 atm, for Cai.

    Returns
    -------
    ``{quantity: {method key: array}}`` with quantities ``u_c`` (bubbling to turbulent), ``u_k`` (end of
    that transition), ``u_se`` (significant entrainment), ``u_tr`` (transport). ``nan`` where the grain
    is lighter than the fluid.
    """
    d, rho_f, mu = floats(diameter_sv), floats(fluid_density), floats(fluid_viscosity)
    ar = archimedes(
        diameter=d, particle_density=sinking(particle_density, rho_f), fluid_density=rho_f, fluid_viscosity=mu
    )
    to_velocity = mu / (rho_f * d)
    values = {
        quantity: {key: a * ar**b * to_velocity for key, (a, b) in laws.items()}
        for quantity, laws in POWER_LAWS.items()
    }
    values["u_k"]["horio-1986-uk"] = horio_uk_reynolds(archimedes=ar) * to_velocity
    if bed_diameter is not None:
        values["u_c"]["cai-1989-uc"] = transition_cai(
            diameter_sv=d,
            particle_density=particle_density,
            fluid_density=rho_f,
            fluid_viscosity=mu,
            bed_diameter=bed_diameter,
            reference_density=reference_density,
            reference_viscosity=reference_viscosity,
        )
    if terminal_velocity is not None:
        entrained = values["u_se"]["bi-grace-1995-use"]
        values["u_se"]["bi-grace-1995-use"] = np.where(
            ar > ENTRAINMENT_ARCHIMEDES_LIMIT, floats(terminal_velocity), entrained
        )
    return values


def regime(
    *,
    velocity: ArrayLike,
    minimum_fluidization_velocity: ArrayLike,
    minimum_bubbling_velocity: ArrayLike,
    turbulent_velocity: ArrayLike,
    transport_velocity: ArrayLike,
    complete_fluidization_velocity: ArrayLike | None = None,
    slugging_velocity: ArrayLike | None = None,
) -> NDArray[np.intp]:
    """Place in ``REGIMES`` of a gas-fluidized bed.

    Each bound starts its regime and is raised to the one before it where the published lines cross: U_mf,
    U_mb, U_c (``turbulent_velocity``), U_se or U_tr (``transport_velocity``). "Partly fluidized" is
    between U_mf and U_cf, the complete fluidization of the coarse end, where given, but ends at U_c.
    "Slugging" replaces bubbling from ``slugging_velocity`` on; give ``nan`` or ``inf`` for a bed that
    can't slug.

    Raises
    ------
    ValueError
        If a velocity other than ``slugging_velocity`` is ``nan``: no regime can be named.
    """
    u, u_mf = floats(velocity), floats(minimum_fluidization_velocity)
    u_cf = u_mf if complete_fluidization_velocity is None else floats(complete_fluidization_velocity)
    slug = floats(np.inf if slugging_velocity is None else slugging_velocity)
    u_mb = np.maximum(floats(minimum_bubbling_velocity), u_mf)
    u_c = np.maximum(floats(turbulent_velocity), u_mb)
    u_fast = np.maximum(floats(transport_velocity), u_c)
    if any(np.any(np.isnan(bound)) for bound in (u, u_cf, u_fast)):
        raise ValueError("a velocity is nan: the regime can't be named")
    conditions = np.broadcast_arrays(u < u_mf, u >= u_fast, u >= u_c, u < u_cf, u < u_mb, u >= slug)
    places = [REGIMES.index(name) for name in _ORDER]
    chosen: NDArray[np.intp] = np.select(conditions, places, default=REGIMES.index("bubbling"))
    return chosen


def liquid_regime(
    *, velocity: ArrayLike, minimum_fluidization_velocity: ArrayLike, terminal_velocity: ArrayLike
) -> NDArray[np.intp]:
    """Place in ``LIQUID_REGIMES`` of a liquid-fluidized bed; from the terminal velocity on it is carried out.

    Heavy grains (lead in water) may bubble in liquids too: see ``bed.froude_mf``. Raises ``ValueError``
    if a velocity is ``nan``.
    """
    u, u_mf = floats(velocity), floats(minimum_fluidization_velocity)
    carried = np.maximum(floats(terminal_velocity), u_mf)
    if np.any(np.isnan(u)) or np.any(np.isnan(carried)):
        raise ValueError("a velocity is nan: the regime can't be named")
    return (u >= u_mf).astype(np.intp) + (u >= carried)
