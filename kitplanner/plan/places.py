"""Places in a plan written for people: `people, third record (id M3), key age`."""

from __future__ import annotations

from collections.abc import Sequence

from kitplanner.plan.records import SECTIONS

Part = str | int

_COLLECTIONS = frozenset((*SECTIONS, "stages", "temperatures", "bouts", "charging"))
_GROUPS = _COLLECTIONS | {"conditions", "machine", "gear", "test_load", "rota"}
ORDINALS = ("first", "second", "third", "fourth", "fifth", "sixth", "seventh", "eighth", "ninth", "tenth")


def ordinal(index: int) -> str:
    """Return the place in a row as a word, or with a number after the tenth.

    Examples
    --------
    >>> ordinal(2), ordinal(10), ordinal(21), ordinal(111)
    ('third', '11th', '22nd', '112th')
    """
    if index < len(ORDINALS):
        return ORDINALS[index]
    number = index + 1
    ending = "th" if number % 100 in (11, 12, 13) else {1: "st", 2: "nd", 3: "rd"}.get(number % 10, "th")
    return f"{number}{ending}"


def short(value: object, most: int = 40) -> str:
    """Return a value as one quoted line of limited length, with unprintable signs spelled out.

    Examples
    --------
    >>> short("a" * 100, 8)
    "'aaaaaaaa...'"
    """
    text = value if isinstance(value, str) else str(value)
    return (
        ascii(text[:most] + ("..." if len(text) > most else ""))
        if not text.isprintable()
        else (repr(text if len(text) <= most else text[:most] + "..."))
    )


def place_in_file(raw: object, parts: Sequence[Part]) -> str:
    """Return the place of a key in a raw plan, naming records by position and id.

    Parameters
    ----------
    raw : the mapping as read from the file.
    parts : keys and list positions from the top of the file.

    Examples
    --------
    >>> place_in_file({"people": [{"id": "M1"}, {"id": "M2"}]}, ["people", 1, "age"])
    'people, second record (id M2), key age'
    >>> place_in_file({}, ["days"])
    'key days'
    """
    words: list[str] = []
    here: object = raw
    for depth, part in enumerate(parts):
        if isinstance(part, int):
            here = here[part] if isinstance(here, list) and part < len(here) else None
            own_id = here.get("id") if isinstance(here, dict) else None
            named = f" (id {short(own_id)[1:-1]})" if isinstance(own_id, str) and own_id else ""
            kind = "record" if isinstance(here, dict) and "start" not in here else "entry"
            words.append(f"{ordinal(part)} {kind}{named}")
        else:
            here = here.get(part) if isinstance(here, dict) else None
            is_section = depth < len(parts) - 1 and isinstance(here, (list, dict))
            words.append(part if is_section else f"key {short(part)[1:-1]}")
    return ", ".join(words) if words else "the top of the file"


def place_of_path(path: Sequence[str]) -> str:
    """Return the place an edit or a check names, in words.

    Examples
    --------
    >>> place_of_path(("people", "M3", "age"))
    'people, record M3, key age'
    >>> place_of_path(("stations", "A", "stages", "s2", "loop_ohm"))
    'stations, record A, stages, record s2, key loop_ohm'
    """
    words: list[str] = []
    after_collection = False
    for depth, part in enumerate(path):
        if after_collection:
            words.append(f"record {short(part)[1:-1]}")
        else:
            words.append(part if part in _GROUPS or depth < len(path) - 1 else f"key {short(part)[1:-1]}")
        after_collection = not after_collection and part in _COLLECTIONS
    return ", ".join(words) if words else "the plan"
