"""Geldart's groups: the sizes at which a powder turns from C to A, A to B and B to D, by several authors.

A boundary set gives three sizes in metres; the size compared with them is the surface-volume mean of
the powder. No closed form for C/A is accepted by the trade: Geldart drew a band and printed no
equation. Sets whose author gives no C/A line use the geometric mean of the two ends of Molerus' line.
The cohesion package judges C/A from more evidence than size and density.
"""

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.fluidization.numbers import GRAVITY
from psdflow.fluidization.numerics import floats, sinking

GROUPS = "CABD"  # finest to coarsest: a group is coded by its place here

# Geldart 1973: U_mf = 8e-4 g d² Δρ/µ (Davies & Richardson 1966), U_mb = 100 d, a 25 cm bubble, voidage 0.4.
U_MF_CONSTANT = 8e-4
MINIMUM_BUBBLING_RATE = 100.0  # 1/s
D_BUBBLE_DIAMETER = 0.25  # m
VOIDAGE_GELDART = 0.4

# Abrahamsen & Geldart's fines term is for a minority of fines: Geldart's own cuts that are all fines
# miss by 2x with it (1973, table 1). Where to stop is a judgement of this project.
FINES_LIMIT = 0.3

# Molerus 1982: cohesion force at a contact, N. Which end belongs to hard and which to soft grains is
# told both ways; no adjective is attached to either.
WEAK_CONTACT_FORCE = 8.76e-8
STRONG_CONTACT_FORCE = 3.71e-7


class Boundaries(NamedTuple):
    """Sizes (m) of the three lines, ``size_ca <= size_ab <= size_bd``; equal sizes mean the group between is absent."""

    size_ca: NDArray[np.float64]
    size_ab: NDArray[np.float64]
    size_bd: NDArray[np.float64]


def geldart_ab_size(
    *, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """A/B size (m) where ``U_mb = U_mf``: ``d = K_MB µ/(8e-4 g Δρ)`` with the viscosity of the case.

    Geldart rounded it for air at 20 °C to ``Δρ d = 0.225 kg/m²``; the unrounded constant is 0.2294.
    Source: Geldart 1973, eq. 5 (looked up in a transcription).
    """
    difference = sinking(particle_density, fluid_density) - floats(fluid_density)
    with np.errstate(divide="ignore"):
        return MINIMUM_BUBBLING_RATE * floats(fluid_viscosity) / (U_MF_CONSTANT * GRAVITY * difference)


def geldart_bd_size(
    *,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    voidage_mf: ArrayLike = VOIDAGE_GELDART,
) -> NDArray[np.float64]:
    """B/D size (m) above which a 25 cm bubble rises slower than the gas between the grains.

    ``sqrt(g d_B/2) = 8e-4 Δρ g d²/(µ ε)``. Rounded by Geldart, air at 20 °C: ``Δρ d² = 1e-3 kg/m``
    (unrounded 1.016e-3). Source: Geldart 1973, eq. 7, "tentative" (looked up in a transcription).
    """
    difference = sinking(particle_density, fluid_density) - floats(fluid_density)
    bubble_rise = floats(np.sqrt(GRAVITY * D_BUBBLE_DIAMETER / 2.0))
    top = bubble_rise * floats(fluid_viscosity) * floats(voidage_mf)
    with np.errstate(divide="ignore"):
        return np.sqrt(top / (U_MF_CONSTANT * GRAVITY * difference))


def abrahamsen_geldart_ab_size(
    *,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    fines_45um: ArrayLike = 0.0,
) -> NDArray[np.float64]:
    """A/B size (m) with gas, pressure and fines.

    ``2300 ρ_g^0.126 µ^0.523 exp(0.716 F45) = d^0.8 (g Δρ)^0.934``; the fines share is clamped at 0.3
    as in ``minimum_bubbling_abrahamsen_geldart``.
    Source: Abrahamsen & Geldart 1980 (looked up in two codes and a table).
    """
    rho_f, mu = floats(fluid_density), floats(fluid_viscosity)
    difference = sinking(particle_density, fluid_density) - rho_f
    fines = np.minimum(floats(fines_45um), FINES_LIMIT)
    with np.errstate(divide="ignore"):
        return (2300.0 * rho_f**0.126 * mu**0.523 * np.exp(0.716 * fines) / (GRAVITY * difference) ** 0.934) ** 1.25


def grace_ab_size(
    *, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """A/B size (m), ``d* = 101 (Δρ/ρ_g)^-0.425``. Source: Grace 1986 (from memory)."""
    rho_f = floats(fluid_density)
    with np.errstate(divide="ignore"):
        ratio = (sinking(particle_density, fluid_density) - rho_f) / rho_f
        return 101.0 * ratio**-0.425 * _viscous_length(particle_density, rho_f, fluid_viscosity)


def grace_bd_size(
    *, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """B/D size (m), Ar = 1.45e5. Source: Grace 1986 (from memory)."""
    return floats(np.cbrt(1.45e5)) * _viscous_length(particle_density, fluid_density, fluid_viscosity)


def molerus_ca_size(
    *, particle_density: ArrayLike, fluid_density: ArrayLike, cohesion_force: ArrayLike = WEAK_CONTACT_FORCE
) -> NDArray[np.float64]:
    """C/A size (m), ``10 Δρ g d³/F_H = 0.01`` (F_H in N). Source: Molerus 1982 (from memory)."""
    difference = sinking(particle_density, fluid_density) - floats(fluid_density)
    with np.errstate(divide="ignore"):
        return np.cbrt(0.01 * floats(cohesion_force) / (10.0 * GRAVITY * difference))


def molerus_ab_size(
    *, particle_density: ArrayLike, fluid_density: ArrayLike, cohesion_force: ArrayLike = WEAK_CONTACT_FORCE
) -> NDArray[np.float64]:
    """A/B size (m), ``(π/6) Δρ g d³/F_H = 0.16`` (F_H in N). Source: Molerus 1982 (from memory)."""
    difference = sinking(particle_density, fluid_density) - floats(fluid_density)
    with np.errstate(divide="ignore"):
        return np.cbrt(0.16 * floats(cohesion_force) / (np.pi / 6.0 * GRAVITY * difference))


def molerus_bd_size(*, particle_density: ArrayLike, fluid_density: ArrayLike) -> NDArray[np.float64]:
    """B/D size (m), ``Δρ g d = 15.3 Pa``. Source: Molerus 1982 (from memory)."""
    difference = sinking(particle_density, fluid_density) - floats(fluid_density)
    with np.errstate(divide="ignore"):
        return 15.3 / (GRAVITY * difference)


def molerus_middle_ca_size(*, particle_density: ArrayLike, fluid_density: ArrayLike) -> NDArray[np.float64]:
    """C/A size (m) at the geometric mean of Molerus' two contact forces: this project's choice."""
    return molerus_ca_size(
        particle_density=particle_density,
        fluid_density=fluid_density,
        cohesion_force=np.sqrt(WEAK_CONTACT_FORCE * STRONG_CONTACT_FORCE),
    )


BOUNDARY_SETS = (
    "abrahamsen-geldart-1980",
    "geldart-1973",
    "grace-1986",
    "molerus-1982-weak",
    "molerus-1982-strong",
)


SHOWN_SETS = (
    "goossens-1998",
)  # evaluated beside the others, without a vote: its A/B line moves the wrong way with pressure


def goossens_size(
    *, archimedes: float, particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """Size (m) at a fixed Archimedes number: 88.5 for A/B, 176 900 for B/D.

    The number for C/A is remembered both as 9.8 and as 0.97 and isn't used. Source: Goossens 1998 (from memory).
    """
    rho_f = np.asarray(fluid_density, float)
    difference = sinking(particle_density, rho_f) - rho_f
    return np.cbrt(archimedes * np.asarray(fluid_viscosity, float) ** 2 / (rho_f * difference * GRAVITY))


def boundary_sizes(
    *,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    fines_45um: ArrayLike = 0.0,
    voidage_mf: ArrayLike = VOIDAGE_GELDART,
) -> dict[str, Boundaries]:
    """The three boundary sizes by every set of ``BOUNDARY_SETS`` and ``SHOWN_SETS``.

    Parameters
    ----------
    particle_density, fluid_density, fluid_viscosity
        kg/m³, kg/m³, Pa·s, at the bed's conditions; any broadcastable shapes.
    fines_45um
        Mass share below 45 µm, 0..1; moves A/B of Abrahamsen & Geldart.
    voidage_mf
        Moves B/D of Geldart; he used 0.4.

    Returns
    -------
    ``{set: Boundaries}``, sizes in m, all of the full broadcast shape. Where an author's lines cross
    (very dense grains; light grains in dense gas) the finer group keeps its side: the group between
    two crossed lines is absent. ``nan`` where the grain is lighter than the fluid.
    """
    pair = {"particle_density": particle_density, "fluid_density": fluid_density}
    three = {**pair, "fluid_viscosity": fluid_viscosity}
    shape = np.broadcast_shapes(
        *(np.shape(x) for x in (particle_density, fluid_density, fluid_viscosity, fines_45um, voidage_mf))
    )
    ca = molerus_middle_ca_size(**pair)
    bd = geldart_bd_size(**three, voidage_mf=voidage_mf)

    def ordered(*sizes: NDArray[np.float64]) -> Boundaries:
        lines = [np.broadcast_to(size, shape) for size in sizes]
        return Boundaries(*np.maximum.accumulate(lines, axis=0))

    def molerus(force: float) -> Boundaries:
        return ordered(
            molerus_ca_size(**pair, cohesion_force=force),
            molerus_ab_size(**pair, cohesion_force=force),
            molerus_bd_size(**pair),
        )

    return {
        "abrahamsen-geldart-1980": ordered(ca, abrahamsen_geldart_ab_size(**three, fines_45um=fines_45um), bd),
        "geldart-1973": ordered(ca, geldart_ab_size(**three), bd),
        "grace-1986": ordered(ca, grace_ab_size(**three), grace_bd_size(**three)),
        "molerus-1982-weak": molerus(WEAK_CONTACT_FORCE),
        "molerus-1982-strong": molerus(STRONG_CONTACT_FORCE),
        "goossens-1998": ordered(
            ca, goossens_size(archimedes=88.5, **three), goossens_size(archimedes=176_900.0, **three)
        ),
    }


def group_index(*, diameter_sv: ArrayLike, boundaries: Boundaries) -> NDArray[np.intp]:
    """Place in ``GROUPS`` of each powder: 0 C, 1 A, 2 B, 3 D.

    A size on the C/A line is A, on A/B is A, on B/D is D, as Geldart wrote his inequalities.

    Raises
    ------
    ValueError
        If a size or boundary is ``nan``: no group can be given.
    """
    d = floats(diameter_sv)
    ca, ab, bd = boundaries
    if np.any(np.isnan(d)) or any(np.any(np.isnan(line)) for line in boundaries):
        raise ValueError("a size or boundary is nan: the powder must be heavier than the fluid")
    return (d >= ca).astype(np.intp) + (d > ab) + (d >= bd)


def group_letters(*, diameter_sv: ArrayLike, boundaries: Boundaries) -> NDArray[np.str_]:
    """The letters ``C``, ``A``, ``B`` or ``D``; parameters and errors as ``group_index``."""
    return np.array(list(GROUPS))[group_index(diameter_sv=diameter_sv, boundaries=boundaries)]


def _viscous_length(
    particle_density: ArrayLike, fluid_density: ArrayLike, fluid_viscosity: ArrayLike
) -> NDArray[np.float64]:
    """``[µ²/(ρ_f Δρ g)]^(1/3)`` in m; a size divided by it is d* = Ar^(1/3)."""
    rho_f, mu = floats(fluid_density), floats(fluid_viscosity)
    difference = sinking(particle_density, fluid_density) - rho_f
    with np.errstate(divide="ignore"):
        return np.cbrt(mu**2 / (rho_f * difference * GRAVITY))
