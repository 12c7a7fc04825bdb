"""A sieve sample -> classes: what a sieve retained lies between it and the next coarser one; the pan below all."""

import numpy as np

from psdflow.errors import InputError
from psdflow.reports.apertures import nominal
from psdflow.reports.classes import Classes, from_middles, in_class
from psdflow.reports.cumulative import cumulative
from psdflow.reports.quantities import TOTAL_REFUSE, TOTAL_WARN, Quantity
from psdflow.reports.report import Options
from psdflow.reports.samples import Sample


def sieve_classes(sample: Sample, options: Options, charge: float | None) -> tuple[Classes, Quantity]:
    """Classes of a sieve sample from its best column, compared with the others.

    Parameters
    ----------
    charge
        Mass weighed in, in the unit of the mass column, if the report states it.

    Raises
    ------
    InputError
        If the columns contradict each other, masses don't add up to the charge or to the stated total.
    """
    best = next(role for role in ("mass", "share", "over", "under") if role in sample.quantities)
    quantity = sample.quantities[best]
    edge = sample.sizes.edge if sample.sizes.edge in ("upper", "mid") and best in ("mass", "share") else "lower"
    classes = _one(sample, quantity, edge, charge)
    if best == "mass":
        classes.warnings += _loss(quantity, classes.total, options, charge)
    if best in ("mass", "share"):
        classes.warnings += stated_total(sample, quantity, classes.total)
        if not sample.sizes.has_pan and edge == "lower":
            finest = sample.sizes.cells[0].low or classes.edges[0]
            classes.warnings.append(f"no pan row: nothing is said about what passed {finest * 1e6:g} µm; taken as none")
    for role, other in sample.quantities.items():
        if role not in (best, "gross", "tare"):
            compare(classes, _one(sample, other, edge, charge), quantity, other)
    strange = [f"{size * 1e6:.4g}" for size in classes.edges if edge != "mid" and nominal(size) is None]
    if strange:
        classes.warnings.append(
            f"{', '.join(strange[:8])} µm: no nominal aperture of ISO 565 or ASTM E11 within 2.5 %; kept as given"
        )
    return classes, quantity


def _one(sample: Sample, quantity: Quantity, edge: str, charge: float | None) -> Classes:
    if quantity.role in ("under", "over"):
        return cumulative(sample.sizes, quantity, charge)
    if edge == "mid":
        return from_middles(sample.sizes, quantity)
    return in_class(sample.sizes, quantity, edge)


def _loss(quantity: Quantity, total: float, options: Options, charge: float | None) -> list[str]:
    """Mass weighed in against the sum of the fractions; limits are the practice of the trade, settable."""
    if charge is None:
        return []
    if not charge > 0:
        raise InputError(f"{quantity.table.grid.name}: the charge weighed in is {charge:g}; a mass over 0 is expected")
    loss = 1 - total / charge
    words = "lost" if loss > 0 else "gained"
    if abs(loss) > options.loss_refuse:
        raise InputError(
            f"{quantity.table.grid.name}: {charge:g} weighed in, {total:g} found on sieves and pan: {abs(loss):.2%} {words}; "
            f"at most {options.loss_refuse:.1%} is accepted. Check the masses, or repeat the sieving"
        )
    if abs(loss) > options.loss_warn:
        return [f"{charge:g} weighed in, {total:g} found: {abs(loss):.2%} {words}; shares are of what was found"]
    return []


def stated_total(sample: Sample, quantity: Quantity, total: float) -> list[str]:
    """Warnings, or a refusal, from a total row under the table that differs from the sum."""
    from psdflow.reports.numerals import numeral

    for row, kind in sample.sizes.footers:
        if kind not in ("total", "unlabelled"):
            continue
        cell = sample.sizes.table.rows[row][quantity.column]
        number = numeral(cell, ",") if isinstance(cell, str) and "," in cell and "." not in cell else numeral(cell, ".")
        if number is None or total <= 0:
            continue
        where = sample.sizes.table.where(row, quantity.column)
        off = abs(number.value / total - 1)
        if off > (TOTAL_REFUSE if kind == "total" and quantity.role == "share" else 0.02):
            raise InputError(
                f"{where}: the total is given as {number.value:g} but the rows add up to {total:g}; a row is wrong or missing. Correct the row or the total"
            )
        if off > TOTAL_WARN:
            return [f"{where.split(', ', 1)[-1]}: the total is given as {number.value:g}, the rows add up to {total:g}"]
    return []


def compare(one: Classes, other: Classes, first: Quantity, second: Quantity) -> None:
    """Two columns of one sample must give the same cumulative curve within rounding.

    Raises
    ------
    InputError
        If they are more than 2 % of the whole apart anywhere; a smaller difference over 0.5 % is a warning.
    """
    shared = np.isin(one.edges, other.edges)
    at = np.searchsorted(other.edges, one.edges[shared])
    fine = np.cumsum(one.all)[:-1][shared]
    fine_other = np.cumsum(other.all)[:-1][at]
    apart = float(np.max(np.abs(fine - fine_other), initial=0.0))
    if apart > 0.02:
        k = int(np.argmax(np.abs(fine - fine_other)))
        raise InputError(
            f"{first.table.grid.name}: {first.table.column_name(first.column)} and {second.table.column_name(second.column)} contradict each other at "
            f"{one.edges[shared][k] * 1e6:.4g} µm: {fine[k]:.2%} against {fine_other[k]:.2%} finer. Correct one, or choose with --columns"
        )
    if apart > TOTAL_WARN:
        one.warnings.append(
            f"{first.table.column_name(first.column)} and {second.table.column_name(second.column)} differ by up to {apart:.2%} of the whole"
        )
