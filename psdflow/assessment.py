"""The result: every quantity of every lot with interval, method, source and range."""

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any, NamedTuple, Self

import numpy as np
from numpy.typing import NDArray

from psdflow.cautions import cautions
from psdflow.distribution import SizeDistribution
from psdflow.duty import Duty
from psdflow.fluidization.groups import GROUPS
from psdflow.material import Material
from psdflow.results import Findings, source_of
from psdflow.uncertainty import interval

# What a reconstructed report doesn't touch.
_NOT_FROM_SIZES = ("fluid_density", "fluid_viscosity", "density_ratio", "u_operating", "hausner_ratio")
RECONSTRUCTED = "reconstructed from percentiles"
# Probabilities are shares of the draws, so their value is the mean over them and they have no interval.
_PROBABILITIES = ("probability_a", "probability_b", "probability_c", "probability_d", "cohesion_probability")


class Row(NamedTuple):
    """One line of the design-input sheet, SI units; ``value`` is None with the reason in ``note`` if absent."""

    key: str
    value: float | str | None
    low: float | None
    high: float | None
    unit: str
    method: str
    source: str
    in_range: bool | None
    note: str


@dataclass(frozen=True)
class Assessment:
    """Predictions for one lot or a history of lots.

    ``assessment["u_mf"]`` gives the values, ``low`` and ``high`` the ends of the 95 % intervals, all of the
    lots' leading shape; `rows` is the sheet of one lot.
    """

    found: Findings
    low: dict[str, NDArray[np.float64]]
    high: dict[str, NDArray[np.float64]]
    distribution: SizeDistribution
    material: Material
    duty: Duty
    lots: tuple[str, ...]
    draws: int
    seed: int
    assumptions: tuple[str, ...] = field(default=())

    @classmethod
    def from_findings(
        cls,
        nominal: Findings,
        drawn: Sequence[Findings],
        *,
        distribution: SizeDistribution,
        material: Material,
        duty: Duty,
        lots: Sequence[str],
        draws: int,
        seed: int,
    ) -> Self:
        """Put intervals around the nominal findings from the drawn ones, piece by piece of the history."""
        low: dict[str, NDArray[np.float64]] = {}
        high: dict[str, NDArray[np.float64]] = {}
        for key, estimate in nominal.estimates.items():
            if not drawn or estimate.unit == "word" or any(key not in piece for piece in drawn):
                continue
            if key in _PROBABILITIES:
                means = [np.asarray(piece[key]).mean(axis=-1) for piece in drawn]
                nominal.revalue(key, _joined(means, nominal.shape))
                continue
            ends = [interval(np.asarray(piece[key], float)) for piece in drawn]
            lowest = _joined([end[0] for end in ends], nominal.shape)
            highest = _joined([end[1] for end in ends], nominal.shape)
            low[key], high[key] = np.fmin(lowest, estimate.value), np.fmax(highest, estimate.value)
        if drawn and "group" in nominal:
            shares = np.stack([nominal[f"probability_{letter.lower()}"] for letter in GROUPS], axis=-1)
            nominal.revalue("group", np.array(list(GROUPS))[shares.argmax(axis=-1)])
        count = nominal.shape[0] if nominal.shape else 1
        names = tuple(lots) or tuple(f"lot {number + 1}" for number in range(count))
        return cls(
            nominal, low, high, distribution, material, duty, names, draws, seed, _assumptions(material, nominal)
        )

    def __getitem__(self, key: str) -> NDArray[Any]:
        return self.found[key]

    def __contains__(self, key: str) -> bool:
        return key in self.found

    @property
    def cautions(self) -> list[str]:
        """What can hurt."""
        return cautions(self.duty)

    @property
    def _reconstructed(self) -> NDArray[np.bool_]:
        return np.broadcast_to(np.asarray(self.distribution.quality.reconstructed), self.found.shape)

    def index(self, lot: int) -> tuple[int, ...]:
        """Where lot number ``lot`` stands in the arrays."""
        return (lot,) if self.found.shape else ()

    def rows(self, lot: int = 0) -> list[Row]:
        """The sheet of one lot, absent quantities last with the reason."""
        rows = [self.row(key, lot) for key in self.found.estimates]
        present = [row for row in rows if row.value is not None]
        absent = [row for row in rows if row.value is None]
        absent += [Row(key, None, None, None, "", "", "", None, why) for key, why in self.found.absent.items()]
        return present + absent

    def row(self, key: str, lot: int = 0) -> Row:
        """One quantity of one lot."""
        index, estimate = self.index(lot), self.found.estimates[key]
        value, method = estimate.value[index], str(estimate.method[index])
        unit = {"share": "1", "word": ""}.get(estimate.unit, estimate.unit)
        inside, source = bool(estimate.in_range[index]), source_of(method)
        note = estimate.note
        if key not in _NOT_FROM_SIZES and self._reconstructed[index]:
            note = f"{note}; {RECONSTRUCTED}" if note else RECONSTRUCTED
        if estimate.unit == "word":
            return Row(key, str(value), None, None, unit, method, source, inside, note)
        if not np.isfinite(value):
            return Row(key, None, None, None, unit, method, source, None, estimate.note or "no value here")
        low, high = (_end(ends, key, index) for ends in (self.low, self.high))
        if low == high:  # a given value: the draws don't move it
            low = high = None
        return Row(key, float(value), low, high, unit, method, source, inside, note)

    def warnings(self, lot: int = 0) -> list[str]:
        """The sentences that hold for one lot."""
        index = self.index(lot)
        said = [notice.for_lot(index) for notice in self.found.notices]
        return list(dict.fromkeys(text for text in said if text))

    def alternatives(self, lot: int = 0) -> dict[str, dict[str, float | str]]:
        """What the other published methods say, by key and method."""
        index = self.index(lot)
        result: dict[str, dict[str, float | str]] = {}
        for key, estimate in self.found.estimates.items():
            values = {name: _plain(value[index]) for name, value in estimate.alternatives.items()}
            kept = {name: value for name, value in values.items() if value is not None}
            if kept:
                result[key] = kept
        return result

    def classes(self, lot: int = 0) -> list[dict[str, float | None]]:
        """Rows by size class: edges, share, terminal velocity, carryover and cyclone."""
        index = self.index(lot)
        columns = {name: np.broadcast_to(array, (*self.found.shape, self.distribution.classes))[index]
                   for name, array in self.found.classes.items()}  # fmt: skip
        count = self.distribution.classes
        return [{name: _number(column[i]) for name, column in columns.items()} for i in range(count)]

    def indicators(self, lot: int = 0) -> list[dict[str, Any]]:
        """The signs of cohesion: value, threshold, state (clear, borderline, flag) and source."""
        index = self.index(lot)
        result = []
        for sign in self.found.indicators:
            score = float(sign.score[index])
            state = "flag" if score >= 1 else "clear" if score <= -1 else "borderline"
            counts = "shown only" if not sign.counts else "can only raise" if sign.only_raises else "counts"
            result.append({"name": sign.name, "value": float(sign.value[index]), "unit": sign.unit,
                           "threshold": sign.threshold, "state": state, "score": score, "use": counts,
                           "source": sign.source})  # fmt: skip
        return result


def _joined(pieces: list[NDArray[Any]], shape: tuple[int, ...]) -> NDArray[Any]:
    return pieces[0] if not shape else np.concatenate([np.broadcast_to(p, (*p.shape[:1],)) for p in pieces])


def _end(ends: dict[str, NDArray[np.float64]], key: str, index: tuple[int, ...]) -> float | None:
    if key not in ends:
        return None
    return _number(ends[key][index])


def _number(value: Any) -> float | None:
    return float(value) if np.isfinite(value) else None


def _plain(value: Any) -> float | str | None:
    return str(value) if isinstance(value, str) else _number(value)


def _assumptions(material: Material, found: Findings) -> tuple[str, ...]:
    """Everything the documents didn't say and the prediction had to assume."""
    said = []
    if material.sphericity is None:
        said.append("sphericity 0.85 ± 0.14 (not given)")
    if material.particle_density.tolerance is None:
        said.append("particle density ± 10 % (no tolerance given)")
    if material.voidage_mf is None and material.loose_bulk_density is None:
        said.append("voidage at minimum fluidization by correlation (neither it nor the loose bulk density given)")
    return tuple(dict.fromkeys([*said, *found.assumptions]))
