"""Units a user may type behind a number other than the field's own, with exact factors between them.

Factors are fractions, so that a number typed in one unit and written back in another comes out the same to
the last digit. Letters of the wrong size are taken only where they leave one meaning: `kwh` is kWh, but `Mw`
could be mW or MW and is refused.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from functools import cache
from types import MappingProxyType

from kitplanner.domain import units

# Prefixes of the International System (BIPM, SI brochure, 9th edition, 2019, table 7) that occur in this trade.
_PREFIXES: Mapping[str, Fraction] = MappingProxyType(
    {
        "u": Fraction(1, 10**6),
        "µ": Fraction(1, 10**6),
        "μ": Fraction(1, 10**6),
        "m": Fraction(1, 1000),
        "k": Fraction(1000),
        "M": Fraction(10**6),
    }
)
_PREFIXED = ("Wh", "Ah", "W", "A", "V", "ohm", "Nm", "m", "F", "J", "g", "s")
_SPELLINGS: Mapping[str, str] = MappingProxyType(
    {
        "Ω": "ohm",
        "Ohm": "ohm",
        "ohms": "ohm",
        "N m": "Nm",
        "N·m": "Nm",
        "N.m": "Nm",
        "w": "W",
        "watt": "W",
        "watts": "W",
        "Watt": "W",
        "v": "V",
        "volt": "V",
        "volts": "V",
        "a": "A",
        "wh": "Wh",
        "WH": "Wh",
        "kwh": "kWh",
        "KWH": "kWh",
        "Kwh": "kWh",
        "KWh": "kWh",
        "mah": "mAh",
        "MAH": "mAh",
        "ah": "Ah",
        "AH": "Ah",
        "j": "J",
        "kj": "kJ",
        "minute": "min",
        "minutes": "min",
        "mins": "min",
        "Min": "min",
        "hour": "h",
        "hours": "h",
        "hr": "h",
        "hrs": "h",
        "second": "s",
        "seconds": "s",
        "sec": "s",
        "day": "d",
        "days": "d",
        "year": "years",
        "time": "times",
        "percent": "%",
        "rpm": "turns/min",
        "1/min": "turns/min",
        "C": "°C",
        "degC": "°C",
        "pcs": "",
    }
)
# Unit -> size in the base unit of its family, the first of the pair.
_FAMILIES: Mapping[str, Mapping[str, Fraction]] = MappingProxyType(
    {
        "Wh": MappingProxyType({"Wh": Fraction(1), "J": 1 / Fraction(int(units.J_PER_WH))}),
        "min": MappingProxyType(
            {
                "min": Fraction(1),
                "h": Fraction(int(units.MINUTES_PER_HOUR)),
                "s": 1 / Fraction(int(units.MINUTES_PER_HOUR)),
                "d": Fraction(units.MINUTES_PER_DAY),
            }
        ),
        "kg": MappingProxyType(
            {"kg": Fraction(1), "g": Fraction(1, 1000), "lb": Fraction(str(units.KG_PER_LB))},
        ),
        "m": MappingProxyType(
            {
                "m": Fraction(1),
                "cm": Fraction(1, 100),
                "ft": Fraction(str(units.M_PER_FT)),
                "in": Fraction(str(units.CM_PER_IN)) / 100,
            }
        ),
    }
)
_OFFERED: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "Wh": ("Wh", "kWh", "mWh", "J", "kJ", "MJ"),
        "W": ("W", "kW", "mW"),
        "A": ("A", "mA", "µA"),
        "Ah": ("Ah", "mAh"),
        "V": ("V", "mV", "kV"),
        "ohm": ("ohm", "mohm", "kohm"),
        "Nm": ("N m", "mNm"),
        "min": ("min", "h", "s", "d"),
        "h": ("h", "min", "s", "d"),
        "kg": ("kg", "g", "lb"),
        "m": ("m", "cm", "mm", "ft", "in"),
        "J": ("J", "kJ", "MJ", "Wh", "kWh"),
    }
)
_RATES = ("/day", " a day", " per day", "/month", " a month", " per month")
_PLAIN = ("%", "turns/min", "years", "times", "°C", "1/h")


def exact_factor(typed: str, wanted: str) -> Fraction | None:
    """Return by what to multiply a number in the typed unit to get the wanted one; None when they do not fit.

    Examples
    --------
    >>> exact_factor("kWh", "Wh"), exact_factor("J", "Wh"), exact_factor("rpm", "Wh")
    (Fraction(1000, 1), Fraction(1, 3600), None)
    >>> exact_factor("Wh/day", "Wh") is None, exact_factor("kWh", "Wh/day")
    (True, Fraction(1000, 1))
    """
    return _factor(typed.strip(), wanted.strip())


def units_for(unit: str) -> tuple[str, ...]:
    """Return units a number of this unit may be typed in, its own first.

    Examples
    --------
    >>> units_for("Wh")[:3], units_for("turns/min")
    (('Wh', 'kWh', 'mWh'), ('turns/min',))
    """
    base, rate = _without_rate(unit)
    offered = _OFFERED.get(_spelled(base), (base,))
    return tuple(dict.fromkeys((unit, *(f"{one}{rate}" for one in offered))))


def is_known_unit(typed: str) -> bool:
    """Tell whether a text is a unit of any kind, so that a slip of the finger is not called one.

    Examples
    --------
    >>> is_known_unit("kWh"), is_known_unit("Wh/day"), is_known_unit("O")
    (True, True, False)
    """
    unit = _spelled(_without_rate(typed.strip())[0])
    _, base = _split(unit)
    return base in _PREFIXED or unit in _PLAIN or any(unit in family for family in _FAMILIES.values())


@cache
def _factor(typed: str, wanted: str) -> Fraction | None:
    if typed == wanted:
        return Fraction(1)
    wanted_base, wanted_rate = _without_rate(wanted)
    typed_base, typed_rate = _without_rate(typed)
    if typed_rate and not _same_rate(typed_rate, wanted_rate):
        return None
    typed_size, typed_family = _sized(_spelled(typed_base))
    wanted_size, wanted_family = _sized(_spelled(wanted_base))
    return typed_size / wanted_size if typed_family == wanted_family and typed_family else None


def _without_rate(unit: str) -> tuple[str, str]:
    """Part "/day" and its like from a unit."""
    for rate in _RATES:
        if unit.endswith(rate):
            return unit[: -len(rate)].strip(), rate
    return unit, ""


def _same_rate(one: str, other: str) -> bool:
    return bool(other) and one[-3:] == other[-3:]


def _spelled(unit: str) -> str:
    unit = unit.replace("Ω", "ohm").replace("Ω", "ohm")
    return _SPELLINGS.get(unit, unit)


def _split(unit: str) -> tuple[Fraction, str]:
    """Part a prefix from its unit."""
    if unit not in _PREFIXED and unit[:1] in _PREFIXES and unit[1:] in _PREFIXED:
        return _PREFIXES[unit[0]], unit[1:]
    return Fraction(1), unit


def _sized(unit: str) -> tuple[Fraction, str]:
    """Return the size of a unit in the base of its family, and that base."""
    # "min" would otherwise be the prefix m and an unknown unit; whole units come first.
    for prefix, base in ((Fraction(1), unit), _split(unit)):
        for family, sizes in _FAMILIES.items():
            if base in sizes:
                return prefix * sizes[base], family
    prefix, base = _split(unit)
    return prefix, base
