"""Every worked example in the docstrings below the window holds."""

from __future__ import annotations

import doctest
import importlib
import pkgutil

import pytest

import kitplanner

LAYERS = ("domain", "plan", "planners", "report")
MODULES = sorted(
    module.name
    for module in pkgutil.walk_packages(kitplanner.__path__, "kitplanner.")
    if module.name.split(".")[1] in LAYERS
)


@pytest.mark.parametrize("name", MODULES)
def test_examples_of_a_module(name: str) -> None:
    assert doctest.testmod(importlib.import_module(name)).failed == 0


def test_examples_are_found() -> None:
    finder = doctest.DocTestFinder(exclude_empty=True)
    laws = importlib.import_module("kitplanner.domain.human_power")
    assert len([each for each in finder.find(laws) if each.examples]) >= 5
