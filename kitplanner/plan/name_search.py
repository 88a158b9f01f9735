"""Finding and blotting out names in text and in the bytes of files, however they were written.

A name counts where it stands as whole words, in any case. Bytes are read as UTF-8, as UTF-16 at both byte orders and
alignments, and as JSON text with escaped characters, so that no copy of a name hides behind an encoding.
"""

from __future__ import annotations

import codecs
import json
import re
import unicodedata
from collections.abc import Iterable, Iterator

# No word, so that no name is ever found in it again.
REMOVED = "***"
_ESCAPE = re.compile(r'\\(?:u[0-9a-fA-F]{4}|["\\/bfnrt])')
_UTF16 = ("utf-16-le", "utf-16-be")


class NameSearch:
    """Finds and blots out a set of names; those without a letter or digit are left out."""

    def __init__(self, names: Iterable[str]) -> None:
        self._names = tuple(dict.fromkeys(form for name in names for form in _forms(name)))
        # Longest first, so that a full name goes as a whole before a shorter one that is part of it.
        ordered = sorted(self._names, key=len, reverse=True)
        self._pattern = re.compile("|".join(map(_whole, ordered)), re.IGNORECASE) if ordered else None

    @property
    def names(self) -> tuple[str, ...]:
        """The names in all their forms."""
        return self._names

    def in_text(self, text: str) -> bool:
        """Return True if any name stands in the text.

        Examples
        --------
        >>> NameSearch(["Ann"]).in_text("Ann's lamp"), NameSearch(["Ann"]).in_text("Manner")
        (True, False)
        """
        return self._pattern is not None and self._pattern.search(text) is not None

    def blotted(self, text: str) -> str:
        """Return the text with a neutral word for every name; the same object without any.

        Examples
        --------
        >>> NameSearch(["Oruun"]).blotted("Oruun's phone")
        "***'s phone"
        """
        if self._pattern is None or self._pattern.search(text) is None:
            return text
        return self._pattern.sub(REMOVED, text)

    def in_bytes(self, data: bytes) -> bool:
        """Return True if any name stands in the bytes of a file, in any of the encodings.

        Examples
        --------
        >>> NameSearch(["Zoë"]).in_bytes(json.dumps("by Zoë").encode())
        True
        """
        return self._pattern is not None and any(self.in_text(text) for text in _readings(data))

    def blotted_bytes(self, data: bytes) -> bytes:
        """Return the bytes with every name blotted out, in the encoding it stood in.

        Plain text keeps all its other bytes; escapes inside JSON text are resolved only where a name hides in them.
        """
        if not self.in_bytes(data):
            return data
        for encoding in _UTF16:
            for offset in (0, 1):
                text = _decoded(data[offset:], encoding)
                if self.in_text(text):
                    even = len(data[offset:]) // 2 * 2
                    body = self.blotted(text).encode(encoding, "surrogatepass")
                    data = data[:offset] + body + data[offset + even :]
        text = self.blotted(data.decode("utf-8", "surrogateescape"))
        if self.in_text(_unescaped(text)):
            text = self.blotted(_unescaped(text))
        return text.encode("utf-8", "surrogateescape")


def _forms(name: str) -> Iterator[str]:
    """Yield a name as typed and in both composed and decomposed characters; signs alone name nobody."""
    bare = name.strip()
    if re.search(r"\w", bare):
        yield bare
        for form in ("NFC", "NFD"):
            yield unicodedata.normalize(form, bare)


def _whole(name: str) -> str:
    """Return a pattern for a name as whole words; a name that begins or ends with a sign needs no boundary there."""
    before = r"(?<!\w)" if re.match(r"\w", name) else ""
    after = r"(?!\w)" if re.search(r"\w\Z", name) else ""
    return f"{before}{re.escape(name)}{after}"


def _readings(data: bytes) -> Iterator[str]:
    """Yield the bytes as every kind of text a name could stand in."""
    text = data.decode("utf-8", "replace")
    yield text
    yield _unescaped(text)
    for encoding in _UTF16:
        for offset in (0, 1):
            yield _decoded(data[offset:], encoding)


def _decoded(data: bytes, encoding: str) -> str:
    return data[: len(data) // 2 * 2].decode(encoding, "surrogatepass")


def _unescaped(text: str) -> str:
    """Return JSON escapes as the characters they stand for; twice, for text inside text."""
    for _ in range(2):
        if "\\" not in text:
            return text
        text = _joined_pairs(_ESCAPE.sub(lambda found: json.loads(f'"{found.group()}"'), text))
    return text


def _joined_pairs(text: str) -> str:
    """Return escaped character pairs as one character; a lone half stays as it is."""
    if not any("\ud800" <= char <= "\udfff" for char in text):
        return text
    pairs = re.compile("[\ud800-\udbff][\udc00-\udfff]")
    return pairs.sub(
        lambda pair: codecs.decode(codecs.encode(pair.group(), "utf-16-le", "surrogatepass"), "utf-16-le"), text
    )
