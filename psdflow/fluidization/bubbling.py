"""Minimum bubbling, smooth expansion, and the bubbles: their size, rise, share of the bed, and its expanded height.

Velocities are superficial, m/s; ``excess`` below means ``velocity - minimum_fluidization_velocity``, never
below 0. Slugging is in ``slugging``.
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.groups import FINES_LIMIT
from psdflow.fluidization.numbers import GRAVITY
from psdflow.fluidization.numerics import floats, sinking
from psdflow.fluidization.terminal import terminal_velocity

POROUS_PLATE_TERM = 0.03  # m, Darton's 4 sqrt(A0) for a porous plate (from memory)
WIDEST_BUBBLE = 0.8  # share of the bed diameter; beyond it a bubble is a slug

# Share of the excess gas that rises as visible bubbles, by place in groups.GROUPS "CABD": typical
# values of Geldart's school (from memory). A bed of group C has no such share.
VISIBLE_FLOW_SHARE = np.array([np.nan, 0.8, 0.6, 0.3])


def minimum_bubbling_geldart(*, diameter_sv: ArrayLike) -> NDArray[np.float64]:
    """``U_mb = 100 d`` (m/s), air at ambient. Source: Geldart 1973 (looked up in a transcription)."""
    return 100.0 * floats(diameter_sv)


def minimum_bubbling_abrahamsen_geldart(
    *,
    diameter_sv: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    fines_45um: ArrayLike = 0.0,
) -> NDArray[np.float64]:
    """``U_mb = 2.07 exp(0.716 F45) d ρ_g^0.06/µ^0.347`` (m/s), gases.

    ``fines_45um`` is the mass share below 45 µm, clamped at ``FINES_LIMIT``: the term is for a minority
    of fines. The result may lie below U_mf: then the powder bubbles from U_mf on (groups B and D).
    Source: Abrahamsen & Geldart 1980 (looked up; 0.37 for the viscosity exponent is a misprint).
    """
    fines = np.minimum(floats(fines_45um), FINES_LIMIT)
    gas = floats(fluid_density) ** 0.06 / floats(fluid_viscosity) ** 0.347
    return 2.07 * np.exp(0.716 * fines) * floats(diameter_sv) * gas


def minimum_bubbling_velocities(
    *,
    diameter_sv: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    fines_45um: ArrayLike = 0.0,
) -> dict[str, NDArray[np.float64]]:
    """U_mb (m/s) by every method, not yet raised to U_mf."""
    return {
        "abrahamsen-geldart-1980-umb": minimum_bubbling_abrahamsen_geldart(
            diameter_sv=diameter_sv,
            fluid_density=fluid_density,
            fluid_viscosity=fluid_viscosity,
            fines_45um=fines_45um,
        ),
        "geldart-1973-umb": minimum_bubbling_geldart(diameter_sv=diameter_sv),
    }


def bed_height_ratio_at_bubbling(
    *, minimum_bubbling_velocity: ArrayLike, minimum_fluidization_velocity: ArrayLike
) -> NDArray[np.float64]:
    """``H_mb/H_mf = (U_mb/U_mf)^0.22``, at least 1.

    The published ``5.50 exp(0.158 F45) ρ_g^0.028 µ^0.115/[d^0.176 (g Δρ)^0.205]`` is this power of the
    authors' own ratio, to the rounding of its exponents (1 %). Source: Abrahamsen & Geldart 1980 (from memory).
    """
    ratio = floats(minimum_bubbling_velocity) / floats(minimum_fluidization_velocity)
    return np.maximum(ratio, 1.0) ** 0.22


def smooth_voidage(
    *,
    velocity: ArrayLike,
    minimum_fluidization_velocity: ArrayLike,
    voidage_mf: ArrayLike,
    diameter_sv: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
) -> NDArray[np.float64]:
    """Voidage of a group A bed between U_mf and U_mb, before it bubbles.

    ``ε³/(1-ε) Δρ g d²/µ = 210 (U - U_mf) + ε_mf³/(1-ε_mf) Δρ g d²/µ``, solved in closed form (one real
    root of ``ε³ + xε - x = 0``). Source: Abrahamsen & Geldart 1980, part II (from memory).
    """
    e_mf, rho_f = floats(voidage_mf), floats(fluid_density)
    difference = sinking(particle_density, rho_f) - rho_f
    pull = difference * GRAVITY * floats(diameter_sv) ** 2 / floats(fluid_viscosity)
    x = 210.0 * _excess(velocity, minimum_fluidization_velocity) / pull + e_mf**3 / (1.0 - e_mf)
    return 2.0 * np.sqrt(x / 3.0) * np.sinh(np.arcsinh(1.5 * np.sqrt(3.0 / x)) / 3.0)


def bubble_diameter_darton(
    *,
    velocity: ArrayLike,
    minimum_fluidization_velocity: ArrayLike,
    height: ArrayLike,
    orifice_area: ArrayLike | None = None,
) -> NDArray[np.float64]:
    """``0.54 (U-U_mf)^0.4 (z + 4 sqrt(A0))^0.8 / g^0.2`` (m) at ``height`` z above the distributor.

    ``orifice_area`` is the plate area per orifice, m²; ``None`` for a porous plate.
    Source: Darton et al. 1977 (looked up; the porous-plate term from memory).
    """
    start = POROUS_PLATE_TERM if orifice_area is None else 4.0 * np.sqrt(floats(orifice_area))
    excess = _excess(velocity, minimum_fluidization_velocity)
    return 0.54 * (excess**2 / GRAVITY) ** 0.2 * (floats(height) + start) ** 0.8


def bubble_diameter_mori_wen(
    *,
    velocity: ArrayLike,
    minimum_fluidization_velocity: ArrayLike,
    height: ArrayLike,
    bed_diameter: ArrayLike,
    orifice_area: ArrayLike | None = None,
) -> NDArray[np.float64]:
    """``d_m - (d_m - d_0) exp(-0.3 z/D)`` (m), ``d_m = 1.64 [A (U-U_mf)]^0.4``.

    First size d_0: porous or crowded plate ``0.376 (U-U_mf)²`` (SI; Kunii & Levenspiel print 2.78/g =
    0.283 instead); single orifices ``1.30 [(U-U_mf) A0]^0.4/g^0.2`` while smaller than their pitch.
    Source: Mori & Wen 1975; Kunii & Levenspiel 1991, eq. 5.15, 5.19, 6.5 (looked up; 0.376 from memory).
    """
    excess, bed = _excess(velocity, minimum_fluidization_velocity), floats(bed_diameter)
    largest = 1.64 * (np.pi / 4.0 * bed**2 * excess) ** 0.4
    first = 0.376 * excess**2
    if orifice_area is not None:
        area = floats(orifice_area)
        single = 1.30 * ((excess * area) ** 2 / GRAVITY) ** 0.2
        first = np.where(single <= np.sqrt(area), single, first)
    first = np.minimum(first, largest)
    return largest - (largest - first) * np.exp(-0.3 * floats(height) / bed)


def bubble_diameter_werther(
    *, velocity: ArrayLike, minimum_fluidization_velocity: ArrayLike, height: ArrayLike
) -> NDArray[np.float64]:
    """``0.00853 [1 + 27.2 (U-U_mf)]^(1/3) (1 + 6.84 z)^1.21`` (m), porous plate, group B.

    Source: Werther 1978 (from memory).
    """
    excess = _excess(velocity, minimum_fluidization_velocity)
    return 0.00853 * np.cbrt(1.0 + 27.2 * excess) * (1.0 + 6.84 * floats(height)) ** 1.21


def bubble_diameter_rowe(
    *, velocity: ArrayLike, minimum_fluidization_velocity: ArrayLike, height: ArrayLike
) -> NDArray[np.float64]:
    """``(U-U_mf)^0.5 z^0.75/g^0.25`` (m), porous plate. Source: Rowe 1976 (from memory)."""
    excess = _excess(velocity, minimum_fluidization_velocity)
    return (excess**2 / GRAVITY) ** 0.25 * floats(height) ** 0.75


def bubble_diameters(
    *,
    velocity: ArrayLike,
    minimum_fluidization_velocity: ArrayLike,
    height: ArrayLike,
    bed_diameter: ArrayLike,
    orifice_area: ArrayLike | None = None,
) -> dict[str, NDArray[np.float64]]:
    """Bubble diameter (m) at ``height`` (m) by every method, uncapped: see ``capped_bubble_diameter``."""
    flow = {
        "velocity": velocity,
        "minimum_fluidization_velocity": minimum_fluidization_velocity,
        "height": height,
    }
    return {
        "darton-1977": bubble_diameter_darton(**flow, orifice_area=orifice_area),
        "mori-wen-1975": bubble_diameter_mori_wen(**flow, bed_diameter=bed_diameter, orifice_area=orifice_area),
        "werther-1978": bubble_diameter_werther(**flow),
        "rowe-1976": bubble_diameter_rowe(**flow),
    }


def largest_stable_bubble(
    *,
    diameter_v: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    sphericity: ArrayLike = 1.0,
) -> NDArray[np.float64]:
    """Largest bubble (m) a group A bed sustains, ``2 U_t²/g`` with U_t of a grain 2.7 times as large.

    Source: Geldart's school (from memory). Coarser powders have no such limit in practice.
    """
    u_t = terminal_velocity(
        diameter=2.7 * floats(diameter_v),
        particle_density=particle_density,
        fluid_density=fluid_density,
        fluid_viscosity=fluid_viscosity,
        sphericity=sphericity,
    )
    return 2.0 * u_t**2 / GRAVITY


def capped_bubble_diameter(
    *, bubble_diameter: ArrayLike, bed_diameter: ArrayLike, largest_stable: ArrayLike = np.inf
) -> NDArray[np.float64]:
    """Bubble diameter (m) no larger than 0.8 of the bed (then it is a slug) nor the largest stable bubble."""
    wall = np.minimum(floats(bubble_diameter), WIDEST_BUBBLE * floats(bed_diameter))
    return np.minimum(wall, floats(largest_stable))


def bubble_rise_velocity(*, bubble_diameter: ArrayLike, bed_diameter: ArrayLike | None = None) -> NDArray[np.float64]:
    """Rise of a single bubble (m/s) in a bed at U_mf: ``0.711 sqrt(g d_b)``.

    With ``bed_diameter`` the walls slow it: x ``1.2 exp(-1.49 d_b/D)`` from d_b/D 0.125 to 0.6, and the
    slug's ``0.35 sqrt(g D)`` beyond. The published pieces don't meet at 0.6 (0.27 against 0.35).
    Source: Kunii & Levenspiel 1991, ch. 6 (looked up; the slug from memory).
    """
    size = floats(bubble_diameter)
    free = 0.711 * np.sqrt(GRAVITY * size)
    if bed_diameter is None:
        return free
    bed = floats(bed_diameter)
    slowed = free * np.where(size / bed < 0.125, 1.0, 1.2 * np.exp(-1.49 * size / bed))
    return np.where(size / bed < 0.6, slowed, 0.35 * np.sqrt(GRAVITY * bed))


def bubble_fraction(
    *,
    velocity: ArrayLike,
    minimum_fluidization_velocity: ArrayLike,
    bubble_rise: ArrayLike,
    visible_flow_share: ArrayLike,
) -> NDArray[np.float64]:
    """Share of the bed that is bubbles, ``Y (U-U_mf)/[(U-U_mf) + u_br]``.

    ``visible_flow_share`` Y by group: ``VISIBLE_FLOW_SHARE[group_index]``, or ``visible_flow_share``.
    Source: Davidson & Harrison 1963 two-phase theory with Geldart's Y (from memory).
    """
    excess = _excess(velocity, minimum_fluidization_velocity)
    rise = excess + floats(bubble_rise)
    return floats(visible_flow_share) * excess / np.where(rise > 0.0, rise, 1.0)


def visible_flow_share(*, archimedes: ArrayLike) -> NDArray[np.float64]:
    """Share of the excess gas in visible bubbles, ``2.27 Ar^-0.21``, at most 1.

    Source: Baeyens & Geldart (from memory).
    """
    return np.minimum(2.27 * floats(archimedes) ** -0.21, 1.0)


def _excess(velocity: ArrayLike, minimum_fluidization_velocity: ArrayLike) -> NDArray[np.float64]:
    return np.maximum(floats(velocity) - floats(minimum_fluidization_velocity), 0.0)
