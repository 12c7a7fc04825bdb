"""A sieve report and a laser report of its fines -> one report."""

from dataclasses import replace
from typing import Literal

import numpy as np

from psdflow.errors import InputError
from psdflow.reports.report import Report
from psdflow.sizes.merge import merge_overlapping, merge_passing

FinesOf = Literal["passing", "all"]
CLEARLY_PASSING, CLEARLY_ALL = 0.10, 0.30  # laser volume coarser than the finest sieve


def merged_report(
    sieve: Report,
    laser: Report,
    *,
    fines_of: FinesOf | None = None,
    cut: float | None = None,
    shape_factor: float | None = None,
) -> Report:
    """One report of sieve sizes: laser below the join, sieves above.

    Parameters
    ----------
    fines_of
        What the laser measured: what is "passing" a sieve, or "all" of the sample; else told from how much it found
        coarser than the finest sieve.
    cut
        The sieve (m) whose passing the laser measured; the finest if not given.
    shape_factor
        Laser size over sieve size; fitted where the laser measured all, else 1 if not given.

    Raises
    ------
    InputError
        If the reports are no such pair, or can't be of one sample.
    """
    if sieve.kind != "sieve" or laser.kind != "laser":
        raise InputError(
            f"{sieve.source} is a {sieve.kind} report and {laser.source} a {laser.kind} report; a sieve report and, "
            "behind --fines, a laser report are expected"
        )
    coarse, fine = sieve.distribution, laser.distribution
    finest = float(sieve.edges[0])
    way = "passing" if cut is not None else fines_of
    if way is None:
        beyond = 1 - float(fine.undersize(finest))
        if CLEARLY_PASSING < beyond < CLEARLY_ALL:
            raise InputError(
                f"{laser.source}: {beyond:.0%} is coarser than the finest sieve of {finest * 1e6:g} µm: nothing tells whether the "
                "laser measured what passed it or the whole sample; say --fines-of passing or --fines-of all"
            )
        way = "passing" if beyond <= CLEARLY_PASSING else "all"
    try:
        if way == "passing":
            made = merge_passing(coarse, fine, cut=cut or finest, shape_factor=shape_factor or 1.0)
        else:
            made = merge_overlapping(coarse, fine, shape_factor=shape_factor)
    except InputError as error:
        raise InputError(f"{sieve.source} with {laser.source}: {error}") from None
    assumed = (
        ["laser size over sieve size was taken as 1; it is 1.0 for beads, 1.1 for rounded and to 1.4 for flaky grains: "
         "say --shape-factor"]
        if way == "passing" and shape_factor is None
        else []
    )  # fmt: skip
    return replace(
        sieve,
        source=f"{sieve.source} + {laser.source}",
        sha256=f"{sieve.sha256} + {laser.sha256}",
        edges=made.edges,
        shares=np.diff(made.under),
        below=float(made.under[0]),
        above=float(1 - made.under[-1]),
        fields={**{f"{k} (laser)": v for k, v in laser.fields.items()}, **sieve.fields},
        understood={
            **sieve.understood,
            "fines": f"{laser.source}, below {made.join * 1e6:g} µm, laser size over sieve size {made.shape_factor:.2f}",
        },
        warnings=tuple(dict.fromkeys([*sieve.warnings, *laser.warnings, *made.warnings, *assumed])),
        repeats=None,
        sieved_from=made.join,
        reconstructed=laser.reconstructed,
    )
