"""Preferences and view state, typed; the only place that reads or writes QSettings.

Nothing of the plan lives here, and nothing here is undoable.
"""

from __future__ import annotations

import hashlib
import os
from collections.abc import Iterable
from pathlib import Path
from typing import Literal, cast, get_args

from PySide6.QtCore import QByteArray, QSettings

Scheme = Literal["system", "light", "dark", "contrast"]

RECENT_LIMIT = 10
TEXT_PERCENT_LOW = 100
TEXT_PERCENT_HIGH = 200


class AppSettings:
    """Preferences of one user; every value is read with its type, since an INI file only holds text."""

    def __init__(self, store: QSettings | None = None) -> None:
        self._store = QSettings() if store is None else store

    @property
    def scheme(self) -> Scheme:
        """Colour scheme of the window."""
        value = self._text("view/scheme", "system")
        return cast(Scheme, value) if value in get_args(Scheme) else "system"

    @scheme.setter
    def scheme(self, value: Scheme) -> None:
        self._store.setValue("view/scheme", value)

    @property
    def text_percent(self) -> int:
        """Size of all text, from 100 to 200 percent of the system's."""
        value = cast(int, self._store.value("view/text_percent", TEXT_PERCENT_LOW, type=int))
        return min(TEXT_PERCENT_HIGH, max(TEXT_PERCENT_LOW, value))

    @text_percent.setter
    def text_percent(self, value: int) -> None:
        self._store.setValue("view/text_percent", min(TEXT_PERCENT_HIGH, max(TEXT_PERCENT_LOW, int(value))))

    @property
    def has_started(self) -> bool:
        """True once the ways to begin a plan were shown without being asked for."""
        return cast(bool, self._store.value("view/started", False, type=bool))

    @has_started.setter
    def has_started(self, value: bool) -> None:
        self._store.setValue("view/started", value)

    @property
    def section(self) -> str:
        """Section shown last, empty at the first start."""
        return self._text("view/section", "")

    @section.setter
    def section(self, value: str) -> None:
        self._store.setValue("view/section", value)

    @property
    def page(self) -> str:
        """Answer page shown last, empty at the first start."""
        return self._text("view/page", "")

    @page.setter
    def page(self, value: str) -> None:
        self._store.setValue("view/page", value)

    def state(self, name: str) -> QByteArray:
        """Size and position of a window or splitter; empty when never kept."""
        return cast(QByteArray, self._store.value(f"layout/{name}", QByteArray(), type=QByteArray))

    def keep_state(self, name: str, state: QByteArray) -> None:
        """Keep size and position of a window or splitter."""
        self._store.setValue(f"layout/{name}", state)

    @property
    def recent_files(self) -> tuple[Path, ...]:
        """Files opened lately, newest first; also those that are missing now."""
        return tuple(Path(text) for text in self._texts("files/recent"))

    def add_recent(self, path: Path) -> None:
        """Put a file first in the list of recent files."""
        name = os.path.abspath(path)
        names = [name, *(other for other in self._texts("files/recent") if other != name)]
        self._store.setValue("files/recent", names[:RECENT_LIMIT])

    def clear_recent(self) -> None:
        """Forget all recent files."""
        self._store.remove("files/recent")

    def acknowledged(self, path: Path) -> frozenset[str]:
        """Cautions acknowledged for the plan in this file."""
        return frozenset(self._texts(f"cautions/{_key(path)}"))

    def keep_acknowledged(self, path: Path, cautions: Iterable[str]) -> None:
        """Keep which cautions were acknowledged for the plan in this file."""
        self._store.setValue(f"cautions/{_key(path)}", sorted(cautions))

    def sync(self) -> None:
        """Write everything out now."""
        self._store.sync()

    def _text(self, key: str, default: str) -> str:
        return cast(str, self._store.value(key, default, type=str))

    def _texts(self, key: str) -> list[str]:
        values = cast("list[str]", self._store.value(key, [], type=list))
        return [str(value) for value in values if value]


def _key(path: Path) -> str:
    """Name a file by a short digest: a path may hold signs that QSettings reads as groups."""
    return hashlib.sha256(os.path.abspath(path).encode("utf-8", "surrogateescape")).hexdigest()[:24]
