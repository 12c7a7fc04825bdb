"""The YAML documents: what is read, what is refused, and how the message reads."""

from pathlib import Path

import pytest

from psdflow import Duty, InputError, Material

MATERIAL = "name: Carrier\nparticle_density: 1450 kg/m^3\n"
DUTY = """
name: Dryer
fluid: {gas: air, temperature: 85 degC, pressure: 1.05 bar}
bed: {diameter: 1.2 m, settled_height: 0.9 m, freeboard_height: 2.5 m, distributor: perforated plate}
velocity: 0.25 m/s
"""


def load(cls, text: str, folder: Path):
    path = folder / "given.yaml"
    path.write_text(text, encoding="utf-8")
    return cls.load(path)


def test_material(tmp_path):
    material = load(Material, MATERIAL + "sphericity: 0.9 +- 0.05\nmoisture: 0.4 %\n", tmp_path)
    assert material.particle_density.value == 1450
    assert material.sphericity.tolerance == pytest.approx(0.05)
    assert material.moisture.value == pytest.approx(0.004)


def test_python_numbers_are_si():
    assert Material(name="sand", particle_density=2650).particle_density.value == 2650


@pytest.mark.parametrize(
    ("line", "message"),
    [
        ("sphericity: 1.3", "given.yaml: sphericity: found 1.3; expected above 0.05, at most 1"),
        (
            "loose_bulk_density: 1600 kg/m3",
            "loose_bulk_density: found 1600 kg/m³; expected less than the particle density",
        ),
        ("spherisity: 0.8", "spherisity: unknown key; did you mean sphericity?"),
        ("moisture: 4 kg", 'moisture: the unit of "4 kg" doesn\'t fit'),
        ("tapped_bulk_density: 600 kg/m3\nloose_bulk_density: 700 kg/m3", "expected at least the loose bulk density"),
        ("voidage_mf: 0.05", "voidage_mf: found 0.05"),
        ("name: Twice", 'key "name" stands twice'),
        ("sphericity: {a: 1}", "sphericity"),
        ("sphericity: &a 0.9\nmoisture: *a", "aliases"),
    ],
)
def test_material_refused(line, message, tmp_path):
    with pytest.raises(InputError) as caught:
        load(Material, MATERIAL + line, tmp_path)
    assert message in str(caught.value)
    assert str(caught.value).startswith("given.yaml")
    assert "\n" not in str(caught.value)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("name: x", "particle_density: missing"),
        ("name: x\nparticle_density: 1450", "has no unit"),
        ("", "expected keys and values"),
        ("- a\n- b", "expected keys and values"),
        ("[1, 2", "line 1"),
        ("\t: x", "line 1"),
    ],
)
def test_not_a_material(text, message, tmp_path):
    with pytest.raises(InputError) as caught:
        load(Material, text, tmp_path)
    assert message in str(caught.value)


def test_duty(tmp_path):
    duty = load(Duty, DUTY, tmp_path)
    assert duty.fluid.resolved.density == pytest.approx(1.021, rel=1e-3)
    assert duty.bed.diameter.value == 1.2


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("velocity: 0.25 m/s", "", "velocity: missing"),
        ("velocity: 0.25 m/s", "velocity: -1 m/s", "velocity: found -1 m/s"),
        ("gas: air", "gas: airr", 'gas "airr" is not known'),
        ("gas: air", "gas: water", "liquid here"),
        ("gas: air", "gas: steam", "steam is liquid"),
        (", pressure: 1.05 bar", "", "pressure: missing"),
        ("gas: air", "gas: air, liquid: water", "exactly one of"),
        ("85 degC", "85 bar", "doesn't fit"),
        ("diameter: 1.2 m,", "diameter: 1.2 m, hight: 3 m,", "hight: unknown key"),
        ("diameter: 1.2 m", "diameter: 0 m", "diameter: found 0 m"),
        ("perforated plate", "magic", "distributor"),
        ("gas: air", "mixture: {nitrogen: 0.8, steam: 0.3}", "sum to 1.1"),
    ],
)
def test_duty_refused(old, new, message, tmp_path):
    assert old in DUTY
    with pytest.raises(InputError) as caught:
        load(Duty, DUTY.replace(old, new), tmp_path)
    assert message in str(caught.value)
    assert "\n" not in str(caught.value)


def test_bare_number_in_a_nested_block(tmp_path):
    text = DUTY + "cyclones:\n  - {design: lapple-general-purpose, body_diameter: 2}\n"
    with pytest.raises(InputError, match=r"body_diameter.*has no unit"):
        load(Duty, text, tmp_path)


def test_gas_cyclone_in_a_liquid(tmp_path):
    text = DUTY.replace("gas: air", "liquid: water") + "cyclones:\n  - {body_diameter: 20 cm}\n"
    with pytest.raises(InputError, match="don't apply to a liquid"):
        load(Duty, text, tmp_path)


def test_gauge_pressure(tmp_path):
    duty = load(Duty, DUTY.replace("1.05 bar", "0.05 barg"), tmp_path)
    assert duty.fluid.resolved.pressure == pytest.approx(106325)


def test_missing_file(tmp_path):
    with pytest.raises(InputError, match="can't be read"):
        Material.load(tmp_path / "none.yaml")


def test_binary_file(tmp_path):
    path = tmp_path / "picture.yaml"
    path.write_bytes(b"\x89PNG\r\n\x1a\n" + bytes(range(256)))
    with pytest.raises(InputError, match="not UTF-8"):
        Material.load(path)
