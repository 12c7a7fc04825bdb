"""The material document: what the powder is."""

from pydantic import model_validator

from psdflow.documents import (
    Angle,
    Density,
    Document,
    Energy,
    Fraction,
    Length,
    Number,
    Temperature,
    require,
)


class Material(Document):
    """Properties of the powder; only ``name`` and ``particle_density`` are required.

    Every quantity may carry a tolerance (``0.9 +- 0.05``), the half-width of a 95 % interval.
    From Python, plain numbers are SI: ``Material(name="sand", particle_density=2650)``.

    Attributes
    ----------
    particle_density
        Envelope density, kg/m³: closed and open pores included, not the skeletal density.
    sphericity
        Wadell's: surface of the sphere of equal volume over the grain's surface, 0..1.
    sieve_to_volume
        Volume-equivalent diameter over sieve aperture, if measured.
    loose_bulk_density, tapped_bulk_density
        kg/m³; their ratio is the Hausner ratio.
    voidage_mf
        Voidage at minimum fluidization, 0..1.
    compacted_voidage
        Voidage of the settled, vibrated bed before it is first loosened; gives the bump of the pressure-drop curve.
    moisture
        Mass fraction of water as received.
    angle_of_repose, flow_function
        Radians; ffc of a shear test.
    softening_temperature
        K; where grains start to stick.
    hamaker_constant, asperity_diameter
        J and m; for the van der Waals force between rough grains.
    bed_pressure_drop_ratio
        Measured pressure drop over bed weight per area in a small column, 0..1.2.
    """

    name: str
    particle_density: Density
    sphericity: Number | None = None
    sieve_to_volume: Number | None = None
    loose_bulk_density: Density | None = None
    tapped_bulk_density: Density | None = None
    voidage_mf: Fraction | None = None
    compacted_voidage: Fraction | None = None
    moisture: Fraction | None = None
    angle_of_repose: Angle | None = None
    flow_function: Number | None = None
    softening_temperature: Temperature | None = None
    hamaker_constant: Energy | None = None
    asperity_diameter: Length | None = None
    bed_pressure_drop_ratio: Number | None = None

    @model_validator(mode="after")
    def _possible(self) -> "Material":
        density = self.particle_density.value
        require(10 <= density <= 25_000, "particle_density", f"{density:g} kg/m³", "10 to 25000 kg/m³")
        for key, low, high in _POSSIBLE:
            quantity = getattr(self, key)
            if quantity is not None:
                require(low < quantity.value <= high, key, f"{quantity.value:.4g}", f"above {low:g}, at most {high:g}")
        for key in ("loose_bulk_density", "tapped_bulk_density"):
            bulk = getattr(self, key)
            if bulk is not None:
                require(
                    0 < bulk.value < density,
                    key,
                    f"{bulk.value:g} kg/m³",
                    f"less than the particle density, {density:g} kg/m³; check which density is which",
                )
        if self.loose_bulk_density and self.tapped_bulk_density:
            loose, tapped = self.loose_bulk_density.value, self.tapped_bulk_density.value
            require(
                tapped >= loose,
                "tapped_bulk_density",
                f"{tapped:g} kg/m³",
                f"at least the loose bulk density, {loose:g} kg/m³",
            )
        return self

    @property
    def hausner_ratio(self) -> float | None:
        """Tapped over loose bulk density, None unless both are given."""
        if self.loose_bulk_density is None or self.tapped_bulk_density is None:
            return None
        return self.tapped_bulk_density.value / self.loose_bulk_density.value


# Physical bounds in SI units: above the first, at most the second.
_POSSIBLE = (
    ("sphericity", 0.05, 1.0),
    ("sieve_to_volume", 0.5, 2.0),
    ("voidage_mf", 0.2, 0.98),
    ("compacted_voidage", 0.15, 0.98),
    ("moisture", -1e-12, 0.8),
    ("angle_of_repose", 0.0, 1.5708),
    ("flow_function", 0.0, 1000.0),
    ("softening_temperature", 150.0, 4000.0),
    ("hamaker_constant", 1e-21, 1e-17),
    ("asperity_diameter", 1e-10, 1e-3),
    ("bed_pressure_drop_ratio", 0.0, 1.5),
)
