"""The duty document: where and how the powder is fluidized."""

import math
from functools import cached_property
from typing import Literal

from pydantic import Field, model_validator

from psdflow import fluid as fluids
from psdflow.documents import (
    Density,
    Document,
    Fraction,
    Length,
    MassRate,
    Pressure,
    Rate,
    Temperature,
    Time,
    Velocity,
    Viscosity,
    require,
)
from psdflow.errors import InputError
from psdflow.fluid import Fluid
from psdflow.units import Measured


class FluidState(Document):
    """Exactly one of ``gas``, ``mixture``, ``liquid``, or ``density`` with ``viscosity``.

    Named fluids need ``temperature`` and absolute ``pressure``; ``1.2 barg`` adds one standard atmosphere.
    """

    gas: str | None = None
    mixture: dict[str, float] | None = None
    liquid: str | None = None
    density: Density | None = None
    viscosity: Viscosity | None = None
    phase: Literal["gas", "liquid"] | None = None
    temperature: Temperature | None = None
    pressure: Pressure | None = None

    @model_validator(mode="after")
    def _one_way(self) -> "FluidState":
        given = self.density is not None or self.viscosity is not None
        ways = [self.gas is not None, self.mixture is not None, self.liquid is not None, given]
        if sum(ways) != 1:
            raise InputError("say exactly one of gas:, mixture:, liquid:, or density: with viscosity:")
        if given:
            if self.density is None or self.viscosity is None:
                raise InputError("density: and viscosity: are needed together")
            require(self.density.value > 0, "density", f"{self.density.value:g} kg/m³", "above 0")
            require(self.viscosity.value > 0, "viscosity", f"{self.viscosity.value:g} Pa·s", "above 0")
        elif self.temperature is None or self.pressure is None:
            missing = "temperature" if self.temperature is None else "pressure"
            raise InputError(f"{missing}: missing; a named fluid needs temperature and absolute pressure")
        _ = self.resolved
        return self

    @cached_property
    def resolved(self) -> Fluid:
        """Density and viscosity at this state."""
        return self._resolve()

    def _resolve(self) -> Fluid:
        t = self.temperature.value if self.temperature else None
        p = self.pressure.value if self.pressure else None
        if self.density is not None and self.viscosity is not None:
            phase = self.phase or ("liquid" if self.density.value > 300 else "gas")
            return Fluid("given fluid", phase, self.density.value, self.viscosity.value, t, p)
        if t is None or p is None:
            raise InputError("a named fluid needs temperature and absolute pressure")
        if self.gas is not None:
            return fluids.gas(self.gas, temperature=t, pressure=p)
        if self.mixture is not None:
            return fluids.gas_mixture(self.mixture, temperature=t, pressure=p)
        return fluids.liquid(self.liquid or "", temperature=t, pressure=p)

    @property
    def steam_fraction(self) -> float:
        """Mole fraction of steam, 0 where the fluid is given by its density."""
        parts = self.mixture or ({self.gas: 1.0} if self.gas else {})
        return sum(share for name, share in parts.items() if "steam" in fluids.composition(name))

    def slopes(self, name: str) -> tuple[float, float]:
        """``d ln ρ / dx`` and ``d ln µ / dx`` at this state, x the temperature (1/K) or the pressure (1/Pa).

        Zero where the fluid was given by its density and viscosity: nothing ties them to the state.
        """
        given: Measured | None = getattr(self, name)
        if given is None or self.density is not None:
            return 0.0, 0.0
        step = given.value * 1e-4
        ends = [self.model_copy(update={name: Measured(given.value + side * step)}) for side in (-1, 1)]
        low, high = (end._resolve() for end in ends)
        return (
            math.log(high.density / low.density) / (2 * step),
            math.log(high.viscosity / low.viscosity) / (2 * step),
        )


class Bed(Document):
    """The vessel: inner diameter, height of the settled bed, free height from its surface to the outlet.

    ``hole_pitch`` is the spacing of the distributor's holes; ``inlet_diameter`` the one inlet of a spouted bed.
    """

    diameter: Length
    settled_height: Length | None = None
    freeboard_height: Length | None = None
    distributor: Literal["perforated plate", "porous plate", "nozzle plate"] | None = None
    hole_pitch: Length | None = None
    inlet_diameter: Length | None = None

    @model_validator(mode="after")
    def _possible(self) -> "Bed":
        for key in ("diameter", "settled_height", "freeboard_height", "hole_pitch", "inlet_diameter"):
            length = getattr(self, key)
            if length is not None:
                require(1e-3 <= length.value <= 100, key, f"{length.value:g} m", "1 mm to 100 m")
        return self


class Feed(Document):
    """Powder fed to the bed."""

    rate: MassRate


class Cyclone(Document):
    """One cyclone stage: a standard ``design`` by name and the body diameter, or all dimensions.

    ``count`` equal cyclones share the gas in parallel.
    """

    design: str | None = None
    body_diameter: Length
    count: int = Field(default=1, ge=1, le=200)
    returns_to: Literal["bed", "bin"] = "bin"
    inlet_height: Length | None = None
    inlet_width: Length | None = None
    outlet_diameter: Length | None = None
    outlet_length: Length | None = None
    cylinder_height: Length | None = None
    total_height: Length | None = None
    dust_outlet_diameter: Length | None = None


class Duty(Document):
    """Fluid state, vessel, superficial velocity at bed conditions; feed, hours and cyclones if there are any.

    ``attrition`` is what the coarser classes lose to the finest, of their mass in a time (``0.001 1/h``).
    ``coarse_end`` is the share (0.5..0.99, default 90 %) whose size stands for the coarse end in u_cf.
    """

    name: str
    fluid: FluidState
    velocity: Velocity
    bed: Bed | None = None
    feed: Feed | None = None
    attrition: Rate | None = None
    operating_hours: Time | None = None
    coarse_end: Fraction = Measured(0.9)
    cyclones: tuple[Cyclone, ...] = Field(default=(), max_length=3)

    @model_validator(mode="after")
    def _possible(self) -> "Duty":
        require(0 < self.velocity.value <= 50, "velocity", f"{self.velocity.value:g} m/s", "above 0, at most 50 m/s")
        end = self.coarse_end.value
        require(0.5 <= end <= 0.99, "coarse_end", f"{end:g}", "50 % to 99 %")
        if self.feed is not None:
            require(self.feed.rate.value > 0, "feed.rate", f"{self.feed.rate.value:g} kg/s", "above 0")
        if self.operating_hours is not None:
            hours = self.operating_hours.value / 3600
            require(0 < hours <= 8784, "operating_hours", f"{hours:g} h", "above 0, at most 8784 h a year")
        if self.cyclones and self.fluid.resolved.phase == "liquid":
            raise InputError("cyclones: gas cyclones don't apply to a liquid; leave the key out")
        if self.cyclones and self.bed is None:
            raise InputError("bed: missing; its diameter gives the gas flow to the cyclones")
        return self

    def at(self, name: Literal["velocity", "temperature", "pressure"], value: float) -> "Duty":
        """The same duty at another velocity (m/s), temperature (K) or absolute pressure (Pa).

        Raises
        ------
        InputError
            The fluid can't have that state, or was given by its density and viscosity.
        """
        fields = {key: getattr(self, key) for key in self.model_fields_set}
        if name == "velocity":
            return Duty(**{**fields, "velocity": Measured(value, self.velocity.tolerance)})
        state = self.fluid
        if state.density is not None:
            raise InputError(f"{name}: the fluid is given by density and viscosity, so its {name} can't be changed")
        old: Measured | None = getattr(state, name)
        given = {key: getattr(state, key) for key in state.model_fields_set}
        changed = FluidState(**{**given, name: Measured(value, old.tolerance if old else None)})
        return Duty(**{**fields, "fluid": changed})
