"""One distribution from a sieved coarse part and a laser measurement of the fines.

Laser sees volume-equivalent spheres, a sieve the second-largest dimension: laser sizes are divided by an apparent shape factor
k = x_laser / x_sieve to become sieve sizes. k belongs to the material (1.0 beads to 1.4 flaky; practice, from memory;
Austin 1998 shows it depends on the distribution, too), so it is fitted or given, bounded, and always shown.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from psdflow.distribution import SizeDistribution
from psdflow.errors import InputError

Array = NDArray[np.float64]
FACTOR_BOUNDS = (0.8, 1.6)
USUAL_JOIN = 90e-6  # middle of 63 to 125 µm, where both methods are good (common practice, no source)
COARSE_WARN, COARSE_REFUSE = 0.05, 0.30  # laser volume coarser than the sieve its sample passed
MISFIT_WARN, MISFIT_REFUSE = 0.05, 0.15  # of the whole, between the curves at the overlapping sieves
JUMP = 2.0  # ratio of the densities on both sides of the join that is said


@dataclass(frozen=True)
class Merged:
    """Edges in m and the share finer than each; below ``join`` from laser, the rest sieved; k; what to warn of."""

    edges: Array
    under: Array
    join: float
    shape_factor: float
    warnings: tuple[str, ...]


def merge_passing(coarse: SizeDistribution, fine: SizeDistribution, *, cut: float, shape_factor: float = 1.0) -> Merged:
    """The laser measured what passed the sieve ``cut`` (m): ``Q(x) = Q_s Q_laser(k x) / Q_laser(k cut)`` below it.

    Raises
    ------
    InputError
        If ``cut`` is no sieve of the coarse part, nothing passed it, k is out of bounds, or the laser found more than 30 %
        coarser than the cut.
    """
    _bounded(shape_factor)
    edges, under = _measured(coarse)
    at = int(np.abs(np.log(edges / cut)).argmin())
    if abs(edges[at] / cut - 1) > 0.03:
        listed = ", ".join(f"{e * 1e6:g}" for e in edges)
        raise InputError(f"the cut of {cut * 1e6:g} µm is no sieve of the coarse part; one of {listed} µm is expected")
    if under[at] <= 0:
        raise InputError(f"nothing passed the sieve of {cut * 1e6:g} µm, so there are no fines to merge")
    beyond = 1 - float(fine.undersize(shape_factor * edges[at]))
    if beyond > COARSE_REFUSE:
        raise InputError(
            f"the laser found {beyond:.0%} coarser than {edges[at] * 1e6:g} µm, so it didn't measure what passed that sieve; "
            "say --fines-of all if it measured the whole sample"
        )
    warnings = []
    if beyond > COARSE_WARN:
        warnings.append(
            f"the laser found {beyond:.0%} of the fines coarser than the sieve of {edges[at] * 1e6:g} µm they passed "
            "(long grains or agglomerates); the rest was scaled up to the share that passed"
        )
    return _joined(edges, under, fine, at, shape_factor, warnings)


def merge_overlapping(coarse: SizeDistribution, fine: SizeDistribution, *, shape_factor: float | None = None) -> Merged:
    """The laser measured the whole sample: k by least squares of ``Q_laser(k x) = Q_sieve(x)``, joined near 90 µm.

    Below the join ``Q(x) = Q_laser(k x) Q_sieve(x_j) / Q_laser(k x_j)``.

    Raises
    ------
    InputError
        If fewer than two sieves lie inside the laser's curve, or the curves don't agree for any k.
    """
    edges, under = _measured(coarse)
    factors = np.geomspace(*FACTOR_BOUNDS, 1401) if shape_factor is None else np.array([_bounded(shape_factor)])
    seen = np.array([fine.undersize(edges * k) for k in (FACTOR_BOUNDS if shape_factor is None else factors)])
    inside = np.all((seen > 0.01) & (seen < 0.995), axis=0) & (under > 0.005) & (under < 0.995)
    if inside.sum() < 2:
        raise InputError(
            "sieves and laser overlap at fewer than two sieves; say --fines-of passing if the laser measured what passed "
            "the finest sieve"
        )
    off = fine.undersize((factors[:, None] * edges[inside]).ravel()).reshape(factors.size, -1) - under[inside]
    best = int((off**2).sum(axis=1).argmin())
    factor, misfit = float(factors[best]), float(np.abs(off[best]).max())
    if misfit > MISFIT_REFUSE:
        raise InputError(
            f"sieves and laser differ by {misfit:.0%} of the whole even with the best shape factor {factor:.2f}; "
            "they can't be of one sample"
        )
    warnings = []
    if misfit > MISFIT_WARN:
        warnings.append(f"sieves and laser differ by up to {misfit:.0%} of the whole where they overlap")
    if shape_factor is None and best in (0, factors.size - 1):
        warnings.append(f"the fitted shape factor {factor:.2f} stands at its bound; one of the reports is doubtful")
    shared = np.flatnonzero(inside)
    shared = (
        shared[1:] if shared.size > 2 and shared[0] == 0 else shared
    )  # not at the finest sieve, if there is a choice
    at = int(shared[np.abs(np.log(edges[shared] / USUAL_JOIN)).argmin()])
    return _joined(edges, under, fine, at, factor, warnings)


def _bounded(factor: float) -> float:
    low, high = FACTOR_BOUNDS
    if not low <= factor <= high:
        raise InputError(f"--shape-factor {factor:g}: {low:g} to {high:g} is expected (laser size over sieve size)")
    return factor


def _measured(distribution: SizeDistribution) -> tuple[Array, Array]:
    """Measured edges and the share finer than each, without the assumed bounds of open ends."""
    kept = slice(1 if distribution.lower_open else 0, -1 if distribution.upper_open else None)
    return distribution.edges[kept], distribution.cumulative[kept]


def _joined(edges: Array, under: Array, fine: SizeDistribution, at: int, factor: float, warnings: list[str]) -> Merged:
    join, share = float(edges[at]), float(under[at])
    fine_edges, fine_under = _measured(fine)
    below = fine_edges / factor < join * 0.97  # no sliver of a class under the join
    scale = share / float(fine.undersize(factor * join))
    all_edges = np.concatenate([fine_edges[below] / factor, edges[at:]])
    all_under = np.concatenate([np.minimum(fine_under[below] * scale, share), under[at:]])
    said = [
        f"sieve and laser were merged at {join * 1e6:g} µm ({share:.1%} finer) with laser size over sieve size "
        f"{factor:.2f}; sizes below are laser sizes divided by it",
        *warnings,
    ]
    half = np.sqrt(2.0)
    q = np.interp(np.log(join) + np.array([-1, 0, 1]) * np.log(half), np.log(all_edges), all_under)
    low, high = q[1] - q[0], q[2] - q[1]
    if min(low, high) * JUMP < max(low, high) and max(low, high) > 0.02:
        said.append(
            f"the density jumps by a factor {max(low, high) / max(min(low, high), 1e-9):.1f} at the join; "
            "one of the parts, or the shape factor, is doubtful there"
        )
    return Merged(all_edges, all_under, join, factor, tuple(said))
