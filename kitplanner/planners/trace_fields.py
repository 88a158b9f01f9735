"""Steps of a trace: a field of a record with its unit, mark and source, or a value computed from others."""

from __future__ import annotations

import math
from collections.abc import Sequence

from kitplanner.plan.fields import FIELDS, FieldSpec
from kitplanner.plan.records import Note, Record, Window
from kitplanner.planners.results import TraceStep


class TraceError(ValueError):
    """A number that cannot be traced: one sentence with the reason."""


def figure(value: float | None, decimals: int = 2) -> str:
    """Return a number without needless zeros, a dash for none.

    Examples
    --------
    >>> figure(6.0), figure(0.765, 3), figure(None), figure(-0.0001)
    ('6', '0.765', '-', '0')
    """
    if value is None or not math.isfinite(value):
        return "-"
    text = f"{value:.{decimals}f}"
    text = text.rstrip("0").rstrip(".") if "." in text else text
    return "0" if text == "-0" else text


def computed(label: str, value: float | None, unit: str, decimals: int = 2, *, record: str = "") -> TraceStep:
    """Return a step for a value computed by the program."""
    return TraceStep(
        label=label,
        value=figure(value, decimals),
        unit=unit,
        mark="computed",
        source="from the steps of this trace",
        record=record,
    )


def words(label: str, value: str, *, record: str = "") -> TraceStep:
    """Return a step for a computed value that is not a number."""
    return TraceStep(
        label=label, value=value, unit="", mark="computed", source="from the steps of this trace", record=record
    )


def field_step(kind: str, record: Record, key: str) -> TraceStep:
    """Return a step for one field: its value (or default), and where it comes from.

    A note of the record wins over the field's own mark and source.

    Parameters
    ----------
    kind : str
        Kind of record as in FIELDS
    record : Record
        The record
    key : str
        The field

    Returns
    -------
    TraceStep
        Label, value, unit, mark and source
    """
    spec = spec_of(kind, key)
    value = getattr(record, key)
    notes: dict[str, Note] = getattr(record, "notes", {})
    note = notes.get(key)
    mark, source = (note.mark, note.source) if note is not None else (spec.mark, spec.source)
    is_default = value is None and spec.default is not None
    if value is not None and note is None and _differs(value, spec.default):
        # The field's mark speaks of its default; another value without a note is the plan's own.
        mark, source = "own", ""
    return TraceStep(
        label=spec.label,
        value=shown(spec, spec.default if is_default else value),
        unit=spec.unit,
        mark=str(mark),
        source=source,
        record=getattr(record, "id", ""),
        key=key,
    )


def _differs(value: object, default: object) -> bool:
    return default is not None and value != default


def field_steps(kind: str, record: Record, keys: Sequence[str]) -> tuple[TraceStep, ...]:
    """Return steps for several fields of one record."""
    return tuple(field_step(kind, record, key) for key in keys)


def spec_of(kind: str, key: str) -> FieldSpec:
    """Return the FieldSpec of a field."""
    for spec in FIELDS[kind]:
        if spec.key == key:
            return spec
    raise TraceError(f"{kind} has no field {key}.")


def shown(spec: FieldSpec, value: object) -> str:
    """Return a field's value as the form shows it, without its unit."""
    if value is None:
        return "-"
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, (int, float)):
        return figure(value * spec.display_scale, spec.decimals)
    if isinstance(value, tuple):
        return ", ".join(_item(item) for item in value) or "-"
    labels = {str(choice): label for choice, label in spec.choices}
    return labels.get(str(value), str(value))


def _item(item: object) -> str:
    return f"{item.start}-{item.end}" if isinstance(item, Window) else str(item)
