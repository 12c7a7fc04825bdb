"""What the bed becomes when it is fed with this lot: steady state on the sheet, a table over time on request.

By the report's classes, with the elutriation constants and the cyclones' catch of the lot as received held.
"""

import numpy as np

from psdflow.carryover.balance import BedBalance, over_time, steady_state
from psdflow.case import Array, Case
from psdflow.distribution import SizeDistribution, class_means
from psdflow.results import Findings

STEADY = "bed_d32_steady carryover_rate_steady loss_rate_steady overflow_rate_steady make_up_rate fines_gone_time"
METHOD = "class balance"
FINES = 45e-6  # m
GONE = 0.05  # share of the first charge's fines that counts as gone
LONGEST = 3.15e8  # s, ten years: beyond that fines count as staying


def bed_balance(case: Case, found: Findings, constant: Array, returned: Array) -> BedBalance | None:
    """The balance of this case, None without feed or bed mass; ``constant`` (K*∞) and ``returned`` by class."""
    bed, feed = case.duty.bed, case.duty.feed
    mass = found.get("bed_mass")
    if bed is None or feed is None or mass is None:
        return None
    area = np.pi / 4 * bed.diameter.value**2
    shares = np.broadcast_to(case.report.shares, (*case.shape, case.report.classes))
    worn = case.duty.attrition.value if case.duty.attrition else 0.0
    rate = np.broadcast_to(feed.rate.value, case.shape)
    return BedBalance(np.asarray(rate), shares, np.asarray(mass), constant * area * (1 - returned), worn)


def balance_stage(case: Case, found: Findings, constant: Array, returned: Array, penetration: Array) -> None:
    """Steady bed, its carryover and loss, make-up, and how long the first charge's fines stay."""
    balance = bed_balance(case, found, constant, returned)
    found.balance = balance
    if balance is None:
        found.miss(STEADY, "the duty gives no feed, or no settled_height of the bed")
        return
    if case.duty.attrition is None:
        found.assumptions.append("no attrition in the bed's balance (attrition not given)")
    area = np.pi / 4 * (case.duty.bed.diameter.value if case.duty.bed else 0.0) ** 2
    bed, overflow = steady_state(balance)
    note = "fed with this lot at constant bed mass; rates of the lot as received held"
    inverse = class_means(case.report.edges, -1, "log-uniform")
    with np.errstate(divide="ignore", invalid="ignore"):
        sauter = 1 / (bed * inverse).sum(axis=-1)
    carried = constant * area * bed
    found.put("bed_d32_steady", sauter, "m", METHOD, note=note)
    found.put("carryover_rate_steady", carried.sum(axis=-1), "kg/s", METHOD, note=note)
    if case.duty.cyclones:
        found.put("loss_rate_steady", (carried * penetration).sum(axis=-1), "kg/s", METHOD, note=note)
    else:
        found.miss("loss_rate_steady", "the duty names no cyclones, so all that is carried over leaves")
    found.put("overflow_rate_steady", overflow, "kg/s", METHOD, note=note)
    first = (balance.loss_constant * balance.feed_share).sum(axis=-1)
    held = np.isfinite(overflow)
    make_up = np.where(held, 0.0, np.maximum(first - balance.feed_rate, 0.0))
    found.put("make_up_rate", make_up, "kg/s", METHOD, note="besides the feed, to hold the bed at first")
    found.warn(
        ~held,
        "the bed can't be held: more is carried away for good than the {feed:.0f} kg/h fed",
        feed=balance.feed_rate * 3600,
    )
    note = "95 % of the first fines below 45 µm, at the steady overflow"
    found.put("fines_gone_time", _fines_gone(case, balance, overflow), "s", METHOD, note=note)


def _fines_gone(case: Case, balance: BedBalance, overflow: Array) -> Array:
    """Time (s) until 95 % of the first charge's fines have left, at the steady overflow; NaN if it had none or they stay.

    Each class of the first charge decays with its own rate: ``exp(-(Q + loss_i) t / M)``; found by bisection.
    """
    fine = case.report.edges[..., 1:] <= FINES * (1 + 1e-9)
    weight = np.where(fine, balance.feed_share, 0.0)
    start = weight.sum(axis=-1)
    rate = (np.nan_to_num(overflow)[..., None] + balance.loss_constant) / balance.bed_mass[..., None]
    low, high = np.zeros(start.shape), np.full(start.shape, LONGEST)

    def left(time: Array) -> Array:
        return np.asarray((weight * np.exp(-rate * time[..., None])).sum(axis=-1))

    for _ in range(50):
        middle = (low + high) / 2
        more = left(middle) > GONE * start
        low, high = np.where(more, middle, low), np.where(more, high, middle)
    return np.where((start > 0) & (left(np.full(start.shape, LONGEST)) <= GONE * start), high, np.nan)


def time_table(report: SizeDistribution, balance: BedBalance, times: Array) -> dict[str, Array]:
    """Bed d32 (m), fines below 45 µm, overflow and loss (kg/s, means since the last time) and closure error by time.

    Arrays over the leading axes, then times. ``closure`` is the largest class error of the mass balance over the bed
    mass.
    """
    history = over_time(balance, balance.feed_share, times)
    mass = history.bed.sum(axis=-1)
    shares = history.bed / mass[..., None]
    inverse = class_means(report.edges, -1, "log-uniform")
    first = (balance.feed_share * balance.bed_mass[..., None])[..., None, :]
    error = np.abs(first + history.fed - history.bed - history.overflow - history.lost).max(axis=-1)
    moved = np.maximum(mass, history.fed.sum(axis=-1))
    middle = np.sqrt(report.edges[..., :-1] * report.edges[..., 1:])
    return {
        "time": times,
        "bed_d32": 1 / (shares * inverse[..., None, :]).sum(axis=-1),
        "below_45um": (shares * (middle < FINES)[..., None, :]).sum(axis=-1),
        "bed_mass": mass,
        "overflow_rate": _means(history.overflow.sum(axis=-1), times),
        "loss_rate": _means(history.lost.sum(axis=-1), times),
        "closure": error / moved,
    }


def _means(total: Array, times: Array) -> Array:
    before = np.concatenate([np.zeros((*total.shape[:-1], 1)), total[..., :-1]], axis=-1)
    return (total - before) / np.diff(np.concatenate([[0.0], times]))
