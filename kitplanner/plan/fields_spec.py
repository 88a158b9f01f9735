"""What a FieldSpec is, and short makers for the kinds that need the same settings again and again."""

from __future__ import annotations

from typing import Any, Literal

from msgspec import Struct

from kitplanner.plan.records import Mark

FieldKind = Literal["text", "number", "integer", "flag", "choice", "windows", "days", "date", "refs", "ref"]
ShownWhen = tuple[str, tuple[Any, ...]]


def QT_TRANSLATE_NOOP(_context: str, text: str) -> str:  # noqa: N802 - the name the translation tool looks for
    """Mark a text for translation and return it unchanged; works without Qt."""
    return text


class FieldSpec(Struct, frozen=True, kw_only=True):
    """One editable key of one record kind: all that forms, tables, checks, help and print need to know.

    `low` and `high` are in the record's own unit; `display_scale` turns a value into the shown one (100 for
    a fraction shown as percent), and `unit` is the shown unit. `default` is what an empty optional field
    means, as a value or as a rule in words. `shown_when` names another key of the record and the values of
    it for which this field matters.
    """

    key: str
    label: str
    kind: FieldKind = "number"
    unit: str = ""
    symbol: str = ""
    low: float | None = None
    high: float | None = None
    low_open: bool = False
    high_open: bool = False
    decimals: int = 0
    display_scale: float = 1.0
    choices: tuple[tuple[str, str], ...] = ()
    optional: bool = False
    default: Any = None
    help: str = ""
    mark: Mark = "default"
    source: str = ""
    spread_fraction: float | None = None
    heading: str = ""
    column: bool = False
    shown_when: ShownWhen | None = None
    refs_to: str = ""


PRACTICE = "common practice, no source"
OWN_VALUE = "planning value of this program, no published source"


def number(key: str, label: str, unit: str, span: tuple[float, float], note: str, **more: Any) -> FieldSpec:
    """Make a number with both ends of its range allowed unless said otherwise."""
    return FieldSpec(key=key, label=label, kind="number", unit=unit, low=span[0], high=span[1], help=note, **more)


def above_zero(key: str, label: str, unit: str, high: float, note: str, **more: Any) -> FieldSpec:
    """Make a number that must be greater than zero."""
    return number(key, label, unit, (0, high), note, low_open=True, **more)


def whole(key: str, label: str, unit: str, span: tuple[int, int], note: str, **more: Any) -> FieldSpec:
    """Make a whole number."""
    return FieldSpec(key=key, label=label, kind="integer", unit=unit, low=span[0], high=span[1], help=note, **more)


def percent(key: str, label: str, high: float, note: str, **more: Any) -> FieldSpec:
    """Make a fraction from 0, held as 0-1 and shown as percent."""
    settings = {"unit": "%", "display_scale": 100.0, "low": 0, **more}
    return FieldSpec(key=key, label=label, kind="number", high=high, help=note, **settings)


def efficiency(key: str, label: str, note: str, **more: Any) -> FieldSpec:
    """Make an efficiency: 1 % to 100 %; a step that loses more than 99 % is a fault, not a stage."""
    return percent(key, label, 1, note, low=0.01, **more)


def text(key: str, label: str, note: str, **more: Any) -> FieldSpec:
    """Make a free text."""
    return FieldSpec(key=key, label=label, kind="text", help=note, **{"mark": "own", **more})


def name(note: str) -> FieldSpec:
    """Make the name every record has."""
    label = QT_TRANSLATE_NOOP("Fields", "Name")
    return FieldSpec(key="name", label=label, kind="text", help=note, mark="own", column=True)


def flag(key: str, label: str, note: str, **more: Any) -> FieldSpec:
    """Make a yes-or-no field."""
    return FieldSpec(key=key, label=label, kind="flag", help=note, **more)


def choice(key: str, label: str, choices: tuple[tuple[str, str], ...], note: str, **more: Any) -> FieldSpec:
    """Make a field that holds one of a fixed list of values."""
    return FieldSpec(key=key, label=label, kind="choice", choices=choices, help=note, **more)


def windows(key: str, label: str, note: str, **more: Any) -> FieldSpec:
    """Make a list of clock windows."""
    return FieldSpec(key=key, label=label, kind="windows", help=note, **more)
