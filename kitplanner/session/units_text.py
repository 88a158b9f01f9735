"""Units a user may type behind a number, as factors; `plan/unit_factors.py` has them exactly."""

from __future__ import annotations

from kitplanner.plan.quantities import QuantityError, parse
from kitplanner.plan.unit_factors import exact_factor, is_known_unit

__all__ = ["factor_of_unit", "is_unit"]


def factor_of_unit(typed: str, wanted: str) -> float | None:
    """Return by what to multiply a number in the typed unit to get the wanted one; None when they do not fit.

    Examples
    --------
    >>> factor_of_unit("kWh", "Wh"), factor_of_unit("mΩ", "ohm"), factor_of_unit("rpm", "Wh")
    (1000.0, 0.001, None)
    >>> round(4000 * factor_of_unit("mAh at 3.85 V", "Wh"), 6)
    15.4
    """
    factor = exact_factor(typed, wanted)
    if factor is not None:
        return float(factor)
    try:
        return parse(f"1 {typed}", wanted).value if "Ah" in typed else None
    except QuantityError:
        return None


def is_unit(typed: str) -> bool:
    """Tell whether a text is a unit of any kind, so that a slip of the finger is not called one.

    Examples
    --------
    >>> is_unit("kWh"), is_unit("mAh at 3.7 V"), is_unit("O")
    (True, True, False)
    """
    return is_known_unit(typed) or factor_of_unit(typed, "Wh") is not None
