"""A guard for overridden Qt virtuals: an exception inside one must never reach Qt.

On CPython 3.11 an exception raised by C code inside a virtual that Qt called from Python ends the process.
The guard hands it to `sys.excepthook`, which reports it, and answers with a safe default.
"""

from __future__ import annotations

import functools
import sys
from collections.abc import Callable
from typing import Any


def guarded(default: Any = None) -> Callable[[Callable[..., Any]], Callable[..., Any]]:
    """Decorate an overridden virtual so that it reports an exception and returns `default` instead."""

    def decorate(method: Callable[..., Any]) -> Callable[..., Any]:
        @functools.wraps(method)
        def call(*args: Any, **kwargs: Any) -> Any:
            try:
                return method(*args, **kwargs)
            except Exception:  # noqa: BLE001 - handed to the hook, which reports it
                sys.excepthook(*sys.exc_info())  # type: ignore[arg-type]
                return default

        return call

    return decorate
