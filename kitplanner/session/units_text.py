"""Units a user may type behind a number, other than the field's own: "1.5 kWh", "90 s", "4000 mAh at 3.85 V"."""

from __future__ import annotations

import re

from kitplanner.domain import units

# Prefixes of the International System (BIPM, SI brochure, 9th edition, 2019, table 7) that occur in this trade.
_PREFIXES = {"u": 1e-6, "µ": 1e-6, "μ": 1e-6, "m": 1e-3, "k": 1e3, "M": 1e6}
_PREFIXED = ("Wh", "W", "A", "V", "ohm", "Nm", "m", "F", "J", "g", "s")
_SPELLINGS = {
    "Ω": "ohm",
    "Ohm": "ohm",
    "ohms": "ohm",
    "N m": "Nm",
    "minutes": "min",
    "hours": "h",
    "WH": "Wh",
    "wh": "Wh",
}
_CHARGE = re.compile(r"^(m?)Ah\s*(?:at|@|x|×|,|\*)\s*([\d.,]+)\s*V?$")


def factor_of_unit(typed: str, wanted: str) -> float | None:
    """Return by what to multiply a number in the typed unit to get the wanted one; None when they do not fit.

    Examples
    --------
    >>> factor_of_unit("kWh", "Wh"), factor_of_unit("mΩ", "ohm"), factor_of_unit("rpm", "Wh")
    (1000.0, 0.001, None)
    >>> round(4000 * factor_of_unit("mAh at 3.85 V", "Wh"), 6)
    15.4
    """
    wanted = _plain(wanted)
    if wanted == "Wh" and (charge := _CHARGE.match(typed)):
        volts = float(charge.group(2).replace(",", "."))
        return float(units.wh_from_mah(1.0 if charge.group(1) else units.MA_PER_A, volts))
    typed = _plain(typed)
    known = _known_factors().get((typed, wanted))
    if known is not None:
        return known
    typed_scale, typed_base = _split(typed)
    wanted_scale, wanted_base = _split(wanted)
    if typed_base == wanted_base:
        return typed_scale / wanted_scale
    base = _known_factors().get((typed_base, wanted_base))
    return None if base is None else base * typed_scale / wanted_scale


def is_unit(typed: str) -> bool:
    """Tell whether a text is a unit of any kind, so that a slip of the finger is not called one.

    Examples
    --------
    >>> is_unit("kWh"), is_unit("mAh at 3.7 V"), is_unit("O")
    (True, True, False)
    """
    unit = _plain(typed)
    _, base = _split(unit)
    named = {one for pair in _known_factors() for one in pair}
    return unit in named or base in _PREFIXED or unit in ("%", "Ah", "mAh", "rpm") or bool(_CHARGE.match(typed))


def _plain(unit: str) -> str:
    unit = unit.strip().removesuffix("/day").replace("Ω", "ohm").replace("Ω", "ohm")
    return _SPELLINGS.get(unit, unit)


def _split(unit: str) -> tuple[float, str]:
    """Part a prefix from its unit."""
    if unit not in _PREFIXED and unit[:1] in _PREFIXES and unit[1:] in _PREFIXED:
        return _PREFIXES[unit[0]], unit[1:]
    return 1.0, unit


def _known_factors() -> dict[tuple[str, str], float]:
    hour = units.MINUTES_PER_HOUR
    return {
        ("J", "Wh"): units.WH_PER_J,
        ("h", "min"): hour,
        ("s", "min"): 1.0 / hour,
        ("min", "h"): 1.0 / hour,
        ("lb", "kg"): units.KG_PER_LB,
        ("g", "kg"): 1e-3,
        ("cm", "m"): 1e-2,
        ("ft", "m"): units.M_PER_FT,
    }
