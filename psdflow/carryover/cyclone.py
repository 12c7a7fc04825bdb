"""Reverse-flow cyclones: dimensions, the standard designs, what makes a shape doubtful, inlet velocity advice."""

from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.errors import InputError
from psdflow.fluidization.numbers import GRAVITY

Array = NDArray[np.float64]


@dataclass(frozen=True)
class CycloneGeometry:
    """Dimensions in m, the trade's letters in brackets.

    body_diameter (D), inlet_height (a), inlet_width (b), outlet_diameter (De, the vortex finder),
    outlet_length (S, from the roof), cylinder_height (h), total_height (H, cylinder and cone),
    dust_outlet_diameter (B). ``design`` is the standard design's name, empty for own dimensions.
    """

    body_diameter: float
    inlet_height: float
    inlet_width: float
    outlet_diameter: float
    outlet_length: float
    cylinder_height: float
    total_height: float
    dust_outlet_diameter: float
    design: str = ""

    @property
    def inlet_area(self) -> float:
        """m²."""
        return self.inlet_height * self.inlet_width

    @property
    def natural_length(self) -> float:
        """Length of the outer vortex below the finder, ``2.3 De (D²/(ab))^(1/3)`` (m). Source: Alexander 1949."""
        return float(2.3 * self.outlet_diameter * np.cbrt(self.body_diameter**2 / self.inlet_area))

    @property
    def core_height(self) -> float:
        """Height Hcs (m) of the cylinder that prolongs the vortex finder, down to the cone or the dust outlet.

        Source: Barth 1956 (looked up).
        """
        if self.dust_outlet_diameter >= self.outlet_diameter:
            return self.total_height - self.outlet_length
        reach = (self.body_diameter - self.outlet_diameter) / (self.body_diameter - self.dust_outlet_diameter)
        return (self.total_height - self.cylinder_height) * reach + self.cylinder_height - self.outlet_length


# Proportions to the body diameter: a, b, De, S, h, H, B. Koch & Licht 1977 compilation: the first five looked up, the
# two high-throughput rows from memory and confirmed by the compilation's own geometry constants.
DESIGNS: dict[str, tuple[float, ...]] = {
    "stairmand-high-efficiency": (0.5, 0.2, 0.5, 0.5, 1.5, 4.0, 0.375),
    "swift-high-efficiency": (0.44, 0.21, 0.4, 0.5, 1.4, 3.9, 0.4),
    "lapple-general-purpose": (0.5, 0.25, 0.5, 0.625, 2.0, 4.0, 0.25),
    "swift-general-purpose": (0.5, 0.25, 0.5, 0.6, 1.75, 3.75, 0.4),
    "peterson-whitby": (0.583, 0.208, 0.5, 0.583, 1.333, 3.17, 0.5),
    "stairmand-high-throughput": (0.75, 0.375, 0.75, 0.875, 1.5, 4.0, 0.375),
    "swift-high-throughput": (0.8, 0.35, 0.75, 0.85, 1.7, 3.7, 0.4),
}
DIMENSIONS = tuple(field.name for field in fields(CycloneGeometry))[1:-1]

RE_ENTRAINMENT = 1.36  # inlet over saltation velocity, Kalen & Zenz 1974 (from memory)

# Inlet velocity of gas cyclones, m/s (common practice, from memory).
LOWEST_INLET_VELOCITY, HIGHEST_INLET_VELOCITY = 9.0, 27.0


def standard_design(name: str, body_diameter: float) -> CycloneGeometry:
    """A standard design scaled to ``body_diameter`` (m).

    Raises
    ------
    InputError
        Unknown name; the message lists the known ones.
    """
    if name not in DESIGNS:
        raise InputError(f'cyclone design "{name}" is not known; known are: {", ".join(DESIGNS)}')
    sizes = {key: ratio * body_diameter for key, ratio in zip(DIMENSIONS, DESIGNS[name], strict=True)}
    return CycloneGeometry(body_diameter=body_diameter, design=name, **sizes)


def own_design(body_diameter: float, **dimensions: float | None) -> CycloneGeometry:
    """A cyclone with all its dimensions given (m).

    Raises
    ------
    InputError
        A dimension is missing, or the shape can't be built.
    """
    missing = [name for name in DIMENSIONS if dimensions.get(name) is None]
    if missing:
        raise InputError(f"cyclone: give design:, or all dimensions; missing are {', '.join(missing)}")
    sizes = {name: float(dimensions[name] or 0) for name in DIMENSIONS}
    shape = CycloneGeometry(body_diameter=body_diameter, design="", **sizes)
    if not 0 < shape.outlet_diameter < body_diameter:
        raise InputError("cyclone: outlet_diameter must be above 0 and below body_diameter")
    if not 0 < shape.outlet_length < shape.total_height:
        raise InputError("cyclone: outlet_length must be above 0 and below total_height")
    if not 0 < shape.cylinder_height < shape.total_height:
        raise InputError("cyclone: cylinder_height must be above 0 and below total_height")
    if not (0 < shape.inlet_width < body_diameter / 2 and shape.inlet_height > 0):
        raise InputError("cyclone: the inlet must be wider than 0 and narrower than the body's radius")
    if not 0 < shape.dust_outlet_diameter < body_diameter:
        raise InputError("cyclone: dust_outlet_diameter must be above 0 and below body_diameter")
    return shape


def shape_doubts(geometry: CycloneGeometry) -> list[str]:
    """What is unusual about the shape, in words. Limits: Salcedo & Candido 2001 (looked up)."""
    said = []
    slack = 1 + 1e-9
    if geometry.inlet_width > (geometry.body_diameter - geometry.outlet_diameter) / 2 * slack:
        said.append("the inlet jet meets the vortex finder (inlet wider than the gap) unless it has a scroll")
    if geometry.natural_length > (geometry.total_height - geometry.outlet_length) * slack:
        said.append("the vortex is longer than the cyclone below the finder: dust may be picked up again")
    if not 0.5 / slack <= geometry.dust_outlet_diameter / geometry.outlet_diameter <= slack:
        said.append("the dust outlet is not between half and the whole vortex-finder diameter")
    return said


def saltation_velocity(
    *,
    geometry: CycloneGeometry,
    inlet_velocity: ArrayLike,
    particle_density: ArrayLike,
    fluid_density: ArrayLike,
    fluid_viscosity: ArrayLike,
) -> Array:
    """Inlet velocity (m/s) from which dust on the wall is picked up again begins at 1.36 times this value.

    ``4.913 W (b/D)^0.4 (1-b/D)^(-1/3) D^0.067 v_in^(2/3)``, ``W = [4 g µ Δρ/(3 ρ²)]^(1/3)``; dimensional, SI.
    Low loading. Source: Kalen & Zenz 1974 (from memory).
    """
    rho = np.asarray(fluid_density, float)
    w = np.cbrt(
        4 * GRAVITY * np.asarray(fluid_viscosity, float) * (np.asarray(particle_density, float) - rho) / (3 * rho**2)
    )
    ratio = geometry.inlet_width / geometry.body_diameter
    shape = ratio**0.4 * (1 - ratio) ** (-1 / 3) * geometry.body_diameter**0.067
    return np.asarray(4.913 * w * shape * np.asarray(inlet_velocity, float) ** (2 / 3))
