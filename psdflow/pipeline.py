"""The pipeline: distribution + material + duty -> Assessment. One page, in the order of the job."""

from collections.abc import Iterable, Sequence

from psdflow.assessment import Assessment
from psdflow.carryover.stage import carryover_stage
from psdflow.case import Case
from psdflow.cohesion.stage import cohesion_stage
from psdflow.distribution import SizeDistribution
from psdflow.duty import Duty
from psdflow.errors import InputError
from psdflow.fluidization.stage import fluidization_stage
from psdflow.material import Material
from psdflow.results import Findings
from psdflow.sizes.stage import size_stage
from psdflow.uncertainty import DEFAULT_DRAWS, DEFAULT_SEED, Draws

# Values a chunk of draws may hold in one array, so that a long history stays inside a few hundred megabytes.
_CHUNK_VALUES = 4_000_000


def assess(
    distribution: SizeDistribution,
    material: Material,
    duty: Duty,
    *,
    lots: Sequence[str] = (),
    below: Iterable[float] = (),
    draws: int = DEFAULT_DRAWS,
    seed: int = DEFAULT_SEED,
) -> Assessment:
    """Predict how powder lots behave in a duty.

    Parameters
    ----------
    distribution
        One lot ``(classes,)`` or a history ``(lots, classes)``; every lot gets the same numbers either way.
    material, duty
        The powder and the unit, as documents.
    lots
        Names of the lots, for the record.
    below
        Further sizes (m) whose undersize share is wanted, besides 10, 20 and 45 µm.
    draws, seed
        Number of Monte Carlo draws behind low and high (0: none) and their seed.

    Raises
    ------
    InputError
        If the grains are lighter than the fluid.
    """
    if material.particle_density.value <= duty.fluid.resolved.density:
        raise InputError(
            f"particle_density: found {material.particle_density.value:g} kg/m³; expected more than the fluid's "
            f"{duty.fluid.resolved.density:g} kg/m³: these grains would float"
        )
    sizes = tuple(below)
    nominal = run(Case(distribution, material, duty), sizes)
    drawn = []
    if draws:
        values = draws * distribution.classes * 16
        step = max(1, _CHUNK_VALUES // values)
        for part in _parts(distribution, step):
            drawn.append(run(Case(part, material, duty, Draws(draws, seed)), sizes))
    return Assessment.from_findings(
        nominal, drawn, distribution=distribution, material=material, duty=duty, lots=lots, draws=draws, seed=seed
    )


def run(case: Case, below: Iterable[float] = ()) -> Findings:
    """Every stage once, on the nominal or on the drawn case."""
    found = Findings(case.shape)
    size_stage(case, found, below)
    fluidization_stage(case, found)
    cohesion_stage(case, found)
    carryover_stage(case, found)
    return found


def _parts(distribution: SizeDistribution, step: int) -> list[SizeDistribution]:
    """A history cut into pieces of ``step`` lots along its first axis; one lot stays as it is."""
    if not distribution.shape:
        return [distribution]
    count = distribution.shape[0]
    return [distribution.lot(slice(start, start + step)) for start in range(0, count, step)]
