"""What the bed becomes: feed, overflow, carryover with return, attrition, class by class over time.

Over each step the rates per class are constant, so every class is integrated exactly and what left is split
exactly between overflow and carryover: the mass balance of each class closes to rounding at every step, whatever
the step. The overflow is the one that keeps the bed mass; if more is carried away than is fed, there is none and
the bed shrinks. Last axis = classes; leading axes (lots, draws) are free.
"""

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]

_HALVINGS = 48  # 1e-14 of the bracket


class BedBalance(NamedTuple):
    """The case: feed and bed in kg/s and kg, rates in 1/s, shares by class.

    ``loss_constant`` is K* x bed area x (1 - share returned to the bed), kg/s for a bed of that class alone.
    ``attrition`` (1/s) is what the classes above ``attrition_above`` (index) lose to the finest class.
    """

    feed_rate: Array
    feed_share: Array
    bed_mass: Array
    loss_constant: Array
    attrition: float = 0.0


class History(NamedTuple):
    """Bed, and what had left, at each time: leading axes first, then times, then classes (kg)."""

    time: Array
    bed: Array
    overflow: Array
    lost: Array
    first_charge: Array
    fed: Array


def steady_state(case: BedBalance) -> tuple[Array, Array]:
    """Bed shares and overflow (kg/s) at steady state, by one root in the overflow.

    ``x_i = (F x_F,i + attrition) / (Q + loss_i + wear_i)`` with Q so that the shares sum to 1. Where even no
    overflow leaves too little (the bed can't be held), shares and overflow are NaN.
    Source: the well-mixed bed of Kunii & Levenspiel 1991, ch. 14 (looked up).
    """
    feed = np.asarray(case.feed_rate, float)[..., None]
    low, high = np.zeros(np.shape(case.feed_rate)), np.array(case.feed_rate, float)

    def shares(overflow: Array) -> Array:
        leaves = overflow[..., None] + case.loss_constant
        wear = np.where(np.arange(case.feed_share.shape[-1]) > 0, case.attrition * case.bed_mass[..., None], 0.0)
        source = feed * case.feed_share
        coarse = source / np.maximum(leaves + wear, 1e-300)
        gained = (coarse * wear)[..., 1:].sum(axis=-1)
        finest = (source[..., 0] + gained) / np.maximum(leaves[..., 0], 1e-300)
        return np.concatenate([finest[..., None], coarse[..., 1:]], axis=-1)

    holds = shares(low + 1e-12 * high).sum(axis=-1) >= 1
    for _ in range(_HALVINGS):
        middle = (low + high) / 2
        more = shares(middle).sum(axis=-1) > 1
        low, high = np.where(more, middle, low), np.where(more, high, middle)
    overflow = (low + high) / 2
    x = shares(overflow)
    x = x / x.sum(axis=-1, keepdims=True)
    return np.where(holds[..., None], x, np.nan), np.where(holds, overflow, np.nan)


def over_time(case: BedBalance, first_share: ArrayLike, times: ArrayLike, *, steps_between: int = 40) -> History:
    """The bed from a first charge of ``first_share`` at t = 0 to each of ``times`` (s, ascending, above 0).

    Returns the bed, the overflow so far, what was lost so far, what is left of the first charge, and what was fed
    so far, by class at each time. Refine with ``steps_between``; the balance closes whatever it is.
    """
    wanted = np.asarray(times, float)
    shape = np.broadcast_shapes(np.shape(first_share), np.shape(case.feed_share), np.shape(case.loss_constant))
    bed = np.broadcast_to(np.asarray(first_share, float), shape) * np.asarray(case.bed_mass)[..., None]
    first = bed.copy()
    overflow, lost, fed = np.zeros(shape), np.zeros(shape), np.zeros(shape)
    records: list[tuple[Array, ...]] = []
    now = 0.0
    for until in wanted:
        start = max(now, until / 1e4)
        steps = np.unique(np.concatenate([[until], np.geomspace(start, until, steps_between)]))
        for moment in steps[steps > now]:
            bed, left, gone, kept, added = _step(case, bed, float(moment) - now)
            overflow, lost, fed, first = overflow + left, lost + gone, fed + added, first * kept
            now = float(moment)
        records.append((bed, overflow, lost, first, fed))
    stacked = [np.stack([record[k] for record in records], axis=-2) for k in range(5)]
    return History(wanted, *stacked)


def _step(case: BedBalance, bed: Array, step: float) -> tuple[Array, Array, Array, Array, Array]:
    """One step: new bed, overflow, loss, share of each class that stayed, and feed with what attrition moved."""
    mass = bed.sum(axis=-1)
    rate = case.loss_constant / np.maximum(mass, 1e-12)[..., None]
    wear = np.where(np.arange(bed.shape[-1]) > 0, case.attrition, 0.0)
    added = np.asarray(case.feed_rate, float)[..., None] * case.feed_share * step + np.zeros_like(bed)

    def after(overflow_rate: Array) -> tuple[Array, Array, Array]:
        """Bed after the step, what attrition moved (into the finest class), and the share of each class that stayed."""
        total = (rate + wear + overflow_rate[..., None]) * step
        stay = np.exp(-total)
        mean = np.where(total > 1e-9, -np.expm1(-total) / np.maximum(total, 1e-300), 1 - total / 2)
        coarse = bed * stay + added * mean
        worn = (bed + added - coarse) * wear * step / np.maximum(total, 1e-300)
        moved = -worn
        moved[..., 0] += worn.sum(axis=-1)
        return coarse + np.maximum(moved, 0.0) * mean, moved, stay

    # The overflow rate that returns the bed to its mass; none while the bed is short of it.
    low, high = np.zeros(mass.shape), np.full(mass.shape, 1e-9 / step)
    while np.any(over := after(high)[0].sum(axis=-1) > case.bed_mass):
        high = np.where(over, high * 8, high)
    for _ in range(_HALVINGS):
        middle = (low + high) / 2
        over = after(middle)[0].sum(axis=-1) > case.bed_mass
        low, high = np.where(over, middle, low), np.where(over, high, middle)
    overflow_rate = np.where(after(np.zeros(mass.shape))[0].sum(axis=-1) > case.bed_mass, high, 0.0)
    kept, moved, stay = after(overflow_rate)
    # What left by overflow and by loss is in the ratio of their rates, both being in proportion to the class.
    gone = bed + added + moved - kept
    leaves = rate + overflow_rate[..., None]
    left = gone * overflow_rate[..., None] / np.maximum(leaves, 1e-300)
    return kept, left, np.where(leaves > 0, gone - left, 0.0), stay, added + moved


def batch(*, charge: ArrayLike, loss_constant: ArrayLike, time: float) -> tuple[Array, float]:
    """Masses (kg) left of a batch without feed after ``time`` (s), and the bed-mass time tau (s/kg): exact.

    ``M_i = M_i0 exp(-k_i τ)`` with ``t(τ) = Σ M_i0 (1 - exp(-k_i τ))/k_i`` inverted by bisection; ``loss_constant``
    k_i = K*_i A in kg/s. One lot, last axis = classes. Own derivation from ``dM_i/dt = -k_i M_i/M``.
    """
    m, k = np.asarray(charge, float), np.asarray(loss_constant, float)

    def elapsed(tau: float) -> float:
        return float(np.sum(np.where(k > 0, -m * np.expm1(-k * tau) / np.where(k > 0, k, 1.0), m * tau)))

    high = time / m.sum()
    while elapsed(high) < time and high < 1e12:
        high *= 2
    low = 0.0
    for _ in range(200):
        middle = (low + high) / 2
        low, high = (middle, high) if elapsed(middle) < time else (low, middle)
    return np.asarray(m * np.exp(-k * high)), high
