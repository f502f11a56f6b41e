"""The closed list of units, their dimensions, and the conversion of what data files may use besides."""
from decimal import Decimal
from functools import lru_cache

import pint

_registry = pint.UnitRegistry(non_int_type=Decimal)
PURE = _registry.Unit("dimensionless").dimensionality

# name: (symbol, factor to SI, engineering prefixes in sentences, the same unit for pint)
_UNITS = {
    "ratio": ("", "1", False, "dimensionless"), "percent": ("%", "0.01", False, "dimensionless"), "count": ("", "1", False, "dimensionless"),
    "process_unit": ("", "1", False, "dimensionless"),      # whatever the process is measured in; a pure number here
    "nat": ("nat", "1", False, "dimensionless"), "bit": ("bit", "0.6931471805599453", False, "dimensionless"),
    "radian": ("rad", "1", False, "dimensionless"), "degree": ("°", "0.017453292519943295", False, "dimensionless"),
    "volt": ("V", "1", True, "volt"), "ampere": ("A", "1", True, "ampere"), "ohm": ("Ω", "1", True, "ohm"), "siemens": ("S", "1", True, "siemens"),
    "farad": ("F", "1", True, "farad"), "henry": ("H", "1", True, "henry"), "hertz": ("Hz", "1", True, "1 / second"),
    "second": ("s", "1", True, "second"), "metre": ("m", "1", True, "metre"), "watt": ("W", "1", True, "watt"),
    "volt_ampere": ("VA", "1", True, "watt"), "joule": ("J", "1", True, "joule"), "coulomb": ("C", "1", True, "coulomb"),
    "celsius": ("°C", "1", False, "kelvin"), "kelvin": ("K", "1", False, "kelvin"), "per_kelvin": ("1/K", "1", False, "1 / kelvin"),
    "ohm_per_volt": ("Ω/V", "1", True, "ohm / volt"), "ohm_per_metre": ("Ω/m", "1", True, "ohm / metre"),
    "farad_per_metre": ("F/m", "1", True, "farad / metre"), "henry_per_metre": ("H/m", "1", True, "henry / metre"),
    "square_metre": ("m²", "1", False, "metre ** 2"), "square_millimetre": ("mm²", "0.000001", False, "metre ** 2"),
    "per_second": ("1/s", "1", False, "1 / second"), "radian_per_second": ("rad/s", "1", False, "1 / second"),
    "volt_squared": ("V²", "1", False, "volt ** 2"), "ampere_squared": ("A²", "1", False, "ampere ** 2"), "ohm_squared": ("Ω²", "1", False, "ohm ** 2"),
    "siemens_squared": ("S²", "1", False, "siemens ** 2"), "second_squared": ("s²", "1", False, "second ** 2"),
    "volt_per_ampere": ("V/A", "1", True, "ohm"), "ampere_per_volt": ("A/V", "1", True, "siemens"), "per_volt": ("1/V", "1", False, "1 / volt"),
    "per_volt_squared": ("1/V²", "1", False, "1 / volt ** 2"),
    "per_ohm": ("1/Ω", "1", True, "siemens"), "per_ampere": ("1/A", "1", False, "1 / ampere"), "ohm_metre": ("Ω·m", "1", True, "ohm * metre"),
    "volt_second": ("V·s", "1", True, "volt * second"), "ampere_second": ("A·s", "1", True, "coulomb"), "ohm_per_kelvin": ("Ω/K", "1", True, "ohm / kelvin"),
    "per_farad": ("1/F", "1", False, "1 / farad"), "per_metre": ("1/m", "1", False, "1 / metre"),
    "ampere_squared_second": ("A²s", "1", False, "ampere ** 2 * second"), "degree_per_second": ("°/s", "0.017453292519943295", False, "1 / second"),
}


def bundled():
    """The units as the bundle carries them."""
    return {name: {"symbol": symbol, "factor": float(factor) if float(factor) != 1 else 1, "prefixes": prefixes}
            for name, (symbol, factor, prefixes, _) in _UNITS.items()}


def names():
    """Names of the closed list."""
    return sorted(_UNITS)


@lru_cache(maxsize=None)
def dimension(name):
    """The dimension of a unit of the closed list, or None for an unknown one."""
    return None if name not in _UNITS else _registry.parse_units(_UNITS[name][3]).dimensionality


def to_si(value, unit, target):
    """A number in `unit` (any unit pint knows, or one of the list) as the correctly rounded SI float of `target`'s dimension.

    Raises ValueError, saying what would be right, where the unit is unknown or of another dimension.
    """
    number = Decimal(repr(value)) if isinstance(value, float) else Decimal(value)
    if unit in _UNITS:
        if dimension(unit) != dimension(target):
            raise ValueError(f"{unit} is not a unit of {target}")
        return float(number * Decimal(_UNITS[unit][1]))
    try:
        quantity = _registry.Quantity(number, _registry.parse_units(unit))
    except Exception:      # pint raises a dozen kinds, all of which mean: not a unit
        raise ValueError(f"{unit!r} is not a unit; use {target} or a prefixed form of it") from None
    if quantity.dimensionality != dimension(target):
        raise ValueError(f"{unit} is not a unit of {target}")
    return float(quantity.to_base_units().magnitude)
