"""The only place that reads "450 degC" or "1.2 barg"; everything else is SI floats.

pint does the arithmetic on a short list of the units that stand on size reports and data sheets. The
full list of the library is left out on purpose: there "C" is a coulomb and "h" may be Planck's constant.
"""

import math
import re
import tokenize
from dataclasses import dataclass
from functools import cache
from typing import TYPE_CHECKING

from psdflow.errors import InputError, shown

if TYPE_CHECKING:
    import pint

STANDARD_ATMOSPHERE = 101_325.0  # Pa, by definition
NORMAL_TEMPERATURE = 273.15  # K, 0 °C: the normal state of gas volumes

_DEFINITIONS = """
micro- = 1e-6 = µ- = μ- = u-
nano- = 1e-9 = n-
milli- = 1e-3 = m-
centi- = 1e-2 = c-
hecto- = 1e2 = h-
kilo- = 1e3 = k-
mega- = 1e6 = M-
meter = [length] = m = metre
gram = [mass] = g
second = [time] = s = sec
kelvin = [temperature]; offset: 0 = K
degC = kelvin; offset: 273.15 = °C = celsius = degc = C
degF = 5 / 9 * kelvin; offset: 233.15 + 200 / 9 = °F = fahrenheit = degf = F
percent = 0.01 = pct
radian = []
degree = 0.017453292519943295 * radian = deg = °
micron = 1e-6 * meter
angstrom = 1e-10 * meter = Å
inch = 0.0254 * meter = in
foot = 0.3048 * meter = ft
pound = 453.59237 * gram = lb
tonne = 1e6 * gram = t
minute = 60 * second = min
hour = 3600 * second = h = hr
day = 86400 * second = d
week = 604800 * second = wk
year = 31557600 * second = a = yr
litre = 1e-3 * meter ** 3 = l = L = liter
newton = kilogram * meter / second ** 2 = N
pascal = newton / meter ** 2 = Pa
joule = newton * meter = J
bar = 1e5 * pascal
atmosphere = 101325 * pascal = atm
psi = 6894.757293168361 * pascal
torr = 133.32236842105263 * pascal = Torr = mmHg
poise = 0.1 * pascal * second = P
"""

# What a key may be measured in: SI unit in pint's words, an example for messages.
_DIMENSIONS: dict[str, tuple[str, str]] = {
    "length": ("meter", "120 um"),
    "velocity": ("meter / second", "0.25 m/s"),
    "density": ("kilogram / meter ** 3", "1450 kg/m^3"),
    "viscosity": ("pascal * second", "1.8e-5 Pa s"),
    "temperature": ("kelvin", "85 degC"),
    "pressure": ("pascal", "1.05 bar"),
    "mass": ("kilogram", "8 t"),
    "mass rate": ("kilogram / second", "900 kg/h"),
    "mass flux": ("kilogram / meter ** 2 / second", "0.5 kg/m^2/s"),
    "concentration": ("kilogram / meter ** 3", "20 mg/m^3"),
    "time": ("second", "7500 h"),
    "rate": ("1 / second", "0.001 1/h"),
    "angle": ("radian", "33 deg"),
    "energy": ("joule", "1.4e-19 J"),
    "specific surface": ("meter ** 2 / kilogram", "80 m^2/kg"),
    "fraction": ("", "8 %"),
    "number": ("", "0.9"),
}

_NUMBER = r"[-+]?(?:\d+(?:[.,]\d*)?|[.,]\d+)(?:[eE][-+]?\d+)?"
_QUANTITY = re.compile(
    rf"\s*(?P<value>{_NUMBER})\s*(?:(?:\+-|\+/-|±)\s*(?P<tolerance>{_NUMBER})\s*(?P<percent>%(?=\s))?)?\s*(?P<unit>.*?)\s*$"
)
_UNIT_CHARACTERS = re.compile(r"[A-Za-zµμÅ°%·⋅²³0-9^*/. \-]{0,40}")
_THOUSANDS = re.compile(r"[-+]?\d{1,3},\d{3}$")
_GAUGE = re.compile(r"^(?P<unit>bar|psi|kPa|MPa|mbar)\s*(?:\(?g\)?|gauge)$")
_ABSOLUTE = re.compile(r"^(?P<unit>bar|psi|kPa|MPa|mbar|Pa)\s*(?:\(?a\)?|abs|absolute)$")


@dataclass(frozen=True)
class Measured:
    """A value in SI units with its tolerance (half-width of a 95 % interval), None if not stated."""

    value: float
    tolerance: float | None = None
    gauge: bool = False


@cache
def _registry() -> "pint.UnitRegistry[float]":
    import pint

    registry: pint.UnitRegistry[float] = pint.UnitRegistry(None)
    registry.load_definitions(_DEFINITIONS.strip().splitlines())
    return registry


@cache
def _scale(unit: str, dimension: str) -> tuple[float, float]:
    """``(factor, offset)`` that turn a value in ``unit`` into SI: ``value * factor + offset``."""
    import pint

    si, _ = _DIMENSIONS[dimension]
    if not _UNIT_CHARACTERS.fullmatch(unit):
        raise LookupError(unit)
    text = unit.replace("°C", "degC").replace("°F", "degF").replace("%", "percent").replace("^", "**")
    text = re.sub(r"(?<=[a-zA-Zµμ])([23])\b", r"**\1", text)
    text = re.sub(r"(?<=[\w°])[\s·⋅](?=[a-zA-Zµμ°])", "*", text)
    registry = _registry()
    try:
        zero = registry.Quantity(0.0, text).to(si or "").magnitude
        one = registry.Quantity(1.0, text).to(si or "").magnitude
    except (pint.errors.PintError, tokenize.TokenError, AttributeError, TypeError, ValueError, AssertionError) as error:
        raise LookupError(str(error)) from error
    return float(one - zero), float(zero)


def read_quantity(text: object, dimension: str) -> Measured:
    """Read a quantity with its unit, and a tolerance if it carries one, into SI.

    Parameters
    ----------
    text
        ``"1450 kg/m^3"``, ``"0.9 +- 0.05"``, ``"85 degC"``, ``"1.2 barg"``, ``"8 %"``; a bare number is
        accepted only for dimensions ``number`` and ``fraction``. A decimal comma is read as a point.
    dimension
        A key of the table of dimensions: ``"length"``, ``"density"``, ``"temperature"``, …

    Raises
    ------
    InputError
        Not a number, no unit, an unknown unit, or a unit that doesn't fit the dimension. The caller puts
        file and key before the message.
    """
    si, example = _DIMENSIONS[dimension]
    if isinstance(text, bool) or text is None:
        raise InputError(f'found {shown(text)}; expected a {dimension} such as "{example}"')
    match = _QUANTITY.match(str(text))
    if match is None:
        raise InputError(f'{shown(text)} is not a number with a unit; write it like "{example}"')
    if _THOUSANDS.match(match["value"]):
        raise InputError(f"{shown(text)} can be read as a thousand or as a decimal comma; write it with a point")
    value = float(match["value"].replace(",", "."))
    unit = match["unit"]
    if not math.isfinite(value):
        raise InputError(f"{shown(text)} is too large a number")
    if not unit and si:
        raise InputError(f'{shown(text)} has no unit; write the {dimension} like "{example}"')
    gauge = False
    if dimension == "pressure" and (named := _GAUGE.match(unit)):
        unit, gauge = named["unit"], True
    elif dimension == "pressure" and (named := _ABSOLUTE.match(unit)):
        unit = named["unit"]
    try:
        factor, offset = _scale(unit, dimension)
    except LookupError:
        raise InputError(
            f'the unit of {shown(text)} doesn\'t fit; a {dimension} is expected, like "{example}"'
        ) from None
    result = value * factor + offset + (STANDARD_ATMOSPHERE if gauge else 0.0)
    tolerance = None
    if match["tolerance"]:
        half = abs(float(match["tolerance"].replace(",", ".")))
        tolerance = abs(result) * half / 100 if match["percent"] else half * factor
    return Measured(result, tolerance, gauge)
