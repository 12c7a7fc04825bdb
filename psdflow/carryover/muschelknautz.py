"""The Muschelknautz method for cyclones: swirl with wall friction and dust, cut size, pressure drop.

Source: Muschelknautz & Trefz in the VDI heat atlas, as in Hoffmann & Stein, Gas Cyclones and Swirl Tubes, ch. 6
(from memory; a regression case was recomputed). The roughness chart and other inlets of the atlas are left out.
"""

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.carryover.cyclone import CycloneGeometry
from psdflow.fluidization.numbers import GRAVITY

Array = NDArray[np.float64]

GAS_FRICTION = 0.005  # smooth steel; to 0.0065
GRADE_SLOPE = 5.0  # 2 for rough or badly sealed cyclones, 7 for the best
STRAND_DENSITY_SHARE = 0.4  # of the bulk density, of the dust strand on the wall


class Swirl(NamedTuple):
    """Velocities at the wall and on the core (m/s), friction factor, wall area (m²)."""

    wall: Array
    core: Array
    friction: Array
    area: float


def constriction(*, width_ratio: ArrayLike, loading: ArrayLike) -> Array:
    """How far the inlet jet is squeezed, α of a slot inlet; ``width_ratio`` is b/R, ``loading`` kg/kg."""
    x, c0 = np.asarray(width_ratio, float), np.asarray(loading, float)
    inner = np.sqrt(1 - (1 - x**2) * (2 * x - x**2) / (1 + c0))
    return np.asarray((1 - np.sqrt(1 + 4 * ((x / 2) ** 2 - x / 2) * inner)) / x)


def swirl(
    *,
    geometry: CycloneGeometry,
    flow: ArrayLike,
    fluid_density: ArrayLike,
    loading: ArrayLike = 0.0,
    efficiency: ArrayLike = 0.95,
    bulk_density: ArrayLike = 1200.0,
) -> Swirl:
    """Swirl with the friction of gas and dust; ``flow`` m³/s, ``loading`` kg/kg, ``bulk_density`` of the dust kg/m³."""
    g, q = geometry, np.asarray(flow, float)
    radius, finder, outlet = g.body_diameter / 2, g.outlet_diameter / 2, g.dust_outlet_diameter / 2
    alpha = constriction(width_ratio=g.inlet_width / radius, loading=loading)
    wall = q / g.inlet_area * (radius - g.inlet_width / 2) / (alpha * radius)
    cone = np.hypot(g.total_height - g.cylinder_height, radius - outlet)
    area = float(
        np.pi * (radius**2 - finder**2)
        + 2 * np.pi * radius * g.cylinder_height
        + 2 * np.pi * finder * g.outlet_length
        + np.pi * (radius + outlet) * cone
    )
    froude = q / (np.pi * finder**2) / np.sqrt(2 * GRAVITY * finder)
    strand = STRAND_DENSITY_SHARE * np.asarray(bulk_density, float)
    dust = (
        np.asarray(efficiency, float) * np.asarray(loading, float) * froude * np.asarray(fluid_density, float) / strand
    )
    friction = GAS_FRICTION + 0.25 * (radius / finder) ** -0.625 * np.sqrt(dust)
    core = wall * (radius / finder) / (1 + friction * area * wall * np.sqrt(radius / finder) / (2 * q))
    return Swirl(np.asarray(wall), np.asarray(core), np.asarray(friction), area)


def muschelknautz_cut(
    *,
    geometry: CycloneGeometry,
    flow: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
    loading: ArrayLike = 0.0,
    efficiency: ArrayLike = 0.95,
    bulk_density: ArrayLike = 1200.0,
) -> Array:
    """Cut size (m), ``sqrt(18 µ 0.9 Q / (2π Δρ v_cs² (H - S)))``."""
    core = swirl(
        geometry=geometry,
        flow=flow,
        fluid_density=fluid_density,
        loading=loading,
        efficiency=efficiency,
        bulk_density=bulk_density,
    ).core
    difference = np.asarray(particle_density, float) - np.asarray(fluid_density, float)
    drag = 18 * np.asarray(fluid_viscosity, float) * 0.9 * np.asarray(flow, float)
    return np.asarray(
        np.sqrt(drag / (2 * np.pi * difference * core**2 * (geometry.total_height - geometry.outlet_length)))
    )


def muschelknautz_pressure_drop(
    *,
    geometry: CycloneGeometry,
    flow: ArrayLike,
    fluid_density: ArrayLike,
    loading: ArrayLike = 0.0,
    efficiency: ArrayLike = 0.95,
    bulk_density: ArrayLike = 1200.0,
) -> Array:
    """Pressure drop (Pa): friction in the body and swirl in the vortex finder."""
    q, rho = np.asarray(flow, float), np.asarray(fluid_density, float)
    found = swirl(
        geometry=geometry,
        flow=flow,
        fluid_density=fluid_density,
        loading=loading,
        efficiency=efficiency,
        bulk_density=bulk_density,
    )
    body = found.friction * found.area * rho * (found.wall * found.core) ** 1.5 / (2 * 0.9 * q)
    axial = q / (np.pi * (geometry.outlet_diameter / 2) ** 2)
    ratio = found.core / axial
    finder = rho * axial**2 / 2 * (2 + ratio**2 + 3 * ratio ** (4 / 3))
    return np.asarray(body + finder)
