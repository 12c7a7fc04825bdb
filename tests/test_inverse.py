"""Questions asked backwards, and the bed over time on the command line."""

from pathlib import Path

import numpy as np
import pytest
from click.testing import CliRunner

from psdflow import Duty, Material, assess
from psdflow.carryover import cyclone_models as models
from psdflow.carryover.cyclone import standard_design
from psdflow.carryover.inverse import cyclone_for_cut, largest_fines_share, with_fines_share
from psdflow.cli import main
from psdflow.sizes.open_ends import with_open_ends

ROOT = Path(__file__).parents[1]
CARRIER = Material(name="carrier", particle_density=1450, sphericity=0.9)
LOT = with_open_ends(
    edges=np.array([20, 38, 45, 53, 75, 106, 150]) * 1e-6, shares=[0.06, 0.07, 0.1, 0.3, 0.3, 0.12], below=0.05
)
DRYER = Duty(
    name="dryer", fluid={"gas": "air", "temperature": 358.15, "pressure": 1.05e5}, velocity=0.25, feed={"rate": 0.25},
    bed={"diameter": 1.2, "settled_height": 0.9, "freeboard_height": 3.2, "distributor": "porous plate"},
    cyclones=[{"design": "stairmand-high-efficiency", "body_diameter": 0.38, "returns_to": "bed"}],
)  # fmt: skip
FILES = [
    str(ROOT / "sample_psd" / "carrier-BW-0412.csv"), "--material", str(ROOT / "configs" / "material-alumina-carrier.yaml"),
    "--duty", str(ROOT / "configs" / "duty-dryer-warm-air.yaml"),
]  # fmt: skip


@pytest.mark.parametrize("share", [0.0, 0.1, 0.5, 1.0])
def test_fines_share_is_set(share):
    changed = with_fines_share(LOT, 50e-6, share)
    assert changed.undersize(50e-6) == pytest.approx(share, abs=1e-9)
    same = with_fines_share(LOT, 50e-6, float(LOT.undersize(50e-6)))
    assert same.percentile(0.3) == pytest.approx(float(LOT.percentile(0.3)))


def test_largest_fines_share_is_the_limit():
    def loss(distribution):
        return float(assess(distribution, CARRIER, DRYER, draws=0)["carryover_rate"])

    limit = 2 * loss(LOT)
    most = largest_fines_share(LOT, loss, limit=limit)
    assert 0 < most < 1
    assert loss(with_fines_share(LOT, 45e-6, most)) <= limit
    assert loss(with_fines_share(LOT, 45e-6, most + 0.01)) > limit
    assert np.isnan(largest_fines_share(LOT, loss, limit=0.0))


def test_cyclone_for_cut_meets_both_wishes():
    gas = {"particle_density": 1450, "fluid_density": 1.02, "fluid_viscosity": 2.1e-5}
    for design in ("stairmand-high-efficiency", "lapple-general-purpose"):
        found = cyclone_for_cut(design=design, flow=0.9, cut_size=2.5e-6, pressure_drop=1200.0, **gas)
        shape = standard_design(design, found.body_diameter)
        drops = models.pressure_drops(geometry=shape, flow=0.9 / found.number, fluid_density=1.02)
        cuts = models.cut_sizes(geometry=shape, flow=0.9 / found.number, **gas)
        assert next(iter(drops.values())) == pytest.approx(1200)
        assert next(iter(cuts.values())) <= 2.5e-6
        if found.number > 1:
            fewer = cyclone_for_cut(design=design, flow=0.9, cut_size=found.cut_size * 1.5, pressure_drop=1200.0, **gas)
            assert fewer.number <= found.number
    assert (
        cyclone_for_cut(design="lapple-general-purpose", flow=50.0, cut_size=1e-7, pressure_drop=500.0, **gas) is None
    )


def test_returning_to_the_bed_keeps_more_fines_than_a_bin():
    cyclone = {"design": "stairmand-high-efficiency", "body_diameter": 0.38}
    steady = {}
    for place in ("bed", "bin"):
        duty = Duty(
            **{
                **{key: getattr(DRYER, key) for key in DRYER.model_fields_set},
                "cyclones": [{**cyclone, "returns_to": place}],
            }
        )
        found = assess(LOT, CARRIER, duty, draws=0)
        steady[place] = (float(found["bed_d32_steady"]), float(found["overflow_rate_steady"]))
    assert steady["bed"][0] < steady["bin"][0]
    assert steady["bed"][1] > steady["bin"][1]


def test_steady_state_on_the_sheet():
    found = assess(LOT, CARRIER, DRYER)
    for key in ("bed_d32_steady", "carryover_rate_steady", "loss_rate_steady", "overflow_rate_steady"):
        assert found.row(key).low <= found.row(key).value <= found.row(key).high
    assert float(found["overflow_rate_steady"] + found["loss_rate_steady"]) == pytest.approx(0.25, rel=1e-3)
    absent = {row.key: row.note for row in assess(LOT, CARRIER, Duty(name="d", fluid=DRYER.fluid, velocity=0.2)).rows()}
    assert "bed" in absent["bed_d32_steady"]
    assert any("no attrition" in said for said in found.assumptions)


def test_attrition_adds_fines():
    worn = Duty(**{**{key: getattr(DRYER, key) for key in DRYER.model_fields_set}, "attrition": 1e-4})
    plain, more = (assess(LOT, CARRIER, duty, draws=0) for duty in (DRYER, worn))
    assert float(more["bed_d32_steady"]) < float(plain["bed_d32_steady"])


def test_flux_at_the_outlet_is_never_below_the_far_flux():
    for height in (0.5, 1.0, 5.0):
        bed = {"diameter": 1.2, "settled_height": 0.9, "freeboard_height": height}
        found = assess(LOT, CARRIER, Duty(name="d", fluid=DRYER.fluid, velocity=0.4, bed=bed), draws=0)
        assert float(found["carryover_flux_outlet"]) >= float(found["carryover_flux"])


def test_over_time_command():
    result = CliRunner().invoke(main, ["assess", *FILES, "--draws", "20", "--over-time", "1 h, 1 d, 1 week"])
    assert result.exit_code == 0, result.output
    assert "1 week" in result.output
    for times in ("1 d, 1 h", "soon", "1"):
        assert CliRunner().invoke(main, ["assess", *FILES, "--draws", "20", "--over-time", times]).exit_code == 2


def test_solve_command():
    result = CliRunner().invoke(main, ["solve", *FILES, "--loss-limit", "0.1 kg/h", "--cut", "3 um"])
    assert result.exit_code == 0, result.output
    assert "below 45 µm" in result.output
    assert "body" in result.output
    assert CliRunner().invoke(main, ["solve", *FILES]).exit_code == 2
