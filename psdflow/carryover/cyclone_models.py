"""Cyclone models: cut size, grade efficiency and pressure drop by each author; loading; series.

Gas flow ``flow`` is per cyclone, m³/s at inlet conditions. Cut sizes have the leading shape of the inputs; a grade
curve takes ``size`` with classes on the last axis and ``cut`` of the leading shape. All sizes assume Stokes drag.
"""

from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.carryover.cyclone import CycloneGeometry
from psdflow.carryover.muschelknautz import GRADE_SLOPE, muschelknautz_cut

Array = NDArray[np.float64]

# Stairmand's designs by similarity: Stokes number at the cut size and Euler number, both on the body velocity.
# Source: Svarovsky; Rhodes 2008, ch. 9 (from memory, its worked examples reproduced).
SIMILARITY = {"stairmand-high-efficiency": (1.4e-4, 320.0), "stairmand-high-throughput": (6e-3, 46.0)}
BARTH_SLOPE = 6.4  # exponent of Dirgo & Leith's fit to Barth's grade curve (from memory)
WALL_FRICTION = 0.005


def lapple_cut(
    *, geometry: CycloneGeometry, flow: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike, turns: float | None = None,
) -> Array:  # fmt: skip
    """``sqrt(9 µ b / (2 π N v_in Δρ))`` (m), ``N = (h + (H-h)/2)/a`` turns unless given.

    Source: Lapple 1951 (looked up). Conservative for modern designs: slope too flat.
    """
    n = (
        turns
        or (geometry.cylinder_height + (geometry.total_height - geometry.cylinder_height) / 2) / geometry.inlet_height
    )
    inlet = np.asarray(flow, float) / geometry.inlet_area
    difference = np.asarray(particle_density, float) - np.asarray(fluid_density, float)
    return np.asarray(
        np.sqrt(9 * np.asarray(fluid_viscosity, float) * geometry.inlet_width / (2 * np.pi * n * inlet * difference))
    )


def barth_swirl(geometry: CycloneGeometry, flow: ArrayLike, loading: ArrayLike = 0.0) -> tuple[Array, Array]:
    """Tangential velocity (m/s) at the wall and on the core's edge.

    ``v_w = v_in R_in/(α R)``, ``α = 1 - 0.4 sqrt(b/R)``, ``v_cs = v_w (R/Rx)/(1 + π f Hcs R v_w/Q)``,
    ``f = 0.005 (1 + 3 sqrt(c0))``, c0 the mass loading (kg/kg). Source: Barth 1956 (from memory; 2 instead of 3 is
    also met, of little effect below 0.1).
    """
    q, radius = np.asarray(flow, float), geometry.body_diameter / 2
    alpha = 1 - 0.4 * np.sqrt(geometry.inlet_width / radius)
    wall = q / geometry.inlet_area * (radius - geometry.inlet_width / 2) / (alpha * radius)
    friction = WALL_FRICTION * (1 + 3 * np.sqrt(np.asarray(loading, float)))
    gain = geometry.body_diameter / geometry.outlet_diameter
    core = wall * gain / (1 + np.pi * friction * geometry.core_height * radius * wall / q)
    return np.asarray(wall), np.asarray(core)


def barth_cut(
    *, geometry: CycloneGeometry, flow: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike, loading: ArrayLike = 0.0,
) -> Array:  # fmt: skip
    """``sqrt(9 µ Q / (π Hcs Δρ v_cs²))`` (m): drag and swirl in balance on the core. Source: Barth 1956 (looked up)."""
    _, core = barth_swirl(geometry, flow, loading)
    difference = np.asarray(particle_density, float) - np.asarray(fluid_density, float)
    drag = 9 * np.asarray(fluid_viscosity, float) * np.asarray(flow, float)
    return np.asarray(np.sqrt(drag / (np.pi * geometry.core_height * difference * core**2)))


def similarity_cut(
    *, geometry: CycloneGeometry, flow: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
) -> Array:  # fmt: skip
    """``sqrt(18 µ D Stk50 / (ρ_p v))`` (m), v = 4Q/(π D²), for Stairmand's two designs.

    Below about 5 g/m³. Source: Svarovsky; Rhodes 2008, ch. 9 (from memory). ``fluid_density`` isn't used.
    """
    stokes, _ = SIMILARITY[geometry.design]
    velocity = 4 * np.asarray(flow, float) / (np.pi * geometry.body_diameter**2)
    drag = 18 * np.asarray(fluid_viscosity, float) * geometry.body_diameter * stokes
    return np.asarray(np.sqrt(drag / (np.asarray(particle_density, float) * velocity)) + 0 * np.asarray(fluid_density))


def iozia_leith_cut(
    *, geometry: CycloneGeometry, flow: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
) -> Array:  # fmt: skip
    """``sqrt(9 µ Q / (π z_c ρ_p v_t²))`` (m) with the core's size and swirl by their regressions.

    Fitted on Stairmand-like cyclones of 0.25 m. Source: Iozia & Leith 1989 (from memory).
    """
    g = geometry
    area, finder, tall = (
        g.inlet_area / g.body_diameter**2,
        g.outlet_diameter / g.body_diameter,
        g.total_height / g.body_diameter,
    )
    swirl = 6.1 * np.asarray(flow, float) / g.inlet_area * area**0.61 * finder**-0.74 * tall**-0.33
    core = 0.52 * g.body_diameter * area**-0.25 * finder**1.53
    below = g.total_height - g.outlet_length
    if core >= g.dust_outlet_diameter:
        cone = g.total_height - g.cylinder_height
        below -= cone / (g.body_diameter / g.dust_outlet_diameter - 1) * (core / g.dust_outlet_diameter - 1)
    drag = 9 * np.asarray(fluid_viscosity, float) * np.asarray(flow, float)
    return np.asarray(
        np.sqrt(drag / (np.pi * below * np.asarray(particle_density, float) * swirl**2)) + 0 * np.asarray(fluid_density)
    )


CUT_SIZES: dict[str, Any] = {
    "stairmand-similarity": similarity_cut,
    "barth-1956": barth_cut,
    "iozia-leith-1989": iozia_leith_cut,
    "lapple-1951": lapple_cut,
    "muschelknautz": muschelknautz_cut,
}


def cut_sizes(
    *, geometry: CycloneGeometry, flow: ArrayLike, particle_density: ArrayLike, fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
) -> dict[str, Array]:  # fmt: skip
    """Cut size (m) by every model that applies; the first is the recommended one.

    Rule: similarity for Stairmand's two designs, on which it was measured; else Barth.
    """
    keys = [key for key in CUT_SIZES if key != "stairmand-similarity" or geometry.design in SIMILARITY]
    return {
        key: CUT_SIZES[key](
            geometry=geometry,
            flow=flow,
            particle_density=particle_density,
            fluid_density=fluid_density,
            fluid_viscosity=fluid_viscosity,
        )
        for key in keys
    }


def scaled_size(
    *,
    size: ArrayLike,
    body_diameter: tuple[float, float],
    flow: tuple[float, float],
    density_difference: tuple[float, float],
    fluid_viscosity: tuple[float, float],
) -> Array:
    """Size (m) that a similar cyclone catches as well as a tested one catches ``size``; pairs are (tested, other), SI.

    ``x2 = x1 sqrt[(D2/D1)³ (Q1/Q2)(Δρ1/Δρ2)(µ2/µ1)]``. Source: Stairmand; Coulson & Richardson vol. 6, ch. 10 (from memory).
    """
    (d1, d2), (q1, q2) = body_diameter, flow
    (rho1, rho2), (mu1, mu2) = density_difference, fluid_viscosity
    return np.asarray(np.asarray(size, float) * np.sqrt((d2 / d1) ** 3 * (q1 / q2) * (rho1 / rho2) * (mu2 / mu1)))


def iozia_leith_slope(*, geometry: CycloneGeometry, cut: ArrayLike) -> Array:
    """Exponent of their grade curve, ``ln β = 0.62 - 0.87 ln(x50/cm) + 5.21 ln(ab/D²) + 1.05 ln(ab/D²)²``, held to 2..8.

    Source: Iozia & Leith 1990 (from memory). Outside 0.05 < ab/D² < 0.2 it runs wild.
    """
    area = np.log(geometry.inlet_area / geometry.body_diameter**2)
    log = 0.62 - 0.87 * np.log(np.asarray(cut, float) * 100) + 5.21 * area + 1.05 * area**2
    return np.clip(np.exp(log), 2.0, 8.0)


def grade_slope(key: str, *, geometry: CycloneGeometry, cut: ArrayLike) -> Array:
    """Exponent m of a model's grade curve ``1/(1 + (x50/x)^m)``: 2 for Lapple and similarity, 6.4 Barth, 5 Muschelknautz.

    Sources: Theodore & DePaola 1980 for Lapple, Rhodes 2008 for similarity (looked up), Dirgo & Leith for Barth.
    """
    if key == "iozia-leith-1989":
        return iozia_leith_slope(geometry=geometry, cut=cut)
    return np.full(np.shape(cut), {"barth-1956": BARTH_SLOPE, "muschelknautz": GRADE_SLOPE}.get(key, 2.0))


def grade_efficiency(*, size: ArrayLike, cut: ArrayLike, slope: ArrayLike) -> Array:
    """``1/(1 + (x50/x)^m)``, (..., classes); ``cut`` and ``slope`` of the leading shape."""
    ratio = np.asarray(cut, float)[..., None] / np.asarray(size, float)
    return np.asarray(1 / (1 + ratio ** np.asarray(slope, float)[..., None]))


def geometry_constant(geometry: CycloneGeometry) -> float:
    """The dimensionless G of Leith & Licht. Source: Koch & Licht 1977 (looked up; its printed values reproduced)."""
    g, d = geometry, geometry.body_diameter
    length = g.natural_length
    inlet = np.pi * (g.outlet_length - g.inlet_height / 2) * (d**2 - g.outlet_diameter**2) / 4
    cylinder = np.pi * d**2 / 4 * (g.cylinder_height - g.outlet_length)
    cone = g.total_height - g.cylinder_height
    if length <= g.total_height - g.outlet_length:
        depth = length + g.outlet_length - g.cylinder_height
        end = (d - (d - g.dust_outlet_diameter) * depth / cone) / d
        core = length
    else:
        depth, end, core = cone, g.dust_outlet_diameter / d, g.total_height - g.outlet_length
    volume = cylinder + np.pi * d**2 / 4 * depth / 3 * (1 + end + end**2) - np.pi * g.outlet_diameter**2 * core / 4
    kc = (2 * inlet + volume) / (2 * d**3)
    return float(8 * kc * d**4 / (g.inlet_height * g.inlet_width) ** 2)


def alexander_exponent(*, geometry: CycloneGeometry, temperature: ArrayLike) -> Array:
    """Vortex exponent ``1 - (1 - 0.67 D^0.14)(T/283)^0.3`` (D m, T K). Source: Alexander 1949 (from memory)."""
    return np.asarray(1 - (1 - 0.67 * geometry.body_diameter**0.14) * (np.asarray(temperature, float) / 283) ** 0.3)


def leith_licht_efficiency(
    *, geometry: CycloneGeometry, flow: ArrayLike, size: ArrayLike, particle_density: ArrayLike,
    fluid_viscosity: ArrayLike, temperature: ArrayLike = 293.15,
) -> Array:  # fmt: skip
    """``1 - exp{-2 [G τ Q (n+1)/D³]^(1/(2n+2))}``, τ = ρ_p x²/(18 µ); (..., classes) for (..., 1) inputs.

    Far too high for fines: for comparison only. Source: Leith & Licht 1972 (looked up).
    """
    n = alexander_exponent(geometry=geometry, temperature=temperature)
    tau = np.asarray(particle_density, float) * np.asarray(size, float) ** 2 / (18 * np.asarray(fluid_viscosity, float))
    group = geometry_constant(geometry) * tau * np.asarray(flow, float) * (n + 1) / geometry.body_diameter**3
    return np.asarray(-np.expm1(-2 * group ** (0.5 / (n + 1))))


def dietz_efficiency(
    *, geometry: CycloneGeometry, flow: ArrayLike, size: ArrayLike, particle_density: ArrayLike,
    fluid_viscosity: ArrayLike, temperature: ArrayLike = 293.15,
) -> Array:  # fmt: skip
    """Three-region model; (..., classes) for (..., 1) inputs. Source: Dietz 1981 (from memory, re-derived)."""
    g, n = geometry, alexander_exponent(geometry=geometry, temperature=temperature)
    tau = np.asarray(particle_density, float) * np.asarray(size, float) ** 2 / (18 * np.asarray(fluid_viscosity, float))
    inlet = np.asarray(flow, float) / g.inlet_area
    k2 = (g.outlet_diameter / g.body_diameter) ** (2 * n)
    length = min(g.natural_length, g.total_height - g.outlet_length)
    x = k2 * (1 + g.inlet_area / (2 * np.pi * length * tau * inlet))
    root = np.sqrt(((1 - x) / 2) ** 2 + k2)
    difference = (x - k2) / ((1 + x) / 2 + root)  # K0 - sqrt(K1² + K2) without cancellation
    entry = np.exp(-np.pi * (2 * g.outlet_length - g.inlet_height) * tau * inlet / g.inlet_area)
    return np.asarray(1 - difference * entry)


def pressure_drops(*, geometry: CycloneGeometry, flow: ArrayLike, fluid_density: ArrayLike) -> dict[str, Array]:
    """Pressure drop (Pa) of the clean gas by every model that applies; the first is the recommended one.

    Heads of the inlet velocity: Shepherd & Lapple ``16 ab/De²`` (looked up), Casal & Martinez-Benet
    ``11.3 (ab/De²)² + 3.33``, Dirgo ``20 (ab/De²)[(S/D)/((H/D)(h/D)(B/D))]^(1/3)`` (from memory); Euler number for
    Stairmand's designs. They scatter by -50 to +100 %; with dust the drop is lower.
    """
    g, d = geometry, geometry.body_diameter
    inlet = np.asarray(flow, float) / g.inlet_area
    head = np.asarray(fluid_density, float) * inlet**2 / 2
    ratio = g.inlet_area / g.outlet_diameter**2
    slender = (g.outlet_length / d) / (g.total_height / d * (g.cylinder_height / d) * (g.dust_outlet_diameter / d))
    heads = {
        "shepherd-lapple-1940": 16 * ratio,
        "casal-martinez-1983": 11.3 * ratio**2 + 3.33,
        "dirgo-1988": 20 * ratio * np.cbrt(slender),
    }
    if g.design in SIMILARITY:
        body = 4 * g.inlet_area / (np.pi * d**2)  # body velocity over inlet velocity
        heads = {"stairmand-euler": SIMILARITY[g.design][1] * body**2, **heads}
    return {key: np.asarray(value * head) for key, value in heads.items()}


LEAST_LOADING = 1e-3  # kg/kg; the formula falls faster than the loading below it, which would clean an almost clean gas


def critical_loading(*, cut: ArrayLike, median_size: ArrayLike, loading: ArrayLike) -> Array:
    """Mass loading (kg/kg) the gas can carry into the vortex, ``0.025 (x50/x_med)(10 c0)^k``; the rest drops at once.

    k = 0.15 from c0 = 0.1 on, ``-0.11 - 0.10 ln c0`` below; held level below c0 = 0.001.
    Source: Muschelknautz, as in Hoffmann & Stein (from
    memory; the constant is in doubt).
    """
    c0 = np.maximum(np.asarray(loading, float), LEAST_LOADING)
    k = np.where(c0 >= 0.1, 0.15, -0.11 - 0.10 * np.log(c0))
    return np.asarray(0.025 * np.asarray(cut, float) / np.asarray(median_size, float) * (10 * c0) ** k)


def penetration_with_loading(*, penetration: ArrayLike, loading: ArrayLike, limit: ArrayLike) -> Array:
    """Penetration by class when dust above the critical loading drops out unclassified, (..., classes).

    ``P x min(1, c0L/c0)``: the size make-up of what escapes stays that of low loading.
    """
    c0 = np.maximum(np.asarray(loading, float), 1e-300)
    kept = np.minimum(1.0, np.asarray(limit, float) / c0)
    return np.asarray(np.asarray(penetration, float) * kept[..., None])
