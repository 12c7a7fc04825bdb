"""What the size stage puts on the sheet."""

from collections.abc import Iterable

import numpy as np

from psdflow.case import Case
from psdflow.results import Findings
from psdflow.sizes import statistics as st
from psdflow.sizes.open_ends import moved_ends
from psdflow.sizes.respirable import LARGEST_INHALED, aerodynamic_diameter, inhalable, respirable, thoracic

DEFINITION = "iso-9276-2"
FINES_SIZES = (10e-6, 20e-6, 45e-6)
PERCENTILES = (10, 16, 50, 84, 90)


def fines_key(size: float) -> str:
    """Sheet key of the share below ``size`` (m): ``below_45um``."""
    return f"below_{size * 1e6:g}um"


def size_stage(case: Case, found: Findings, below: Iterable[float] = ()) -> None:
    """Percentiles, moment means, spread, fines, surface, pan; in the sizes that were measured."""
    report = case.report
    for percent in PERCENTILES:
        # The tabulated d16 and d84 are d15.87 and d84.13, one standard deviation of a log-normal.
        fraction = {16: 0.1587, 84: 0.8413}.get(percent, percent / 100)
        found.put(f"d{percent}", report.percentile(fraction), "m", DEFINITION)
        assumed = st.in_open_end(report, fraction)
        found.warn(
            assumed,
            f"d{percent} lies in the open end of the report; its value rests on an assumed bound",
        )
    pan, pan_surface = st.pan_share(report), st.pan_surface_share(report)
    found.put("d32", st.d32(report), "m", DEFINITION, alternatives=_d32_alternatives(case))
    found.put("d43", st.d43(report), "m", DEFINITION)
    for key, (p, q) in st.NAMED_MEANS.items():
        if key not in {"d32", "d43"}:
            note = "decided by the finest class" if p + q < 4 else ""
            found.put(key, st.moment_mean(report, p, q), "m", DEFINITION, note=note)
    found.put("d_sv", case.diameter_sv, "m", "definition", note="surface-volume mean that the formulas take")
    found.put("span", st.span(report), "1", DEFINITION)
    found.put("geometric_sd", st.geometric_sd(report), "1", DEFINITION)
    for size in sorted({*FINES_SIZES, *below}):
        found.put(fines_key(size), report.undersize(size), "share", DEFINITION)
    unseen = np.sum([size < report.edges[..., 1] for size in FINES_SIZES], axis=0)
    found.warn(
        (unseen > 0) & (pan > 0),
        "nothing was measured below {finest:.0f} µm: the shares below smaller sizes are guesses inside the pan",
        finest=report.edges[..., 1] * 1e6,
    )
    found.put("pan_share", pan, "share", "definition")
    found.put("pan_surface_share", pan_surface, "share", "definition", note="how far d32 rests on the assumed pan size")
    found.warn(
        pan_surface > 0.20,
        "the pan ({pan:.1f} % of the mass) holds {surface:.0f} % of the surface under its assumed size: "
        "d32 and all that follows from it depend on what is in it; have it measured by laser diffraction",
        pan=pan * 100,
        surface=pan_surface * 100,
    )
    found.put(
        "specific_surface",
        st.specific_surface(case.volume, particle_density=case.particle_density, sphericity=case.sphericity),
        "m^2/kg",
        "definition",
        note="outer surface only",
    )
    middle = np.sqrt(case.volume.edges[..., :-1] * case.volume.edges[..., 1:])
    aerodynamic = aerodynamic_diameter(diameter=middle, particle_density=np.asarray(case.particle_density)[..., None])
    for key, convention in (("inhalable", inhalable), ("thoracic", thoracic), ("respirable", respirable)):
        passing = np.where(aerodynamic <= LARGEST_INHALED, convention(aerodynamic), 0.0)
        found.put(
            f"{key}_share",
            (case.volume.shares * passing).sum(axis=-1),
            "share",
            "iso-7708",
            note="of the powder, not of any airborne dust",
        )
    if case.draws is None:
        found.warn(
            report.quality.reconstructed,
            "the report gives percentiles only: its classes, and every figure that follows from them, are a reconstruction",
        )


def _d32_alternatives(case: Case) -> dict[str, np.ndarray]:
    """d32 by the midpoint conventions, and under each bound of the pan: what the pan does to it."""
    report = case.report
    others = {
        "geometric midpoints": st.d32(report, "geometric-midpoint"),
        "arithmetic midpoints": st.d32(report, "arithmetic-midpoint"),
    }
    if report.lower_open and case.draws is None:
        ends = st.d32(moved_ends(report, np.array([0.0, 1.0]), np.array([0.5, 0.5])))
        others["pan at its finest bound"], others["pan at its coarsest bound"] = ends[..., 0], ends[..., 1]
        without = type(report)(report.edges[..., 1:], report.shares[..., 1:])
        others["pan left out"] = st.d32(without)
    return others
