"""The record's own fonts, carried in the document: a machine without fonts prints the same pages."""

from __future__ import annotations

import base64
from functools import cache
from importlib.resources import files
from io import BytesIO
from pathlib import Path

import matplotlib
from fontTools.ttLib import TTFont

FACES = (
    ("Calcsheet Serif", "serif-regular.woff", 400, "normal"),
    ("Calcsheet Serif", "serif-italic.woff", 400, "italic"),
    ("Calcsheet Serif", "serif-semibold.woff", 600, "normal"),
    ("Calcsheet Sans", "sans-regular.woff", 400, "normal"),
    ("Calcsheet Sans", "sans-italic.woff", 400, "italic"),
    ("Calcsheet Sans", "sans-semibold.woff", 600, "normal"),
)
FALLBACK = "DejaVu Sans"


def font_faces(text: str, *, packed: bool) -> str:
    """Style rules that define the record's fonts from data URIs.

    Parameters
    ----------
    text : str
        Everything the document prints. Characters that the record's fonts lack are taken from DejaVu Sans,
        which comes with matplotlib, reduced to those characters.
    packed : bool
        Compressed, for browsers. PDF engines get them plain: WeasyPrint would stamp the time into what it
        unpacks, and no two runs would be alike.

    Returns
    -------
    str
        One ``@font-face`` rule a face.
    """
    lacking = {character for character in map(ord, set(text)) if character > 0x20} - _covered()
    drawn = lacking & _fallback_covered() if lacking else frozenset()
    fallback = _face(FALLBACK, _fallback_face(frozenset(drawn)), 400, "normal", packed) if drawn else ""
    return _own_faces(packed) + fallback


def missing_characters(text: str) -> str:
    """Characters that no font of the record has: they print only where the system has a font for them."""
    found = {ord(character) for character in text if character.isprintable()}
    found -= _covered() | _fallback_covered()
    return "".join(chr(character) for character in sorted(found))


@cache
def _own_faces(packed: bool) -> str:
    return "".join(_face(family, _bytes(name), weight, style, packed) for family, name, weight, style in FACES)


def _face(family: str, data: bytes, weight: int, style: str, packed: bool) -> str:
    source = base64.b64encode(data if packed else _unpacked(data)).decode("ascii")
    mime, form = ("font/woff", "woff") if packed else ("font/ttf", "truetype")
    return (
        f'@font-face {{ font-family: "{family}"; font-weight: {weight}; font-style: {style}; '
        f'src: url("data:{mime};base64,{source}") format("{form}"); }}\n'
    )


def _unpacked(data: bytes) -> bytes:
    font = TTFont(BytesIO(data), recalcTimestamp=False)
    font.flavor = None
    stream = BytesIO()
    font.save(stream)
    return stream.getvalue()


def _bytes(name: str) -> bytes:
    return (files("calcsheet.record") / "page" / "fonts" / name).read_bytes()


@cache
def _covered() -> frozenset[int]:
    # Serif stands before sans in every family list, so what either has is printed.
    names = ("serif-regular.woff", "sans-regular.woff")
    return frozenset().union(*(TTFont(BytesIO(_bytes(name)), lazy=True).getBestCmap() for name in names))


def _fallback_file() -> Path:
    return Path(matplotlib.get_data_path()) / "fonts" / "ttf" / "DejaVuSans.ttf"


@cache
def _fallback_covered() -> frozenset[int]:
    return frozenset(TTFont(_fallback_file(), lazy=True).getBestCmap())


@cache
def _fallback_face(characters: frozenset[int]) -> bytes:
    from fontTools.subset import Options, Subsetter  # noqa: PLC0415

    font = TTFont(_fallback_file(), recalcTimestamp=False)
    for table in {"FFTM", "GDEF", "GPOS", "GSUB", "kern"} & set(font.keys()):
        del font[table]
    subsetter = Subsetter(Options(hinting=False, layout_features=[], notdef_outline=True))
    subsetter.populate(unicodes=sorted(characters))
    subsetter.subset(font)
    font.flavor = "woff"
    stream = BytesIO()
    font.save(stream)
    return stream.getvalue()
