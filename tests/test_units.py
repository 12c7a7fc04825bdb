"""Reading quantities with units."""

import contextlib

import pytest
from hypothesis import given
from hypothesis import strategies as st

from psdflow.errors import InputError
from psdflow.units import read_quantity

READ = [
    ("1450 kg/m^3", "density", 1450.0),
    ("1450 kg/m3", "density", 1450.0),
    ("1450 kg/m³", "density", 1450.0),
    ("0.82 g/cm3", "density", 820.0),
    ("90 lb/ft3", "density", 1441.66),
    ("1.45 t/m^3", "density", 1450.0),
    ("85 degC", "temperature", 358.15),
    ("85 °C", "temperature", 358.15),
    ("185 °F", "temperature", 358.15),
    ("300 K", "temperature", 300.0),
    ("1.05 bar", "pressure", 105000.0),
    ("1.2 barg", "pressure", 221325.0),
    ("1.2 bar(g)", "pressure", 221325.0),
    ("1.05 bara", "pressure", 105000.0),
    ("14.7 psi", "pressure", 101353.0),
    ("0 barg", "pressure", 101325.0),
    ("0.2 um", "length", 2e-7),
    ("0,2 µm", "length", 2e-7),
    ("0.2 μm", "length", 2e-7),
    ("25 micron", "length", 25e-6),
    ("6 in", "length", 0.1524),
    ("900 kg/h", "mass rate", 0.25),
    ("12 t/d", "mass rate", 0.138889),
    ("7500 h", "time", 2.7e7),
    ("33 deg", "angle", 0.575959),
    ("1.8e-5 Pa s", "viscosity", 1.8e-5),
    ("18 µPa·s", "viscosity", 1.8e-5),
    ("0.018 cP", "viscosity", 1.8e-5),
    ("8 %", "fraction", 0.08),
    ("0.08", "fraction", 0.08),
    ("0.9", "number", 0.9),
    ("20 mg/m3", "concentration", 2e-5),
]


@pytest.mark.parametrize(("text", "dimension", "value"), READ)
def test_read(text, dimension, value):
    assert read_quantity(text, dimension).value == pytest.approx(value, rel=1e-5)


@pytest.mark.parametrize(
    ("text", "dimension", "tolerance"),
    [
        ("0.9 +- 0.05", "number", 0.05),
        ("1450 +- 60 kg/m^3", "density", 60.0),
        ("1450 ± 5 % kg/m^3", "density", 72.5),
        ("0.82 +/- 0.02 g/cm^3", "density", 20.0),
        ("85 +- 3 degC", "temperature", 3.0),
        ("85 degC", "temperature", None),
    ],
)
def test_tolerance(text, dimension, tolerance):
    assert read_quantity(text, dimension).tolerance == (
        None if tolerance is None else pytest.approx(tolerance, rel=1e-9)
    )


@pytest.mark.parametrize(
    ("text", "dimension", "message"),
    [
        ("1450", "density", "has no unit"),
        ("1 kg", "density", "doesn't fit"),
        ("85 m", "temperature", "doesn't fit"),
        ("warm", "temperature", "not a number with a unit"),
        ("5 furlong", "length", "doesn't fit"),
        ("1,450 kg/m3", "density", "decimal comma"),
        ("1e400 m", "length", "too large"),
        ("5 m/(s", "velocity", "doesn't fit"),
        ("5 m; import os", "length", "doesn't fit"),
        (None, "length", "found"),
        (True, "number", "found"),
        ("nan", "number", "not a number"),
    ],
)
def test_refused(text, dimension, message):
    with pytest.raises(InputError, match=message) as caught:
        read_quantity(text, dimension)
    assert "\n" not in str(caught.value)


@given(st.text(max_size=60), st.sampled_from(["length", "density", "pressure", "temperature", "number"]))
def test_any_text_is_read_or_refused(text, dimension):
    with contextlib.suppress(InputError):
        read_quantity(text, dimension)
