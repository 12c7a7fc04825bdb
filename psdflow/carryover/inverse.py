"""Questions asked backwards: the most fines, or the cyclone, that keep a limit."""

from collections.abc import Callable
from dataclasses import replace
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from psdflow.carryover import cyclone_models as models
from psdflow.carryover.cyclone import standard_design
from psdflow.distribution import SizeDistribution

Array = NDArray[np.float64]

MOST_CYCLONES = 64
_HALVINGS = 40


class CycloneAnswer(NamedTuple):
    """Equal cyclones in parallel: how many, body diameter (m), cut size (m), pressure drop (Pa), inlet velocity (m/s)."""

    number: int
    body_diameter: float
    cut_size: float
    pressure_drop: float
    inlet_velocity: float


def with_fines_share(distribution: SizeDistribution, below: float, share: float) -> SizeDistribution:
    """The lot with another share below ``below`` (m), both parts keeping their own shape; one lot.

    The class that holds ``below`` is split there first.
    """
    edges, at = distribution.edges, float(np.clip(below, distribution.edges[0], distribution.edges[-1]))
    under = distribution.cumulative
    near = edges[np.abs(np.log(edges / at)) < 1e-9]
    at = float(near[0]) if near.size else at
    new_edges = np.union1d(edges, [at])
    shares = np.diff(np.interp(np.log(new_edges), np.log(edges), under))
    fine = new_edges[1:] <= at * (1 + 1e-12)
    now = float(shares[fine].sum())
    factor = np.where(fine, share / now if now > 0 else 0.0, (1 - share) / (1 - now) if now < 1 else 0.0)
    return replace(distribution, edges=new_edges, shares=shares * factor)


def largest_fines_share(
    distribution: SizeDistribution, loss: Callable[[SizeDistribution], float], *, limit: float, below: float = 45e-6
) -> float:
    """Largest share below ``below`` (m) for which ``loss`` stays at or under ``limit``; NaN if even none is too much.

    ``loss`` gives the loss rate of a distribution (an assessment without draws); found by bisection, so it must rise
    with the fines.
    """
    if loss(with_fines_share(distribution, below, 0.0)) > limit:
        return float("nan")
    low, high = 0.0, 1.0
    if loss(with_fines_share(distribution, below, high)) <= limit:
        return 1.0
    for _ in range(_HALVINGS // 2):
        middle = (low + high) / 2
        low, high = (middle, high) if loss(with_fines_share(distribution, below, middle)) <= limit else (low, middle)
    return low


def cyclone_for_cut(
    *,
    design: str,
    flow: float,
    cut_size: float,
    pressure_drop: float,
    particle_density: float,
    fluid_density: float,
    fluid_viscosity: float,
) -> CycloneAnswer | None:
    """Fewest equal cyclones of a standard design that reach ``cut_size`` (m) within ``pressure_drop`` (Pa).

    ``flow`` is the whole gas flow, m³/s. Each count uses the allowed drop up: the drop goes with (flow per cyclone)² /
    D⁴. None if 64 aren't enough. Cut and drop by the recommended models.
    """
    for count in range(1, MOST_CYCLONES + 1):
        each = flow / count
        one = standard_design(design, 1.0)
        drop_at_one = float(
            next(iter(models.pressure_drops(geometry=one, flow=each, fluid_density=fluid_density).values()))
        )
        body = (drop_at_one / pressure_drop) ** 0.25
        shape = standard_design(design, body)
        cuts = models.cut_sizes(
            geometry=shape,
            flow=each,
            particle_density=particle_density,
            fluid_density=fluid_density,
            fluid_viscosity=fluid_viscosity,
        )
        cut = float(next(iter(cuts.values())))
        if cut <= cut_size:
            return CycloneAnswer(count, body, cut, pressure_drop, each / shape.inlet_area)
    return None
