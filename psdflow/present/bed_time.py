"""The fed bed over time as a table, and the answers of ``psdflow solve`` in words."""

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
from rich.console import Console
from rich.table import Table
from rich.text import Text

from psdflow.errors import InputError
from psdflow.present.numerals import digits
from psdflow.present.text import Subject
from psdflow.units import read_quantity

if TYPE_CHECKING:
    from psdflow.reports import Report

HEADS = ("after", "bed d32\nµm", "<45 µm\n%", "bed\nkg", "overflow\nkg/h", "lost for good\nkg/h", "balance error")


def print_over_time(subjects: Sequence[Subject], times: str) -> None:
    """Bed of each lot after each of ``times`` ("1 h, 1 d"), fed with the lot it was filled with."""
    from psdflow.carryover.balance_stage import time_table

    names = [part.strip() for part in times.split(",") if part.strip()]
    seconds = np.array([read_quantity(name, "time").value for name in names])
    if not names or np.any(seconds <= 0) or np.any(np.diff(seconds) <= 0):
        raise InputError(f'--over-time: found "{times}"; expected rising times with units, like "1 h, 1 d, 4 week"')
    console = Console(highlight=False)
    for subject in subjects:
        found = subject.assessment.found
        console.print(Text(f"{subject.name} over time, fed with the same lot", style="bold"))
        if found.balance is None:
            console.print("  not computed: the duty needs a feed and a bed with a settled_height")
            continue
        rows = time_table(subject.assessment.distribution, found.balance, seconds)
        table = Table(box=None, pad_edge=False, padding=(0, 2, 0, 2), header_style="dim")
        for head in HEADS:
            table.add_column(head, justify="right")
        columns = [
            [digits(value * factor) for value in rows[key]]
            for key, factor in (("bed_d32", 1e6), ("below_45um", 100), ("bed_mass", 1), ("overflow_rate", 3600),
                                ("loss_rate", 3600))
        ]  # fmt: skip
        closure = [f"{value:.0e}" for value in rows["closure"]]
        for row in zip(names, *columns, closure, strict=True):
            table.add_row(*row)
        console.print(table)


def fines_answer(report: "Report", material: Path, duty: Path, limit: str, *_: str) -> str:
    """The largest share below 45 µm that keeps the loss under the limit."""
    from psdflow.carryover.inverse import largest_fines_share
    from psdflow.distribution import SizeDistribution
    from psdflow.duty import Duty
    from psdflow.material import Material
    from psdflow.pipeline import assess

    powder, unit = Material.load(material), Duty.load(duty)
    key = "loss_rate" if unit.cyclones else "carryover_rate"

    def loss(distribution: SizeDistribution) -> float:
        found = assess(distribution, powder, unit, draws=0)
        if key not in found:
            raise InputError(f"the loss can't be computed: {found.found.absent[key]}")
        return float(found[key])

    most = largest_fines_share(report.distribution, loss, limit=read_quantity(limit, "mass rate").value)
    now = float(report.distribution.undersize(45e-6)) * 100
    what = key.split("_")[0]
    if np.isnan(most):
        return f"even without fines below 45 µm the {what} is over {limit}"
    return f"the {what} stays under {limit} up to {most * 100:.3g} % below 45 µm; this lot has {now:.3g} %"


def cyclone_answer(report: "Report", material: Path, duty: Path, cut: str, drop: str, design: str) -> str:
    """The fewest cyclones of a design that reach the cut size within the allowed drop."""
    from psdflow.carryover.inverse import cyclone_for_cut
    from psdflow.case import Case
    from psdflow.duty import Duty
    from psdflow.material import Material

    case = Case(report.distribution, Material.load(material), Duty.load(duty))
    if case.duty.bed is None or case.fluid.phase == "liquid":
        raise InputError("cyclones need a gas and a bed with a diameter")
    found = cyclone_for_cut(
        design=design,
        flow=float(case.gas_flow),
        cut_size=read_quantity(cut, "length").value,
        pressure_drop=read_quantity(drop, "pressure").value,
        particle_density=float(case.particle_density),
        fluid_density=float(case.fluid_density),
        fluid_viscosity=float(case.fluid_viscosity),
    )
    if found is None:
        return f"no number of {design} cyclones up to 64 reaches {cut} within {drop}"
    return (
        f"{found.number} x {design}, body {found.body_diameter:.3g} m: cut {found.cut_size * 1e6:.3g} µm at {drop}, inlet "
        f"{found.inlet_velocity:.3g} m/s"
    )
