"""Rows to and from the clipboard, in the forms that spreadsheets, mail and this program take."""

from __future__ import annotations

from collections.abc import Sequence

from msgspec import structs
from PySide6.QtCore import QMimeData
from PySide6.QtGui import QClipboard

from kitplanner.plan.exchange_export import ExportChoices, Sheet, copied, sheet_of
from kitplanner.plan.records import Plan
from kitplanner.session.field_parsing import number_style
from kitplanner.session.field_text import translate

TABBED = "text/tab-separated-values"


def put_rows(clipboard: QClipboard, plan: Plan, section: str, ids: Sequence[str], keys: tuple[str, ...] = ()) -> Sheet:
    """Put records on the clipboard, with their ids so that they find back; `keys` are their fields, empty for all.

    Rows come in the order of `ids`, which is the order on the screen.

    Raises
    ------
    ExchangeError
        The section has no table of its own to give.
    """
    choices = ExportChoices(
        with_names=True,
        decimal_comma=number_style().decimal == ",",
        keys=("id", *keys) if keys else (),
        ids=tuple(ids),
        say=translate,
    )
    sheet = sheet_of(_in_order_of(plan, section, ids), section, choices)
    forms = copied(sheet)
    data = QMimeData()
    data.setData(TABBED, forms.tsv.encode())
    data.setText(forms.tsv)
    data.setHtml(forms.html)
    clipboard.setMimeData(data)
    return sheet


def rows_on(clipboard: QClipboard) -> str:
    """Return the text of the rows on the clipboard, empty where there are none."""
    data = _held(clipboard)
    if data is None:
        return ""
    if data.hasFormat(TABBED):
        return bytes(data.data(TABBED).data()).decode("utf-8", "replace")
    return data.text() if data.hasText() else ""


def _held(clipboard: QClipboard) -> QMimeData | None:
    """Return what is held; Qt gives nothing where the clipboard is empty, whatever its stubs say."""
    return clipboard.mimeData()


def _in_order_of(plan: Plan, section: str, ids: Sequence[str]) -> Plan:
    place = {one: number for number, one in enumerate(ids)}
    records = getattr(plan, section)
    ordered = sorted(records, key=lambda record: place.get(record.id, len(place)))
    return structs.replace(plan, **{section: tuple(ordered)})
