"""Opens every shipped file from the installed copy that runs this; the checkout's files arrive on standard input."""

from __future__ import annotations

import sys
from pathlib import Path

import kitplanner
from kitplanner.plan.files import read_plan
from kitplanner.plan.shipped import PACKAGE, resource

root = Path(sys.argv[1])
assert not Path(kitplanner.__file__).is_relative_to(root), "this is the checkout, not an installed copy"
count = 0
for line in sys.stdin:
    path = Path(line.rstrip("\n"))
    if path.is_relative_to(root / "resources"):
        found = resource(path.relative_to(root / "resources").as_posix())
    else:
        found = PACKAGE / "_demo_profiles" / path.relative_to(root / "demo_profiles")
        read_plan(found)
    assert found.is_relative_to(PACKAGE), found
    assert found.read_bytes() == path.read_bytes(), found
    count += 1
assert count > 8, f"only {count} files"

from PySide6.QtGui import QFontDatabase, QGuiApplication  # noqa: E402

app = QGuiApplication([])
for name in ("fonts/DejaVuSans.ttf", "fonts/DejaVuSans-Bold.ttf"):
    assert QFontDatabase.addApplicationFont(str(resource(name))) >= 0, name
print(f"{count} shipped files opened from {PACKAGE.name} installed elsewhere")
