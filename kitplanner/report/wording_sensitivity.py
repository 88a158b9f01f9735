"""What matters most, in words: one sentence for the picture, one line and table row per input."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from types import MappingProxyType

from kitplanner.plan.fields import field
from kitplanner.plan.records import Plan
from kitplanner.planners.sensitivity_records import InputName, Sensitivity, SensitivityRow, Variation
from kitplanner.report.wording import counted, listed, minutes, number, percent, plain, sentence

HEADER = ("Input", "Low value", "Answer at low", "High value", "Answer at high", "Share of the spread", "Mark")
NOT_UNCERTAIN = "a choice"
NO_ONE_VALUE = "each their own"
_NO_NEED = "nothing needed"
_NO_CHARGE = "no charge"


_INPUTS: Mapping[InputName, str] = MappingProxyType(
    {
        "person": "watts of {name}",
        "people_shared": "watts of all people together",
        "attendance": "share of offered minutes turned",
        "station": "output of {name}",
        "station_losses": "losses in {name}",
        "store_in": "efficiency into {name}",
        "store_out": "efficiency out of {name}",
        "store_round_trip": "efficiency into and out of the stores",
        "store_start": "start charge of {name}",
        "store_health": "health of {name}",
        "other_source": "energy from {name}",
        "device_use": "use of {name}",
        "device_start": "own start charge of {name}",
        "device_capacity": "battery of {name}",
        "device_rate": "charge rate of {name}",
        "device_losses": "charging losses of {name}",
        "margin": "margin on use",
        "temperature": "air temperature",
    }
)


def input_words(plan: Plan, variation: Variation) -> str:
    """Return what varies, with the name of its record, as part of a sentence."""
    name = _name(plan, variation.record)
    if variation.name == "person" and not name:
        return f"each of {counted(int(variation.central), 'person', 'people')} alone"
    if variation.name == "station_losses" and variation.key == "eta_fraction":
        return f"efficiency of {name}"
    return _INPUTS[variation.name].format(name=name)


def value_words(variation: Variation, value: float) -> str:
    """Return a value of an input with its unit; factors as "times the estimate"."""
    if variation.name == "person":
        return f"{number(value)} W" if variation.record else NO_ONE_VALUE
    if variation.name == "people_shared" or variation.key == "stages":
        return f"{number(value, 2)} times the estimate"
    if variation.unit.startswith("%"):
        return f"{percent(value)}{variation.unit[1:]}"
    decimals = field(variation.kind, variation.key).decimals or None
    return f"{number(value, decimals)} {variation.unit}".strip()


def answer_words(result: Sensitivity, value: float | None) -> str:
    """Return an answer with its unit; why there is none otherwise."""
    if result.question == "coverage":
        return _NO_NEED if value is None else percent(value)
    return _NO_CHARGE if value is None else minutes(value)


def share_words(row: SensitivityRow) -> str:
    """Return an input's share of the answer's spread; a choice has none."""
    return NOT_UNCERTAIN if row.variation.is_choice else percent(row.variance_fraction)


def sensitivity_sentence(plan: Plan, result: Sensitivity, most: int = 3) -> str:
    """Return which few inputs move the answer most, in one sentence."""
    what = "coverage" if result.question == "coverage" else "minutes"
    if not result.rows:
        return f"There is no answer whose inputs could be compared for the {what}."
    uncertain = [row for row in result.rows if not row.variation.is_choice]
    if not uncertain:
        return f"No uncertain input moves the {what}."
    first = uncertain[:most]
    named = [
        f"{input_words(plan, row.variation)} ({answer_words(result, row.answer_low)} "
        f"to {answer_words(result, row.answer_high)})"
        for row in first
    ]
    share = sum(row.variance_fraction for row in first)
    tail = f"; together they are {percent(share)} of its spread" if len(uncertain) > len(first) else ""
    verb = "depends" if result.question == "coverage" else "depend"
    return sentence(
        f"the {what} ({answer_words(result, result.answer)}) {verb} most on {listed(named)}{tail}; "
        "each alone from its low to its high value, all others in the middle"
    )


def row_sentence(plan: Plan, result: Sensitivity, row: SensitivityRow) -> str:
    """Return one input in one sentence."""
    variation = row.variation
    low, high = answer_words(result, row.answer_low), answer_words(result, row.answer_high)
    return sentence(
        f"{input_words(plan, variation)}: {value_words(variation, variation.low)} gives {low}, "
        f"{value_words(variation, variation.high)} gives {high} ({variation.mark})"
    )


def table_rows(plan: Plan, result: Sensitivity) -> tuple[tuple[str, ...], ...]:
    """Return the table twin of the picture, one row per input in its order, under `HEADER`."""
    return tuple(
        (
            sentence(input_words(plan, row.variation)).rstrip("."),
            value_words(row.variation, row.variation.low),
            answer_words(result, row.answer_low),
            value_words(row.variation, row.variation.high),
            answer_words(result, row.answer_high),
            share_words(row),
            row.variation.mark,
        )
        for row in result.rows
    )


def bar_fractions(result: Sensitivity) -> tuple[tuple[float, float], ...]:
    """Return each row's bar from low to high answer, on a common scale from 0 (least answer shown) to 1 (greatest).

    An answer that does not exist stands at the end of the scale it left by: no need is the greatest coverage, no charge
    the longest time.
    """
    known = [value for row in result.rows for value in (row.answer_low, row.answer_high) if value is not None]
    if result.answer is not None:
        known.append(result.answer)
    if not known:
        return ()
    least, greatest = min(known), max(known)
    width = greatest - least

    def place(value: float | None) -> float:
        if value is None or width <= 0.0 or not math.isfinite(value):
            return 1.0
        return (value - least) / width

    return tuple((place(row.answer_low), place(row.answer_high)) for row in result.rows)


def _name(plan: Plan, key: str) -> str:
    sections: Sequence[Sequence[object]] = (
        plan.people,
        plan.stations,
        plan.stores,
        plan.devices,
        plan.other_sources,
    )
    for records in sections:
        for record in records:
            if getattr(record, "id", None) == key:
                return plain(str(getattr(record, "name", ""))) or plain(key)
    return plain(key)
