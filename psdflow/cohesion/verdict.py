"""The cohesion verdict: low, elevated or high, from whatever indicators there are.

Rule (screening; not validated between 15 and 25 µm):

1. Signs form two families, because members of one share a cause. Size: the Bond number where Hamaker constant
   and asperity size are given, else the place of d_sv in the band of the C/A boundary; weight 1. Flow: the weighted
   mean of Hausner ratio (1), flow function (1) and angle of repose (0.4); weight their sum, at most 1.5,
   halved above 200 °C because room-temperature tests don't transfer to a hot bed.
2. The score is the weighted mean of the families. Fines below 10 or 20 µm over a caution limit, or a bed within 20 K of
   softening, add 1; over a strong limit 2. Nothing is subtracted.
3. Score >= 1: high. Score <= -1: low. Else elevated.
4. Families of opposite sign more than 2 apart are a conflict: elevated, test it; never averaged away.
5. A measured ratio of bed pressure drop to bed weight overrides all: below 0.8 high, from 0.9 low.

The probability is the mean over the draws of the score's place in the band, ``(score + 1) / 2`` in 0..1.
"""

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

FLOW_WEIGHTS = {"hausner_ratio": 1.0, "flow_function": 1.0, "angle_of_repose": 0.4}
LARGEST_FLOW_WEIGHT = 1.5
HOT_BED = 473.15  # K
RISKS = ("low", "elevated", "high")
RATIO_HIGH, RATIO_LOW = 0.8, 0.9


class Verdict(NamedTuple):
    """Score -2..2, index into RISKS, whether the families conflict, and the probability 0..1, per element."""

    score: NDArray[np.float64]
    risk: NDArray[np.intp]
    conflict: NDArray[np.bool_]
    probability: NDArray[np.float64]


def flow_family(scores: dict[str, NDArray[np.float64]], *, hot: bool) -> tuple[NDArray[np.float64], float]:
    """Weighted mean score of the flow tests and the family's weight; weight 0 if there are none."""
    if not scores:
        return np.zeros(()), 0.0
    weight = sum(FLOW_WEIGHTS[key] for key in scores)
    mean = sum((FLOW_WEIGHTS[key] * score for key, score in scores.items()), np.zeros(())) / weight
    return np.asarray(mean), min(weight, LARGEST_FLOW_WEIGHT) * (0.5 if hot else 1.0)


def verdict(
    *,
    size_score: ArrayLike,
    flow_scores: dict[str, NDArray[np.float64]],
    caution: ArrayLike,
    strong: ArrayLike,
    hot: bool = False,
    pressure_drop_ratio: ArrayLike | None = None,
) -> Verdict:
    """Combine scores (each -2..2) by the rule at the top of this module; arrays broadcast."""
    size = np.asarray(size_score, float)
    flow, weight = flow_family(flow_scores, hot=hot)
    conflict = (weight > 0) & (size * flow < 0) & (np.abs(size - flow) > 2)
    step = np.where(np.asarray(strong), 2.0, np.where(np.asarray(caution), 1.0, 0.0))
    score = np.clip((size + weight * flow) / (1 + weight) + step, -2, 2)
    risk = np.where(score >= 1, 2, np.where(score <= -1, 0, 1))
    risk = np.where(conflict, 1, risk)
    probability = np.where(conflict, 0.5, np.clip((score + 1) / 2, 0, 1))
    if pressure_drop_ratio is not None:
        ratio = np.asarray(pressure_drop_ratio, float)
        risk = np.where(ratio < RATIO_HIGH, 2, np.where(ratio >= RATIO_LOW, 0, 1)) + 0 * risk
        probability = np.clip((RATIO_LOW - ratio) / (RATIO_LOW - RATIO_HIGH), 0.02, 0.98) + 0 * probability
        conflict = conflict & False
    return Verdict(score, risk.astype(np.intp), conflict, np.asarray(probability))
