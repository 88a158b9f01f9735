"""Mouse and keyboard on a display of their own: real X events by xdotool, and what the program shows read back.

No window manager runs there. What one would do for a user, giving the keys to the window that has just come up, is
done here and counted as no step.
"""

from __future__ import annotations

import json
import os
import select
import shutil
import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path
from types import TracebackType

from PySide6.QtCore import QLibraryInfo

from kitplanner.app.qt_check import missing_plugin_library

HERE = Path(__file__).parent
ROOT = HERE.parents[1]
SCREEN = "1500x1000x24"
PATIENCE_S = 30.0


def why_not() -> str:
    """Say what is missing for a walk, empty when nothing is."""
    missing = [name for name in ("Xvfb", "xdotool") if shutil.which(name) is None]
    if missing:
        return f"{' and '.join(missing)} not installed"
    plugins = Path(QLibraryInfo.path(QLibraryInfo.LibraryPath.PluginsPath)) / "platforms"
    return missing_plugin_library({"DISPLAY": ":0", "QT_QPA_PLATFORM": "xcb"}, plugins) or ""


class Display:
    """An X server without a screen, on a free number that it chooses itself."""

    def __init__(self) -> None:
        read, write = os.pipe()
        command = ["Xvfb", "-displayfd", str(write), "-screen", "0", SCREEN, "-nolisten", "tcp", "-terminate"]
        silent = subprocess.DEVNULL
        self._server = subprocess.Popen(command, pass_fds=(write,), stdout=silent, stderr=silent)
        os.close(write)
        with os.fdopen(read) as answer:
            number = answer.readline().strip()
        if not number:
            self.close()
            raise AssertionError("the X server did not start")
        self.name = f":{number}"

    def close(self) -> None:
        self._server.terminate()
        try:
            self._server.wait(10)
        except subprocess.TimeoutExpired:
            self._server.kill()
            self._server.wait(10)


class Part(dict):
    """One thing of the accessibility tree."""

    def __getattr__(self, key: str):
        return self[key]

    @property
    def middle(self) -> tuple[int, int]:
        x, y, width, height = self["box"]
        return x + width // 2, y + height // 2


class Walker:
    """One user at one program; counts clicks and keys, and times itself."""

    def __init__(self, display: Display, home: Path, plan: Path | None = None) -> None:
        self.home, self.steps, self.signs = home, 0, 0
        home.mkdir(parents=True, exist_ok=True)
        self._env = {
            **{key: value for key, value in os.environ.items() if not key.startswith(("XDG_", "QT_", "WAYLAND"))},
            "HOME": str(home),
            **{f"XDG_{kind}_HOME": str(home / kind.lower()) for kind in ("CONFIG", "DATA", "CACHE", "STATE")},
            "XDG_RUNTIME_DIR": str(home),
            "DISPLAY": display.name,
            "QT_QPA_PLATFORM": "xcb",
            "LC_ALL": "C.UTF-8",
            "PYTHONPATH": str(ROOT),
        }
        home.chmod(0o700)
        self._notes = (home / "stderr.txt").open("w+")
        self._program = subprocess.Popen(
            [sys.executable, str(HERE / "probe.py"), *([str(plan)] if plan else [])],
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            stderr=self._notes,
            env=self._env,
            cwd=home,
            text=True,
        )
        self._focused = 0
        self._began = time.monotonic()

    def __enter__(self) -> Walker:
        return self

    def __exit__(self, kind: type | None, _value: object, _trace: TracebackType | None) -> None:
        if kind is not None:
            print(self.story())
        if self._program.poll() is None:
            self._program.terminate()
        for stream in (self._program.stdin, self._program.stdout):
            if stream is not None:
                stream.close()
        try:
            self._program.wait(10)
        except subprocess.TimeoutExpired:
            self._program.kill()
            self._program.wait(10)
        self._notes.close()

    @property
    def seconds(self) -> float:
        return time.monotonic() - self._began

    def begin(self) -> None:
        """Start the clock: the window is there now."""
        self._began, self.steps, self.signs = time.monotonic(), 0, 0

    def said(self) -> str:
        """What the program wrote on its error stream."""
        self._notes.flush()
        return (self.home / "stderr.txt").read_text()

    def story(self) -> str:
        """Everything in sight, for a walk that lost its way."""
        try:
            lines = [f"-- {one['kind']} {one['title']} active={one['active']}\n" + _lines(one) for one in self.look()]
        except (OSError, ValueError) as error:
            lines = [str(error)]
        return "\n".join([*lines, self.said()])

    # what is in sight

    def _ask(self, what: str):
        assert self._program.stdin is not None
        assert self._program.stdout is not None
        self._program.stdin.write(f"{what}\n")
        self._program.stdin.flush()
        ready, _, _ = select.select([self._program.stdout], [], [], PATIENCE_S)
        assert ready, f"the program does not answer: {self.said()}"
        line = self._program.stdout.readline()
        assert line, f"the program ended: {self.said()}"
        return json.loads(line)

    def look(self, what: str = "all") -> list[dict]:
        """The windows now, each with its parts unless only "windows" are asked for."""
        found = self._ask(what)
        for one in found:
            one["parts"] = [Part(part) for part in one["parts"]]
        self._give_keys(found)
        return found

    def _give_keys(self, found: list[dict]) -> None:
        if any(one["popup"] for one in found):
            return
        plain = [one for one in found if one["kind"] not in ("QTipLabel", "QMenu")]
        wanted = next((one for one in plain if one["modal"]), next((o for o in plain if "Window" in o["kind"]), None))
        if wanted is not None and (wanted["id"] != self._focused or not wanted["active"]):
            self._focused = wanted["id"]
            self._send("windowfocus", "--sync", str(wanted["id"]))

    def parts(self, role: str, name: str = "", window: str = "") -> list[Part]:
        """Everything in sight with a role whose name begins so; signs that mark a key do not count."""
        return [
            part
            for one in self.look()
            if not window or one["title"].startswith(window)
            for part in one["parts"]
            if part.role == role and part.name.replace("&", "").startswith(name)
        ]

    def find(self, role: str, name: str = "", window: str = "", **states: bool) -> Part:
        """Wait for a part and return it."""
        box: list[Part] = []

        def is_there() -> bool:
            found = self.parts(role, name, window)
            box[:] = [part for part in found if all(part[key] == value for key, value in states.items())]
            return bool(box)

        self.until(is_there, f"{role} {name!r} {states or ''}")
        return box[0]

    def focus(self) -> Part:
        """The part that takes the keys."""
        return Part(self._ask("focus") or {"role": "", "name": "", "value": ""})

    def until(self, is_so: Callable[[], object], what: str) -> None:
        """Wait for something to be so, within reason."""
        end = time.monotonic() + PATIENCE_S
        while not is_so():
            assert time.monotonic() < end, f"waited in vain for {what}"
            time.sleep(0.03)

    def texts(self, words: str) -> list[str]:
        """Texts in sight that hold the words."""
        return [part.name for one in self.look() for part in one["parts"] if words in part.name]

    # hands

    def _send(self, *words: str) -> None:
        subprocess.run(["xdotool", *words], env=self._env, check=True, timeout=20, capture_output=True)

    def key(self, *keys: str) -> None:
        """Press keys, one step each."""
        self.look("windows")
        self.steps += len(keys)
        self._send("key", "--delay", "20", *keys)

    def type(self, text: str) -> None:
        """Type text; its signs are counted apart, for a file's name may be long or short."""
        self.look("windows")
        self.signs += len(text)
        self._send("type", "--delay", "15", text)

    def click(self, part: Part, times: int = 1) -> None:
        """Click the middle of a part, one step each time."""
        self.steps += times
        x, y = part.middle
        self._send("mousemove", str(x), str(y), "click", "--repeat", str(times), "--delay", "60", "1")

    def tab_to(self, role: str, name: str, key: str = "Tab", most: int = 120) -> None:
        """Press a key until a part has the keys."""
        for _ in range(most):
            now = self.focus()
            if now.role == role and now.name.startswith(name):
                return
            self.key(key)
        raise AssertionError(f"{most} times {key} did not reach {role} {name!r}")

    def reveal(self, role: str, name: str, within: Part) -> Part:
        """Turn the wheel over an area until a part of it is in sight, one step a notch."""
        x, top, width, height = within["box"]
        for _ in range(60):
            part = self.find(role, name)
            middle = part.middle[1]
            if top + 14 < middle < top + height - 14:
                return part
            self.steps += 1
            button = "5" if middle >= top + height - 14 else "4"
            self._send("mousemove", str(x + width - 30), str(top + height // 2), "click", button)
        raise AssertionError(f"the wheel did not bring {role} {name!r} into sight")

    def drag(self, start: tuple[int, int], end: tuple[int, int]) -> None:
        """Drag with the left button, one step."""
        self.steps += 1
        middle = ((start[0] + end[0]) // 2, (start[1] + end[1]) // 2)
        self._send("mousemove", *map(str, start), "mousedown", "1")
        for x, y in (middle, end):
            self._send("mousemove", str(x), str(y))
        self._send("mouseup", "1")

    def tell(self, walk: str) -> None:
        """Print what the walk took."""
        print(f"\nwalk of {walk}: {self.seconds:.1f} s, {self.steps} steps and {self.signs} signs of text")

    def leave(self) -> None:
        """Quit by key and wait for the program to end by itself, without a traceback or a warning of Qt."""
        self.key("ctrl+q")
        assert self._program.wait(20) == 0, self.said()
        said = self.said()
        assert not [line for line in said.splitlines() if line.startswith(("Traceback", "Q"))], said


def _lines(one: dict) -> str:
    return "\n".join(
        f"{part.role} {part.name!r} {part.value!r} {part.box} {'focus' if part.focused else ''}"
        f"{'' if part.enabled else ' off'}"
        for part in one["parts"]
    )
