"""What the fluidization stage puts on the sheet about the bed: pressure drop, bubbles, slugging, height."""

from typing import Any

import numpy as np
from numpy.typing import NDArray

from psdflow.case import Array, Case
from psdflow.fluidization import bed, bubbling, groups, regimes, slugging
from psdflow.fluidization import spouting as spouted
from psdflow.fluidization.expansion import bed_expansions
from psdflow.fluidization.numbers import reynolds
from psdflow.fluidization.terminal import terminal_velocity
from psdflow.methods import in_range
from psdflow.results import Findings

GAS_ONLY = "applies to gas-fluidized beds; the fluid is a liquid"
NO_BED = "the duty gives no bed with diameter and settled_height"
PERFORATED_PITCH = 0.03  # m, assumed spacing of holes or nozzles where the duty gives none


def _orifice_area(case: Case, found: Findings) -> float | None:
    """Plate area per hole, m²; None for a porous plate."""
    vessel = case.duty.bed
    if vessel is None or vessel.distributor in (None, "porous plate"):
        if vessel is not None and vessel.distributor is None:
            found.assumptions.append("distributor: porous plate (none given)")
        return None
    if vessel.hole_pitch is None:
        found.assumptions.append(f"distributor holes {PERFORATED_PITCH * 1000:.0f} mm apart (hole_pitch not given)")
        return PERFORATED_PITCH**2
    return vessel.hole_pitch.value**2


def _solids_height(case: Case, found: Findings, settled: float) -> Array:
    """Height of the solids without voids, m: from the bulk density if known, else from the voidage."""
    loose = case.given("loose_bulk_density")
    if loose is not None:
        return np.asarray(settled * loose / case.particle_density)
    return np.asarray(settled * (1 - found["voidage_mf"]))


def _pressure_drop(case: Case, found: Findings, solids: Array) -> None:
    value = bed.bed_pressure_drop(
        bed_height=solids, voidage=0.0, particle_density=case.particle_density, fluid_density=case.fluid_density
    )
    note = "buoyant weight per area, level once the whole bed is fluidized"
    found.put("bed_pressure_drop", value * case.scatter("bed_pressure_drop", 0.05), "Pa", "bed-weight", note=note)


def gas_bed(case: Case, found: Findings) -> None:
    """Pressure drop, bubbles, slugging and height of a gas-fluidized bed."""
    vessel = case.duty.bed
    if vessel is None or vessel.settled_height is None:
        found.miss(
            "bed_pressure_drop bed_mass bed_voidage expanded_height bubble_diameter bubble_flow dense_flow bubble_rise_velocity bubble_fraction "
            "u_ms_slug slug_kind",
            NO_BED,
        )
        return
    diameter, velocity, u_mf = vessel.diameter.value, case.velocity, found["u_mf"]
    solids = _solids_height(case, found, vessel.settled_height.value)
    height_mf = solids / (1 - found["voidage_mf"])
    _pressure_drop(case, found, solids)
    mass = solids * case.particle_density * np.pi / 4 * diameter**2
    found.put("bed_mass", mass, "kg", "definition", note="of the settled bed")
    index = groups.group_index(
        diameter_sv=case.diameter_sv,
        boundaries=groups.Boundaries(found["size_ca"], found["size_ab"], found["size_bd"]),
    )
    fine = index <= groups.GROUPS.index("A")
    stable = bubbling.largest_stable_bubble(diameter_v=case.diameter_v, sphericity=case.sphericity, **case.grain)
    largest = np.where(fine, stable, np.inf)
    orifice = _orifice_area(case, found)
    flow: dict[str, Any] = {"velocity": velocity, "minimum_fluidization_velocity": u_mf}
    every = {
        key: bubbling.capped_bubble_diameter(bubble_diameter=size, bed_diameter=diameter, largest_stable=largest)
        for key, size in bubbling.bubble_diameters(
            **flow, height=height_mf, bed_diameter=diameter, orifice_area=orifice
        ).items()
    }
    size = np.where(velocity > u_mf, every["darton-1977"] * case.scatter("bubble", 0.3), np.nan)
    size = np.minimum(size, bubbling.WIDEST_BUBBLE * diameter)
    note = "at the bed surface; none below u_mf"
    found.put("bubble_diameter", size, "m", "darton-1977", alternatives=every, note=note)
    share = _visible_share(index)
    _gas_split(case, found, size, share)
    _slugging(case, found, diameter, height_mf, largest)
    _height(case, found, height_mf, index, largest, orifice)


def _visible_share(index: NDArray[np.intp]) -> Array:
    """Share of the excess gas in visible bubbles by group; a group C bed, if it fluidizes, is taken as A."""
    return bubbling.VISIBLE_FLOW_SHARE[np.maximum(index, groups.GROUPS.index("A"))]


def _gas_split(case: Case, found: Findings, size: Array, share: Array) -> None:
    """Two-phase split of the gas: what rises as bubbles, what passes through the dense bed, bubbles' speed and share."""
    bed_diameter = case.duty.bed.diameter.value if case.duty.bed else np.inf
    excess = np.maximum(case.velocity - found["u_mf"], 0.0)
    visible = share * excess
    rise = bubbling.bubble_rise_velocity(bubble_diameter=np.nan_to_num(size), bed_diameter=bed_diameter)
    bubbles = np.isfinite(size)
    found.put("bubble_flow", visible, "m/s", "two-phase", note="gas in bubbles, per bed area")
    found.put("dense_flow", case.velocity - visible, "m/s", "two-phase", note="gas between the grains, per bed area")
    found.put(
        "bubble_rise_velocity", np.where(bubbles, excess + rise, np.nan), "m/s", "two-phase", note="at the surface"
    )
    fraction = bubbling.bubble_fraction(
        velocity=case.velocity,
        minimum_fluidization_velocity=found["u_mf"],
        bubble_rise=rise,
        visible_flow_share=share,
    )
    found.put(
        "bubble_fraction", np.where(bubbles, fraction, 0.0), "share", "two-phase", note="of the bed, at the surface"
    )


def _slugging(case: Case, found: Findings, diameter: float, height_mf: Array, largest: Array) -> None:
    every = slugging.slugging_velocities(
        minimum_fluidization_velocity=found["u_mf"], bed_diameter=diameter, bed_height_mf=height_mf
    )
    slugs = slugging.can_slug(
        diameter=case.diameter_v,
        particle_density=case.particle_density,
        bed_diameter=diameter,
        bed_height_mf=height_mf,
        largest_stable=largest,
    )
    key = "baeyens-geldart-1974-slugging"
    value = np.where(slugs, every[key] * case.method_scatter("u_ms_slug", np.full((), key)), np.nan)
    note = "where the bed is deep enough for slugs and its bubbles grow wide enough"
    found.put("u_ms_slug", value, "m/s", key, alternatives=every, note=note)
    kind = np.where(slugs, slugging.slug_kind(diameter=case.diameter_v, bed_diameter=diameter), "none")
    found.put(
        "slug_kind", kind, "word", "common practice", note="axial slugs fill the column, wall slugs ride on one side"
    )


def _height(
    case: Case, found: Findings, height_mf: Array, index: NDArray[np.intp], largest: Array, orifice: float | None
) -> None:
    """Height of the fluidized bed: settled, smooth or bubbling by the velocity."""
    vessel = case.duty.bed
    if vessel is None:
        return
    velocity, u_mf, u_mb = case.velocity, found["u_mf"], found["u_mb"]
    every = bed_expansions(
        velocity=velocity,
        minimum_fluidization_velocity=u_mf,
        bed_height_mf=height_mf,
        bed_diameter=vessel.diameter.value,
        visible_flow_share=_visible_share(index),
        diameter=case.diameter_v,
        particle_density=case.particle_density,
        fluid_density=case.fluid_density,
        orifice_area=orifice,
        largest_stable=largest,
    )
    smooth = bubbling.smooth_voidage(
        velocity=np.minimum(velocity, u_mb),
        minimum_fluidization_velocity=u_mf,
        voidage_mf=found["voidage_mf"],
        diameter_sv=case.diameter_sv,
        **case.grain,
    )
    smooth_ratio = (1 - found["voidage_mf"]) / (1 - smooth)
    bubbles = velocity > u_mb
    ratio = np.where(bubbles, every["two-phase"], np.where(velocity > u_mf, smooth_ratio, 1.0))
    ratio = 1 + (ratio - 1) * case.scatter("expanded_height", 0.3)
    method = np.where(bubbles, "two-phase", "abrahamsen-geldart-1980-smooth")
    inside = velocity < found["u_c"]
    found.put(
        "expanded_height",
        ratio * height_mf,
        "m",
        method,
        in_range=inside,
        alternatives={key: value * height_mf for key, value in every.items()},
    )
    voidage = 1 - (1 - found["voidage_mf"]) / ratio
    found.put("bed_voidage", voidage, "1", method, in_range=inside, note="of the whole expanded bed, bubbles included")


def liquid_bed(case: Case, found: Findings) -> None:
    """A liquid-fluidized bed: regime, Richardson & Zaki expansion, smooth or bubbling by Froude number."""
    found.miss(
        "group probability_a probability_b probability_c probability_d u_mb umb_umf_ratio u_c u_k u_se u_tr "
        "u_ms_slug slug_kind smooth_window bubble_diameter bubble_flow dense_flow bubble_rise_velocity bubble_fraction",
        GAS_ONLY,
    )
    velocity, u_mf = case.velocity, found["u_mf"]
    u_t = terminal_velocity(diameter=case.diameter_v, sphericity=case.sphericity, **case.grain)
    index = regimes.liquid_regime(velocity=velocity, minimum_fluidization_velocity=u_mf, terminal_velocity=u_t)
    found.put("regime", np.array(regimes.LIQUID_REGIMES)[index], "word", "regime bounds")
    froude = bed.froude_mf(minimum_fluidization_velocity=u_mf, diameter=case.diameter_v)
    note = "below 0.13 smooth (particulate), above 1.3 bubbling (aggregative); Wilhelm & Kwauk 1948"
    found.put("froude_mf", froude, "1", "definition", note=note)
    found.warn(velocity < u_mf, "the operating velocity is below u_mf: the bed does not fluidize")
    vessel = case.duty.bed
    if vessel is None or vessel.settled_height is None:
        found.miss("bed_pressure_drop expanded_height", NO_BED)
        return
    solids = _solids_height(case, found, vessel.settled_height.value)
    _pressure_drop(case, found, solids)
    ratio = case.diameter_v / vessel.diameter.value
    exponent = bed.richardson_zaki_exponent(
        reynolds_t=reynolds(
            velocity=u_t,
            length=case.diameter_v,
            fluid_density=case.fluid_density,
            fluid_viscosity=case.fluid_viscosity,
        )
    )
    voidage = bed.liquid_bed_voidage(
        velocity=velocity,
        terminal_velocity=u_t,
        exponent=exponent,
        voidage_mf=found["voidage_mf"],
        diameter_ratio=ratio,
    )
    carried = voidage >= 0.999
    height = np.where(carried, np.nan, solids / (1 - np.minimum(voidage, 0.999)))
    note = "mean size only: a wide powder sorts itself by height"
    found.put("expanded_height", height, "m", "richardson-zaki-1954", note=note)
    found.put("bed_voidage", np.where(carried, np.nan, voidage), "1", "richardson-zaki-1954", note=note)
    found.warn(carried, "the liquid carries the mean grain out of the bed")


def spouting(case: Case, found: Findings) -> None:
    """Least velocity and greatest depth of a spouted bed, for a group D powder over a single inlet."""
    vessel = case.duty.bed
    keys = "u_spout_min height_spout_max"
    if vessel is None or vessel.inlet_diameter is None or vessel.settled_height is None:
        found.miss(keys, "the duty gives no inlet_diameter with a settled_height (a spouted bed has one central inlet)")
        return
    shape: dict[str, Any] = {
        "diameter": case.diameter_v,
        "particle_density": case.particle_density,
        "fluid_density": case.fluid_density,
        "column_diameter": vessel.diameter.value,
        "inlet_diameter": vessel.inlet_diameter.value,
    }
    coarse = found["group"] == "D"
    least = spouted.minimum_spouting_velocity(bed_height=vessel.settled_height.value, **shape)
    deepest = spouted.maximum_spoutable_height(fluid_viscosity=case.fluid_viscosity, **shape)
    note = "for group D only"
    for key, value, unit, method in (
        ("u_spout_min", least, "m/s", "mathur-gishler-1955"),
        ("height_spout_max", deepest, "m", "mcnab-bridgwater-1977"),
    ):
        scattered = value * case.method_scatter(key, np.full((), method))
        inside = in_range(method, bed_diameter=vessel.diameter.value)
        found.put(key, np.where(coarse, scattered, np.nan), unit, method, in_range=inside, note=note)
    stable = spouted.stable_inlet(
        diameter=case.diameter_v,
        column_diameter=vessel.diameter.value,
        inlet_diameter=vessel.inlet_diameter.value,
    )
    found.warn(coarse & ~stable, "the inlet is too wide for a stable spout: below 25 grains and 0.35 of the column")
    found.warn(
        coarse & (vessel.settled_height.value > deepest),
        "the bed is deeper than the greatest spoutable depth ({depth:.2g} m): it fluidizes on top",
        depth=deepest,
    )
