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

from psdflow.distribution import SizeDistribution, class_means
from psdflow.sizes.open_ends import moved_ends

COVERAGE = 0.95
DEFAULT_DRAWS = 4000  # ends of intervals good to the second digit (tests/test_assess.py)
DEFAULT_SEED = 20

# Standard deviations of ln(size) of one report: of all sizes together, and added at x10 and x90; used where the report
# has no repeats of its own. Laser: ISO 13320 repeatability, 3 % at x50 and 5 % at x10 and x90, so 4 % is left for the
# width; doubled for a median below 10 µm (the standard doubles each percentile below 10 µm; here the median decides).
# Sieve: what sieving again gives on the same sieves; 1 to 2 % of the mass, judgement. The sieves' own error is drawn
# apart. Image and settling are treated as laser. Judgement.
REPORT_ERROR: dict[str, tuple[float, float]] = {
    "sieve": (0.01, 0.01),
    "laser": (0.03, 0.04),
    "image": (0.03, 0.04),
    "settling": (0.03, 0.04),
}
FINE_MEDIAN = 10e-6  # below it the laser figures double
WEIGHING_SD = 0.0005  # of the charge: a balance good to 0.1 % of the load (ASTM C136-19 §6.1, looked up), as 95 %

# Permitted deviation of a sieve's mean aperture as a share of it, by aperture in µm (ASTM E11, column Y, from the table in
# the library `fluids`, its units put right); between these sizes it is interpolated in ln(size).
APERTURE_TOLERANCE: dict[float, float] = {
    20: 0.115, 25: 0.100, 32: 0.0844, 38: 0.0763, 45: 0.0689, 53: 0.0642, 63: 0.0587, 75: 0.0547, 90: 0.0511,
    106: 0.0491, 125: 0.0464, 150: 0.0440, 180: 0.0422, 212: 0.0410, 250: 0.0396, 300: 0.0383, 355: 0.0375, 425: 0.0365,
    500: 0.0360, 600: 0.0353, 710: 0.0348, 850: 0.0342, 1000: 0.0340, 2000: 0.0325, 4000: 0.0318, 8000: 0.0311,
    16000: 0.0306, 31500: 0.0302, 63000: 0.0297, 125000: 0.0293,
}  # fmt: skip


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

    def normals(self, name: str, columns: int) -> NDArray[np.float64]:
        """Standard normal draws of ``columns`` independent things, shape ``(count, columns)``, each stratified."""
        from scipy.special import ndtri

        generator = np.random.default_rng([self.seed, zlib.crc32(name.encode()), columns])
        layers = generator.permuted(np.tile(np.arange(self.count), (columns, 1)), axis=1).T
        uniform = (layers + generator.random((self.count, columns))) / self.count
        return np.asarray(ndtri(uniform.clip(1e-12, 1 - 1e-12)))

    def around(
        self, name: str, value: ArrayLike, sd: float, low: float = -np.inf, high: float = np.inf
    ) -> NDArray[np.float64]:
        """Normal draws around ``value``, held inside what is physically possible."""
        return np.clip(np.asarray(value, float) + sd * self.normal(name), low, high)

    @cached_property
    def names(self) -> dict[str, int]:
        """Seed and count as they stand in the JSON."""
        return {"draws": self.count, "seed": self.seed}


def redrawn_report(
    distribution: SizeDistribution, draws: Draws, *, particle_density: float = 2500.0
) -> SizeDistribution:
    """The distribution as repeated reports might give it, leading shape ``(..., draws)``.

    Sizes shift together and the width stretches about the median by the report's own repeatability, else by that of
    its method; open ends move inside their plausible bounds; sieves have the apertures their standard permits;
    shares change by weighing, by what was lost in sieving and by the few coarse grains in a small sample.

    Parameters
    ----------
    particle_density
        kg/m³, for the number of grains in the sample; matters only where the sample's mass is known.
    """
    quality, kind = distribution.quality, distribution.measured_by
    median = distribution.percentile(0.5)
    fine = np.where((kind == "laser") & (median < FINE_MEDIAN), 2.0, 1.0)
    shift_sd, stretch_sd = (
        quality.known(name, fine * sd)[..., None]
        for name, sd in zip(("size_sd", "width_sd"), REPORT_ERROR[kind], strict=True)
    )
    moved = moved_ends(distribution, draws.uniform("pan"), draws.uniform("oversize"))
    middle = np.log(median)[..., None, None]
    half_width = np.log(distribution.percentile(0.9) / distribution.percentile(0.1)) / 2
    relative = stretch_sd / np.maximum(half_width, 0.05)[..., None]
    stretch = np.maximum(1 + relative * draws.normal("report width"), 0.3)[..., None]
    shift = (shift_sd * draws.normal("report size"))[..., None]
    logs = np.log(moved.edges)
    if kind == "sieve":
        logs = logs + _apertures(distribution, draws)
    edges = np.exp(middle + shift + stretch * (logs - middle))
    return replace(moved, edges=edges, shares=_redrawn_shares(distribution, draws, particle_density))


def aperture_tolerance(aperture: ArrayLike) -> NDArray[np.float64]:
    """Permitted deviation of a sieve's mean aperture, as a share of it; ``aperture`` in m. Source: ASTM E11."""
    sizes, shares = np.array(list(APERTURE_TOLERANCE)), np.array(list(APERTURE_TOLERANCE.values()))
    return np.interp(np.log(np.asarray(aperture, float) * 1e6), np.log(sizes), shares)


def _apertures(distribution: SizeDistribution, draws: Draws) -> NDArray[np.float64]:
    """Deviation of ln(aperture) of each sieve, shape ``(..., draws, edges)``.

    The tolerance is taken as 95 %; half the variance is common to the stack (one maker, one age), half is each
    sieve's own (judgement). Neighbours never cross: a sieve moves by less than half the way. An assumed outer edge goes
    with the sieve beside it.
    """
    edges = distribution.edges
    sd = aperture_tolerance(edges) / 1.96 / np.sqrt(2)
    sd = np.where(edges < distribution.quality.known("sieved_from", 0.0)[..., None] * 0.999, 0.0, sd)
    own = draws.normals("apertures", edges.shape[-1])
    common = draws.normal("apertures together")[:, None]
    gaps = np.diff(np.log(edges), axis=-1)
    room = 0.45 * np.minimum(
        np.concatenate([gaps[..., :1], gaps], axis=-1), np.concatenate([gaps, gaps[..., -1:]], axis=-1)
    )
    room = room[..., None, :]
    moved = np.clip(sd[..., None, :] * (own + common), -room, room)
    if distribution.lower_open:
        moved[..., 0] = moved[..., 1]
    if distribution.upper_open:
        moved[..., -1] = moved[..., -2]
    return moved


def _redrawn_shares(distribution: SizeDistribution, draws: Draws, particle_density: float) -> NDArray[np.float64]:
    """Shares after another weighing and another sample, shape ``(..., draws, classes)``; they sum to 1 once scaled."""
    quality, shares = distribution.quality, distribution.shares[..., None, :]
    loss, mass = quality.known("loss", 0.0)[..., None], quality.known("sample_mass", np.inf)[..., None, None]
    if distribution.measured_by == "sieve":
        # A gain has no better explanation than a weighing gone wrong.
        sd = (WEIGHING_SD + np.maximum(-loss, 0.0) / 2)[..., None] * (shares > 0)
        shares = np.maximum(shares + sd * draws.normals("weighing", distribution.classes), 0.1 * shares)
        if distribution.lower_open:
            # None to all of what was lost was dust, which belongs in the pan.
            dust = np.maximum(loss, 0.0) * draws.uniform("dust lost")
            shares = np.concatenate([shares[..., :1] + dust[..., None], shares[..., 1:]], axis=-1)
    if np.isfinite(mass).any():
        shares = shares * _sampled(distribution, draws, mass, particle_density)
    return shares


def _sampled(
    distribution: SizeDistribution, draws: Draws, sample_mass: NDArray[np.float64], particle_density: float
) -> NDArray[np.float64]:
    """Factor on each share from the number of its grains in the sample.

    Poisson counts: relative variance ``m / (p M)`` of a class of share p and grain mass m in a sample of mass M,
    which after scaling is the sampling error of size classes (1/M)[(1/p - 2) m + Σ p m] (Gy, after Pitard; rederived
    and simulated). Log-normal factors of mean 1 keep shares positive.
    """
    grain = particle_density * np.pi / 6 * class_means(distribution.edges, 3, "log-uniform")
    share = distribution.shares
    with np.errstate(divide="ignore"):
        variance = np.where(share > 0, grain / share, 0.0)[..., None, :] / sample_mass
    log_variance = np.log1p(variance)
    return np.exp(np.sqrt(log_variance) * draws.normals("sampling", distribution.classes) - log_variance / 2)


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
