"""One powder in one duty as arrays: what every stage takes.

The nominal case has the lots' leading shape and no scatter; the drawn case adds a last leading axis of
draws, in which report, powder properties and methods vary together. Both go through the same stages.
"""

from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.distribution import SizeDistribution
from psdflow.duty import Duty
from psdflow.fluid import Fluid
from psdflow.material import Material
from psdflow.methods import catalogue
from psdflow.sizes.conversion import sieve_to_volume_ratio, surface_volume, volume_equivalent
from psdflow.sizes.statistics import d32
from psdflow.uncertainty import Draws, redrawn_report
from psdflow.units import Measured

Array = NDArray[np.float64]

ASSUMED_SPHERICITY = 0.85  # rounded to sub-angular grains; between beads (1.0) and crushed solids (0.77). Judgement

# Standard deviations where the document states no tolerance. Judgement; the density and flow figures follow the
# rule the cohesion verdict was written for.
PROPERTY_SD: dict[str, float] = {
    "particle_density": 0.05,  # relative
    "sphericity": 0.03,
    "assumed sphericity": 0.07,
    "sieve_to_volume": 0.05,  # relative
    "voidage_mf": 0.015,
    "hausner_ratio": 0.06,  # protocol unknown
    "flow_function": 0.15,  # relative
    "angle_of_repose": 0.0524,  # rad, 3 degrees
    "hamaker_constant": 0.2,  # of the logarithm
    "asperity_diameter": 0.4,  # of the logarithm
}


@dataclass(frozen=True)
class Case:
    """Arrays that broadcast over the leading shape; ``draws`` is None for the nominal case."""

    distribution: SizeDistribution
    material: Material
    duty: Duty
    draws: Draws | None = None

    @cached_property
    def fluid(self) -> Fluid:
        """The fluid at the duty's state."""
        return self.duty.fluid.resolved

    @cached_property
    def _state(self) -> tuple[Array, Array]:
        """Density (kg/m³) and viscosity (Pa·s); one temperature and one pressure move both in every draw."""
        density, viscosity = np.asarray(self.fluid.density, float), np.asarray(self.fluid.viscosity, float)
        state = self.duty.fluid
        if self.draws is None:
            return density, viscosity
        for name, given in (("temperature", state.temperature), ("pressure", state.pressure)):
            if given is not None and given.tolerance:
                slope_density, slope_viscosity = state.slopes(name)
                step = given.tolerance / 1.96 * self.draws.normal(name)
                density, viscosity = density * np.exp(slope_density * step), viscosity * np.exp(slope_viscosity * step)
        return density, viscosity

    @property
    def fluid_density(self) -> Array:
        """kg/m³, drawn with the duty's tolerances of temperature and pressure."""
        return self._state[0]

    @property
    def fluid_viscosity(self) -> Array:
        """Pa·s, drawn as the density."""
        return self._state[1]

    @cached_property
    def velocity(self) -> Array:
        """Superficial operating velocity, m/s, drawn if the duty states a tolerance."""
        given = self.duty.velocity
        return self._property("velocity", given, 0.0, 1e-9, np.inf)

    @cached_property
    def report(self) -> SizeDistribution:
        """The distribution in the sizes that were measured, redrawn if this is the drawn case."""
        if self.draws is None:
            return self.distribution
        return redrawn_report(self.distribution, self.draws, particle_density=self.material.particle_density.value)

    def around(self, name: str, value: float, sd: float, low: float = -np.inf, high: float = np.inf) -> Array:
        """``value``, or draws of it with standard deviation ``sd``."""
        if self.draws is None:
            return np.asarray(value, float)
        return self.draws.around(name, value, sd, low, high)

    def _property(self, key: str, given: Measured, sd: float, low: float, high: float) -> Array:
        spread = sd if given.tolerance is None else given.tolerance / 1.96
        return self.around(key, given.value, spread, low, high)

    def scatter(self, name: str, sd: ArrayLike) -> Array:
        """Factor exp(sd z) of a method's published scatter; 1 in the nominal case."""
        if self.draws is None:
            return np.asarray(1.0)
        return np.asarray(np.exp(np.asarray(sd, float) * self.draws.normal(name)))

    def method_scatter(self, name: str, keys: NDArray[np.str_]) -> Array:
        """`scatter` with the standard deviation of the method that each element came from."""
        if self.draws is None:
            return np.asarray(1.0)
        found, position = np.unique(keys, return_inverse=True)
        sd = np.array([catalogue()[key].scatter if key in catalogue() else 0.0 for key in found])
        return self.scatter(name, sd[position].reshape(keys.shape))

    @cached_property
    def particle_density(self) -> Array:
        """kg/m³."""
        given = self.material.particle_density
        sinks = 1.005 * self.fluid.density  # it was seen to sink: no draw floats
        return self._property("particle_density", given, PROPERTY_SD["particle_density"] * given.value, sinks, np.inf)

    @cached_property
    def sphericity(self) -> Array:
        """Measured, else assumed."""
        given = self.material.sphericity
        if given is None:
            return self.around("sphericity", ASSUMED_SPHERICITY, PROPERTY_SD["assumed sphericity"], 0.5, 1.0)
        return self._property("sphericity", given, PROPERTY_SD["sphericity"], 0.1, 1.0)

    @cached_property
    def sieve_to_volume(self) -> Array:
        """Volume-equivalent diameter over sieve aperture: measured, else by sphericity."""
        given = self.material.sieve_to_volume
        if given is not None:
            return self._property("sieve_to_volume", given, PROPERTY_SD["sieve_to_volume"] * given.value, 0.3, 3.0)
        return sieve_to_volume_ratio(self.sphericity) * self.around(
            "sieve_to_volume", 1.0, PROPERTY_SD["sieve_to_volume"]
        )

    def given(self, key: str, *, relative: bool = False, low: float = 0.0, high: float = np.inf) -> Array | None:
        """An optional property of the material with its tolerance, None if it wasn't given."""
        given: Measured | None = getattr(self.material, key)
        if given is None:
            return None
        sd = PROPERTY_SD.get(key, 0.0) * (given.value if relative else 1.0)
        return self._property(key, given, sd, low, high)

    @cached_property
    def volume(self) -> SizeDistribution:
        """The distribution in volume-equivalent diameters."""
        return volume_equivalent(self.report, self.sieve_to_volume)

    @cached_property
    def diameter_v(self) -> Array:
        """Sauter mean of the volume-equivalent diameters, m: what the Wen & Yu family takes."""
        return d32(self.volume)

    @cached_property
    def diameter_sv(self) -> Array:
        """Surface-volume mean diameter, m: what Geldart's chart and its relatives take."""
        return surface_volume(self.diameter_v, self.sphericity)

    @cached_property
    def fines_45um(self) -> Array:
        """Share below 45 µm in the report's sizes."""
        return self.report.undersize(45e-6)

    @cached_property
    def grain(self) -> dict[str, Any]:
        """The three arguments that most formulas share: grain and fluid."""
        return {
            "particle_density": self.particle_density,
            "fluid_density": self.fluid_density,
            "fluid_viscosity": self.fluid_viscosity,
        }

    @property
    def gas_flow(self) -> Array:
        """Gas through the whole bed, m³/s at bed conditions; NaN without a bed."""
        diameter = self.duty.bed.diameter.value if self.duty.bed else np.nan
        return np.asarray(self.velocity * np.pi / 4 * diameter**2)

    @property
    def shape(self) -> tuple[int, ...]:
        """Leading shape."""
        return self.report.shape
