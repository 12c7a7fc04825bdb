"""What the cyclones keep and what is lost: the stages in series, each fed with what the one before let through."""

import numpy as np
from numpy.typing import NDArray

from psdflow.carryover import cyclone_models as models
from psdflow.carryover.cyclone import (
    DIMENSIONS,
    HIGHEST_INLET_VELOCITY,
    LOWEST_INLET_VELOCITY,
    RE_ENTRAINMENT,
    CycloneGeometry,
    own_design,
    saltation_velocity,
    shape_doubts,
    standard_design,
)
from psdflow.case import Array, Case
from psdflow.distribution import SizeDistribution
from psdflow.duty import Cyclone
from psdflow.results import Findings
from psdflow.units import NORMAL_TEMPERATURE, STANDARD_ATMOSPHERE

# How much of the effect of loading holds is in doubt, for its constant is from memory and a leak up a dipleg undoes it:
# half of it is taken, in the logarithm, and the interval spans none to all. Judgement.
LOADING_TAKEN = 0.5


def geometry_of(cyclone: Cyclone) -> CycloneGeometry:
    """The shape a duty's cyclone entry stands for."""
    body = cyclone.body_diameter.value
    if cyclone.design is not None:
        return standard_design(cyclone.design, body)
    given = {name: getattr(cyclone, name) for name in DIMENSIONS}
    return own_design(body, **{name: length.value if length else None for name, length in given.items()})


def cyclone_stage(
    case: Case, found: Findings, fine: SizeDistribution, size: Array, flux: Array, parts: int
) -> tuple[Array, Array]:
    """Cut size, efficiency, pressure drop and loss; ``flux`` (kg/m²/s) by sub-class enters the first stage.

    Returns the shares of each sub-class that go back to the bed and that are lost.
    """
    bed = case.duty.bed
    assert bed is not None
    velocity, area = case.velocity, np.pi / 4 * bed.diameter.value**2
    penetration, unloaded, returned = np.ones_like(flux), np.ones_like(flux), np.zeros_like(flux)
    sound: NDArray[np.bool_] = np.array(True)
    total_drop: Array = np.asarray(0.0)
    for number, entry in enumerate(case.duty.cyclones, start=1):
        suffix = "" if number == 1 else f"_{number}"
        shape, flow = geometry_of(entry), velocity * area / entry.count
        cut, slope = _cut(case, found, shape, flow, suffix)
        entering = flux * penetration
        passed = 1 - models.grade_efficiency(size=size, cut=cut, slope=slope)
        unloaded = unloaded * passed
        through = penetration * _loaded(case, fine, entering, passed, cut, suffix)
        if entry.returns_to == "bed":
            returned = returned + penetration - through
        penetration = through
        total_drop = total_drop + _pressure_drop(case, found, shape, flow, suffix)
        sound = sound & _inlet(case, found, shape, flow, suffix, number)
    others = {"grade curve without loading effect": unloaded}
    if case.draws is None:
        others |= _by_model(case, flux, size)
    _losses(case, found, fine, flux, penetration, others, sound, parts)
    if len(case.duty.cyclones) > 1:
        found.put("cyclone_pressure_drop_total", total_drop, "Pa", "sum of the stages")
    return returned, penetration


def _cut(case: Case, found: Findings, shape: CycloneGeometry, flow: Array, suffix: str) -> tuple[Array, Array]:
    """Cut size and grade-curve slope of the recommended model; every model's cut as an alternative."""
    every = models.cut_sizes(geometry=shape, flow=flow, **case.grain)
    key = next(iter(every))
    cut = every[key] * case.method_scatter(f"cyclone cut{suffix}", np.full((), key))
    cut = np.broadcast_to(cut, case.shape)
    note = "half of this size is caught; volume-equivalent"
    found.put(f"cyclone_cut_size{suffix}", cut, "m", key, alternatives=every, note=note)
    return cut, np.broadcast_to(models.grade_slope(key, geometry=shape, cut=cut), case.shape)


def _loaded(case: Case, fine: SizeDistribution, entering: Array, passed: Array, cut: Array, suffix: str) -> Array:
    """Penetration with what drops out at once because the gas can't carry it through the vortex."""
    from psdflow.carryover.stage import median_size

    loading = entering.sum(axis=-1) / (case.velocity * case.fluid_density)
    median = np.nan_to_num(median_size(fine, entering), nan=1.0)
    limit = models.critical_loading(cut=cut, median_size=median, loading=loading)
    taken = LOADING_TAKEN if case.draws is None else case.draws.uniform(f"critical loading{suffix}")
    ratio = np.minimum(limit / np.maximum(loading, 1e-300), 1.0) ** taken
    return models.penetration_with_loading(penetration=passed, loading=loading, limit=ratio * loading)


def _pressure_drop(case: Case, found: Findings, shape: CycloneGeometry, flow: Array, suffix: str) -> Array:
    every = models.pressure_drops(geometry=shape, flow=flow, fluid_density=case.fluid_density)
    key = next(iter(every))
    value = every[key] * case.method_scatter(f"cyclone drop{suffix}", np.full((), key))
    note = "clean gas; lower with dust"
    return found.put(f"cyclone_pressure_drop{suffix}", value, "Pa", key, alternatives=every, note=note)


def _inlet(
    case: Case, found: Findings, shape: CycloneGeometry, flow: Array, suffix: str, number: int
) -> NDArray[np.bool_]:
    """Inlet velocity with advice; whether it is one at which cyclones are run, so that the models hold."""
    inlet = flow / shape.inlet_area
    found.put(f"cyclone_inlet_velocity{suffix}", inlet, "m/s", "definition")
    found.warn(
        (inlet < LOWEST_INLET_VELOCITY) | (inlet > HIGHEST_INLET_VELOCITY),
        f"cyclone {number}: the inlet velocity of {{inlet:.1f}} m/s is outside {LOWEST_INLET_VELOCITY:.0f} to "
        f"{HIGHEST_INLET_VELOCITY:.0f} m/s: change its size or number",
        inlet=inlet,
    )
    saltation = saltation_velocity(geometry=shape, inlet_velocity=inlet, **case.grain)
    found.put(f"cyclone_saltation_ratio{suffix}", inlet / saltation, "1", "kalen-zenz-1974", note="best near 1.25")
    found.warn(
        inlet > RE_ENTRAINMENT * saltation,
        f"cyclone {number}: the inlet velocity is {{ratio:.2f}} times the saltation velocity; from {RE_ENTRAINMENT} on "
        "caught dust may be picked up again",
        ratio=inlet / saltation,
    )
    for doubt in shape_doubts(shape):
        found.warn(True, f"cyclone {number}: {doubt}")
    return np.asarray((inlet >= LOWEST_INLET_VELOCITY) & (inlet <= HIGHEST_INLET_VELOCITY))


def _losses(
    case: Case,
    found: Findings,
    fine: SizeDistribution,
    flux: Array,
    penetration: Array,
    others: dict[str, Array],
    sound: NDArray[np.bool_],
    parts: int,
) -> None:
    """Efficiency of all stages together, what is lost an hour and a year, its size and concentration.

    ``others`` is the penetration by other models; ``sound`` whether every inlet velocity is a usual one.
    """
    from psdflow.carryover.stage import class_sum, median_size

    bed = case.duty.bed
    assert bed is not None
    lost, area = flux * penetration, np.pi / 4 * bed.diameter.value**2
    carried, gone = flux.sum(axis=-1), lost.sum(axis=-1)
    method, note = "cyclone-grade", "past the last cyclone; no leaks, no attrition"
    some = np.where(carried > 0, carried, np.nan)
    found.put("cyclone_efficiency", 1 - gone / some, "share", method, in_range=sound, note="of all stages, by mass")
    rates = {key: (flux * share).sum(axis=-1) * area for key, share in others.items()}
    rate = found.put("loss_rate", gone * area, "kg/s", method, in_range=sound, alternatives=rates, note=note)
    found.put("loss_d50", median_size(fine, lost), "m", method, in_range=sound, note="volume-equivalent")
    concentration = gone / case.velocity
    note = "in the gas at bed conditions"
    found.put("loss_concentration", concentration, "kg/m^3", method, in_range=sound, note=note)
    if case.fluid.temperature is not None and case.fluid.pressure is not None:
        normal = case.fluid.temperature / NORMAL_TEMPERATURE * STANDARD_ATMOSPHERE / case.fluid.pressure
        dry = 1 - case.duty.fluid.steam_fraction
        note = "at 0 °C and 101.325 kPa, dry"
        if dry > 0:
            found.put(
                "loss_concentration_normal", concentration * normal / dry, "kg/m^3", method, in_range=sound, note=note
            )
    if case.duty.operating_hours is not None:
        note = "first-hours rate held"
        found.put("loss_per_year", rate * case.duty.operating_hours.value, "kg", method, in_range=sound, note=note)
    share = np.where(gone > 0, gone, np.nan)[..., None]
    found.classes |= {
        "cyclone_efficiency": 1 - class_sum(penetration, parts) / parts,
        "loss_share": class_sum(lost, parts) / share,
    }


def _by_model(case: Case, flux: Array, size: Array) -> dict[str, Array]:
    """Share of each sub-class let through by every model, without loading effect: how far the models disagree."""
    bed = case.duty.bed
    assert bed is not None
    area = np.pi / 4 * bed.diameter.value**2
    result: dict[str, Array] = {}
    for entry in case.duty.cyclones:
        shape, flow = geometry_of(entry), case.velocity * area / entry.count
        passed = {
            key: 1
            - models.grade_efficiency(
                size=size,
                cut=np.broadcast_to(cut, case.shape),
                slope=np.broadcast_to(models.grade_slope(key, geometry=shape, cut=cut), case.shape),
            )
            for key, cut in models.cut_sizes(geometry=shape, flow=flow, **case.grain).items()
        }
        dust = {
            "particle_density": case.particle_density[..., None],
            "fluid_viscosity": case.fluid_viscosity[..., None],
        }
        warm = {} if case.fluid.temperature is None else {"temperature": case.fluid.temperature}
        for key, model in (
            ("dietz-1981", models.dietz_efficiency),
            ("leith-licht-1972", models.leith_licht_efficiency),
        ):
            passed[key] = 1 - model(geometry=shape, flow=flow[..., None], size=size, **dust, **warm)
        result = {key: result.get(key, np.ones_like(flux)) * share for key, share in passed.items()}
    return result
