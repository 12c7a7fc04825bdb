"""Sweeps and the operating window."""

import csv
from pathlib import Path

import numpy as np
import pytest
from click.testing import CliRunner

from psdflow import Duty, InputError, Material, assess
from psdflow.cli import main
from psdflow.present.figures import pressure_drop_figure, save, sweep_figure
from psdflow.sizes.open_ends import with_open_ends
from psdflow.sweep import read_range, sweep

ROOT = Path(__file__).parents[1]
CARRIER = Material(name="carrier", particle_density=1450, sphericity=0.9)
LOT = with_open_ends(
    edges=np.array([20, 38, 45, 53, 75, 106, 150]) * 1e-6, shares=[0.06, 0.07, 0.1, 0.3, 0.3, 0.12], below=0.05
)
DRYER = Duty(
    name="dryer",
    fluid={"gas": "air", "temperature": 358.15, "pressure": 1.05e5},
    velocity=0.25,
    bed={"diameter": 1.2, "settled_height": 0.9, "freeboard_height": 3.2, "distributor": "porous plate"},
)


def test_every_point_is_a_full_assessment():
    swept = sweep(LOT, CARRIER, DRYER, over="velocity", start=0.1, stop=0.6, points=4)
    for point in swept.points:
        alone = assess(LOT, CARRIER, DRYER.at("velocity", point.value), draws=0)
        assert point.regime == str(alone["regime"])
        assert point.carryover_rate == float(alone["carryover_rate"])
        assert point.height == float(alone["expanded_height"])


def test_regimes_follow_one_another():
    swept = sweep(LOT, CARRIER, DRYER, over="velocity", start=1e-4, stop=6.0, points=40)
    order = ["fixed bed", "partly fluidized", "smooth fluidization", "bubbling", "slugging", "turbulent",
             "fast fluidization or transport"]  # fmt: skip
    places = [order.index(point.regime) for point in swept.points]
    assert places == sorted(places)
    assert places[0] == 0
    assert places[-1] == 6


def test_the_window_keeps_its_promise():
    limit = 20 / 3600
    swept = sweep(LOT, CARRIER, DRYER, over="velocity", start=0.005, stop=1.0, points=5, loss_limit=limit)
    window = swept.window
    assert window.lowest == pytest.approx(1.2 * float(assess(LOT, CARRIER, DRYER, draws=0)["u_cf"]))
    at = [
        float(assess(LOT, CARRIER, DRYER.at("velocity", window.highest * f), draws=0)["carryover_rate"])
        for f in (0.99, 1.01)
    ]
    assert at[0] < limit < at[1]
    assert window.lowest < window.highest_safe < window.highest


def test_no_window_names_the_fraction_in_the_way():
    swept = sweep(LOT, CARRIER, DRYER, over="velocity", start=0.001, stop=1.0, points=3, margin=20, loss_limit=1e-6)
    assert "there is no window" in swept.window.words
    assert "µm" in swept.window.words


def test_no_limit_no_highest():
    assert "no highest" in sweep(LOT, CARRIER, DRYER, over="velocity", start=0.01, stop=1.0, points=2).window.words


def test_hotter_and_denser_gas():
    """u_mf of fines falls as the gas gets hotter, for its viscosity rises; pressure hardly moves it (common practice)."""
    hot = sweep(LOT, CARRIER, DRYER, over="temperature", start=300, stop=900, points=5).points
    assert np.all(np.diff([point.velocity_ratio for point in hot]) > 0)
    dense = sweep(LOT, CARRIER, DRYER, over="pressure", start=1e5, stop=20e5, points=5).points
    ratios = [point.velocity_ratio for point in dense]
    assert max(ratios) / min(ratios) < 1.3


def test_what_leaves_its_range_is_named():
    swept = sweep(LOT, CARRIER, DRYER, over="velocity", start=0.01, stop=4.0, points=6)
    assert "carryover_flux" in swept.points[0].outside
    assert "expanded_height" in swept.points[-1].outside


@pytest.mark.parametrize(
    ("what", "text", "expected"),
    [
        ("velocity", "0.05:0.8 m/s", ("velocity", (0.05, 0.8))),
        ("velocity", "50 mm/s:0.8 m/s", ("velocity", (0.05, 0.8))),
        ("temperature", "20:500 degC", ("temperature", (293.15, 773.15))),
        ("pressure", "1:20 bar", ("pressure", (1e5, 20e5))),
    ],
)
def test_ranges(what, text, expected):
    over, ends = read_range(what, text)
    assert over == expected[0]
    assert ends == pytest.approx(expected[1])


@pytest.mark.parametrize(
    ("what", "text"), [("speed", "1:2 m/s"), ("velocity", "1 m/s"), ("velocity", "1:2"), ("velocity", ":2 m/s")]
)
def test_bad_ranges(what, text):
    with pytest.raises(InputError):
        read_range(what, text)


def test_refused_sweeps():
    with pytest.raises(InputError, match="must rise"):
        sweep(LOT, CARRIER, DRYER, over="velocity", start=1.0, stop=0.1)
    with pytest.raises(InputError, match="points"):
        sweep(LOT, CARRIER, DRYER, over="velocity", start=0.1, stop=1.0, points=1)
    given = Duty(name="d", fluid={"density": 1.2, "viscosity": 1.8e-5}, velocity=0.2)
    with pytest.raises(InputError, match="can't be changed"):
        sweep(LOT, CARRIER, given, over="temperature", start=300, stop=400)
    steam = Duty(name="d", fluid={"gas": "steam", "temperature": 450, "pressure": 1e5}, velocity=0.2)
    with pytest.raises(InputError, match="steam is liquid"):
        sweep(LOT, CARRIER, steam, over="pressure", start=1e5, stop=40e5)


def test_command(tmp_path):
    result = CliRunner().invoke(main, [
        "sweep", str(ROOT / "sample_psd" / "carrier-BW-0412.csv"),
        "--material", str(ROOT / "configs" / "material-alumina-carrier.yaml"),
        "--duty", str(ROOT / "configs" / "duty-dryer-warm-air.yaml"),
        "--over", "velocity", "0.01:0.4 m/s", "--points", "5", "--loss-limit", "2 kg/h", "--out", str(tmp_path),
    ])  # fmt: skip
    assert result.exit_code == 0, result.output
    assert result.output.index("Lowest velocity") < result.output.index("u / u_mf")
    with (tmp_path / "BW-0412-over-velocity.csv").open(encoding="utf-8") as file:
        table = list(csv.DictReader(file))
    assert [float(row["velocity"]) for row in table] == pytest.approx(np.geomspace(0.01, 0.4, 5))
    assert (tmp_path / "BW-0412-over-velocity.png").read_bytes().startswith(b"\x89PNG")


def test_quick_says_so():
    result = CliRunner().invoke(main, [
        "assess", str(ROOT / "sample_psd" / "carrier-BW-0412.csv"), "--quick",
        "--material", str(ROOT / "configs" / "material-alumina-carrier.yaml"),
        "--duty", str(ROOT / "configs" / "duty-dryer-warm-air.yaml"),
    ])  # fmt: skip
    assert result.exit_code == 0, result.output
    assert "No intervals" in result.output


def test_figures(tmp_path):
    swept = sweep(LOT, CARRIER, DRYER, over="temperature", start=300, stop=900, points=4)
    save(sweep_figure(swept), tmp_path / "t.svg")
    save(pressure_drop_figure(assess(LOT, CARRIER, DRYER, draws=20)), tmp_path / "p.png")
    assert (tmp_path / "t.svg").stat().st_size > 1000
    with pytest.raises(InputError, match="needs a bed"):
        pressure_drop_figure(assess(LOT, CARRIER, Duty(name="d", fluid=DRYER.fluid, velocity=0.2), draws=20))
