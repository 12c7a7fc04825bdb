"""The operating window: one lot over a range of velocity, temperature or pressure.

Every point is a full assessment of the duty at that value; nothing is extrapolated from one to the next. The
superficial velocity stays as given at bed conditions when temperature or pressure is swept.
"""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal, NamedTuple

import numpy as np
from numpy.typing import NDArray

from psdflow.assessment import Assessment
from psdflow.carryover.cyclone import HIGHEST_INLET_VELOCITY
from psdflow.distribution import SizeDistribution
from psdflow.duty import Duty
from psdflow.errors import InputError
from psdflow.material import Material
from psdflow.pipeline import assess
from psdflow.uncertainty import DEFAULT_SEED
from psdflow.units import read_quantity

Over = Literal["velocity", "temperature", "pressure"]

MARGIN = 1.2  # over u_cf, for the lowest velocity: common practice, no source
MOST_POINTS = 200
_BISECTIONS = 22
_DRAWS_AT_ENDS = 400


class Point(NamedTuple):
    """One value of the sweep, SI units; None where the duty lacks what it needs."""

    value: float
    regime: str
    velocity_ratio: float
    d_star: float
    u_star: float
    height: float | None
    carryover_rate: float | None
    loss_rate: float | None
    outside: tuple[str, ...]


class Window(NamedTuple):
    """Lowest and highest operating velocity (m/s) with 95 % intervals, and the answer in words.

    ``highest`` is infinite where nothing limits it inside the sweep, NaN without a limit.
    """

    lowest: float
    lowest_interval: tuple[float, float]
    highest: float
    highest_safe: float
    words: str


@dataclass(frozen=True)
class Sweep:
    """Points of a sweep, and the operating window if the velocity was swept."""

    over: Over
    points: tuple[Point, ...]
    window: Window | None
    lot: str


def sweep(
    distribution: SizeDistribution,
    material: Material,
    duty: Duty,
    *,
    over: Over,
    start: float,
    stop: float,
    points: int = 25,
    margin: float = MARGIN,
    loss_limit: float | None = None,
    lot: str = "lot 1",
    seed: int = DEFAULT_SEED,
) -> Sweep:
    """Assess one lot at ``points`` values from ``start`` to ``stop`` (m/s, K or Pa), evenly in their logarithm.

    Parameters
    ----------
    margin
        Lowest velocity over the velocity at which the coarse end moves.
    loss_limit
        kg/s: the most that may be lost past the cyclones, or carried over where there are none.

    Raises
    ------
    InputError
        A range that is empty, not positive or too finely divided, or a state the fluid can't have.
    """
    if not 0 < start < stop:
        raise InputError(f"the range to sweep must rise and be positive; found {start:g} to {stop:g} in SI units")
    if not 2 <= points <= MOST_POINTS:
        raise InputError(f"points: found {points}; expected 2 to {MOST_POINTS}")
    if not 1 <= margin <= 100:
        raise InputError(f"margin: found {margin:g}; expected 1 to 100")
    values = np.geomspace(start, stop, points)
    made = tuple(_point(value, assess(distribution, material, duty.at(over, value), draws=0)) for value in values)
    window = None
    if over == "velocity":
        window = _window(distribution, material, duty, values, made, margin, loss_limit, seed)
    return Sweep(over, made, window, lot)


def read_range(what: str, text: str) -> tuple[Over, tuple[float, float]]:
    """``velocity`` and ``"0.05:0.8 m/s"`` into the swept quantity and its SI range; a unit at the end serves both.

    Raises
    ------
    InputError
        Another quantity, or no range.
    """
    for over in ("velocity", "temperature", "pressure"):
        if what == over:
            ends = [end.strip() for end in text.split(":")]
            if len(ends) != 2 or not all(ends):
                raise InputError(f'--over {what}: found "{text}"; expected FROM:TO with a unit, like "0.05:0.8 m/s"')
            unit = ends[1].lstrip("+-0123456789.,eE ")
            first = ends[0] if ends[0].lstrip("+-0123456789.,eE ") else f"{ends[0]} {unit}"
            return over, (read_quantity(first, over).value, read_quantity(ends[1], over).value)
    raise InputError(f'--over: found "{what}"; expected velocity, temperature or pressure')


def _point(value: float, found: Assessment) -> Point:
    rows = {row.key: row for row in found.rows()}

    def number(key: str) -> float | None:
        row = rows.get(key)
        return None if row is None or row.value is None else float(row.value)

    shown = ("u_mf", "u_mb", "u_c", "u_se", "expanded_height", "carryover_flux", "tdh", "loss_rate")
    outside = tuple(key for key in shown if key in rows and rows[key].in_range is False)
    ratio = float(found["u_operating"]) / float(found["u_mf"])
    return Point(
        float(value), str(found["regime"]), ratio, float(found["d_star"]), float(found["u_star"]),
        number("expanded_height"), number("carryover_rate"), number("loss_rate"), outside,
    )  # fmt: skip


def _window(
    distribution: SizeDistribution,
    material: Material,
    duty: Duty,
    values: NDArray[np.float64],
    made: tuple[Point, ...],
    margin: float,
    limit: float | None,
    seed: int,
) -> Window:
    """Between the velocity that keeps the coarse end moving and the one at which the loss reaches the limit."""
    first = assess(distribution, material, duty.at("velocity", values[0]), draws=_DRAWS_AT_ENDS, seed=seed)
    lowest = margin * float(first["u_cf"])
    interval = (margin * float(first.low["u_cf"]), margin * float(first.high["u_cf"]))
    start = f"lowest velocity {lowest:.2g} m/s ({margin:g} x u_cf; {interval[0]:.2g} to {interval[1]:.2g})"
    if limit is None:
        return Window(lowest, interval, np.nan, np.nan, f"{start}; no loss limit given, so no highest")
    key = "loss_rate" if made[0].loss_rate is not None else "carryover_rate"
    if made[0].carryover_rate is None:
        return Window(lowest, interval, np.nan, np.nan, f"{start}; the loss can't be computed for this duty")

    def reaches(velocity: float, *, sure: bool) -> bool:
        """Whether the loss (or its upper 95 % end) is over the limit."""
        draws = _DRAWS_AT_ENDS if sure else 0
        found = assess(distribution, material, duty.at("velocity", velocity), draws=draws, seed=seed)
        return float(found.high[key] if sure else found[key]) > limit

    highest, safe = (_crossing(values, reaches, sure) for sure in (False, True))
    what = "loss" if key == "loss_rate" else "carryover"
    shown = f"{limit * 3600:.3g} kg/h"
    end_of_models = _cyclone_limit(first)
    if lowest < end_of_models < min(highest, float(values[-1])):
        words = (
            f"{start}; highest {end_of_models:.2g} m/s, where a cyclone's inlet passes {HIGHEST_INLET_VELOCITY:g} m/s and "
            f"its models stop holding; the {what} is under {shown} up to there"
        )
        return Window(lowest, interval, end_of_models, min(safe, end_of_models), words)
    if np.isinf(highest):
        words = f"{start}; the {what} stays under {shown} over the whole sweep"
        return Window(lowest, interval, highest, safe, words)
    end = f"highest {highest:.2g} m/s, where the {what} reaches {shown} (surely under it below {safe:.2g} m/s)"
    if highest > lowest:
        return Window(lowest, interval, highest, safe, f"{start}; {end}")
    words = f"there is no window: {start}, but {end}; {_in_the_way(distribution, material, duty, lowest)}"
    return Window(lowest, interval, highest, safe, words)


def _cyclone_limit(found: Assessment) -> float:
    """Operating velocity at which the first cyclone inlet reaches the highest usual velocity; infinite without cyclones."""
    inlets = [float(found[key]) for key in found.found.estimates if key.startswith("cyclone_inlet_velocity")]
    if not inlets:
        return np.inf
    return float(found["u_operating"]) * HIGHEST_INLET_VELOCITY / max(inlets)


def _crossing(values: NDArray[np.float64], reaches: Callable[..., bool], sure: bool) -> float:
    """The velocity at which ``reaches`` turns true, by bisection; infinite if it never does in the sweep, 0 if always."""
    low, high = float(values[0]), float(values[-1])
    if not reaches(high, sure=sure):
        return np.inf
    if reaches(low, sure=sure):
        return 0.0
    for _ in range(_BISECTIONS if not sure else _BISECTIONS // 2):
        middle = float(np.sqrt(low * high))
        if reaches(middle, sure=sure):
            high = middle
        else:
            low = middle
    return low


def _in_the_way(distribution: SizeDistribution, material: Material, duty: Duty, velocity: float) -> str:
    """Which fraction stops the window: what is lost most at the velocity that the coarse end needs."""
    found = assess(distribution, material, duty.at("velocity", velocity), draws=0)
    rows = found.classes()
    key = "loss_share" if rows[0].get("loss_share") is not None else "carryover_share"
    worst = max(rows, key=lambda row: row[key] or 0.0)
    share = (worst[key] or 0.0) * 100
    d_end = float(distribution.percentile(duty.coarse_end.value)) * 1e6
    low, high = (worst["lower"] or 0.0) * 1e6, (worst["upper"] or 0.0) * 1e6
    return (
        f"at the lowest velocity {share:.0f} % of it is the class {low:.0f} to {high:.0f} µm, while the coarse end "
        f"({d_end:.0f} µm) needs that velocity: take off either"
    )
