"""Draws and intervals: how doubt in the inputs and in the methods becomes low and high.

Every uncertain thing has a name and its own stream of standard normal draws, so adding one doesn't move the
others, and all lots see the same draws: a difference between two lots is never noise. Draws are
stratified (one in each of ``count`` equal-probability layers), which steadies the ends of the intervals.
Source of the approach: propagation of distributions, JCGM 101:2008 (from memory).
"""

import zlib
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.distribution import SizeDistribution
from psdflow.sizes.open_ends import moved_ends

COVERAGE = 0.95
DEFAULT_DRAWS = 4000  # ends of intervals good to the second digit (tests/test_assess.py)
DEFAULT_SEED = 20

# Standard deviations of ln(size) of one report: of all sizes together, and added at x10 and x90.
# Laser: ISO 13320 repeatability, 3 % at x50 and 5 % at x10 and x90, so 4 % is left for the width.
# Sieve: the mean aperture's tolerance in ASTM E11 is 3.6 % to 7.6 % for 150 to 45 µm; half of it as a standard
# deviation, and as much again for the width. Image and settling are treated as laser. Judgement.
REPORT_ERROR: dict[str, tuple[float, float]] = {
    "sieve": (0.025, 0.025),
    "laser": (0.03, 0.04),
    "image": (0.03, 0.04),
    "settling": (0.03, 0.04),
}


@dataclass(frozen=True)
class Draws:
    """Named streams of standard normal draws, shape ``(count,)``, fixed by ``seed``."""

    count: int = DEFAULT_DRAWS
    seed: int = DEFAULT_SEED

    def uniform(self, name: str) -> NDArray[np.float64]:
        """Stratified uniform draws in (0, 1)."""
        generator = np.random.default_rng([self.seed, zlib.crc32(name.encode())])
        return np.asarray((generator.permutation(self.count) + generator.random(self.count)) / self.count)

    def normal(self, name: str) -> NDArray[np.float64]:
        """Stratified standard normal draws."""
        from scipy.special import ndtri

        return np.asarray(ndtri(self.uniform(name).clip(1e-12, 1 - 1e-12)))

    def around(
        self, name: str, value: ArrayLike, sd: float, low: float = -np.inf, high: float = np.inf
    ) -> NDArray[np.float64]:
        """Normal draws around ``value``, held inside what is physically possible."""
        return np.clip(np.asarray(value, float) + sd * self.normal(name), low, high)

    @cached_property
    def names(self) -> dict[str, int]:
        """Seed and count as they stand in the JSON."""
        return {"draws": self.count, "seed": self.seed}


def redrawn_report(distribution: SizeDistribution, draws: Draws) -> SizeDistribution:
    """The distribution as repeated reports might give it, leading shape ``(..., draws)``.

    Sizes shift together and the width stretches about the median by the measuring method's repeatability;
    open ends move inside their plausible bounds. Shares stay as reported.
    """
    shift_sd, stretch_sd = REPORT_ERROR[distribution.measured_by]
    moved = moved_ends(distribution, draws.uniform("pan"), draws.uniform("oversize"))
    median = np.log(distribution.percentile(0.5))[..., None, None]
    half_width = np.log(distribution.percentile(0.9) / distribution.percentile(0.1)) / 2
    relative = stretch_sd / np.maximum(half_width, 0.05)
    stretch = np.maximum(1 + relative[..., None] * draws.normal("report width"), 0.3)[..., None]
    shift = shift_sd * draws.normal("report size")[:, None]
    edges = np.exp(median + shift + stretch * (np.log(moved.edges) - median))
    return replace(moved, edges=edges)


def interval(values: NDArray[np.float64]) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Ends of the central 95 % interval over the last axis (draws), NaN where no draw has a value."""
    tail = (1 - COVERAGE) / 2
    ordered = np.sort(values, axis=-1)  # NaN goes last
    count = np.isfinite(values).sum(axis=-1)

    def at(fraction: float) -> NDArray[np.float64]:
        position = fraction * np.maximum(count - 1, 0)
        below = np.floor(position).astype(int)
        above = np.minimum(below + 1, np.maximum(count - 1, 0))
        lower = np.take_along_axis(ordered, below[..., None], -1)[..., 0]
        upper = np.take_along_axis(ordered, above[..., None], -1)[..., 0]
        with np.errstate(invalid="ignore"):
            return np.asarray(lower + (position - below) * (upper - lower))

    return at(tail), at(1 - tail)
