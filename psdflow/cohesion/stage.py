"""What the cohesion stage puts on the sheet: indicators, verdict, what would settle it."""

from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.case import PROPERTY_SD, Array, Case
from psdflow.cohesion import indicators as sign
from psdflow.cohesion.forces import REFERENCE_ASPERITY, REFERENCE_HAMAKER, bond_number
from psdflow.cohesion.verdict import HOT_BED, RISKS, verdict
from psdflow.fluidization.groups import STRONG_CONTACT_FORCE, WEAK_CONTACT_FORCE, molerus_ca_size
from psdflow.results import Findings, Indicator

RULE = "cohesion-families"
MICRO = 1e6


def cohesion_stage(case: Case, found: Findings) -> None:
    """Every indicator with value, threshold and source; then risk and probability by the families' rule."""
    if case.fluid.phase == "liquid":
        found.miss(
            "cohesion_risk cohesion_probability bond_number",
            "cohesion between dry grains doesn't apply in a liquid",
        )
        return
    size, finest, coarsest = _size_family(case, found)
    flow = _flow_family(case, found)
    caution, strong = _fines(case, found)
    caution, strong = _softening(case, found, caution, strong)
    ratio = case.given("bed_pressure_drop_ratio")
    temperature = case.fluid.temperature
    judged = verdict(
        size_score=size,
        flow_scores=flow,
        caution=caution,
        strong=strong,
        hot=temperature is not None and temperature > HOT_BED,
        pressure_drop_ratio=ratio,
    )
    found.put("cohesion_risk", np.array(RISKS)[judged.risk], "word", RULE, note=_deciding(flow, ratio))
    found.put("cohesion_probability", judged.probability, "1", RULE)
    found.put("cohesion_score", judged.score, "1", RULE, note="-2 flows, +2 cohesive; the band of doubt is -1 to +1")
    if ratio is not None:
        found.indicate(
            Indicator(
                "bed pressure drop / bed weight",
                ratio,
                "",
                "low from 0.9, high below 0.8",
                sign.clipped((0.85 - ratio) / 0.05),
                "measured in a column; thresholds judged",
            )
        )
    found.warn(judged.conflict, "size and flow tests contradict each other on cohesion: run a small fluidization test")
    open_verdict = judged.risk == RISKS.index("elevated")
    if case.material.hausner_ratio is None:
        found.warn(open_verdict, "cohesion is open: measure loose and tapped density (Hausner ratio) to settle it")
    else:
        found.warn(
            open_verdict & ~judged.conflict, "cohesion is open: a pressure-drop test in a small column would settle it"
        )
    found.warn(
        (case.diameter_sv < 1.6 * coarsest) & (case.diameter_sv > finest / 1.6),
        "mean size {size:.0f} µm lies near the C/A boundary band ({low:.0f} to {high:.0f} µm); "
        "this screening is not validated between 15 and 25 µm",
        size=case.diameter_sv * MICRO,
        low=finest * MICRO,
        high=coarsest * MICRO,
    )
    found.warn(case.diameter_sv < 1e-6, "below 1 µm a powder may fluidize as agglomerates")
    if case.material.moisture is not None:
        found.assumptions.append(
            "moisture is recorded but not judged: no published limit holds for porous and non-porous grains alike"
        )


def _size_family(case: Case, found: Findings) -> tuple[Array, Array, Array]:
    """Score of the size family and the two ends of the C/A band (m)."""
    densities: dict[str, Any] = {"particle_density": case.particle_density, "fluid_density": case.fluid_density}
    finest = molerus_ca_size(**densities, cohesion_force=WEAK_CONTACT_FORCE)
    coarsest = molerus_ca_size(**densities, cohesion_force=STRONG_CONTACT_FORCE)
    by_size = sign.size_score(diameter_sv=case.diameter_sv, finest_ca=finest, coarsest_ca=coarsest)
    measured = case.material.hamaker_constant is not None and case.material.asperity_diameter is not None
    bond = bond_number(
        diameter=case.diameter_sv,
        particle_density=case.particle_density,
        hamaker_constant=_force_property(case, "hamaker_constant", REFERENCE_HAMAKER),
        asperity_diameter=_force_property(case, "asperity_diameter", REFERENCE_ASPERITY),
    )
    by_bond = sign.bond_score(bond_number=bond)
    low, high = float(np.mean(finest)) * MICRO, float(np.mean(coarsest)) * MICRO
    found.indicate(
        Indicator(
            "mean size d_sv",
            case.diameter_sv * MICRO,
            "µm",
            f"C/A band {low:.0f} to {high:.0f} µm",
            by_size,
            "Molerus 1982, both contact forces (from memory)",
            counts=not measured,
        )
    )
    low, high = sign.BOND_BAND
    found.indicate(
        Indicator(
            "granular Bond number",
            bond,
            "",
            f"C/A band {low:.0f} to {high:.0f}",
            by_bond,
            "van der Waals force of rough grains (Rumpf form, from memory); band judged",
            counts=measured,
        )
    )
    note = "" if measured else "reference grain: Hamaker 6.5e-20 J, asperities 0.2 µm; shown, not counted"
    found.put("bond_number", bond, "1", "rumpf-rough-spheres", note=note)
    return (by_bond if measured else by_size), np.asarray(finest), np.asarray(coarsest)


def _force_property(case: Case, key: str, reference: float) -> Array:
    """A given property with its tolerance, or the reference grain's with the spread of its kind."""
    if getattr(case.material, key) is not None:
        given = case.given(key, relative=True, low=1e-30)
        return np.asarray(given)
    return reference * case.scatter(key, PROPERTY_SD[key])


def _flow_family(case: Case, found: Findings) -> dict[str, Array]:
    """Scores of the flow tests that were given; puts the Hausner ratio on the sheet."""
    scores: dict[str, Array] = {}
    nominal = case.material.hausner_ratio
    if nominal is None:
        found.miss("hausner_ratio", "loose and tapped bulk density are needed")
    else:
        hausner = case.around("hausner_ratio", nominal, PROPERTY_SD["hausner_ratio"], 1.0)
        found.put("hausner_ratio", hausner, "1", "measured", note="±0.06: the tapping protocol isn't stated")
        scores["hausner_ratio"] = sign.hausner_score(hausner_ratio=hausner)
        found.indicate(
            Indicator(
                "Hausner ratio",
                hausner,
                "",
                "1.25 to 1.40",
                scores["hausner_ratio"],
                "Geldart, Harnby & Wong 1984 (from memory)",
            )
        )
    ffc = case.given("flow_function", relative=True, low=0.1)
    if ffc is not None:
        scores["flow_function"] = sign.flow_function_score(flow_function=ffc)
        found.indicate(
            Indicator(
                "flow function ffc", ffc, "", "2 to 8", scores["flow_function"], "classes of Jenike 1964 (from memory)"
            )
        )
    repose = case.given("angle_of_repose", low=0.05, high=1.5)
    if repose is not None:
        scores["angle_of_repose"] = sign.repose_score(angle_of_repose=repose)
        found.indicate(
            Indicator(
                "angle of repose",
                np.rad2deg(repose),
                "°",
                "40 to 45°",
                scores["angle_of_repose"],
                "Geldart et al. 2006 (from memory)",
            )
        )
    return scores


def _fines(case: Case, found: Findings) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    """Fines flags. The share below 45 µm is not one: up to a third it helps group A, and the mean size tells the rest."""
    shares = {key: case.report.undersize(float(key[6:-2]) * 1e-6) for key in sign.FINES_CAUTION}
    for key, limit in sign.FINES_CAUTION.items():
        upper = sign.FINES_STRONG.get(key, 2 * limit)
        score = sign.clipped((shares[key] - (limit + upper) / 2) / ((upper - limit) / 2))
        text = f"caution over {limit * 100:.0f} %"
        text += f", strong over {upper * 100:.0f} %" if key in sign.FINES_STRONG else ""
        name, source = f"share below {key[6:-2]} µm", "judged from percolation of fines"
        found.indicate(Indicator(name, shares[key] * 100, "%", text, score, source, only_raises=True))
    caution, strong = sign.fines_flags(shares)
    found.warn(
        caution,
        "fines ({f10:.1f} % below 10 µm, {f20:.1f} % below 20 µm) raise the cohesion risk",
        f10=shares["below_10um"] * 100,
        f20=shares["below_20um"] * 100,
    )
    return caution, strong


def _softening(
    case: Case, found: Findings, caution: ArrayLike, strong: ArrayLike
) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    softening, temperature = case.material.softening_temperature, case.fluid.temperature
    if softening is None or temperature is None:
        return np.asarray(caution), np.asarray(strong)
    near, over = sign.softening_flags(temperature=temperature, softening_temperature=softening.value)
    margin = softening.value - temperature
    found.warn(near, f"the bed is {abs(margin):.0f} K {'over' if margin <= 0 else 'below'} the softening temperature")
    found.indicate(
        Indicator(
            "margin to softening",
            np.asarray(margin),
            "K",
            "caution under 20 K, strong under 0 K",
            sign.clipped((sign.SOFTENING_MARGIN / 2 - margin) / (sign.SOFTENING_MARGIN / 2)),
            "judgement",
            only_raises=True,
        )
    )
    return np.asarray(np.logical_or(caution, near)), np.asarray(np.logical_or(strong, over))


def _deciding(flow: dict[str, Array], ratio: Array | None) -> str:
    if ratio is not None:
        return "decided by the measured bed pressure drop"
    return "from size" + (
        f" and {', '.join(key.replace('_', ' ') for key in flow)}" if flow else " alone: no flow test given"
    )
