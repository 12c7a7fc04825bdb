"""Every u_mf method and the whole pipeline against Geldart's measured powders.

Geldart, Powder Technology 7 (1973) 285, table 1 (looked up in an open transcription): 21 rows with u_mf, air at 20 °C,
sizes by microscope, catalyst densities approximate in the paper.
"""

import csv
from pathlib import Path

import numpy as np
import pytest

from psdflow import Duty, Material, SizeDistribution, assess
from psdflow.fluidization.groups import boundary_sizes, group_letters
from psdflow.fluidization.minimum import minimum_fluidization_velocities, recommended_u_mf

AIR = {"fluid_density": 1.2042, "fluid_viscosity": 1.82e-5}
MEASURED = Path(__file__).parent / "data" / "umf_umb_measured.csv"


def rows() -> list[dict[str, str]]:
    lines = [line for line in MEASURED.read_text(encoding="utf-8").splitlines() if not line.startswith("#")]
    return [row for row in csv.DictReader(lines) if row["u_mf_ms"]]


def columns():
    table = rows()
    size, density, u_mf = (
        np.array([float(row[key]) for row in table]) for key in ("d_sv_um", "particle_density_kgm3", "u_mf_ms")
    )
    return size * 1e-6, density, u_mf


def test_methods_by_group(capsys):
    """Mean absolute percentage error by method and group; the recommended rule is within 3 points of the best single
    method (spheres: the source gives no shape)."""
    size, density, measured = columns()
    grain = {"diameter_sv": size, "diameter_v": size, "particle_density": density, **AIR}
    found = minimum_fluidization_velocities(**grain)
    found["recommended rule"] = recommended_u_mf(**grain).value
    lines = boundary_sizes(particle_density=density, **AIR)["geldart-1973"]
    letters = group_letters(diameter_sv=size, boundaries=lines)
    errors = {key: np.abs(value / measured - 1) * 100 for key, value in found.items()}
    with capsys.disabled():
        print(f"\n  u_mf, mean absolute error in %, {len(measured)} rows{'':18}all   C/A     B")
        for key in sorted(errors, key=lambda key: errors[key].mean()):
            parts = [errors[key], errors[key][letters != "B"], errors[key][letters == "B"]]
            print(f"  {key:45}" + "".join(f"{part.mean():6.1f}" for part in parts))
    best = min(error.mean() for key, error in errors.items() if key != "recommended rule")
    assert errors["recommended rule"].mean() <= best + 3


def pipeline(size: float, density: float):
    narrow = SizeDistribution.of([size * 0.999, size * 1.001], [1.0], measured_by="laser", quantity="volume")
    air = {"gas": "air", "temperature": 293.15, "pressure": 101325}
    powder = Material(name="powder", particle_density=density, sphericity=1.0)
    return assess(narrow, powder, Duty(name="tube", fluid=air, velocity=0.01))


def test_interval_covers_the_measured_values(capsys):
    """The 95 % interval of the pipeline holds at least 85 % of the measured u_mf and u_mb."""
    size, density, measured = columns()
    bubbling = np.array([float(row["u_mb_ms"]) for row in rows()])
    found = [pipeline(d, rho) for d, rho in zip(size, density, strict=True)]
    for key, values in (("u_mf", measured), ("u_mb", bubbling)):
        inside = [float(a.low[key]) <= u <= float(a.high[key]) for a, u in zip(found, values, strict=True)]
        with capsys.disabled():
            print(f"\n  95 % interval of {key} holds {sum(inside)} of {len(inside)} measured values", end="")
        assert np.mean(inside) >= 0.85, key


# Facts of the trade: common practice, no source.


def test_coarse_grains_are_group_d():
    """Grains of 10 mm of ordinary density in air are group D (common practice, no source)."""
    for density in (800, 1500, 2650, 4000):
        assert str(pipeline(10e-3, density)["group"]) == "D"


def test_100_um_of_ordinary_density_is_a_or_on_its_edge():
    """100 µm, 1500 to 2500 kg/m³, ambient air: A, or A and B share the votes (common practice, no source)."""
    for density in (1500, 2000, 2500):
        found = pipeline(100e-6, density)
        assert float(found["probability_a"]) > 0.3
        assert float(found["probability_a"] + found["probability_b"]) > 0.98


def test_group_a_has_a_window_without_bubbles_and_b_has_none():
    """u_mb/u_mf above 1 for a typical group A powder, below 1 for B (Geldart 1973; common practice)."""
    fine, sand = pipeline(60e-6, 1500), pipeline(300e-6, 2600)
    assert float(fine["umb_umf_ratio"]) > 1
    assert float(fine["smooth_window"]) > 0
    assert float(sand["umb_umf_ratio"]) < 1
    assert float(sand["smooth_window"]) == 0


@pytest.mark.parametrize("density", [1000, 1500, 2600])
def test_finer_has_more_surface_and_is_more_cohesive(density):
    """A finer grain has more surface for its volume and is more cohesive (common practice, no source)."""
    found = [pipeline(size, density) for size in (5e-6, 20e-6, 80e-6, 320e-6)]
    surface = [float(a["specific_surface"]) for a in found]
    probability = [float(a["cohesion_probability"]) for a in found]
    assert surface == sorted(surface, reverse=True)
    assert probability == sorted(probability, reverse=True)
    assert probability[0] > 0.95
    assert probability[-1] < 0.05


def test_u_mf_tends_to_carman_kozeny_for_fines():
    """Carman 1937: Ergun's u_mf with 150 for 180 is 1.2 times Carman & Kozeny's in the laminar limit (mathematics)."""
    grain = {"diameter_sv": 20e-6, "diameter_v": 20e-6, "particle_density": 1500.0, **AIR}
    found = minimum_fluidization_velocities(**grain, sphericity=1.0, voidage=0.45)
    assert found["ergun-1952"] / found["carman-kozeny-1937"] == pytest.approx(1.2, rel=1e-4)
