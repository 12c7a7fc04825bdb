"""The terminal page: verdict, then numbers with unit and interval, then warnings and cautions."""

from collections.abc import Sequence
from typing import NamedTuple

from rich.console import Console, Group, RenderableType
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

from psdflow.assessment import Assessment, Row
from psdflow.methods import catalogue
from psdflow.present.numerals import digits, figure, friendly, span_of
from psdflow.present.words import short_verdict, verdict

# What the page shows, by heading; everything else is on the sheet.
PAGE: dict[str, tuple[str, ...]] = {
    "Size": (
        "d32", "d50", "d10", "d90", "span", "below_10um", "below_20um", "below_45um", "pan_share", "respirable_share",
    ),
    "Fluid": ("fluid_density", "fluid_viscosity", "archimedes"),
    "Velocity": ("u_mf", "u_cf", "u_mb", "u_ms_slug", "u_c", "u_se", "u_tr", "u_t10", "u_t50", "u_t90"),
    "Bed": ("bed_pressure_drop", "voidage_mf", "expanded_height", "bubble_diameter"),
    "Cohesion": ("cohesion_probability", "hausner_ratio", "bond_number"),
    "Carryover": (
        "carryover_flux", "carryover_rate", "carryover_d50", "tdh", "elutriable_share", "elutriable_size",
        "cyclone_cut_size", "cyclone_efficiency", "cyclone_pressure_drop", "cyclone_inlet_velocity",
        "loss_rate", "loss_d50", "loss_concentration",
    ),
}  # fmt: skip
NAMES = {
    "d32": "Sauter mean d32", "d50": "median d50", "d10": "d10", "d90": "d90", "span": "span",
    "below_10um": "below 10 µm", "below_20um": "below 20 µm", "below_45um": "below 45 µm", "pan_share": "in the pan",
    "respirable_share": "respirable share", "fluid_density": "density", "fluid_viscosity": "viscosity",
    "archimedes": "Archimedes number", "u_mf": "minimum fluidization u_mf", "u_cf": "complete fluidization u_cf",
    "u_mb": "minimum bubbling u_mb", "u_ms_slug": "slugging from", "u_c": "turbulent from u_c",
    "u_se": "entrainment from u_se", "u_tr": "transport from u_tr", "u_t10": "terminal, d10 grain",
    "u_t50": "terminal, d50 grain", "u_t90": "terminal, d90 grain", "bed_pressure_drop": "pressure drop",
    "voidage_mf": "voidage at u_mf", "expanded_height": "expanded height", "bubble_diameter": "bubble diameter",
    "cohesion_probability": "probability of cohesion", "hausner_ratio": "Hausner ratio", "bond_number": "Bond number",
    "carryover_flux": "flux over the top", "carryover_rate": "rate over the top", "carryover_d50": "its median size",
    "tdh": "disengaging height", "elutriable_share": "share that can be carried",
    "elutriable_size": "up to grain size", "cyclone_cut_size": "cyclone cut size",
    "cyclone_efficiency": "cyclone efficiency", "cyclone_pressure_drop": "cyclone pressure drop",
    "cyclone_inlet_velocity": "cyclone inlet velocity", "loss_rate": "lost", "loss_d50": "median size lost",
    "loss_concentration": "dust in the outlet gas",
}  # fmt: skip


WIDE = 110  # columns from which methods and sources fit beside the numbers


class Subject(NamedTuple):
    """One lot of one assessment, with what the report said."""

    assessment: Assessment
    lot: int
    name: str
    source: str
    report_warnings: tuple[str, ...]


def page(subject: Subject, *, wide: bool = True) -> RenderableType:
    """The whole page of one lot; a narrow one leaves methods and sources to the sheet."""
    assessment, lot = subject.assessment, subject.lot
    return Group(
        _title(subject),
        *(Padding(Text(line), (0, 0, 0, 2)) for line in verdict(assessment, lot)),
        Padding(_numbers(assessment, lot, wide), (1, 0, 0, 2)),
        Padding(_signs(assessment, lot, wide), (1, 0, 0, 2)),
        *_lines("Watch", [*subject.report_warnings, *assessment.warnings(lot)], "yellow"),
        *_lines("Assumed", assessment.assumptions, ""),
        Text(""),
    )


def brief(subject: Subject) -> RenderableType:
    """Verdict and warnings of one lot, for a run over several."""
    assessment, lot = subject.assessment, subject.lot
    return Group(
        _title(subject),
        *(Padding(Text(line), (0, 0, 0, 2)) for line in verdict(assessment, lot)),
        *_lines("Watch", [*subject.report_warnings, *assessment.warnings(lot)], "yellow"),
    )


# Columns of the overview: sheet key and heading.
OVERVIEW = (
    ("group", "group"),
    ("d32", "d32"),
    ("below_45um", "<45 µm"),
    ("u_mf", "u_mf"),
    ("cohesion_probability", "cohesion"),
    ("loss_rate", "lost"),
)


def overview(subjects: Sequence[Subject]) -> RenderableType:
    """One line a lot."""
    table = Table(box=None, pad_edge=False, padding=(0, 2, 0, 0), header_style="bold")
    table.add_column("lot", overflow="fold")
    table.add_column("verdict", overflow="fold")
    shown = [(key, head) for key, head in OVERVIEW if any(_row(subject, key) for subject in subjects)]
    for key, head in shown:
        first = next(row for subject in subjects if (row := _row(subject, key)))
        unit = friendly(key, first.unit).unit
        table.add_column(f"{head}\n{unit}".rstrip(), justify="right", no_wrap=True)
    for subject in subjects:
        cells = [_cell(_row(subject, key)) for key, _ in shown]
        table.add_row(Text(subject.name), Text(short_verdict(subject.assessment, subject.lot)), *cells)
    return table


def _cell(row: Row | None) -> str:
    if row is None or row.value is None:
        return "–"
    if isinstance(row.value, str):
        return row.value
    unit = friendly(row.key, row.unit)
    return figure(row.value * unit.factor, unit.unit, 2)


def foot(assessment: Assessment) -> RenderableType:
    """The cautions, and what the intervals mean."""
    doubt = (
        f"Intervals: 95 %, {assessment.draws} draws (seed {assessment.seed}) over report, powder and methods."
        if assessment.draws
        else "No intervals: run without draws."
    )
    return Group(*_lines("Cautions", assessment.cautions, "bold"), Text(""), Text(doubt, style="dim"))


def write(console: Console, subjects: Sequence[Subject], *, full: bool) -> None:
    """Print everything: one lot as a page, several as an overview with verdicts (pages if ``full``)."""
    if len(subjects) == 1 or full:
        for subject in subjects:
            console.print(page(subject, wide=console.width >= WIDE))
    else:
        console.print(overview(subjects))
        console.print()
        for subject in subjects:
            console.print(brief(subject))
        console.print()
    console.print(foot(subjects[0].assessment))


def _row(subject: Subject, key: str) -> Row | None:
    return subject.assessment.row(key, subject.lot) if key in subject.assessment else None


def _title(subject: Subject) -> Text:
    assessment = subject.assessment
    return Text.assemble(
        (subject.name, "bold underline"),
        ("  " + " · ".join([assessment.material.name, assessment.duty.name, subject.source]), "dim"),
    )


def _plain_table(heads: Sequence[str], right: Sequence[str] = ()) -> Table:
    table = Table(box=None, pad_edge=False, padding=(0, 2, 0, 0), header_style="dim")
    for head in heads:
        table.add_column(head, justify="right" if head in right else "left", no_wrap=head in ("", *right))
    return table


def _numbers(assessment: Assessment, lot: int, wide: bool) -> Table:
    heads = ["", "quantity", "value", "95 % interval", "unit", *(["method"] if wide else [])]
    table = _plain_table(heads, ("value", "95 % interval"))
    for heading, keys in PAGE.items():
        shown = heading
        for key in keys:
            row = assessment.row(key, lot) if key in assessment else None
            if row is None or row.value is None or isinstance(row.value, str):
                continue
            unit = friendly(key, row.unit)
            entry = catalogue().get(row.method)
            method = entry.name if entry else row.method
            outside = "" if row.in_range else "outside its range"
            last = [f"{method}, {outside}" if outside else method] if wide else []
            span = span_of(row.low, row.high, unit)
            name = NAMES.get(key, key) + (f" ({outside})" if outside and not wide else "")
            table.add_row(shown, name, figure(row.value * unit.factor, unit.unit), span, unit.unit, *last)
            shown = ""
    return table


def _signs(assessment: Assessment, lot: int, wide: bool) -> RenderableType:
    signs = assessment.indicators(lot)
    if not signs:
        return Text("")
    table = _plain_table(
        ["sign of cohesion", "value", "threshold", "state", *(["use", "source"] if wide else [])], ("value",)
    )
    for sign in signs:
        value = f"{digits(sign['value'])} {sign['unit']}".strip()
        state = sign["state"] if sign["use"] != "shown only" or wide else f"{sign['state']} (not counted)"
        table.add_row(sign["name"], value, sign["threshold"], state, *([sign["use"], sign["source"]] if wide else []))
    return table


def _lines(heading: str, lines: Sequence[str], style: str) -> list[RenderableType]:
    if not lines:
        return []
    body = [Padding(Text("- " + line), (0, 0, 0, 4)) for line in lines]
    return [Padding(Text(heading, style=style), (1, 0, 0, 2)), *body]
