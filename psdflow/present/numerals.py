"""Numbers and units as people read them: three significant digits, µm, kg/h, per cent."""

import math
from typing import NamedTuple

# Sheet unit -> unit on screens and its factor; rates and concentrations by key, as kg/s serves both bed and loss.
_FRIENDLY: dict[str, tuple[str, float]] = {
    "m": ("µm", 1e6),
    "kg/s": ("kg/h", 3600.0),
    "Pa.s": ("µPa·s", 1e6),
    "s": ("h", 1 / 3600),
    "kg": ("kg", 1.0),
    "m^2/kg": ("m²/kg", 1.0),
    "kg/m^3": ("kg/m³", 1.0),
    "kg/m^2/s": ("kg/m²/s", 1.0),
    "1": ("", 1.0),
}
_IN_METRES = ("tdh", "expanded_height", "bubble_diameter", "height_spout_max")
_PER_CENT = ("share", "below_", "probability", "cyclone_efficiency")

# Name, unit, factor and offset of a swept quantity for people.
SWEPT = {
    "velocity": ("superficial velocity", "m/s", 1.0, 0.0),
    "temperature": ("temperature", "°C", 1.0, -273.15),
    "pressure": ("pressure, absolute", "bar", 1e-5, 0.0),
}


class Friendly(NamedTuple):
    """A unit for people and the factor from SI."""

    unit: str
    factor: float


def friendly(key: str, unit: str) -> Friendly:
    """The unit in which people read sheet key ``key`` of SI unit ``unit``."""
    if unit == "m" and key in _IN_METRES:
        return Friendly("m", 1.0)
    if unit == "1" and any(word in key for word in _PER_CENT):
        return Friendly("%", 100.0)
    if key == "loss_concentration":
        return Friendly("g/m³", 1000.0)
    return Friendly(*_FRIENDLY.get(unit, (unit, 1.0)))


def digits(value: float | None, significant: int = 3) -> str:
    """A number at ``significant`` digits, without exponent where it stays readable; a dash for None."""
    if value is None:
        return "–"
    if value == 0:
        return "0"
    if not 1e-4 <= abs(value) < 1e6:
        return f"{value:.{significant - 1}e}"
    text = f"{value:.{significant}g}"
    if "e" in text:
        text = f"{float(text):.0f}"
    return text


def figure(value: float, unit: str, significant: int = 3) -> str:
    """A number for people: as `digits`, but a share just under 100 % shows what is missing from it."""
    if unit == "%" and 99 < value < 100:
        return f"{value:.{min(6, 1 - math.floor(math.log10(100 - value)))}f}"
    if unit == "%" and 0 < value < 1e-3:
        return "<0.001"
    return digits(value, significant)


def span_of(low: float | None, high: float | None, unit: Friendly) -> str:
    """An interval at two significant digits in the friendly unit, empty where there is none."""
    if low is None or high is None:
        return ""
    return " to ".join(figure(end * unit.factor, unit.unit, 2) for end in (low, high))
