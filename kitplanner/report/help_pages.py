"""The help pages: which there are, their titles, their text; all of it offline and readable without pictures.

Marks in a page: `**label**` names something in the program (a field, section, answer or choice), `*Menu, line*` a menu
line, `` `text` `` a key or a command.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from types import MappingProxyType

from kitplanner.plan.shipped import resource

# Page id -> file in resources/help, in reading order.
PAGES: Mapping[str, str] = MappingProxyType(
    {
        "first-plan": "first-plan.md",
        "household": "first-steps-household.md",
        "camp": "first-steps-camp.md",
        "bench": "first-steps-bench.md",
        "reading-the-answers": "reading-the-answers.md",
        "effort": "effort.md",
        "balance": "balance.md",
        "rota": "rota.md",
        "what-matters": "what-matters.md",
        "warning-and-after": "warning-and-after.md",
        "privacy": "privacy.md",
        "cautions": "cautions.md",
        "sources": "where-numbers-come-from.md",
        "keys": "keys.md",
        "glossary": "glossary.md",
    }
)
# Place in the window -> page that helps there.
PAGE_OF_PLACE: Mapping[str, str] = MappingProxyType(
    {
        "plan": "first-plan",
        "people": "privacy",
        "stations": "sources",
        "stores": "warning-and-after",
        "devices": "first-plan",
        "medical_needs": "cautions",
        "effort": "effort",
        "balance": "balance",
        "rota": "rota",
        "bench": "bench",
    }
)
_MENU = re.compile(r"(?<!\*)\*([^*\n]+)\*(?!\*)")
_BOLD = re.compile(r"\*\*([^*]+)\*\*")
_CODE = re.compile(r"`([^`]+)`")


def page_text(page: str) -> str:
    """Return a page as written (Markdown).

    Raises
    ------
    KeyError
        If there is no such page

    Examples
    --------
    >>> page_text("glossary").splitlines()[0]
    '# Words'
    """
    return resource(f"help/{PAGES[page]}").read_text(encoding="utf-8")


def page_title(page: str) -> str:
    """Return a page's title: its first line.

    Examples
    --------
    >>> page_title("first-plan")
    'A first plan'
    """
    return page_text(page).partition("\n")[0].lstrip("# ").strip()


def page_for(place: str) -> str:
    """Return the page that helps at a place of the window, the first one where none is named.

    Examples
    --------
    >>> page_for("rota"), page_for("nowhere")
    ('rota', 'first-plan')
    """
    return PAGE_OF_PLACE.get(place, "first-plan")


def plain_page(page: str) -> str:
    """Return a page as plain text: no marks, table cells with a colon between them.

    Examples
    --------
    >>> "floor: the state of charge" in plain_page("glossary")
    True
    """
    kept = (line for line in page_text(page).splitlines() if not line.startswith("|---"))
    return "\n".join(_plain_line(line) for line in kept) + "\n"


def _plain_line(line: str) -> str:
    if line.startswith("|"):
        line = ": ".join(cell.strip() for cell in line.strip("|").split("|"))
    return _CODE.sub(r"\1", _MENU.sub(r"\1", _BOLD.sub(r"\1", line.lstrip("#").strip())))


def names_in(page: str) -> tuple[str, ...]:
    """Return what a page names as a thing in the program, as written between double stars."""
    return tuple(" ".join(found.split()) for found in _BOLD.findall(page_text(page)))


def menu_lines_in(page: str) -> tuple[str, ...]:
    """Return the menu lines a page names."""
    return tuple(" ".join(found.split()) for found in _MENU.findall(_BOLD.sub("", page_text(page))))


def codes_in(page: str) -> tuple[str, ...]:
    """Return the keys and commands a page names."""
    return tuple(_CODE.findall(page_text(page)))
