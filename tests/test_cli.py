"""The command line as its user meets it."""

import csv
import json
from pathlib import Path

import pytest
from click.testing import CliRunner

from psdflow.cli import main

ROOT = Path(__file__).parents[1]
SAMPLES, CONFIGS = ROOT / "sample_psd", ROOT / "configs"
CARRIER = [
    "--material",
    str(CONFIGS / "material-alumina-carrier.yaml"),
    "--duty",
    str(CONFIGS / "duty-dryer-warm-air.yaml"),
]
REPORT = str(SAMPLES / "carrier-BW-0412.csv")


def run(*arguments: str):
    return CliRunner().invoke(main, list(arguments))


def refused(result) -> str:
    """The one line of a refusal."""
    assert result.exit_code == 2, result.output
    lines = result.stderr.strip().splitlines()
    assert len(lines) == 1, result.stderr
    assert lines[0].startswith("psdflow: ")
    assert "Traceback" not in result.output
    return lines[0]


def test_one_report():
    result = run("assess", REPORT, *CARRIER)
    assert result.exit_code == 0, result.output
    assert (
        result.output.index("Group A") < result.output.index("minimum fluidization") < result.output.index("Cautions")
    )


def test_every_sample_report_is_read_and_assessed():
    pairs = {
        "carrier-*": ("alumina-carrier", "dryer-warm-air"),
        "sand-*": ("quartz-sand", "sand-heater"),
        "media-*": ("washer-media", "washer-water"),
    }
    lots, groups = [], set()
    for pattern, (material, duty) in pairs.items():
        files = sorted(str(path) for path in SAMPLES.glob(pattern))
        result = run("assess", *files, "--material", str(CONFIGS / f"material-{material}.yaml"),
                     "--duty", str(CONFIGS / f"duty-{duty}.yaml"), "--json", "-", "--draws", "50")  # fmt: skip
        assert result.exit_code == 0, result.output
        for entry in json.loads(result.stdout)["lots"]:
            lots.append(entry["lot"])
            if "group" in entry["quantities"]:
                groups.add(entry["quantities"]["group"]["value"])
    assert len(lots) == len(set(lots)) >= 10
    assert groups == set("ABCD")


def test_hot_pressurised_gas():
    result = run("assess", REPORT, *CARRIER[:2], "--duty", str(CONFIGS / "duty-reactor-hot-pressure.yaml"))
    assert result.exit_code == 0, result.output
    assert "Pressure (20 bar absolute)" in " ".join(result.output.split())
    assert "displace oxygen" in " ".join(result.output.split())


def test_json_has_the_agreed_shape():
    result = run("assess", REPORT, *CARRIER, "--json", "-", "--below", "30 um")
    document = json.loads(result.stdout)
    entry = document["lots"][0]
    assert {"lot", "quantities", "alternatives", "classes", "cautions", "warnings"} <= set(entry)
    for quantity in entry["quantities"].values():
        assert set(quantity) == {"value", "low", "high", "unit", "method", "source", "in_range", "note"}
    assert {"lower", "upper", "share", "terminal_velocity", "elutriation_constant", "carryover_flux", "carryover_share",
            "cyclone_efficiency", "loss_share"} == set(entry["classes"][0])  # fmt: skip
    assert "below_30um" in entry["quantities"]
    assert 0 <= entry["quantities"]["below_45um"]["value"] <= 1
    assert sum(row["share"] for row in entry["classes"]) == pytest.approx(1)


KEYS = """
d10 d16 d50 d84 d90 d32 d43 span geometric_sd below_10um below_20um below_45um specific_surface pan_share
respirable_share fluid_density fluid_viscosity archimedes density_ratio d_star u_star group probability_a probability_b
probability_c probability_d u_mf u_cf u_mb umb_umf_ratio u_t10 u_t50 u_t90 u_c u_k u_tr u_ms_slug u_operating regime
bed_pressure_drop voidage_mf expanded_height bubble_diameter cohesion_risk cohesion_probability bond_number
hausner_ratio carryover_flux carryover_rate carryover_d50 tdh loss_rate loss_d50 loss_concentration cyclone_cut_size
cyclone_efficiency cyclone_pressure_drop
"""


def test_every_key_is_there_or_absent_with_a_reason():
    entry = json.loads(run("assess", REPORT, *CARRIER, "--json", "-").stdout)["lots"][0]
    for key in KEYS.split():
        assert key in entry["quantities"] or entry["absent"][key], key


def test_out_folder(tmp_path):
    result = run("assess", REPORT, *CARRIER, "--out", str(tmp_path / "o"), "--draws", "50")
    assert result.exit_code == 0, result.output
    names = {path.name for path in (tmp_path / "o").iterdir()}
    assert {"BW-0412-sheet.csv", "BW-0412-distribution.svg", "BW-0412-velocities.png", "assessment.json"} <= names
    with (tmp_path / "o" / "BW-0412-sheet.csv").open(encoding="utf-8") as file:
        rows = list(csv.DictReader(file))
    assert list(rows[0]) == ["key", "value", "low", "high", "unit", "method", "source", "in_range", "note"]
    assert float(next(row for row in rows if row["key"] == "u_mf")["value"]) > 0
    assert (tmp_path / "o" / "BW-0412-velocities.png").read_bytes().startswith(b"\x89PNG")


def test_two_lots_of_one_name_get_two_sheets(tmp_path):
    copy = tmp_path / "again.csv"
    copy.write_text(Path(REPORT).read_text(encoding="utf-8"), encoding="utf-8")
    run("assess", REPORT, str(copy), *CARRIER, "--out", str(tmp_path / "o"), "--draws", "10")
    assert {path.name for path in (tmp_path / "o").glob("*.csv")} == {"BW-0412-sheet.csv", "BW-0412-2-sheet.csv"}


def test_the_same_bytes_twice(tmp_path):
    for name in ("a", "b"):
        run("assess", REPORT, *CARRIER, "--out", str(tmp_path / name), "--draws", "50")
    for path in (tmp_path / "a").iterdir():
        assert path.read_bytes() == (tmp_path / "b" / path.name).read_bytes(), path.name


def test_nothing_half_written_on_refusal(tmp_path):
    bad = tmp_path / "bad.csv"
    bad.write_text("size um,retained %\n100,50\n50,-3\npan,53\n")
    refused(run("assess", REPORT, str(bad), *CARRIER, "--out", str(tmp_path / "o"), "--json", str(tmp_path / "x.json")))
    assert not (tmp_path / "o").exists()
    assert not (tmp_path / "x.json").exists()


def test_a_place_that_cannot_be_written(tmp_path):
    (tmp_path / "file").write_text("x")
    line = refused(run("assess", REPORT, *CARRIER, "--out", str(tmp_path / "file" / "o")))
    assert "can't be written" in line


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("", "empty"),
        ("size um,retained %\n100,50\n50,-3\npan,53\n", "row 3"),
        ("size um,retained %\n100,50\n50,lots\npan,20\n", "row 3"),
        ("size um,retained %\n100,50\n100,30\npan,20\n", "100"),
        ("size um,retained %\n100,50\n50,20\npan,10\n", "80"),
        ("size um,passing %\n200,100\n100,50\n50,60\n", "row 3"),
    ],
)
def test_bad_reports(tmp_path, text, expected):
    bad = tmp_path / "bad.csv"
    bad.write_text(text)
    line = refused(run("assess", str(bad), *CARRIER))
    assert "bad.csv" in line
    assert expected in line


def test_a_picture_named_csv(tmp_path):
    bad = tmp_path / "scan.csv"
    bad.write_bytes(b"\x89PNG\r\n\x1a\n" + bytes(range(256)) * 20)
    assert "scan.csv" in refused(run("assess", str(bad), *CARRIER))


def test_missing_files():
    assert "none.csv" in refused(run("assess", "none.csv", *CARRIER))
    assert "none.yaml" in refused(run("assess", REPORT, "--material", "none.yaml", *CARRIER[2:]))


def test_floating_powder():
    line = refused(run("assess", REPORT, "--material", str(CONFIGS / "material-washer-media.yaml"),
                       "--duty", str(CONFIGS / "duty-washer-water.yaml"), "--below", "warm"))  # fmt: skip
    assert "warm" in line


def test_read_shows_what_was_understood(tmp_path):
    result = run("read", REPORT, "--out", str(tmp_path))
    assert result.exit_code == 0, result.output
    assert "Mass retained" in result.output
    again = run("read", str(tmp_path / "BW-0412.csv"))
    assert again.exit_code == 0, again.output
    assert "BW-0412" in again.output


def test_methods():
    assert "Wen & Yu 1966" in run("methods").output
    assert "u_mf, recommended:" in run("methods", "u_mf").output
    assert "Bi & Grace" not in run("methods", "u_mf").output
    assert "quantities with methods" in refused(run("methods", "speed"))


def test_help():
    assert run("--help").exit_code == 0


FILES = ROOT / "tests" / "reports"


def folder(tmp_path, *names: str) -> str:
    """A folder of reports, among them bad ones."""
    place = tmp_path / "reports"
    place.mkdir()
    for name in names:
        (place / Path(name).name).write_bytes((FILES / name).read_bytes())
    return str(place)


MIXED = ("files/sieve_mass_um.csv", "files/laser_single_size.csv", "bad/negative_share.csv", "bad/old_workbook.xls")


def test_a_folder_goes_on_past_bad_files(tmp_path):
    place = folder(tmp_path, *MIXED)
    result = run("read", place, "--out", str(tmp_path / "o"))
    assert result.exit_code == 3, result.output
    assert "SM-0412" in result.stdout
    assert {p.name for p in (tmp_path / "o").iterdir()} == {"SM-0412.csv", "laser_single_size.csv"}
    assert "not read (2)" in result.stderr
    said = " ".join(result.stderr.split())
    assert "negative_share.csv" in said
    assert "can't be negative" in said
    assert "save it as .xlsx" in said


def test_a_folder_is_assessed(tmp_path):
    result = run("assess", folder(tmp_path, *MIXED), *CARRIER, "--draws", "20", "--json", "-")
    assert result.exit_code == 3
    assert [lot["lot"] for lot in json.loads(result.stdout)["lots"]] == ["laser_single_size", "SM-0412"]
    good = str(SAMPLES)
    assert run("read", good).exit_code == 0


def test_a_folder_of_bad_files_only(tmp_path):
    result = run("assess", folder(tmp_path, "bad/negative_share.csv"), *CARRIER)
    assert result.exit_code == 3
    assert "not read (1)" in result.stderr
    (tmp_path / "empty").mkdir()
    assert "holds no size report" in refused(run("read", str(tmp_path / "empty")))


def test_the_bar_stands_on_stderr(tmp_path, monkeypatch):
    monkeypatch.setenv("FORCE_COLOR", "1")
    result = run("read", folder(tmp_path, *MIXED[:2]))
    assert "reading reports" in result.stderr
    assert "reading reports" not in result.stdout


def test_every_reading_option_reaches_a_folder(tmp_path):
    place = folder(tmp_path, "files/sieve_loss_warned.csv")
    assert "0.99% lost" in " ".join(run("read", place).output.split())
    assert "0.99% lost" not in run("read", place, "--loss-warn", "0.01").output
    strict = run("read", place, "--loss-warn", "0.001", "--loss-refuse", "0.005")
    assert strict.exit_code == 3
    assert "at most 0.5% is accepted" in " ".join(strict.stderr.split())
    assert "the first not over the second" in refused(run("read", REPORT, "--loss-warn", "0.5"))


def test_fits():
    result = run("read", REPORT, "--fits")
    assert result.exit_code == 0, result.output
    for word in ("Rosin–Rammler–Sperling–Bennett", "log-normal", "Gates–Gaudin–Schuhmann", "max miss %"):
        assert word in result.output


def test_a_small_sample_widens_the_coarse_end():
    ends = []
    for mass in ("1 mg", "100 g"):
        result = run("assess", str(SAMPLES / "carrier-BW-0412.csv"), *CARRIER, "--sample-mass", mass, "--json", "-")
        d90 = json.loads(result.stdout)["lots"][0]["quantities"]["d90"]
        ends.append(d90["high"] - d90["low"])
    assert ends[0] > ends[1]
    assert "5 cm" in refused(run("read", REPORT, "--sample-mass", "5 cm"))


def test_fines_by_laser(tmp_path):
    laser = str(FILES / "merge" / "fines_laser.csv")
    sieve = str(FILES / "merge" / "coarse_sieve.csv")
    result = run("read", sieve, "--fines", laser, "--out", str(tmp_path))
    assert result.exit_code == 0, result.output
    assert "merged at 63 µm (8.0% finer)" in " ".join(result.output.split())
    again = run("assess", str(tmp_path / "M-1.csv"), *CARRIER, "--draws", "20", "--json", "-")
    at_once = run("assess", sieve, "--fines", laser, *CARRIER, "--draws", "20", "--json", "-")
    one, other = (json.loads(r.stdout)["lots"][0]["quantities"] for r in (again, at_once))
    assert one["d32"] == other["d32"]
    assert one["pan_share"]["value"] == 0
    assert "one sieve report with one laser report" in refused(run("read", sieve, sieve, "--fines", laser))
    assert "belong to --fines" in refused(run("read", sieve, "--cut", "63 um"))
