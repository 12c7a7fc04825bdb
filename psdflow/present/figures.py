"""Figures of one lot: the distribution and the velocity ladder. Each takes an assessment and returns a Figure.

Readable in grey: nothing is told by colour alone; lines carry their names instead of a legend.
"""

from pathlib import Path
from typing import TYPE_CHECKING, Any

import matplotlib as mpl
import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.patheffects import withStroke
from matplotlib.ticker import FuncFormatter, LogLocator, NullFormatter

from psdflow.assessment import Assessment
from psdflow.errors import InputError
from psdflow.present.numerals import SWEPT, digits
from psdflow.present.sheet import replacing

if TYPE_CHECKING:
    from psdflow.sweep import Sweep

INK, SOFT, PALE, ACCENT = "#1d2733", "#6b7785", "#d4dae1", "#a8480f"
STYLE: Any = {
    "font.size": 9,
    "axes.edgecolor": SOFT,
    "axes.labelcolor": INK,
    "text.color": INK,
    "xtick.color": INK,
    "ytick.color": INK,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "svg.hashsalt": "psdflow",
    "hatch.linewidth": 0.6,
}


def _plain_log(axes: Axes, steps: tuple[float, ...] = (1,)) -> None:
    """Log axis labelled 0.1, 1, 10 (times ``steps``) rather than in powers."""
    axes.set_xscale("log")
    axes.xaxis.set_major_locator(LogLocator(subs=steps))
    axes.xaxis.set_major_formatter(FuncFormatter(lambda value, _: digits(value)))
    axes.xaxis.set_minor_formatter(NullFormatter())


def distribution_figure(assessment: Assessment, lot: int = 0) -> Figure:
    """Density per ln(size) as steps, cumulative curve above it; open ends hatched, their bounds assumed."""
    with mpl.rc_context(STYLE):
        report = assessment.distribution.lot(lot) if assessment.found.shape else assessment.distribution
        edges = report.edges * 1e6
        cumulative = report.cumulative * 100
        density = report.shares / np.diff(np.log(edges))
        figure = Figure(figsize=(6.4, 4.8), layout="constrained")
        upper, lower = figure.subplots(2, 1, sharex=True, height_ratios=(3, 2))
        measured = slice(1 if report.lower_open else 0, -1 if report.upper_open else None)
        upper.plot(edges[measured], cumulative[measured], color=INK, marker="o", markersize=3.5, linewidth=1.4)
        upper.plot(edges, cumulative, color=INK, linewidth=1.0, linestyle=(0, (2, 2)))
        upper.set_ylabel("finer than, % by volume")
        upper.set_ylim(0, 103)
        for fraction in (0.1, 0.5, 0.9):
            size = float(report.percentile(fraction)) * 1e6
            upper.plot([size, size], [0, fraction * 100], color=SOFT, linewidth=0.8)
            upper.annotate(f"d{fraction * 100:.0f} {digits(size)} µm", (size, fraction * 100), xytext=(5, -10),
                           textcoords="offset points", color=INK, fontsize=8)  # fmt: skip
        mean = float(assessment["d32"][assessment.index(lot)]) * 1e6
        lower.stairs(density, edges, fill=True, color=PALE)
        lower.stairs(density, edges, color=INK, linewidth=1.0)
        for is_open, k in ((report.lower_open, 0), (report.upper_open, -1)):
            if is_open:
                ends = edges[[0, 1]] if k == 0 else edges[[-2, -1]]
                lower.stairs(density[[k]], ends, fill=True, facecolor="white", edgecolor=SOFT, hatch="////")
                lower.annotate("assumed", (np.sqrt(ends[0] * ends[1]), density[k]), xytext=(0, 4),
                               textcoords="offset points", ha="center", fontsize=7.5, color=SOFT)  # fmt: skip
        lower.axvline(mean, color=ACCENT, linewidth=1.4)
        lower.annotate(f"d32 {digits(mean)} µm", (mean, density.max()), xytext=(-5, -2), textcoords="offset points",
                       ha="right", va="top", color=ACCENT, fontsize=8)  # fmt: skip
        lower.set_ylabel("share per ln(size)")
        lower.set_ylim(0, density.max() * 1.15)
        lower.set_xlabel(
            "size, µm" + (" (sieve aperture)" if report.measured_by == "sieve" else " (volume-equivalent)")
        )
        decades = np.log10(edges[-1] / edges[0])
        _plain_log(lower, (1, 2, 5) if decades < 2.5 else (1,))
        positive = np.flatnonzero(report.shares > 1e-4)
        lower.set_xlim(edges[positive[0]] * 0.85, edges[positive[-1] + 1] * 1.18)
        upper.set_title(assessment.lots[lot], loc="left", fontsize=10, fontweight="bold")
        return figure


# Ladder rungs from the settled bed to transport, with the name written beside each.
RUNGS: tuple[tuple[str, str], ...] = (
    ("u_tr", "transport u_tr"),
    ("u_se", "significant entrainment u_se"),
    ("u_c", "turbulent u_c"),
    ("u_ms_slug", "slugging"),
    ("u_mb", "minimum bubbling u_mb"),
    ("u_cf", "complete fluidization u_cf"),
    ("u_mf", "minimum fluidization u_mf"),
    ("u_t90", "terminal velocity of d90"),
    ("u_t50", "terminal velocity of d50"),
    ("u_t10", "terminal velocity of d10"),
)


def velocity_figure(assessment: Assessment, lot: int = 0) -> Figure:
    """Every velocity with its 95 % interval on one log axis, the operating velocity across them all."""
    with mpl.rc_context(STYLE):
        rows = [(name, row) for key, name in RUNGS if key in assessment
                and (row := assessment.row(key, lot)).value is not None]  # fmt: skip
        terminal = sum(row.key.startswith("u_t") and row.key != "u_tr" for _, row in rows)
        figure = Figure(figsize=(6.8, 0.36 * len(rows) + 1.3), layout="constrained")
        axes = figure.subplots()
        heights = [len(rows) - k - (0 if k < len(rows) - terminal else 0.6) for k in range(len(rows))]
        for height, (_, row) in zip(heights, rows, strict=True):
            value = float(row.value or 0)
            if row.low is not None and row.high is not None:
                axes.plot([row.low, row.high], [height, height], color=SOFT, linewidth=5, alpha=0.45,
                          solid_capstyle="butt")  # fmt: skip
            grain = row.key.startswith("u_t") and row.key != "u_tr"
            axes.plot(value, height, marker="D" if grain else "o", color=INK, markersize=5,
                      markerfacecolor="white" if not row.in_range else INK)  # fmt: skip
            axes.annotate(digits(value), (value, height), xytext=(0, 5), textcoords="offset points", ha="center",
                          fontsize=7.5, path_effects=[withStroke(linewidth=2.5, foreground="white")],
                          zorder=5)  # fmt: skip
        velocity = float(assessment.row("u_operating", lot).value or 0)
        axes.axvline(velocity, color=ACCENT, linewidth=1.6)
        axes.annotate(f"operating {digits(velocity)} m/s", (velocity, max(heights) + 0.75), xytext=(4, 0),
                      textcoords="offset points", color=ACCENT, fontsize=8, va="center")  # fmt: skip
        axes.set_yticks(heights, [name for name, _ in rows])
        axes.tick_params(axis="y", length=0)
        axes.spines["left"].set_visible(False)
        axes.set_ylim(min(heights) - 0.6, max(heights) + 1.1)
        _plain_log(axes)
        axes.grid(axis="x", color=PALE, linewidth=0.6)
        axes.set_axisbelow(True)
        axes.set_xlabel("velocity, m/s (bar: 95 % interval; hollow: outside the method's range)", x=0, ha="left")
        axes.set_title(assessment.lots[lot], loc="left", fontsize=10, fontweight="bold")
        return figure


def pressure_drop_figure(assessment: Assessment, lot: int = 0) -> Figure:
    """Pressure drop as the gas is turned up (full line) and down (dashed), u_mf and the operating velocity marked.

    Raises
    ------
    InputError
        The duty has no bed height, so there is no weight to carry.
    """
    from psdflow.fluidization.curve import COMPACTION, pressure_drop_curve

    if "bed_pressure_drop" not in assessment:
        raise InputError("the pressure-drop curve needs a bed with diameter and settled_height")
    at = assessment.index(lot)
    value = {key: float(assessment[key][at]) for key in ("u_mf", "bed_pressure_drop", "voidage_mf", "d_sv")}
    given = assessment.material.compacted_voidage
    compacted = given.value if given else value["voidage_mf"] - COMPACTION
    velocity = np.linspace(0, 3 * value["u_mf"], 400)[1:]
    fluid = assessment.duty.fluid.resolved
    curve = pressure_drop_curve(
        velocity=velocity,
        minimum_fluidization_velocity=value["u_mf"],
        bed_weight=value["bed_pressure_drop"],
        voidage_mf=value["voidage_mf"],
        compacted_voidage=compacted,
        diameter_sv=value["d_sv"],
        fluid_density=fluid.density,
        fluid_viscosity=fluid.viscosity,
    )
    with mpl.rc_context(STYLE):
        figure = Figure(figsize=(6.4, 3.8), layout="constrained")
        axes = figure.subplots()
        axes.plot(velocity, curve.rising / 1000, color=INK, linewidth=1.6)
        axes.plot(velocity, curve.falling / 1000, color=INK, linewidth=1.2, linestyle=(0, (4, 2)))
        top, weight = float(curve.rising.max()) / 1000, value["bed_pressure_drop"] / 1000
        said = "given" if given else "assumed"
        axes.annotate(f"turned up, packed to voidage {compacted:.2f} ({said})", (value["u_mf"], top), xytext=(8, 2),
                      textcoords="offset points", fontsize=8)  # fmt: skip
        half = 0.5 * value["u_mf"]
        axes.annotate("turned down", (half, float(np.interp(half, velocity, curve.falling)) / 1000), xytext=(8, -8),
                      textcoords="offset points", fontsize=8)  # fmt: skip
        axes.annotate(f"weight of the bed {digits(weight)} kPa", (velocity[-1], weight), xytext=(0, -12), ha="right",
                      textcoords="offset points", fontsize=8)  # fmt: skip
        axes.axvline(value["u_mf"], color=SOFT, linewidth=0.8)
        axes.annotate(f"u_mf {digits(value['u_mf'])} m/s", (value["u_mf"], 0), xytext=(4, 4), fontsize=8,
                      textcoords="offset points", color=SOFT)  # fmt: skip
        axes.set_xlim(0, velocity[-1])
        axes.set_ylim(0, top * 1.15)
        axes.set_xlabel("superficial velocity, m/s")
        axes.set_ylabel("pressure drop of the bed, kPa")
        axes.set_title(assessment.lots[lot], loc="left", fontsize=10, fontweight="bold")
        return figure


def sweep_figure(swept: "Sweep") -> Figure:
    """Regime, u/u_mf, height of the bed, carryover and loss over the swept quantity; the operating window shaded."""
    name, unit, factor, offset = SWEPT[swept.over]
    x = np.array([point.value for point in swept.points]) * factor + offset
    panels: list[tuple[str, list[float | None], bool]] = [
        ("u / u_mf", [point.velocity_ratio for point in swept.points], True)
    ]
    if any(point.height is not None for point in swept.points):
        panels.append(("bed height, m", [point.height for point in swept.points], False))
    if any(point.carryover_rate for point in swept.points):
        panels.append(("carried, kg/h", [_hourly(point.carryover_rate) for point in swept.points], True))
    if any(point.loss_rate for point in swept.points):
        panels.append(("lost, kg/h", [_hourly(point.loss_rate) for point in swept.points], True))
    with mpl.rc_context(STYLE):
        figure = Figure(figsize=(6.8, 1.5 * len(panels) + 1.2), layout="constrained")
        rows = figure.subplots(len(panels), 1, sharex=True, squeeze=False)[:, 0]
        for axes, (label, values, log) in zip(rows, panels, strict=True):
            y = np.array([np.nan if value is None else value for value in values], float)
            axes.plot(x, np.where(y > 0, y, np.nan), color=INK, linewidth=1.4, marker="o", markersize=3)
            if log:
                axes.set_yscale("log")
            axes.set_ylabel(label, fontsize=8)
            axes.grid(axis="y", color=PALE, linewidth=0.6)
        _regime_bands(rows, x, [point.regime for point in swept.points])
        _window_shade(rows, swept)
        if swept.over != "temperature":
            _plain_log(rows[-1], (1, 2, 5) if x[-1] / x[0] < 300 else (1,))
        rows[-1].set_xlim(x[0], x[-1])
        rows[-1].set_xlabel(f"{name}, {unit}")
        rows[0].set_title(swept.lot, loc="left", fontsize=10, fontweight="bold", pad=24)
        return figure


def _hourly(rate: float | None) -> float | None:
    return None if rate is None else rate * 3600


def _regime_bands(rows: Any, x: Any, regimes: list[str]) -> None:
    """A line wherever the regime changes, its name written above the stretch."""
    starts = [0, *(i for i in range(1, len(regimes)) if regimes[i] != regimes[i - 1])]
    for number, start in enumerate(starts):
        stop = starts[number + 1] if number + 1 < len(starts) else len(x) - 1
        if start:
            for axes in rows:
                axes.axvline(x[start], color=SOFT, linewidth=0.7, linestyle=(0, (1, 2)))
        place = np.sqrt(x[start] * x[stop]) if x[0] > 0 else (x[start] + x[stop]) / 2
        text = regimes[start].replace(" fluidization", "").replace("fast or transport", "fast")
        rows[0].annotate(text, (place, 1.0), xycoords=("data", "axes fraction"), xytext=(0, 3 + 10 * (number % 2)),
                         textcoords="offset points", ha="center", fontsize=7.5, color=SOFT)  # fmt: skip


def _window_shade(rows: Any, swept: "Sweep") -> None:
    """The operating window between its two ends, if there is one."""
    window = swept.window
    if window is None or not window.highest > window.lowest:
        return
    end = min(window.highest, swept.points[-1].value)
    for axes in rows:
        axes.axvspan(window.lowest, end, facecolor="none", edgecolor=ACCENT, hatch="...", alpha=0.35, linewidth=0)
        axes.axvline(window.lowest, color=ACCENT, linewidth=1.2)
        if end < swept.points[-1].value:
            axes.axvline(end, color=ACCENT, linewidth=1.2)


def save(figure: Figure, path: Path) -> None:
    """Write a figure as SVG or PNG by the file's suffix, the same bytes for the same input."""
    kind = path.suffix.lstrip(".")
    metadata = {"Date": None} if kind == "svg" else {"Software": None}
    with mpl.rc_context(STYLE), replacing(path, "wb") as file:
        figure.savefig(file, format=kind, dpi=150, metadata=metadata)
