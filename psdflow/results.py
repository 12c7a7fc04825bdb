"""What the stages hand back: estimates with method and range, what is absent and why, what to warn of."""

from dataclasses import dataclass, field, replace
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from psdflow.methods import catalogue


@dataclass(frozen=True)
class Estimate:
    """One quantity for all lots.

    ``value``, ``method`` and ``in_range`` have the leading shape of the lots; ``method`` holds catalogue
    keys, or words such as "definition". ``alternatives`` are the other methods' values of that shape.
    """

    value: NDArray[Any]
    unit: str
    method: NDArray[np.str_]
    in_range: NDArray[np.bool_]
    alternatives: dict[str, NDArray[np.float64]] = field(default_factory=dict)
    note: str = ""


@dataclass(frozen=True)
class Notice:
    """A sentence that holds for the lots where ``where`` is true; ``values`` fill its {fields}."""

    where: NDArray[np.bool_]
    text: str
    values: dict[str, NDArray[Any]]

    def for_lot(self, index: tuple[int, ...]) -> str | None:
        """The sentence for one lot, None if it doesn't hold there."""
        if not self.where[index]:
            return None
        return self.text.format(**{name: value[index] for name, value in self.values.items()})


@dataclass(frozen=True)
class Indicator:
    """One sign of cohesion: value in friendly units, threshold in words, score -2..2 and its source.

    ``counts`` is False for signs shown beside a twin that already votes; ``only_raises`` for those that
    can raise the risk and never lower it.
    """

    name: str
    value: NDArray[np.float64]
    unit: str
    threshold: str
    score: NDArray[np.float64]
    source: str
    counts: bool = True
    only_raises: bool = False


class Findings:
    """Collects the stages' results; values are read back with ``findings["u_mf"]``."""

    def __init__(self, shape: tuple[int, ...]) -> None:
        self.shape = shape
        self.estimates: dict[str, Estimate] = {}
        self.absent: dict[str, str] = {}
        self.notices: list[Notice] = []
        self.assumptions: list[str] = []
        self.classes: dict[str, NDArray[np.float64]] = {}
        self.indicators: list[Indicator] = []
        self.balance: Any = None  # the bed's class balance (psdflow.carryover.balance), where feed and bed are known

    def __getitem__(self, key: str) -> NDArray[Any]:
        return self.estimates[key].value

    def __contains__(self, key: str) -> bool:
        return key in self.estimates

    def get(self, key: str) -> NDArray[Any] | None:
        """The value of ``key``, None if it isn't there."""
        return self.estimates[key].value if key in self.estimates else None

    def _spread(self, value: ArrayLike) -> NDArray[Any]:
        return np.broadcast_to(np.asarray(value), self.shape)

    def put(
        self,
        key: str,
        value: ArrayLike,
        unit: str,
        method: ArrayLike,
        *,
        in_range: ArrayLike = True,
        alternatives: dict[str, NDArray[np.float64]] | None = None,
        note: str = "",
    ) -> NDArray[Any]:
        """Record a quantity; scalars spread over the lots. Returns the value."""
        others = {name: self._spread(v) for name, v in (alternatives or {}).items()}
        self.estimates[key] = Estimate(
            self._spread(value), unit, self._spread(method), self._spread(in_range), others, note
        )
        return self.estimates[key].value

    def revalue(self, key: str, value: ArrayLike) -> None:
        """Replace the value of a recorded quantity."""
        self.estimates[key] = replace(self.estimates[key], value=self._spread(value))

    def indicate(self, indicator: Indicator) -> None:
        """Record an indicator of cohesion, spread over the lots."""
        value, score = self._spread(indicator.value), self._spread(indicator.score)
        self.indicators.append(replace(indicator, value=value, score=score))

    def miss(self, keys: str, reason: str) -> None:
        """Record why quantities (space-separated keys) are absent."""
        for key in keys.split():
            self.absent[key] = reason

    def warn(self, where: ArrayLike, text: str, **values: ArrayLike) -> None:
        """Record a warning for the lots where ``where`` holds."""
        mask = self._spread(where)
        if mask.any():
            spread = {name: self._spread(value) for name, value in values.items()}
            self.notices.append(Notice(mask, text, spread))


def source_of(method: str) -> str:
    """Citation of a catalogue key; empty for definitions and measured inputs."""
    entry = catalogue().get(method)
    return entry.source if entry else ""
