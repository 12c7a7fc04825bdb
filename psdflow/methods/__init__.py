"""The catalogue: every published method with its source, range and scatter.

A formula lives in one function of the package that uses it; its entry here says where it comes from
and where it holds. Results name their entry by ``key``. The tables are split by subject
(``sizes``, ``fluidization``, ``cohesion``, ``carryover``) to keep them readable.
"""

from dataclasses import dataclass, field
from functools import cache

import numpy as np
from numpy.typing import ArrayLike, NDArray


@dataclass(frozen=True)
class Method:
    """One published method.

    Attributes
    ----------
    key
        The name results carry, e.g. ``wen-yu-1966``.
    quantity
        The sheet key it gives, e.g. ``u_mf``.
    name
        As the field calls it: ``Wen & Yu 1966``.
    source
        Author, year, journal or book, equation or table.
    ranges
        Published range of each variable in SI units: ``{"diameter": (51e-6, 0.05)}``. Empty when the
        source states none that could be found.
    scatter
        Standard deviation of ln(measured / predicted) on foreign data, the method's own doubt.
    checked
        ``"looked up"`` or ``"from memory"``: how the coefficients were obtained.
    diameter
        Which size it takes: ``"sv"`` (surface-volume), ``"v"`` (volume-equivalent), ``""`` (none).
    note
        What a user must know: misquotations, traps, why a choice was made.
    """

    key: str
    quantity: str
    name: str
    source: str
    ranges: dict[str, tuple[float, float]] = field(default_factory=dict)
    scatter: float = 0.0
    checked: str = "from memory"
    diameter: str = ""
    note: str = ""


@cache
def catalogue() -> dict[str, Method]:
    """Every method by key, in the order of the pipeline."""
    from psdflow.methods import carryover, cohesion, fluidization, sizes

    entries = [*sizes.METHODS, *fluidization.METHODS, *cohesion.METHODS, *carryover.METHODS]
    table = {entry.key: entry for entry in entries}
    if len(table) != len(entries):
        raise AssertionError("two methods share a key")
    return table


def method(key: str) -> Method:
    """The catalogue entry of ``key``."""
    return catalogue()[key]


def distance_outside(key: str, **variables: ArrayLike | None) -> NDArray[np.float64]:
    """How far a case lies outside a method's published range, summed over the variables in ln units; 0 inside.

    Parameters
    ----------
    key
        Catalogue key.
    **variables
        Values in SI units of every variable the method's ``ranges`` name, any broadcastable shapes;
        others are ignored. ``None`` means unknown: it can't put the case out of range.
    """
    far: NDArray[np.float64] = np.zeros(())
    for name, (low, high) in method(key).ranges.items():
        given = variables[name]
        if given is not None:
            value = np.maximum(np.asarray(given, float), 1e-300)
            below = np.log(low / value) if low > 0 else np.full(value.shape, -1.0)
            far = far + np.maximum(np.maximum(below, np.log(value / high)), 0.0)
    return far


def in_range(key: str, **variables: ArrayLike | None) -> NDArray[np.bool_]:
    """Whether a case lies inside a method's published range; parameters as `distance_outside`."""
    return np.asarray(distance_outside(key, **variables) <= 1e-12)
