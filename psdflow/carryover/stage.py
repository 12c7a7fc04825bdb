"""What the carryover stage puts on the sheet: flux by size, disengaging height, what the cyclones keep, what is lost.

Everything is for a bed of the lot as received: fines leave first, so the figures are those of the first hours.
"""

from typing import Any, NamedTuple

import numpy as np
from numpy.typing import NDArray

from psdflow.carryover import elutriation
from psdflow.carryover.balance_stage import STEADY, balance_stage
from psdflow.carryover.cyclone_stage import cyclone_stage
from psdflow.carryover.freeboard import disengaging_heights, flux_at_height, surface_flux
from psdflow.carryover.saturation import choking_flux
from psdflow.case import Array, Case
from psdflow.distribution import SizeDistribution
from psdflow.fluidization.terminal import size_with_terminal_velocity, terminal_velocity
from psdflow.methods import distance_outside, in_range
from psdflow.results import Findings

COMMON_DOUBT = 0.35  # standard deviation of ln(flux) that all laws share: a factor of 2 either way. Judgement
CHOKING_FROM = 1.0  # m/s: the choking laws are for transport lines, not for slow beds
NEARLY_AS_NEAR = 0.5  # ln units: laws this much further out of range than the nearest one are still combined
FINENESS, MOST_PARTS = 60, 5  # sub-classes aimed at, the most a class is cut into: within 0.5 % of ten times as many
RATES = "carryover_flux carryover_rate carryover_d50 tdh carryover_flux_outlet choking_flux"
LOSSES = (
    "cyclone_cut_size cyclone_efficiency cyclone_pressure_drop cyclone_inlet_velocity "
    "loss_rate loss_d50 loss_concentration"
)


class Stream(NamedTuple):
    """Carried dust by sub-class: the lot in volume-equivalent sizes, mean sizes, K*∞ and flux (kg/m²/s), parts a class."""

    fine: SizeDistribution
    size: Array
    constant: Array
    flux: Array
    parts: int


def carryover_stage(case: Case, found: Findings) -> None:
    """Elutriation by size, disengaging height against the freeboard, cyclones."""
    _carried(case, found)
    _class_rows(case, found)
    if case.fluid.phase == "liquid":
        found.miss(f"{RATES} {LOSSES} {STEADY}", "elutriation laws and gas cyclones don't apply in a liquid")
        return
    if case.duty.bed is None:
        found.miss(f"{RATES} {LOSSES} {STEADY}", "the duty gives no bed with a diameter")
        return
    stream = _flux(case, found)
    _disengaging(case, found)
    if not case.duty.cyclones:
        found.miss(LOSSES, "the duty names no cyclones, so all that is carried over leaves")
        returned, penetration = np.zeros_like(stream.flux), np.ones_like(stream.flux)
    else:
        returned, penetration = cyclone_stage(case, found, stream.fine, stream.size, stream.flux, stream.parts)
    by_class = (class_sum(values, stream.parts) / stream.parts for values in (stream.constant, returned, penetration))
    balance_stage(case, found, *by_class)


def class_sum(values: Array, parts: int) -> Array:
    """Sub-class values summed back into the report's classes."""
    return np.asarray(values.reshape(*values.shape[:-1], -1, parts).sum(axis=-1))


def median_size(fine: SizeDistribution, weights: Array) -> Array:
    """Mass-median size (m) of a stream with ``weights`` by sub-class; NaN where nothing flows."""
    total = weights.sum(axis=-1)
    some = total > 0
    filled = np.where(some[..., None], weights, 1.0)
    return np.where(some, SizeDistribution(fine.edges, filled).percentile(0.5), np.nan)


def _carried(case: Case, found: Findings) -> None:
    """The grain that just hangs in the flow, and the share finer than it."""
    size = size_with_terminal_velocity(
        terminal_velocity=case.velocity,
        sphericity=case.sphericity,
        mean_free_path=case.fluid.mean_free_path,
        **case.grain,
    )
    share = case.volume.scaled(1 / np.broadcast_to(size, case.shape)).undersize(1.0)
    found.put(
        "elutriable_size", size, "m", "haider-levenspiel-1989", note="volume-equivalent grain with u_t = velocity"
    )
    found.put("elutriable_share", share, "share", "haider-levenspiel-1989", note="of the lot, finer than that")
    found.warn(
        share > 0.5,
        "{share:.0f} % of the lot is finer than the grain the velocity can carry ({size:.0f} µm)",
        share=share * 100,
        size=size * 1e6,
    )


def _class_rows(case: Case, found: Findings) -> None:
    """Edges, shares and terminal velocities of the report's classes; the rest is filled in further on."""
    middle = np.sqrt(case.volume.edges[..., :-1] * case.volume.edges[..., 1:])
    free = _class_arguments(case)
    none = np.full((1,), np.nan)
    found.classes = {
        "lower": case.report.edges[..., :-1],
        "upper": case.report.edges[..., 1:],
        "share": case.report.shares,
        "terminal_velocity": terminal_velocity(diameter=middle, **free),
        "elutriation_constant": none,
        "carryover_flux": none,
        "carryover_share": none,
        "cyclone_efficiency": none,
        "loss_share": none,
    }


def _class_arguments(case: Case) -> dict[str, Any]:
    """Grain and fluid with a class axis appended."""
    values = {**case.grain, "sphericity": case.sphericity}
    spread: dict[str, Any] = {key: np.asarray(value, float)[..., None] for key, value in values.items()}
    if case.fluid.mean_free_path is not None:
        spread["mean_free_path"] = np.asarray(case.fluid.mean_free_path)
    return spread


def _flux(case: Case, found: Findings) -> Stream:
    """Flux by sub-class from the laws in range, with the laws' doubt."""
    bed = case.duty.bed
    assert bed is not None
    parts = min(MOST_PARTS, max(1, FINENESS // case.volume.classes))
    fine = case.volume.refined(parts)
    size = np.sqrt(fine.edges[..., :-1] * fine.edges[..., 1:])
    velocity, diameter = np.asarray(case.velocity), bed.diameter.value
    by_class = velocity[..., None]
    # Below the critical size fines travel as clusters: the laws are held at that size, or at half the largest size
    # that can be carried where this is smaller, so that the level part is never cut off by it.
    level = np.minimum(elutriation.critical_size(particle_density=case.particle_density), found["elutriable_size"] / 2)
    held = np.maximum(size, level[..., None])
    free = _class_arguments(case)
    u_t = terminal_velocity(diameter=held, **free) * case.scatter("u_t", 0.1)[..., None]
    laws = elutriation.LAWS if case.draws is None else elutriation.DEFAULT_LAWS
    constants = elutriation.rate_constants(
        laws,
        diameter=held,
        terminal_velocity=u_t,
        velocity=by_class,
        bed_diameter=diameter,
        minimum_fluidization_velocity=found["u_mf"][..., None],
        **{key: free[key] for key in case.grain},
    )
    usable, any_law = _usable(case, fine, held, u_t < by_class, diameter)
    chosen = {key: constants[key] for key in elutriation.DEFAULT_LAWS}
    constant = elutriation.combined_rate_constant(chosen, usable)
    totals = {key: (value * fine.shares).sum(axis=-1) for key, value in constants.items()}
    scatter = case.scatter("elutriation", _doubt(totals, usable))
    fluidized = np.where(velocity > found["u_mf"], 1.0, 0.0)
    constant = constant * (scatter * fluidized)[..., None]
    flux = constant * fine.shares
    total = found.put(
        "carryover_flux",
        flux.sum(axis=-1),
        "kg/m^2/s",
        "elutriation-mean",
        in_range=any_law,
        alternatives=totals,
        note="above the disengaging height, lot as received",
    )
    found.put("carryover_rate", total * np.pi / 4 * diameter**2, "kg/s", "elutriation-mean", in_range=any_law)
    found.put("carryover_d50", median_size(fine, flux), "m", "elutriation-mean", note="volume-equivalent")
    _flux_warnings(case, found, any_law, level, total)
    _choking(case, found, total, diameter)
    share = np.where(total > 0, total, np.nan)[..., None]
    found.classes |= {
        "elutriation_constant": class_sum(constant, parts) / parts,
        "carryover_flux": class_sum(flux, parts),
        "carryover_share": class_sum(flux, parts) / share,
    }
    return Stream(fine, size, constant, flux, parts)


def _usable(
    case: Case, fine: SizeDistribution, size: Array, carried: NDArray[np.bool_], bed_diameter: float
) -> tuple[dict[str, NDArray[np.bool_]], NDArray[np.bool_]]:
    """Which laws are combined, and whether any range covers the lot; by the mean size of what can be carried.

    Those in range, else those nearest to it: a law far from its data says nothing.
    """
    weight = fine.shares * carried
    total = weight.sum(axis=-1)
    mean = np.exp((weight * np.log(size)).sum(axis=-1) / np.where(total > 0, total, 1.0))
    far = {
        key: distance_outside(
            key,
            diameter=mean,
            velocity=case.velocity,
            bed_diameter=bed_diameter,
            particle_density=case.particle_density,
        )
        for key in elutriation.DEFAULT_LAWS
    }
    nearest = np.min([np.broadcast_to(distance, case.shape) for distance in far.values()], axis=0)
    reach = np.where(nearest > 0, nearest + NEARLY_AS_NEAR, 1e-12)
    return {key: distance <= reach for key, distance in far.items()}, nearest <= 1e-12


def _doubt(totals: dict[str, Array], usable: dict[str, NDArray[np.bool_]]) -> Array:
    """Standard deviation of ln(flux): of the mean of the laws that were combined, and what they all share."""
    logs = np.stack([np.log(np.maximum(totals[key], 1e-30)) for key in usable])
    gates = np.stack([np.broadcast_to(gate, logs.shape[1:]) for gate in usable.values()])
    count = np.maximum(gates.sum(axis=0), 1)
    mean = (logs * gates).sum(axis=0) / count
    spread = np.sqrt((gates * (logs - mean) ** 2).sum(axis=0) / np.maximum(count - 1, 1))
    alone = np.where(count == 1, 0.8, spread)  # one law only: its scatter on foreign data
    return np.asarray(np.hypot(np.minimum(alone, 2.5) / np.sqrt(count), COMMON_DOUBT))


def _flux_warnings(case: Case, found: Findings, any_law: NDArray[np.bool_], level: Array, total: Array) -> None:
    found.warn(
        ~any_law & (total > 0),
        "no elutriation law was fitted to this velocity, bed and size: carryover is an extrapolation",
    )
    fines = case.volume.scaled(1 / np.broadcast_to(level, case.shape)).undersize(1.0)
    found.warn(
        (fines > 0.1) & (total > 0),
        "{share:.0f} % of the lot is below {size:.0f} µm, where fines travel as clusters: its flux is an upper bound",
        share=fines * 100,
        size=level * 1e6,
    )
    if case.duty.feed is not None and case.duty.bed is not None:
        rate = found["carryover_rate"]
        found.warn(
            rate > case.duty.feed.rate.value,
            "the first carryover ({rate:.0f} kg/h) exceeds the feed: it falls as the bed loses its fines",
            rate=rate * 3600,
        )


def _disengaging(case: Case, found: Findings) -> None:
    bed = case.duty.bed
    assert bed is not None
    velocity, diameter = case.velocity, bed.diameter.value
    every = disengaging_heights(
        velocity=velocity,
        minimum_fluidization_velocity=found["u_mf"],
        bed_diameter=diameter,
        bubble_diameter=found.get("bubble_diameter"),
    )
    key = "zenz-weil-tdh"
    value = every[key] * case.method_scatter("tdh", np.full((), key))
    inside = in_range(key, velocity=velocity, bed_diameter=diameter)
    tdh = found.put("tdh", value, "m", key, in_range=inside, alternatives=every, note="above the bed surface")
    bubble = found.get("bubble_diameter")
    if bed.freeboard_height is None or bubble is None:
        found.miss("carryover_flux_outlet", "the duty gives no freeboard_height or no settled_height")
    if bed.freeboard_height is not None:
        free = bed.freeboard_height.value
        if bubble is not None:
            _outlet_flux(case, found, bubble, free)
        found.warn(
            tdh > free,
            f"the outlet is {free:.2g} m above the bed, below the disengaging height of {{tdh:.2g}} m: "
            "more is carried over than given",
            tdh=tdh,
        )


def _outlet_flux(case: Case, found: Findings, bubble: Array, height: float) -> None:
    """Flux at the outlet: what is carried for good, and what is thrown up at the surface and hasn't fallen back yet.

    Shown beside the far flux, not used for the losses: the law for the ejected flux is an order of magnitude, and
    what it adds is coarse splash that any cyclone catches.
    """
    thrown = surface_flux(
        velocity=case.velocity,
        minimum_fluidization_velocity=found["u_mf"],
        bubble_diameter=np.nan_to_num(bubble),
        fluid_density=case.fluid_density,
        fluid_viscosity=case.fluid_viscosity,
    )
    far = found["carryover_flux"]
    value = flux_at_height(far_flux=far, surface_flux=thrown * case.scatter("surface flux", 1.0), height=height)
    found.put(
        "carryover_flux_outlet", value, "kg/m^2/s", "wen-chen-1982-decay", note=f"{height:g} m above the bed surface"
    )


def _choking(case: Case, found: Findings, total: Array, diameter: float) -> None:
    """The most that dilute upflow could carry, and a warning where the flux asks for more."""
    u_t = found["u_t10"]
    every = {
        law: choking_flux(
            velocity=case.velocity,
            terminal_velocity=u_t,
            particle_density=case.particle_density,
            fluid_density=case.fluid_density,
            bed_diameter=diameter,
            law=law,
        )
        for law in ("yang-1983", "punwani-1976")
    }
    most = found.put(
        "choking_flux", every["yang-1983"], "kg/m^2/s", "yang-1983", alternatives=every, note="of the d10 grain"
    )
    found.warn(
        (total > most) & (most > 0) & (case.velocity >= CHOKING_FROM),
        "the carryover ({flux:.2g} kg/m²/s) exceeds the choking flux of dilute upflow ({most:.2g} kg/m²/s, Yang 1983): "
        "it may be overstated",
        flux=total,
        most=most,
    )
