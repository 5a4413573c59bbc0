"""Two PDF files held against each other: page by page, then all that lies outside the pages."""

from __future__ import annotations

import io
import re
from difflib import SequenceMatcher
from typing import Any

from pypdf import PdfReader
from pypdf.generic import ArrayObject, DictionaryObject, IndirectObject, StreamObject

from calcsheet.record.recordfile import bounded

PLAIN = re.compile(rb"-?\d*\.?\d+")
INLINE_IMAGE = re.compile(rb"\sID\s")
DRAWN = 0.02
"""Points by which the coordinates of another machine may differ: far below what can be seen."""
PACKED = ("/Length", "/Filter", "/DecodeParms")
"""How a stream is packed, which is no part of what it says."""
MOST_PAGES = 3000
MOST_OBJECTS = 500_000
MOST_WORDS = 3000
"""Words of a page that are set side by side one by one."""

OUTSIDE = "outside the pages"
NAMES = {"/Contents": "its content", "/Annots": "its annotations", "/Resources": "its fonts, images or other resources"}
BY_SIGNING = ("/AcroForm", "/DSS", "/Perms", "/Extensions", "/Metadata", "/Info", "/Version")
"""Entries of the catalogue that a signing program adds or keeps up to date."""
PdfDifference = tuple[str, str]
"""Place and what differs there."""


class TooLargeError(ValueError):
    """A file with more pages or objects than a record has."""


def first_page(source: bytes) -> str | None:
    """Text of a PDF's first page; None where it can't be read."""
    try:
        with bounded():
            return PdfReader(io.BytesIO(source)).pages[0].extract_text()
    except Exception:  # the library raises whatever it meets in a damaged file
        return None


def compared(found: bytes, made: bytes, *, signed: bool = False) -> list[PdfDifference]:
    """What differs between a PDF and the one made again.

    Parameters
    ----------
    found, made : bytes
        The file in hand; the file as it should be.
    signed : bool
        Leave out what a signing program adds: fields of signatures on the first page, and `BY_SIGNING`.

    Returns
    -------
    list of (str, str)
        Place, such as "page 3", and what differs.

    Raises
    ------
    Exception
        Of any type, where the file in hand is damaged or beyond the reader's limits.
    """
    with bounded():
        old, new = PdfReader(io.BytesIO(found)), PdfReader(io.BytesIO(made))
        pages, should = len(old.pages), len(new.pages)
        if pages > MOST_PAGES:
            raise TooLargeError(f"{pages} pages")
        wrong: list[PdfDifference] = []
        if pages != should:
            wrong.append(("pages", f"{pages} pages, should be {should}"))
        same = _Same()
        count = min(pages, should)
        for i in range(count):
            same.take(old.pages[i].indirect_reference, new.pages[i].indirect_reference)
        changed = {
            i: parts for i in range(count) if (parts := same.page(old.pages[i], new.pages[i], signed and i == 0))
        }
        outside = same.tree(old.trailer["/Root"], new.trailer["/Root"], "")
        outside += same.tree(old.trailer.get("/Info"), new.trailer.get("/Info"), "/Info")
        if changed:  # a font is shared: words may differ on any page
            for i in range(count):
                words = _words(old.pages[i].extract_text(), new.pages[i].extract_text())
                if not words and i in changed:
                    words = [f"{part} differ, the words don't" for part in changed[i]]
                wrong += [(f"page {i + 1}", text) for text in words]
        wrong += [(OUTSIDE, f"{at} differs") for at in outside if not (signed and at.startswith(BY_SIGNING))]
        return wrong


def _words(found: str, made: str) -> list[str]:
    """Words of a page that differ."""
    old, new = found.split(), made.split()
    if old == new:
        return []
    if max(len(old), len(new)) > MOST_WORDS:
        return [f"{len(old)} words, should be {len(new)}"]
    said = []
    for kind, a, b, c, d in SequenceMatcher(None, old, new, autojunk=False).get_opcodes():
        if kind != "equal":
            here, there = " ".join(old[a:b])[:80], " ".join(new[c:d])[:80]
            if not there:
                said.append(f'printed "{here}", which should not stand there')
            elif not here:
                said.append(f'not printed: "{there}"')
            else:
                said.append(f'printed "{here}", should be "{there}"')
    return said


class _Same:
    """Walks two files' objects side by side; each pair of them is looked at once."""

    def __init__(self) -> None:
        self.seen: set[tuple[int, int]] = set()

    def take(self, old: Any, new: Any) -> bool:
        """Note a pair of references; whether it is new."""
        pair = (getattr(old, "idnum", -1), getattr(new, "idnum", -1))
        if pair in self.seen:
            return False
        if len(self.seen) > MOST_OBJECTS:
            raise TooLargeError(f"more than {MOST_OBJECTS} objects")
        self.seen.add(pair)
        return True

    def page(self, old: DictionaryObject, new: DictionaryObject, signed: bool) -> list[str]:
        """Parts of a page that differ: its content, annotations, resources …; fields of signatures left out if `signed`."""
        wrong = []
        for key in sorted({*old, *new} - {"/Parent"}):
            a, b = _raw(old, key), _raw(new, key)
            if key == "/Annots" and signed:
                a, b = _unsigned(a), b if b is not None else ArrayObject()
            if self.tree(a, b, key):
                wrong.append(NAMES.get(key, f"its {key[1:]}"))
        return wrong

    def tree(self, old: Any, new: Any, place: str) -> list[str]:
        """Places at which two trees of objects differ."""
        wrong: list[str] = []
        left = [(old, new, place)]
        while left:
            a, b, at = left.pop()
            if isinstance(a, IndirectObject) and isinstance(b, IndirectObject) and not self.take(a, b):
                continue
            a, b = _got(a), _got(b)
            if isinstance(a, DictionaryObject) and isinstance(b, DictionaryObject):
                packed = isinstance(a, StreamObject) or isinstance(b, StreamObject)
                if packed and not _same_stream(a, b):
                    wrong.append(at)
                for key in sorted({*a, *b} - {*(PACKED if packed else ()), "/Parent"}):
                    left.append((_raw(a, key), _raw(b, key), f"{at}{key}"))
            elif isinstance(a, ArrayObject) and isinstance(b, ArrayObject) and len(a) == len(b):
                pairs = zip(_entries(a), _entries(b), strict=True)
                left += [(x, y, f"{at}/{i}") for i, (x, y) in enumerate(pairs)]
            elif (type(a) is not type(b) or a != b) and not _near(a, b):
                wrong.append(at or "its catalogue")
        return sorted(set(wrong))


def _unsigned(annotations: Any) -> Any:
    """Annotations but for fields of signatures."""
    items = _got(annotations)
    if not isinstance(items, ArrayObject):
        return ArrayObject() if items is None else items
    return ArrayObject(item for item in _entries(items) if not _is_signature(_got(item)))


def _entries(array: ArrayObject) -> list[Any]:
    """Entries as they stand: references are not followed."""
    return [list.__getitem__(array, i) for i in range(len(array))]


def _is_signature(annotation: Any) -> bool:
    return isinstance(annotation, DictionaryObject) and annotation.get("/FT") == "/Sig"


def _raw(holder: DictionaryObject, key: str) -> Any:
    """An entry as it stands: a reference is not followed."""
    return dict.get(holder, key)


def _got(value: Any) -> Any:
    steps = 0
    while isinstance(value, IndirectObject):
        steps += 1
        if steps > 10:
            raise TooLargeError("references without end")
        value = value.get_object()
    return value


def _near(a: Any, b: Any) -> bool:
    return isinstance(a, int | float) and isinstance(b, int | float) and abs(a - b) <= DRAWN and not isinstance(a, bool)


def _same_stream(a: Any, b: Any) -> bool:
    if not (isinstance(a, StreamObject) and isinstance(b, StreamObject)):
        return False
    x, y = _content(a), _content(b)
    return x == y or (_is_drawing(a) and _near_drawing(x, y))


def _content(stream: StreamObject) -> bytes:
    if "/DCTDecode" in str(stream.get("/Filter")) or "/JPXDecode" in str(stream.get("/Filter")):
        return bytes(stream._data)
    return bytes(stream.get_data())


def _is_drawing(stream: StreamObject) -> bool:
    """A page's content or a form: operators with numbers; no font, image, table of characters or file."""
    return stream.get("/Type") in (None, "/XObject") and stream.get("/Subtype") in (None, "/Form")


def _near_drawing(a: bytes, b: bytes) -> bool:
    """Whether two drawings are one but for coordinates within `DRAWN`; glyphs, in hexadecimal, are whole numbers here.

    Text as characters and images in line are not looked into: they must be equal.
    """
    if PLAIN.sub(b"0", a) != PLAIN.sub(b"0", b) or b"(" in a or INLINE_IMAGE.search(a):
        return False
    return all(abs(float(x) - float(y)) <= DRAWN for x, y in zip(PLAIN.findall(a), PLAIN.findall(b), strict=True))
