"""Shipped files are found and stray names are not."""

from __future__ import annotations

import pytest

from kitplanner.plan import shipped


@pytest.mark.parametrize("name", ["fonts/DejaVuSans.ttf", "fonts/DejaVuSans-Bold.ttf", "LICENSE.txt"])
def test_resource_is_there(name: str) -> None:
    assert shipped.resource(name).stat().st_size > 500


@pytest.mark.parametrize("name", ["nothing.txt", "../pyproject.toml", "../kitplanner/__init__.py"])
def test_missing_or_outside_resource_is_refused(name: str) -> None:
    with pytest.raises(shipped.MissingFileError, match="install the program again"):
        shipped.resource(name)


@pytest.mark.parametrize("name", shipped.DEMOS)
def test_every_demo_is_there(name: str) -> None:
    path = shipped.demo(name)
    assert path.suffix == ".kitplan"
    assert path.stat().st_size > 500


def test_installed_copy_wins_over_checkout(tmp_path, monkeypatch) -> None:
    package = tmp_path / "kitplanner"
    for folder in (package / "_resources", tmp_path / "resources"):
        folder.mkdir(parents=True)
        (folder / "a.txt").write_text(folder.name)
    monkeypatch.setattr(shipped, "PACKAGE", package)
    assert shipped.resource("a.txt").read_text() == "_resources"
    (package / "_resources" / "a.txt").unlink()
    assert shipped.resource("a.txt").read_text() == "resources"
