"""What must be true before Qt may start: a sound pair of PySide6 and Python, a screen, the system's libraries.

Everything here runs before any Qt class is used and answers with one sentence, or None when all is well.
"""

from __future__ import annotations

import ctypes
import os
import sys
from collections.abc import Mapping
from pathlib import Path

# Each Qt call that returns nothing loses one reference to None with this release on these interpreters
# (its stable-ABI library was built for 3.12, where None is not counted): after about 5,000 calls
# Python ends with "none_dealloc". Measured here; 6.11.3 and older, and 3.12 and newer, are sound.
UNSOUND_QT = "6.12.0"
UNSOUND_PYTHON = ((3, 10), (3, 11))

APT_LINE = (
    "apt-get install libegl1 libgl1 libglib2.0-0 libdbus-1-3 libfontconfig1 libxkbcommon0 libxcb-cursor0 "
    "libxcb-icccm4 libxcb-keysyms1 libxcb-shape0 libxcb-xkb1 libxkbcommon-x11-0"
)
WITHOUT_SCREEN = (
    "kitplanner effort PLAN, kitplanner balance PLAN, kitplanner rota PLAN, kitplanner bench PLAN STATION, "
    "and on paper kitplanner print PLAN effort -o FILE.pdf"
)


def unsound_pair(qt_version: str, python_version: tuple[int, int]) -> str | None:
    """Refuse the pair of PySide6 and Python that is known to end in the middle of work."""
    if qt_version != UNSOUND_QT or python_version not in UNSOUND_PYTHON:
        return None
    python = ".".join(str(part) for part in python_version)
    return (
        f"PySide6 {qt_version} on Python {python} has a fault that ends the program after a few thousand steps and "
        f"loses your work; install another version with: pip install 'PySide6-Essentials<6.12'"
    )


def no_screen(environment: Mapping[str, str], platform: str = sys.platform) -> str | None:
    """Refuse to start where there is no screen to draw on, and name what works without one."""
    if not platform.startswith("linux") or environment.get("QT_QPA_PLATFORM"):
        return None
    if environment.get("DISPLAY") or environment.get("WAYLAND_DISPLAY"):
        return None
    return (
        "There is no screen here to open a window on (neither DISPLAY nor WAYLAND_DISPLAY is set). "
        f"The same answers without a window: {WITHOUT_SCREEN}."
    )


def silent_display(environment: Mapping[str, str]) -> str | None:
    """Refuse a DISPLAY that nobody answers at; Qt itself would end with a core dump there."""
    if not uses_x11(environment):
        return None
    try:
        xcb = ctypes.CDLL("libxcb.so.1")
    except OSError as error:
        return missing_library(error)
    xcb.xcb_connect.restype = ctypes.c_void_p
    for name in ("xcb_connection_has_error", "xcb_disconnect"):
        getattr(xcb, name).argtypes = [ctypes.c_void_p]
    connection = xcb.xcb_connect(environment.get("DISPLAY", "").encode() or None, None)
    broken = xcb.xcb_connection_has_error(connection)
    xcb.xcb_disconnect(connection)
    if not broken:
        return None
    return (
        f"The screen named by DISPLAY ({environment.get('DISPLAY', '')!r}) does not answer; start the program from a "
        f"desktop session, or work without a window: {WITHOUT_SCREEN}."
    )


def missing_plugin_library(environment: Mapping[str, str], plugins: Path) -> str | None:
    """Refuse if the X11 plugin of Qt lacks a system library; Qt itself would end with a core dump there."""
    plugin = plugins / "libqxcb.so"
    if not uses_x11(environment) or not plugin.exists():
        return None
    try:
        ctypes.CDLL(str(plugin))
    except OSError as error:
        return missing_library(error)
    return None


def missing_library(error: Exception) -> str:
    """Say which system library is missing and how to get it on Debian and its kin."""
    name = str(error).split(":", maxsplit=1)[0]
    return f"The system library {name} is missing; on Debian or Ubuntu install it as root with: {APT_LINE}"


def uses_x11(environment: Mapping[str, str], platform: str = sys.platform) -> bool:
    """Whether Qt will draw through X11 with these settings."""
    if not platform.startswith("linux"):
        return False
    chosen = environment.get("QT_QPA_PLATFORM", "").split(":", maxsplit=1)[0].split(";", maxsplit=1)[0]
    if chosen:
        return chosen == "xcb"
    return bool(environment.get("DISPLAY")) and not environment.get("WAYLAND_DISPLAY")


def before_qt() -> str | None:
    """All checks that need no Qt library, in order."""
    import PySide6  # only its version; the libraries load later

    return (
        unsound_pair(PySide6.__version__, sys.version_info[:2]) or no_screen(os.environ) or silent_display(os.environ)
    )
