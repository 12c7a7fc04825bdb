"""How good the report behind a distribution is: what the drawn run makes of it is in `psdflow.uncertainty`."""

from collections.abc import Sequence
from dataclasses import dataclass, fields
from typing import Self

import numpy as np
from numpy.typing import ArrayLike, NDArray


@dataclass(frozen=True, eq=False)
class Quality:
    """What is known about a report's own error, each of the lots' leading shape; NaN where nothing is known.

    Attributes
    ----------
    size_sd, width_sd
        Standard deviations of ln(size): of all sizes together, and added at x10 and x90; from the report's repeated
        readings, or from a distribution that is wide by its making. NaN: the figures of the measuring method.
    sample_mass
        Mass of the sample that was measured, kg; few coarse grains in it are a sampling error.
    loss
        Share of the sieved charge that was not found again; negative for a gain.
    sieved_from
        Finest edge (m) that is a sieve, in a distribution merged from sieve and laser. NaN: all, if it was sieved.
    reconstructed
        Whether the classes were made from percentiles alone.
    """

    size_sd: ArrayLike = np.nan
    width_sd: ArrayLike = np.nan
    sample_mass: ArrayLike = np.nan
    loss: ArrayLike = np.nan
    sieved_from: ArrayLike = np.nan
    reconstructed: ArrayLike = False

    def __post_init__(self) -> None:
        for field in fields(self):
            kind = bool if field.name == "reconstructed" else float
            object.__setattr__(self, field.name, np.asarray(getattr(self, field.name), kind))

    def _each(self, name: str) -> NDArray[np.float64]:
        value: NDArray[np.float64] = getattr(self, name)
        return value

    def known(self, name: str, otherwise: ArrayLike) -> NDArray[np.float64]:
        """A figure where it is known, else ``otherwise``."""
        value = self._each(name)
        return np.where(np.isnan(value), otherwise, value)

    @classmethod
    def stack(cls, many: Sequence["Quality"]) -> Self:
        """Of several lots, along a new leading axis."""
        return cls(**{f.name: np.stack([one._each(f.name) for one in many]) for f in fields(cls)})

    def lot(self, index: int | slice) -> "Quality":
        """Of one lot of a history, or of several by a slice."""
        values = {f.name: self._each(f.name) for f in fields(self)}
        return Quality(**{name: value[index] if value.ndim else value for name, value in values.items()})
