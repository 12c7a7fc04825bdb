"""Density and viscosity of the fluid at temperature and absolute pressure.

Named gases and mixtures go through the library chemicals: density from the second virial coefficient
(Tsonopoulos 1974), viscosity by Lucas (Reid, Prausnitz & Poling 1987), mixtures by Wilke 1950; steam and
liquid water by IAPWS-95 and IAPWS 2008, because Lucas is 5 to 10 % low for hot steam.
"""

import math
from dataclasses import dataclass, field, replace
from typing import Literal, NamedTuple

from psdflow.errors import InputError

GAS_CONSTANT = 8.314462618  # J/mol/K, exact since 2019


class Gas(NamedTuple):
    """Constants of a pure gas: g/mol, K, Pa, -, -, debye, registry number."""

    molar_mass: float
    critical_temperature: float
    critical_pressure: float
    critical_compressibility: float
    acentric_factor: float
    dipole: float
    cas: str


# Constants as the library chemicals tabulates them (its look-up takes a second, so they stand here; a test
# compares every row with it).
GASES: dict[str, Gas] = {
    "nitrogen": Gas(28.0134, 126.192, 3.3958e06, 0.2894, 0.0372, 0.0, "7727-37-9"),
    "oxygen": Gas(31.9988, 154.581, 5.043e06, 0.2879, 0.0222, 0.0, "7782-44-7"),
    "argon": Gas(39.948, 150.687, 4.863e06, 0.2895, -0.00219, 0.0, "7440-37-1"),
    "helium": Gas(4.0026, 5.1953, 228320, 0.3041, -0.3836, 0.0, "7440-59-7"),
    "neon": Gas(20.1797, 44.4, 2.66163e06, 0.2992, -0.0355, 0.0, "7440-01-9"),
    "hydrogen": Gas(2.01588, 33.145, 1.2964e06, 0.3033, -0.219, 0.0, "1333-74-0"),
    "steam": Gas(18.0153, 647.096, 2.2064e07, 0.2294, 0.3443, 1.85, "7732-18-5"),
    "carbon dioxide": Gas(44.0095, 304.128, 7.3773e06, 0.2746, 0.22394, 0.0, "124-38-9"),
    "carbon monoxide": Gas(28.0101, 132.86, 3.494e06, 0.2915, 0.0497, 0.11, "630-08-0"),
    "methane": Gas(16.0425, 190.564, 4.5992e06, 0.2863, 0.01142, 0.0, "74-82-8"),
    "ethane": Gas(30.069, 305.322, 4.8722e06, 0.2799, 0.0995, 0.0, "74-84-0"),
    "ethylene": Gas(28.0532, 282.35, 5.0418e06, 0.2812, 0.0866, 0.0, "74-85-1"),
    "propane": Gas(44.0956, 369.89, 4.2512e06, 0.2765, 0.1521, 0.08, "74-98-6"),
    "propylene": Gas(42.0797, 364.211, 4.555e06, 0.2756, 0.146, 0.36, "115-07-1"),
    "butane": Gas(58.1222, 425.125, 3.796e06, 0.2738, 0.201, 0.0, "106-97-8"),
    "isobutane": Gas(58.1222, 407.81, 3.629e06, 0.2759, 0.184, 0.13, "75-28-5"),
    "1-butene": Gas(56.1063, 419.29, 4.0051e06, 0.2710, 0.192, 0.36, "106-98-9"),
    "sulfur dioxide": Gas(64.0638, 430.64, 7.8866e06, 0.2727, 0.256, 1.63, "7446-09-5"),
    "ammonia": Gas(17.0305, 405.56, 1.13634e07, 0.2461, 0.256, 1.47, "7664-41-7"),
    "hydrogen chloride": Gas(36.4609, 324.68, 8.3135e06, 0.2594, 0.129, 1.08, "7647-01-0"),
    "hydrogen sulfide": Gas(34.0809, 373.1, 9e06, 0.2847, 0.1005, 0.97, "7783-06-4"),
    "chlorine": Gas(70.906, 416.865, 7.6424e06, 0.2736, 0.07, 0.0, "7782-50-5"),
}

DRY_AIR = {"nitrogen": 0.7812, "oxygen": 0.2096, "argon": 0.0092}  # mole fractions, Lemmon et al. 2000

_ALIASES = {
    "n2": "nitrogen", "o2": "oxygen", "ar": "argon", "he": "helium", "h2": "hydrogen", "h2o": "steam",
    "water vapour": "steam", "water vapor": "steam", "co2": "carbon dioxide", "co": "carbon monoxide",
    "ch4": "methane", "c2h4": "ethylene", "ethene": "ethylene", "c3h6": "propylene", "propene": "propylene",
    "so2": "sulfur dioxide", "sulphur dioxide": "sulfur dioxide", "nh3": "ammonia", "hcl": "hydrogen chloride",
    "h2s": "hydrogen sulfide", "hydrogen sulphide": "hydrogen sulfide", "cl2": "chlorine", "c2h6": "ethane",
    "c3h8": "propane",
}  # fmt: skip


@dataclass(frozen=True)
class Fluid:
    """What the formulas need to know of the fluid, SI units.

    ``mean_free_path`` (m) is None where the molar mass or the state isn't known, and for liquids.
    """

    name: str
    phase: Literal["gas", "liquid"]
    density: float
    viscosity: float
    temperature: float | None = None
    pressure: float | None = None
    mean_free_path: float | None = None
    method: str = "given values"
    warnings: tuple[str, ...] = field(default=())


def gas_names() -> list[str]:
    """Every gas name that can be asked for."""
    return ["air", *GASES]


def composition(name: str) -> dict[str, float]:
    """Mole fractions of a named gas; air is dry air.

    Raises
    ------
    InputError
        Unknown gas; the message lists the known ones. "water" is refused: liquid or steam must be said.
    """
    key = " ".join(name.strip().lower().replace("_", " ").split())
    if key == "air":
        return dict(DRY_AIR)
    if key == "water":
        raise InputError('gas: "water" is a liquid here; write "gas: steam" or "liquid: water"')
    key = _ALIASES.get(key, key)
    if key not in GASES:
        raise InputError(f'gas "{name}" is not known; known are: {", ".join(gas_names())}')
    return {key: 1.0}


def gas(name: str, *, temperature: float, pressure: float) -> Fluid:
    """A named gas at ``temperature`` (K) and absolute ``pressure`` (Pa); see `gas_mixture`."""
    fluid = gas_mixture(composition(name), temperature=temperature, pressure=pressure)
    return replace(fluid, name=name)


def gas_mixture(fractions: dict[str, float], *, temperature: float, pressure: float) -> Fluid:
    """A gas mixture by mole fraction.

    Parameters
    ----------
    fractions
        Mole fractions by gas name, summing to 1 within 0.5 % (then normalised).
    temperature, pressure
        K and Pa absolute.

    Raises
    ------
    InputError
        Unknown gas, fractions that don't sum to 1, a state in which the gas (or one component) condenses,
        or one so dense that the virial equation stops holding.
    """
    _check_state(temperature, pressure)
    total = sum(fractions.values())
    if any(f < 0 for f in fractions.values()) or abs(total - 1) > 0.005:
        raise InputError(f"mixture: mole fractions must be positive and sum to 1; they sum to {total:.4g}")
    parts: dict[str, float] = {}
    for name, fraction in fractions.items():
        for part, share in composition(name).items():
            parts[part] = parts.get(part, 0.0) + fraction / total * share
    parts = {part: share for part, share in parts.items() if share > 0}
    for part, share in parts.items():
        _refuse_condensing(part, share, temperature, pressure)
    density, warnings = _gas_density(parts, temperature, pressure)
    viscosity = _gas_viscosity(parts, temperature, density)
    molar_mass = sum(share * GASES[part].molar_mass for part, share in parts.items()) / 1000
    # Mean free path of a gas, kinetic theory: (mu/p) sqrt(pi R T / (2 M)).
    path = viscosity / pressure * math.sqrt(math.pi * GAS_CONSTANT * temperature / (2 * molar_mass))
    pure_steam = set(parts) == {"steam"}
    method = (
        "IAPWS-95 density, IAPWS 2008 viscosity"
        if pure_steam
        else "second virial density (Tsonopoulos 1974), Lucas viscosity"
        + (", Wilke 1950 mixing" if len(parts) > 1 else "")
    )
    name = " + ".join(f"{share:.3g} {part}" for part, share in parts.items())
    return Fluid(name, "gas", density, viscosity, temperature, pressure, path, method, warnings)


def liquid(name: str, *, temperature: float, pressure: float) -> Fluid:
    """Liquid water at K and Pa absolute (IAPWS-95, IAPWS 2008).

    Raises
    ------
    InputError
        Another liquid (give its density and viscosity), or a state in which water boils or freezes.
    """
    from chemicals.iapws import iapws95_Psat, iapws95_rho
    from chemicals.viscosity import mu_IAPWS

    _check_state(temperature, pressure)
    if name.strip().lower() not in {"water", "h2o"}:
        raise InputError(f'liquid "{name}" is not known; only water is. Give density: and viscosity: instead')
    if not 273.15 <= temperature < 647.0:
        raise InputError(f"water is not liquid at {temperature - 273.15:.1f} °C")
    if pressure < (saturation := iapws95_Psat(temperature)):
        raise InputError(
            f"water boils at {temperature - 273.15:.1f} °C below {saturation / 1e5:.3g} bar; "
            f"the pressure given is {pressure / 1e5:.3g} bar absolute"
        )
    density = float(iapws95_rho(temperature, pressure))
    viscosity = float(mu_IAPWS(temperature, density))
    method = "IAPWS-95 density, IAPWS 2008 viscosity"
    return Fluid("water", "liquid", density, viscosity, temperature, pressure, None, method)


def _check_state(temperature: float, pressure: float) -> None:
    if not 50 <= temperature <= 3000:
        raise InputError(f"temperature {temperature - 273.15:.4g} °C is outside what can be computed (-223 to 2727 °C)")
    if not 10 <= pressure <= 2e7:
        raise InputError(
            f"pressure {pressure / 1e5:.4g} bar absolute is outside what can be computed (1e-4 to 200 bar)"
        )


def _refuse_condensing(part: str, share: float, temperature: float, pressure: float) -> None:
    """Refuse a state in which a component would be liquid: its partial pressure above saturation."""
    constants = GASES[part]
    if temperature >= constants.critical_temperature:
        return
    if part == "steam":
        from chemicals.iapws import iapws95_Psat

        if temperature < 273.15:
            raise InputError(f"steam freezes at {temperature - 273.15:.1f} °C")
        saturation = iapws95_Psat(temperature)
    else:
        from chemicals.vapor_pressure import Lee_Kesler

        saturation = Lee_Kesler(
            temperature, constants.critical_temperature, constants.critical_pressure, constants.acentric_factor
        )
    if share * pressure > saturation:
        raise InputError(
            f"{part} is liquid at {temperature - 273.15:.1f} °C and a partial pressure of "
            f"{share * pressure / 1e5:.3g} bar (it condenses above {saturation / 1e5:.3g} bar); "
            "a gas was asked for. Check temperature and pressure"
        )


def _gas_density(parts: dict[str, float], temperature: float, pressure: float) -> tuple[float, tuple[str, ...]]:
    """Density in kg/m³ and warnings; second virial equation ``Z = 1 + B p / (R T)``."""
    from chemicals.iapws import iapws95_rho
    from chemicals.virial import BVirial_mixture, BVirial_Tsonopoulos

    if set(parts) == {"steam"}:
        return float(iapws95_rho(temperature, pressure)), ()
    gases, fractions = [GASES[part] for part in parts], list(parts.values())
    pair = [[float(BVirial_Tsonopoulos(temperature, *_pair_constants(a, b))) for b in gases] for a in gases]
    b_mix = BVirial_mixture(fractions, pair)
    departure = b_mix * pressure / (GAS_CONSTANT * temperature)
    if departure < -0.25:
        raise InputError(
            f"the gas is too dense for the virial equation at {pressure / 1e5:.3g} bar and "
            f"{temperature - 273.15:.1f} °C (compressibility {1 + departure:.2f}); give density: and viscosity: instead"
        )
    warnings: tuple[str, ...] = ()
    if abs(departure) > 0.10:
        warnings = (
            f"gas density is far from ideal (compressibility {1 + departure:.2f}); good to a few per cent only",
        )
    molar_mass = sum(f * g.molar_mass for f, g in zip(fractions, gases, strict=True)) / 1000
    return pressure * molar_mass / ((1 + departure) * GAS_CONSTANT * temperature), warnings


def _pair_constants(a: Gas, b: Gas) -> tuple[float, float, float]:
    """Critical temperature, pressure and acentric factor of an unlike pair (Prausnitz's combining rules).

    Source: Reid, Prausnitz & Poling 1987, ch. 4, with no binary interaction (from memory).
    """
    if a is b:
        return a.critical_temperature, a.critical_pressure, a.acentric_factor
    tc = math.sqrt(a.critical_temperature * b.critical_temperature)
    volumes = [g.critical_compressibility * GAS_CONSTANT * g.critical_temperature / g.critical_pressure for g in (a, b)]
    volume = ((volumes[0] ** (1 / 3) + volumes[1] ** (1 / 3)) / 2) ** 3
    zc = (a.critical_compressibility + b.critical_compressibility) / 2
    return tc, zc * GAS_CONSTANT * tc / volume, (a.acentric_factor + b.acentric_factor) / 2


def _gas_viscosity(parts: dict[str, float], temperature: float, density: float) -> float:
    """Viscosity in Pa·s at low density; the steam part of a mixture by IAPWS at its dilute limit."""
    from chemicals.viscosity import Lucas_gas, Wilke, mu_IAPWS

    pure: list[float] = []
    for part in parts:
        g = GASES[part]
        if part == "steam":
            pure.append(float(mu_IAPWS(temperature, density if len(parts) == 1 else 1e-3)))
        else:
            cas = g.cas if part in {"helium", "hydrogen"} else None  # quantum-gas factor
            pure.append(
                float(
                    Lucas_gas(
                        temperature,
                        g.critical_temperature,
                        g.critical_pressure,
                        g.critical_compressibility,
                        g.molar_mass,
                        g.dipole,
                        cas,
                    )
                )
            )
    if len(pure) == 1:
        return pure[0]
    return float(Wilke(list(parts.values()), pure, [GASES[part].molar_mass for part in parts]))
