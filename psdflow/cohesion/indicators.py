"""Each sign of cohesion on one scale: a score from -2 (flows) to +2 (cohesive), 0 in the middle of the doubt.

-1 and +1 are the published ends of the band in which both behaviours occur.
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

BOND_BAND = (250.0, 1000.0)  # for the force of REFERENCE_HAMAKER and REFERENCE_ASPERITY. Judgement, see the catalogue
FINES_CAUTION = {"below_10um": 0.10, "below_20um": 0.30}
FINES_STRONG = {"below_10um": 0.20}
SOFTENING_MARGIN = 20.0  # K below the softening temperature that already call for caution


def clipped(score: ArrayLike) -> NDArray[np.float64]:
    """Hold a score inside -2..2."""
    return np.clip(np.asarray(score, float), -2.0, 2.0)


def size_score(*, diameter_sv: ArrayLike, finest_ca: ArrayLike, coarsest_ca: ArrayLike) -> NDArray[np.float64]:
    """``2 ln(d_mid / d) / ln(d_hi / d_lo)``: place of the mean size in the band of the C/A boundary.

    ``finest_ca`` and ``coarsest_ca`` (m) are the boundary by the weakest and the strongest contact force
    of Molerus 1982; ``d_mid`` their geometric mean.
    """
    low, high = np.asarray(finest_ca, float), np.asarray(coarsest_ca, float)
    return clipped(2 * np.log(np.sqrt(low * high) / np.asarray(diameter_sv, float)) / np.log(high / low))


def bond_score(*, bond_number: ArrayLike) -> NDArray[np.float64]:
    """``2 ln(Bo / 500) / ln(1000 / 250)``. Band: judgement, reproduces 15 to 25 µm at 1000 kg/m³."""
    low, high = BOND_BAND
    return clipped(2 * np.log(np.asarray(bond_number, float) / np.sqrt(low * high)) / np.log(high / low))


def hausner_score(*, hausner_ratio: ArrayLike) -> NDArray[np.float64]:
    """``(HR - 1.325) / 0.075``: 1.25 gives -1, 1.40 gives +1.

    Source: Geldart, Harnby & Wong 1984, Powder Technol. 37:25: below 1.25 like group A, above 1.40 group
    C (from memory).
    """
    return clipped((np.asarray(hausner_ratio, float) - 1.325) / 0.075)


def flow_function_score(*, flow_function: ArrayLike) -> NDArray[np.float64]:
    """``log2(4 / ffc)``: 8 gives -1, 2 gives +1. Source: Jenike 1964 classes 2, 4, 10 (from memory)."""
    return clipped(np.log2(4 / np.asarray(flow_function, float)))


def repose_score(*, angle_of_repose: ArrayLike) -> NDArray[np.float64]:
    """``(angle - 42.5°) / 2.5°``, angle in rad. Source: Geldart et al. 2006, 40° and 45° (from memory)."""
    return clipped((np.rad2deg(np.asarray(angle_of_repose, float)) - 42.5) / 2.5)


def fines_flags(shares: dict[str, NDArray[np.float64]]) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    """Whether any fines share calls for caution, and whether one does strongly.

    ``shares`` by sheet key (``below_10um``, …). Judgement, from the percolation estimate that fines govern
    a bed from about a fifth of the mass on.
    """
    caution = np.any([shares[key] > limit for key, limit in FINES_CAUTION.items()], axis=0)
    strong = np.any([shares[key] > limit for key, limit in FINES_STRONG.items()], axis=0)
    return np.asarray(caution), np.asarray(strong)


def softening_flags(
    *, temperature: ArrayLike, softening_temperature: ArrayLike
) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    """Whether the bed is within 20 K of softening (caution), and whether it is at or over it (strong)."""
    over = np.asarray(temperature, float) - np.asarray(softening_temperature, float)
    return np.asarray(over > -SOFTENING_MARGIN), np.asarray(over >= 0)
