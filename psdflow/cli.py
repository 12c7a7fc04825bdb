"""The command line: parse, call, print."""

import sys
from collections.abc import Callable
from functools import wraps
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from psdflow import __version__
from psdflow.errors import InputError

if TYPE_CHECKING:
    from psdflow.present.text import Subject
    from psdflow.reports import Report


def _plainly(command: Callable[..., None]) -> Callable[..., None]:
    """Print an InputError as its one line and exit 2."""

    @wraps(command)
    def run(*args: Any, **kwargs: Any) -> None:
        try:
            command(*args, **kwargs)
        except InputError as error:
            click.echo(f"psdflow: {error}", err=True)
            sys.exit(2)

    return run


def _reading_options(command: Callable[..., None]) -> Callable[..., None]:
    """The options that say how a report is to be read where it can't be recognised."""
    for option in (
        click.option("--columns", help="Which column is what, e.g. size=A,share=C or size='sieve',under=3."),
        click.option("--kind", type=click.Choice(["sieve", "laser"]), help="How the sizes were measured."),
        click.option("--basis", type=click.Choice(["mass", "volume", "number", "area"]), help="What was counted."),
        click.option("--decimal", type=click.Choice([".", ","]), help="Decimal sign of the numbers."),
        click.option("--sample", help="Read only the sample of this name."),
        click.option(
            "--size-unit",
            type=click.Choice(["um", "mm", "nm", "cm", "m", "in", "phi", "astm"]),
            help="Unit of the sizes.",
        ),
        click.option("--loss-warn", type=float, help="Sieve loss, fraction of the charge, that is said (0.005)."),
        click.option("--loss-refuse", type=float, help="Sieve loss, fraction of the charge, that is refused (0.02)."),
        click.option("--sample-mass", metavar="MASS", help='Mass of the sample measured, e.g. "2 g".'),
        click.option("--fines", type=click.Path(path_type=Path), help="Laser report of the fines of one sieve report."),
        click.option("--fines-of", type=click.Choice(["passing", "all"]), help="What the laser report measured."),
        click.option("--cut", metavar="SIZE", help="The sieve whose passing the laser measured; else the finest."),
        click.option("--shape-factor", type=float, help="Laser size over sieve size (0.8 to 1.6); else fitted, or 1."),
    ):
        command = option(command)
    return command


@click.group(context_settings={"help_option_names": ["-h", "--help"]})
@click.version_option(__version__)
def main() -> None:
    """From a size report to fluidization behaviour: group, velocities, cohesion risk, carryover."""


@main.command()
@click.argument("files", nargs=-1, required=True, type=click.Path(path_type=Path))
@_reading_options
@click.option("--out", type=click.Path(path_type=Path), help="Folder for the canonical tables.")
@click.option("--fits", is_flag=True, help="Also fit the published distributions.")
@_plainly
def read(files: tuple[Path, ...], out: Path | None, fits: bool, **how: Any) -> None:
    """What is understood from the size reports in FILES; a folder stands for all reports in it."""
    from rich.console import Console

    from psdflow.present.reading import fitted, understood
    from psdflow.present.sheet import file_stems, replacing
    from psdflow.reports import canonical_text

    console = Console(highlight=False)
    reports, failures = _reports(files, how)
    for report, stem in zip(reports, file_stems([report.lot for report in reports]), strict=True):
        console.print(understood(report))
        if fits:
            console.print(fitted(report))
        if out is not None:
            with replacing(out / f"{stem}.csv") as file:
                file.write(canonical_text(report))
    _end(failures)


@main.command()
@click.argument("files", nargs=-1, required=True, type=click.Path(path_type=Path))
@click.option("--material", required=True, type=click.Path(path_type=Path), help="What the powder is (YAML).")
@click.option("--duty", required=True, type=click.Path(path_type=Path), help="Where it is fluidized (YAML).")
@_reading_options
@click.option("--below", multiple=True, metavar="SIZE", help='Also the share below this size, e.g. "30 um".')
@click.option("--out", type=click.Path(path_type=Path), help="Folder for the sheets and figures.")
@click.option("--json", "json_to", metavar="FILE|-", help="Everything as JSON, to a file or to the terminal.")
@click.option("--over-time", metavar="TIMES", help='The fed bed after some times, e.g. "1 h, 1 d, 4 week".')
@click.option("--full", is_flag=True, help="The whole page of every lot, not only the overview.")
@click.option("--draws", default=None, type=click.IntRange(0, 100_000), help="Draws behind the intervals; 0 for none.")
@click.option("--quick", is_flag=True, help="No draws, so no intervals; the page says so.")
@click.option("--seed", default=None, type=click.IntRange(0), help="Seed of the draws.")
@_plainly
def assess(
    files: tuple[Path, ...],
    material: Path,
    duty: Path,
    below: tuple[str, ...],
    out: Path | None,
    json_to: str | None,
    over_time: str | None,
    full: bool,
    draws: int | None,
    quick: bool,
    seed: int | None,
    **how: Any,
) -> None:
    """Predict how the lots in FILES (reports, or folders of them) will fluidize, cake, blow over and be lost."""
    from psdflow.duty import Duty
    from psdflow.material import Material
    from psdflow.pipeline import assess as predict
    from psdflow.present.text import Subject
    from psdflow.uncertainty import DEFAULT_DRAWS, DEFAULT_SEED
    from psdflow.units import read_quantity

    powder, unit = Material.load(material), Duty.load(duty)
    sizes = tuple(read_quantity(text, "length").value for text in below)
    subjects = []
    reports, failures = _reports(files, how)
    for report in reports:
        try:
            assessment = predict(
                report.distribution,
                powder,
                unit,
                lots=(report.lot,),
                below=sizes,
                draws=0 if quick else DEFAULT_DRAWS if draws is None else draws,
                seed=DEFAULT_SEED if seed is None else seed,
            )
        except InputError as error:
            raise InputError(f"{report.source}: {error}") from None
        subjects.append(Subject(assessment, 0, report.lot, report.source, report.warnings))
    if subjects:
        _present(subjects, out, json_to, full)
        if over_time is not None and json_to != "-":
            from psdflow.present.bed_time import print_over_time

            print_over_time(subjects, over_time)
    _end(failures)


def _present(subjects: "list[Subject]", out: Path | None, json_to: str | None, full: bool) -> None:
    from psdflow.present import sheet

    if json_to == "-":
        click.echo(sheet.json_text(subjects), nl=False)
    else:
        from rich.console import Console

        from psdflow.present.text import write

        write(Console(highlight=False), subjects, full=full)
        if json_to is not None:
            sheet.write_json(subjects, Path(json_to))
    if out is not None:
        from psdflow.present.figures import distribution_figure, pressure_drop_figure, save, velocity_figure

        stems = sheet.file_stems([subject.name for subject in subjects])
        for subject, stem in zip(subjects, stems, strict=True):
            sheet.write_csv(subject, out / f"{stem}-sheet.csv")
            drawn = {"distribution": distribution_figure, "velocities": velocity_figure}
            if "bed_pressure_drop" in subject.assessment:
                drawn["pressure-drop"] = pressure_drop_figure
            for name, draw in drawn.items():
                figure = draw(subject.assessment, subject.lot)
                for suffix in ("svg", "png"):
                    save(figure, out / f"{stem}-{name}.{suffix}")
        sheet.write_json(subjects, out / "assessment.json")
        click.echo(f"sheets and figures written to {out}", err=True)


def _reports(files: tuple[Path, ...], how: dict[str, Any]) -> "tuple[list[Report], list[tuple[str, str]]]":
    """The reports of files and folders; what failed inside folders, as (file, reason). A bad file itself is raised."""
    from psdflow.present.progress import counted
    from psdflow.reports import merged_report, read_folder
    from psdflow.reports import read as read_report
    from psdflow.units import read_quantity

    merge = {key: how.pop(key, None) for key in ("fines_of", "cut", "shape_factor")}
    fines = how.pop("fines", None)
    given = {key: value for key, value in how.items() if value is not None}
    if "sample_mass" in given:
        given["sample_mass"] = read_quantity(given["sample_mass"], "mass").value
    if merge["cut"] is not None:
        merge["cut"] = read_quantity(merge["cut"], "length").value
    reports: list[Report] = []
    failures: list[tuple[str, str]] = []
    for file in files:
        if file.is_dir():
            with counted("reading reports") as on_progress:
                read_here, failed_here = read_folder(file, on_progress=on_progress, **given)
            reports += read_here
            failures += failed_here
        else:
            reports += read_report(file, **given)
    if fines is None:
        if any(value is not None for value in merge.values()):
            raise InputError("--fines-of, --cut and --shape-factor belong to --fines LASER; name the laser report")
        return reports, failures
    others = read_report(fines)
    if len(reports) != 1 or len(others) != 1 or failures:
        raise InputError(
            f"--fines merges one sieve report with one laser report; {len(reports)} and {len(others)} samples were found. "
            "Name one file; choose a sample with --sample, or write each with --out first"
        )
    return [merged_report(reports[0], others[0], **merge)], failures


def _end(failures: list[tuple[str, str]]) -> None:
    """List the files that couldn't be read, and exit 3 if there are any."""
    if failures:
        from rich.console import Console

        from psdflow.present.reading import failed

        Console(stderr=True, highlight=False).print(failed(failures))
        sys.exit(3)


@main.command()
@click.argument("file", type=click.Path(path_type=Path))
@click.option("--material", required=True, type=click.Path(path_type=Path), help="What the powder is (YAML).")
@click.option("--duty", required=True, type=click.Path(path_type=Path), help="Where it is fluidized (YAML).")
@click.option("--over", "swept", required=True, nargs=2, metavar="WHAT FROM:TO",
              help='velocity, temperature or pressure, and its range: velocity "0.05:0.8 m/s".')  # fmt: skip
@click.option("--points", default=25, type=int, show_default=True, help="How many values.")
@click.option("--margin", default=1.2, type=float, show_default=True, help="Lowest velocity over u_cf.")
@click.option("--loss-limit", metavar="RATE", help='Most that may be lost, e.g. "2 kg/h".')
@_reading_options
@click.option("--out", type=click.Path(path_type=Path), help="Folder for the table (csv) and the figure.")
@_plainly
def sweep(
    file: Path,
    material: Path,
    duty: Path,
    swept: tuple[str, str],
    points: int,
    margin: float,
    loss_limit: str | None,
    out: Path | None,
    **how: str | None,
) -> None:
    """The operating window of the lots in FILE over velocity, temperature or pressure."""
    from rich.console import Console

    from psdflow.duty import Duty
    from psdflow.material import Material
    from psdflow.present.sheet import file_stems
    from psdflow.present.sweeping import sweep_page, write_sweep_csv
    from psdflow.sweep import read_range
    from psdflow.sweep import sweep as run
    from psdflow.units import read_quantity

    powder, unit = Material.load(material), Duty.load(duty)
    over, (start, stop) = read_range(*swept)
    limit = None if loss_limit is None else read_quantity(loss_limit, "mass rate").value
    reports, failures = _reports((file,), how)
    for report, stem in zip(reports, file_stems([report.lot for report in reports]), strict=True):
        found = run(report.distribution, powder, unit, over=over, start=start, stop=stop, points=points, margin=margin,
                    loss_limit=limit, lot=report.lot)  # fmt: skip
        Console(highlight=False).print(sweep_page(found))
        if out is not None:
            from psdflow.present.figures import save, sweep_figure

            write_sweep_csv(found, out / f"{stem}-over-{over}.csv")
            figure = sweep_figure(found)
            for suffix in ("svg", "png"):
                save(figure, out / f"{stem}-over-{over}.{suffix}")
    _end(failures)


@main.command()
@click.argument("file", type=click.Path(path_type=Path))
@click.option("--material", required=True, type=click.Path(path_type=Path), help="What the powder is (YAML).")
@click.option("--duty", required=True, type=click.Path(path_type=Path), help="Where it is fluidized (YAML).")
@click.option("--loss-limit", metavar="RATE", help='Largest fines share that keeps the loss under it, e.g. "2 kg/h".')
@click.option("--cut", "wanted_cut", metavar="SIZE", help='Cyclones that reach this cut size, e.g. "5 um".')
@click.option(
    "--drop", metavar="PRESSURE", default="1.5 kPa", show_default=True, help="Allowed pressure drop for --cut."
)
@click.option("--design", default="stairmand-high-efficiency", show_default=True, help="Standard design for --cut.")
@click.option("--sample", help="Read only the sample of this name.")
@_plainly
def solve(
    file: Path,
    material: Path,
    duty: Path,
    loss_limit: str | None,
    wanted_cut: str | None,
    drop: str,
    design: str,
    sample: str | None,
) -> None:
    """Ask backwards: the most fines for a loss limit, the cyclones for a cut size."""
    from psdflow.present.bed_time import cyclone_answer, fines_answer

    if loss_limit is None and wanted_cut is None:
        raise InputError("solve: give --loss-limit for the most fines, or --cut for the cyclones")
    for report in _reports((file,), {} if sample is None else {"sample": sample})[0]:
        for text, answer in ((loss_limit, fines_answer), (wanted_cut, cyclone_answer)):
            if text is not None:
                click.echo(f"{report.lot}: {answer(report, material, duty, text, drop, design)}")


@main.command()
@click.argument("quantity", required=False)
@_plainly
def methods(quantity: str | None) -> None:
    """The published methods with sources and ranges; all, or those that give one QUANTITY such as u_mf."""
    from rich.console import Console

    from psdflow.present.catalogue import catalogue_page

    Console(highlight=False).print(catalogue_page(quantity))


if __name__ == "__main__":
    main()
