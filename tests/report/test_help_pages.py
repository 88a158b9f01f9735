"""Help pages: all there, plain, and naming only things that exist."""

from __future__ import annotations

import re
import shlex
from pathlib import Path

import pytest
from PySide6.QtGui import QKeySequence

from kitplanner.app import cli
from kitplanner.plan.fields import FIELDS
from kitplanner.plan.shipped import resource
from kitplanner.report.glossary import terms
from kitplanner.report.help_pages import (
    PAGE_OF_PLACE,
    PAGES,
    codes_in,
    menu_lines_in,
    names_in,
    page_for,
    page_text,
    page_title,
    plain_page,
)
from kitplanner.ui.answers import PAGES as ANSWER_PAGES
from kitplanner.ui.menus import EDIT, FILE, HELP, VIEW
from kitplanner.ui.panels.sections import SECTIONS


def known_names() -> set[str]:
    labels = {spec.label for specs in FIELDS.values() for spec in specs}
    choices = {label for specs in FIELDS.values() for spec in specs for _, label in spec.choices}
    sections = {section.title for section in SECTIONS}
    answers = {entry.title for entry in ANSWER_PAGES}
    return labels | choices | sections | answers | {term.word for term in terms().values()}


@pytest.mark.parametrize("page", PAGES)
def test_page_names_only_what_exists(page: str) -> None:
    unknown = set(names_in(page)) - known_names()
    assert unknown == set()


@pytest.mark.parametrize("page", PAGES)
def test_page_has_a_title_text_and_no_picture_or_address(page: str) -> None:
    text = page_text(page)
    assert page_title(page)
    assert len(text) > 300
    assert not re.search(r"https?:|www\.|!\[|<[a-z]", text)
    plain = plain_page(page)
    assert "**" not in plain
    assert "|" not in plain


def test_no_page_lies_about_unlisted() -> None:
    folder = Path(resource("help/glossary.md")).parent
    assert {file.name for file in folder.glob("*.md")} == set(PAGES.values())


def test_places_lead_to_pages() -> None:
    assert set(PAGE_OF_PLACE.values()) <= set(PAGES)
    assert page_for("effort") == "effort"


@pytest.mark.parametrize("page", PAGES)
def test_commands_are_understood_by_the_command_line(page: str) -> None:
    for code in codes_in(page):
        if code.startswith("kitplanner "):
            cli._parser().parse_args(shlex.split(code)[1:])


def menu_keys() -> set[str]:
    found = {"Ctrl+Y"} | {f"Ctrl+{number}" for number in range(10)}
    items = [item.keys for menu in (FILE, EDIT, VIEW, HELP) for item in menu if item.keys is not None]
    standard = QKeySequence.StandardKey
    for keys in [*items, standard.Undo, standard.Redo, standard.New]:
        bindings = [QKeySequence(keys)] if isinstance(keys, str) else QKeySequence.keyBindings(keys)
        found |= {binding.toString() for binding in bindings}
    return found


def test_keys_are_those_of_the_menus(qapp: object) -> None:
    named = {code for code in codes_in("keys") if not code.startswith("kitplanner")}
    assert named <= menu_keys(), named - menu_keys()
    assert {"Ctrl+S", "F1", "F8"} <= named


def test_menu_lines_are_found() -> None:
    assert menu_lines_in("first-plan") == ("File, New from",)
