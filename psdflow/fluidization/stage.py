"""What the fluidization stage puts on the sheet: numbers, group, velocities, regime; the bed is in ``bed_stage``."""

from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from psdflow.case import Array, Case
from psdflow.fluidization import bubbling, groups, minimum, regimes
from psdflow.fluidization.bed_stage import gas_bed, liquid_bed, spouting
from psdflow.fluidization.numbers import archimedes, reynolds, velocity_scale
from psdflow.fluidization.terminal import DEFAULT_LAW, terminal_velocity
from psdflow.methods import in_range
from psdflow.results import Findings

# Segregation is usually negligible below a size ratio of 3 and serious above 8 (common practice, no source).
SEGREGATING_RATIO, SEGREGATING_SPREAD = 8.0, 8.0


def fluidization_stage(case: Case, found: Findings) -> None:
    """Archimedes number to regime; gas beds by groups and bubbles, liquid beds by Richardson & Zaki."""
    _numbers(case, found)
    _voidage(case, found)
    _onset(case, found)
    _terminal(case, found)
    if case.fluid.phase == "liquid":
        liquid_bed(case, found)
    else:
        _group(case, found)
        _minimum_bubbling(case, found)
        _transitions(case, found)
        gas_bed(case, found)
        spouting(case, found)
        _regime(case, found)


def _numbers(case: Case, found: Findings) -> None:
    found.put("fluid_density", case.fluid_density, "kg/m^3", case.fluid.method)
    found.put("fluid_viscosity", case.fluid_viscosity, "Pa.s", case.fluid.method)
    ar = archimedes(diameter=case.diameter_sv, **case.grain)
    found.put("archimedes", ar, "1", "definition", note="with d_sv")
    found.put("density_ratio", case.particle_density / case.fluid_density, "1", "definition")
    found.put("d_star", np.cbrt(ar), "1", "definition", note="dimensionless diameter, Ar^(1/3)")
    velocity = case.velocity
    found.put("u_operating", velocity, "m/s", "given")
    found.put("u_star", velocity / velocity_scale(**case.grain), "1", "definition", note="dimensionless velocity")


def _voidage(case: Case, found: Findings) -> None:
    """Voidage at minimum fluidization: measured, from the loose bulk density, or by correlation."""
    measured, loose = case.given("voidage_mf", low=0.2, high=0.95), case.given("loose_bulk_density")
    ratio = case.particle_density / case.fluid_density
    ar = archimedes(diameter=case.diameter_v, **case.grain)
    estimates = {
        "broadhurst-becker-1975-voidage": minimum.voidage_mf_broadhurst_becker(
            sphericity=case.sphericity, archimedes=ar, density_ratio=ratio
        ),
        "wen-yu-1966-voidage": minimum.voidage_mf_wen_yu(sphericity=case.sphericity),
    }
    holds = in_range("broadhurst-becker-1975-voidage", archimedes=ar, density_ratio=ratio, sphericity=case.sphericity)
    value, method = np.where(holds, *estimates.values()), np.where(holds, *estimates)
    note = "not measured"
    if measured is not None:
        value, method, note = measured, np.array("measured"), ""
    elif loose is not None:
        value, method, note = (
            1 - loose / case.particle_density,
            np.array("loose bulk density"),
            "from the loose bulk density",
        )
    else:
        value = value * case.scatter("voidage_mf", 0.1 / 2)
    value = np.clip(value, 0.25, 0.95)
    found.put("voidage_mf", value, "1", method, alternatives=estimates, note=note)


def _recommended(case: Case, diameter_v: Array, found: Findings, *, by_class: bool = False) -> minimum.Recommended:
    """U_mf by the published rule; in a liquid Wen & Yu, unless voidage and sphericity were measured.

    ``by_class`` says that ``diameter_v`` has a last axis of classes.
    """

    def spread(value: ArrayLike) -> Array:
        array = np.asarray(value, float)
        return array[..., None] if by_class and array.ndim else array

    phi, shared = spread(case.sphericity), {key: spread(value) for key, value in case.grain.items()}
    measured = case.material.voidage_mf is not None and case.material.sphericity is not None
    if case.fluid.phase == "liquid" and not measured:
        c1, c2 = minimum.TWO_CONSTANTS["wen-yu-1966"]
        value = minimum.minimum_fluidization_two_constants(diameter=diameter_v, constant_1=c1, constant_2=c2, **shared)
        return minimum.Recommended(value, np.full(np.shape(value), "wen-yu-1966"))
    return minimum.recommended_u_mf(
        diameter_sv=diameter_v * phi,
        diameter_v=diameter_v,
        sphericity=phi,
        voidage=spread(found["voidage_mf"]),
        pressure=case.fluid.pressure,
        measured=measured,
        **shared,
    )


def _onset(case: Case, found: Findings) -> None:
    """u_mf and u_cf, with every method as an alternative."""
    best = _recommended(case, case.diameter_v, found)
    scatter = case.method_scatter("u_mf", best.method)
    every = minimum.minimum_fluidization_velocities(
        diameter_sv=case.diameter_sv,
        diameter_v=case.diameter_v,
        sphericity=case.sphericity,
        voidage=found["voidage_mf"],
        **case.grain,
    )
    u_mf = found.put(
        "u_mf",
        best.value * scatter,
        "m/s",
        best.method,
        in_range=_onset_in_range(case, found, best),
        alternatives=every,
    )
    fine = _recommended(case, case.volume.percentile(0.1), found)
    begins = np.minimum(fine.value * scatter, u_mf)
    inside = _onset_in_range(case, found, fine)
    found.put("u_bf", begins, "m/s", fine.method, in_range=inside, note="u_mf of the d10 size: the fines move first")
    end = case.duty.coarse_end.value
    coarse = _recommended(case, case.volume.percentile(end), found)
    middles = np.sqrt(case.volume.edges[..., :-1] * case.volume.edges[..., 1:])
    others = {
        "knowlton-1977": minimum.complete_fluidization_knowlton(
            class_minimum_fluidization_velocity=_recommended(case, middles, found, by_class=True).value,
            class_share=case.volume.shares,
        ),
        "chyang-huang-1988": minimum.complete_fluidization_chyang_huang(diameter=case.diameter_v, **case.grain),
    }
    found.put(
        "u_cf",
        np.maximum(coarse.value * scatter, u_mf),
        "m/s",
        coarse.method,
        in_range=_onset_in_range(case, found, coarse),
        alternatives=others,
        note=f"u_mf of the d{end * 100:g} size: the coarse end moves",
    )
    ratio = found["u_cf"] / u_mf
    spread = case.volume.percentile(0.9) / case.volume.percentile(0.1)
    found.warn(
        (ratio > SEGREGATING_RATIO) | (spread > SEGREGATING_SPREAD),
        "the size range is wide (u_cf / u_mf {ratio:.1f}, d90 / d10 {spread:.1f}): the bed may segregate, coarse grains "
        "settling out near u_mf",
        ratio=ratio,
        spread=spread,
    )


def _onset_in_range(case: Case, found: Findings, best: minimum.Recommended) -> Array:
    """Whether each element lies inside the published range of the method that gave it."""
    result = np.ones(np.shape(best.value), bool)
    for key in np.unique(best.method):
        taken = case.diameter_sv if key.startswith("baeyens") else case.diameter_v
        inside = in_range(
            str(key),
            diameter=taken,
            voidage_mf=found["voidage_mf"],
            sphericity=case.sphericity,
            reynolds_mf=reynolds(
                velocity=best.value,
                length=taken,
                fluid_density=case.fluid_density,
                fluid_viscosity=case.fluid_viscosity,
            ),
            pressure=case.fluid.pressure,
        )
        result = np.where(best.method == key, inside, result)
    return np.asarray(result)


def _terminal(case: Case, found: Findings) -> None:
    scatter = case.scatter("u_t", 0.1)
    for percent in (10, 50, 90):
        u_t = terminal_velocity(
            diameter=case.volume.percentile(percent / 100),
            sphericity=case.sphericity,
            mean_free_path=case.fluid.mean_free_path,
            **case.grain,
        )
        inside = in_range(DEFAULT_LAW, sphericity=case.sphericity, reynolds_t=None)
        found.put(f"u_t{percent}", u_t * scatter, "m/s", DEFAULT_LAW, in_range=inside)


def _group(case: Case, found: Findings) -> None:
    """One vote for each boundary set, in every draw; the most voted letter is the group."""
    sets = groups.boundary_sizes(fines_45um=case.fines_45um, voidage_mf=found["voidage_mf"], **case.grain)
    votes = np.zeros((*found.shape, len(groups.GROUPS)))
    letters: dict[str, Any] = {}
    for key, lines in sets.items():
        moved = case.diameter_sv * case.method_scatter(f"group {key}", np.full((), key))
        index = groups.group_index(diameter_sv=moved, boundaries=lines)
        letters[key] = np.array(list(groups.GROUPS))[index]
        if key in groups.SHOWN_SETS:
            continue
        votes += np.broadcast_to(index, found.shape)[..., None] == np.arange(len(groups.GROUPS))
    share = votes / len(groups.BOUNDARY_SETS)
    winner = np.array(list(groups.GROUPS))[share.argmax(axis=-1)]
    found.put("group", winner, "word", "boundary sets", alternatives=letters, note="most votes of the boundary sets")
    for position, letter in enumerate(groups.GROUPS):
        found.put(f"probability_{letter.lower()}", share[..., position], "1", "boundary sets")
    lines = sets["abrahamsen-geldart-1980"]
    for name, line in zip(("size_ca", "size_ab", "size_bd"), lines, strict=True):
        found.put(name, line, "m", "abrahamsen-geldart-1980", note="boundary size at this fluid state")


def _minimum_bubbling(case: Case, found: Findings) -> None:
    every = bubbling.minimum_bubbling_velocities(
        diameter_sv=case.diameter_sv,
        fluid_density=case.fluid_density,
        fluid_viscosity=case.fluid_viscosity,
        fines_45um=case.fines_45um,
    )
    key = "abrahamsen-geldart-1980-umb"
    computed = every[key] * case.method_scatter("u_mb", np.full((), key))
    inside = in_range(key, diameter=case.diameter_sv, particle_density=case.particle_density)
    u_mf = found["u_mf"]
    ratio = computed / u_mf
    found.put("umb_umf_ratio", ratio, "1", key, in_range=inside, note="below 1: bubbles as soon as it fluidizes")
    note = "of velocities without bubbles, from u_mf to u_mb; none for groups B and D"
    found.put("smooth_window", np.maximum(computed - u_mf, 0.0), "m/s", key, in_range=inside, note=note)
    note = "bubbles from u_mf on where the formula gives less than u_mf"
    found.put("u_mb", np.maximum(computed, u_mf), "m/s", key, in_range=inside, alternatives=every, note=note)


def _transitions(case: Case, found: Findings) -> None:
    bed_diameter = case.duty.bed.diameter.value if case.duty.bed else None
    terminal = terminal_velocity(
        diameter=case.diameter_v,
        sphericity=case.sphericity,
        mean_free_path=case.fluid.mean_free_path,
        **case.grain,
    )
    every = regimes.transition_velocities(
        diameter_sv=case.diameter_sv, bed_diameter=bed_diameter, terminal_velocity=terminal, **case.grain
    )
    for quantity, values in every.items():
        key = regimes.RECOMMENDED[quantity]
        value = values[key] * case.method_scatter(quantity, np.full((), key))
        inside = in_range(key, archimedes=found["archimedes"])
        found.put(quantity, value, "m/s", key, in_range=inside, alternatives=values)


def _regime(case: Case, found: Findings) -> None:
    slug = found.get("u_ms_slug")
    index = regimes.regime(
        velocity=case.velocity,
        minimum_fluidization_velocity=found["u_mf"],
        minimum_bubbling_velocity=found["u_mb"],
        turbulent_velocity=found["u_c"],
        transport_velocity=found["u_se"],
        complete_fluidization_velocity=found["u_cf"],
        slugging_velocity=slug,
    )
    note = "by u_mf, u_cf, u_mb, u_c and u_se; published transition lines differ by a factor of two"
    found.put("regime", np.array(regimes.REGIMES)[index], "word", "regime bounds", note=note)
    velocity = case.velocity
    found.warn(velocity < found["u_mf"], "the operating velocity is below u_mf: the bed does not fluidize")
    found.warn(
        (velocity >= found["u_mf"]) & (velocity < found["u_cf"]),
        "the operating velocity is below u_cf ({u_cf:.2g} m/s): the coarse end may rest on the distributor",
        u_cf=found["u_cf"],
    )
