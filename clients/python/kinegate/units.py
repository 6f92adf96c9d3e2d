"""Numbers with units.

Inside the package a quantity is a plain float in the base unit of its dimension: GeV
(masses and momenta too, c = 1), radian, metre, second, hertz. Arguments may be such a
float or a text with a unit; the constants turn numbers in other units into base units:

>>> from kinegate.units import MEV, DEGREE
>>> 850 * MEV
0.85
>>> energy("850 MeV")
0.85
>>> photon_energy("532 nm")
2.33...e-09
"""

from __future__ import annotations

import math
import re
from typing import Final

from kinegate.errors import ArgumentError, shortened

__all__ = [
    "CENTIMETRE",
    "DEGREE",
    "EV",
    "GEV",
    "KELVIN",
    "KEV",
    "METRE",
    "MEV",
    "MILLIMETRE",
    "MILLIRADIAN",
    "NANOMETRE",
    "NANOSECOND",
    "PEV",
    "PICOSECOND",
    "RADIAN",
    "SECOND",
    "TEV",
    "Quantity",
    "angle",
    "energy",
    "format_angle",
    "format_cross_section",
    "format_energy",
    "format_length",
    "format_time",
    "length",
    "photon_energy",
    "plain",
    "time",
]

EV: Final = 1e-9
"""One electronvolt in GeV."""
KEV: Final = 1e-6
"""One kiloelectronvolt in GeV."""
MEV: Final = 1e-3
"""One megaelectronvolt in GeV."""
GEV: Final = 1.0
"""One gigaelectronvolt in GeV."""
TEV: Final = 1e3
"""One teraelectronvolt in GeV."""
PEV: Final = 1e6
"""One petaelectronvolt in GeV."""
RADIAN: Final = 1.0
"""One radian in radian."""
MILLIRADIAN: Final = 1e-3
"""One milliradian in radian."""
DEGREE: Final = math.pi / 180
"""One degree in radian."""
METRE: Final = 1.0
"""One metre in metre."""
CENTIMETRE: Final = 1e-2
"""One centimetre in metre."""
MILLIMETRE: Final = 1e-3
"""One millimetre in metre."""
NANOMETRE: Final = 1e-9
"""One nanometre in metre."""
SECOND: Final = 1.0
"""One second in second."""
NANOSECOND: Final = 1e-9
"""One nanosecond in second."""
PICOSECOND: Final = 1e-12
"""One picosecond in second."""
KELVIN: Final = 1.0
"""One kelvin in kelvin."""

Quantity = float | str
"""A float in the base unit of what it stands for, or a text such as "1.2 GeV"."""

# Power of ten of the base unit; the degree is the one unit that is no power of ten.
_UNITS: Final[dict[str, dict[str, int]]] = {
    "energy": {"eV": -9, "keV": -6, "MeV": -3, "GeV": 0, "TeV": 3, "PeV": 6, "EeV": 9},
    "angle": {"urad": -6, "mrad": -3, "rad": 0, "deg": 0},
    "length": {"fm": -15, "pm": -12, "nm": -9, "um": -6, "mm": -3, "cm": -2, "m": 0, "km": 3},
    "time": {"as": -18, "fs": -15, "ps": -12, "ns": -9, "us": -6, "ms": -3, "s": 0},
    "cross-section": {"ab": -18, "fb": -15, "pb": -12, "nb": -9, "ub": -6, "mb": -3, "b": 0},
    "frequency": {"Hz": 0, "kHz": 3, "MHz": 6, "GHz": 9, "THz": 12, "PHz": 15},
}
_EXAMPLES: Final = {
    "energy": "1.3 GeV",
    "angle": "25 deg",
    "length": "20 cm",
    "time": "1.5 ns",
    "cross-section": "1 mb",
    "frequency": "400 Hz",
}
_FORM: Final = re.compile(
    r"([-+]?(?:[0-9]+\.?[0-9]*|\.[0-9]+))(?:[eE]([-+]?[0-9]{1,4}))?\s*([A-Za-z]+)"
)

# Planck constant in GeV s and times the speed of light in GeV m: exact in the SI of 2019.
_H_GEV_S: Final = 6.62607015e-34 / 1.602176634e-10
_HC_GEV_M: Final = 6.62607015e-34 * 299792458 / 1.602176634e-10


def energy(value: Quantity) -> float:
    """Read an energy, mass or momentum, in GeV.

    >>> energy("1.5 TeV")
    1500.0
    >>> energy(0.938)
    0.938
    >>> energy("20 deg")
    Traceback (most recent call last):
    kinegate.errors.ArgumentError: '20 deg' is a quantity of angle; energy is needed, ...
    """
    return _read(value, "energy")


def angle(value: Quantity) -> float:
    """Read an angle, in radian.

    >>> angle("180 deg")
    3.14159...
    """
    return _read(value, "angle")


def length(value: Quantity) -> float:
    """Read a length, in metre.

    >>> length("5 cm")
    0.05
    """
    return _read(value, "length")


def time(value: Quantity) -> float:
    """Read a time, in second.

    >>> time("1.5 ns")
    1.5e-09
    """
    return _read(value, "time")


def photon_energy(value: Quantity) -> float:
    """Read the energy of a photon, in GeV, from its energy, wavelength or frequency.

    >>> photon_energy("1 GHz")
    4.1356...e-15
    """
    if not isinstance(value, str):
        return plain(value)
    number, dimension = _parse(value, "energy")
    if dimension == "length":
        if number <= 0:
            raise ArgumentError(f"{value!r} is not above 0, as a wavelength must be", value=value)
        return _HC_GEV_M / number
    if dimension == "frequency":
        return _H_GEV_S * number
    if dimension != "energy":
        raise ArgumentError(
            f"{value!r} is a quantity of {dimension}; "
            "an energy, wavelength or frequency of a photon is needed",
            value=value,
        )
    return number


def _read(value: Quantity, dimension: str) -> float:
    if not isinstance(value, str):
        return plain(value)
    number, found = _parse(value, dimension)
    if found != dimension:
        names = ", ".join(_UNITS[dimension])
        message = f"{value!r} is a quantity of {found}; {dimension} is needed, in {names}"
        raise ArgumentError(message, value=value)
    return number


def plain(value: Quantity) -> float:
    """Read a number without a unit.

    >>> plain(0.5)
    0.5
    """
    try:
        return float(value)
    except (TypeError, ValueError, OverflowError):
        message = f"{shortened(value)} is not a number"
        raise ArgumentError(message, value=value) from None


def _parse(text: str, wanted: str) -> tuple[float, str]:
    parts = _FORM.fullmatch(text.strip())
    if parts is None:
        message = f'{text!r} is not a number with a unit; write for example "{_EXAMPLES[wanted]}"'
        raise ArgumentError(message, value=text)
    number, exponent, name = parts.groups()
    for dimension, units in _UNITS.items():
        if name in units:
            # The decimal that is meant is rounded once: 850 MeV is the double nearest 0.850.
            value = float(f"{number}e{units[name] + int(exponent or 0)}")
            if name == "deg":
                value *= DEGREE
            if math.isinf(value):
                raise ArgumentError(f"{text!r} is out of range", value=text)
            return value, dimension
    names = ", ".join(_UNITS[wanted])
    message = f"unknown unit {name!r} in {text!r}; units of {wanted} are {names}"
    raise ArgumentError(message, value=text)


def format_energy(value: float, digits: int = 7) -> str:
    """Write an energy given in GeV, in the unit that suits it.

    >>> format_energy(0.9110817)
    '911.0817 MeV'
    >>> format_energy(1.23e-4, 2)
    '120 keV'
    """
    return _scaled(value, "energy", digits)


def format_angle(value: float, digits: int = 5) -> str:
    """Write an angle given in radian, in degrees.

    >>> format_angle(0.473)
    '27.101 deg'
    """
    return f"{_digits(value / DEGREE, digits)} deg"


def format_cross_section(value: float, digits: int = 5) -> str:
    """Write a cross-section given in barn, in the unit that suits it.

    >>> format_cross_section(0.17006316)
    '170.06 mb'
    """
    return _scaled(value, "cross-section", digits)


def format_length(value: float, digits: int = 5) -> str:
    """Write a length given in metre, in the unit that suits it.

    >>> format_length(0.0703)
    '7.03 cm'
    """
    return _scaled(value, "length", digits)


def format_time(value: float, digits: int = 5) -> str:
    """Write a time given in second, in the unit that suits it.

    >>> format_time(2.617e-10)
    '261.7 ps'
    """
    return _scaled(value, "time", digits)


def _scaled(value: float, dimension: str, digits: int) -> str:
    units = _UNITS[dimension]
    fitting = [name for name, power in units.items() if abs(value) >= 10.0**power]
    base = next(name for name, power in units.items() if power == 0)
    if value == 0 or not math.isfinite(value):
        name = base
    else:
        name = fitting[-1] if fitting else next(iter(units))
    return f"{_digits(value / 10.0 ** units[name], digits)} {name}"


def _digits(value: float, digits: int) -> str:
    text = f"{value:.{digits}g}"
    # Whole numbers of more digits than asked for stay readable: 120, not 1.2e+02.
    return f"{float(text):.0f}" if "e+" in text and abs(value) < 1e7 else text  # noqa: PLR2004
