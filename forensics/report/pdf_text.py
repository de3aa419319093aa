"""Letters of the printed report: typefaces, styles, and text cut to the width it is given."""

from __future__ import annotations

import unicodedata
from collections.abc import Iterator
from functools import cache
from itertools import groupby
from pathlib import Path
from xml.sax.saxutils import escape

import matplotlib as mpl
from reportlab.lib.colors import HexColor
from reportlab.lib.styles import ParagraphStyle
from reportlab.pdfbase import pdfmetrics
from reportlab.pdfbase.ttfonts import TTFont
from reportlab.platypus import Paragraph

from forensics.errors import legible

# Matplotlib ships these, the figures are lettered in them, and they know more scripts than a PDF's own.
BODY, BOLD, CODE, SERIF = "DejaVuSans", "DejaVuSans-Bold", "DejaVuSansMono", "DejaVuSerif-Bold"

_PLAIN = {BODY: BODY, BOLD: BOLD, CODE: BODY, SERIF: BOLD}

INK, SOFT, LINE, FAINT = (HexColor(c) for c in ("#1b2733", "#55616c", "#cfd4d8", "#eceff1"))
OCHRE, WINE, TEAL, LINK = (HexColor(c) for c in ("#c77f0a", "#7a1f3d", "#0b4f4a", "#1d5f8a"))

# A line of prose longer than this loses the eye on its way back [pt].
PROSE = 560.0
_OPEN = {")": "(", "]": "[", "}": "{"}
# No paragraph may outgrow a page: longer ones go on in the next [letters].
_LONGEST = 2500


@cache
def load_fonts() -> dict[str, frozenset[int]]:
    """Make the typefaces known to the PDF library; give the letters that each has."""
    folder = Path(mpl.get_data_path()) / "fonts" / "ttf"
    known = {}
    for name in (BODY, BOLD, CODE, SERIF):
        font = TTFont(name, str(folder / f"{name}.ttf"))
        pdfmetrics.registerFont(font)
        known[name] = frozenset(font.face.charToGlyph)
    pdfmetrics.registerFontFamily(BODY, normal=BODY, bold=BOLD, italic=BODY, boldItalic=BOLD)
    return known


def face(font: str, *texts: str) -> str:
    """Give the typeface if it has all letters of the texts, else the plain one of its weight."""
    known = load_fonts()[font]
    return font if all(text.isascii() or known.issuperset(map(ord, text)) for text in texts) else _PLAIN[font]


def style(size: float, font: str = BODY, **more: object) -> ParagraphStyle:
    """Make a paragraph style of a size [pt]; words longer than a line are broken."""
    load_fonts()
    settings = {"leading": 1.38 * size, "textColor": INK, "splitLongWords": 1, "bulletFontName": BODY} | more
    return ParagraphStyle(f"{font} {size}", fontName=font, fontSize=size, **settings)


def readable(text: str) -> str:
    r"""Show text so that a page can hold it.

    Letters that steer, or that the typefaces lack, are named by their number, and words of scripts that run
    from right to left are put in the order they are seen.

    Examples
    --------
    >>> readable("Kestrel 3")
    'Kestrel 3'
    >>> readable("bit \u4e95")
    'bit <U+4E95>'
    """
    text = legible(text)
    if text.isascii():
        return text
    known = load_fonts()[BODY] & load_fonts()[BOLD]
    text = "".join(c if ord(c) in known else f"<U+{ord(c):04X}>" for c in text)
    return _as_seen(text)


def marked(text: str) -> str:
    """Make text fit for a paragraph: readable, and nothing in it taken for markup."""
    return escape(readable(text))


def paragraphs(text: str, look: ParagraphStyle, lead: str = "") -> Iterator[Paragraph]:
    """Set a text as one paragraph, or several where it is very long; `lead` is ready markup before it."""
    font = face(look.fontName, readable(text))
    if font != look.fontName:
        look = ParagraphStyle(look.name, look, fontName=font)
    for start in range(0, max(len(text), 1), _LONGEST):
        yield Paragraph((lead if start == 0 else "") + marked(text[start : start + _LONGEST]), look)


@cache
def _advance(font: str, letter: str) -> float:
    load_fonts()
    return pdfmetrics.stringWidth(letter, font, 1.0)


def width_of(text: str, font: str, size: float) -> float:
    """Width of a line [pt]."""
    return size * sum(_advance(font, letter) for letter in text)


def broken(text: str, font: str, size: float, width: float) -> list[str]:
    """Break text into lines that fit a width [pt]; a word longer than a line is broken too."""
    if width_of(text, font, size) <= width:
        return [text]
    lines, line = [], ""
    # Only the plain blank parts words: the thin and the fixed one hold a number together.
    for word in text.split(" "):
        longer = f"{line} {word}" if line else word
        if width_of(longer, font, size) <= width:
            line = longer
            continue
        if line:
            lines.append(line)
        *full, line = _pieces(word, font, size, width)
        lines += full
    return [*lines, line]


def _pieces(word: str, font: str, size: float, width: float) -> list[str]:
    """Cut a word into pieces that fit; each holds one letter at least."""
    pieces, piece, used = [], "", 0.0
    for letter in word:
        step = size * _advance(font, letter)
        if piece and used + step > width:
            pieces.append(piece)
            piece, used = "", 0.0
        piece, used = piece + letter, used + step
    return [*pieces, piece]


def shortened(text: str, letters: int) -> str:
    """Keep what must stay in one piece shorter than a page; an ellipsis shows where something is left out."""
    return text if len(text) <= letters else text[:letters].rstrip() + "…"


def cut(text: str, font: str, size: float, width: float) -> str:
    """Shorten a line to a width [pt], with an ellipsis where something is left out."""
    if width_of(text, font, size) <= width:
        return text
    return _pieces(text, font, size, width - width_of("…", font, size))[0].rstrip() + "…"


def _as_seen(text: str) -> str:
    """Turn runs of right-to-left letters round; numbers inside them keep their order.

    Notes
    -----
    The part of the Unicode bidirectional algorithm (annex 9) that names in a left-to-right line need;
    marks stay with their letter. Letters are not joined: the typefaces show them in their lone forms.
    """
    kinds = [unicodedata.bidirectional(c) for c in text]
    if not any(kind in ("R", "AL") for kind in kinds):
        return text
    seen, start = [], 0
    while start < len(text):
        if kinds[start] not in ("R", "AL"):
            seen.append(text[start])
            start += 1
            continue
        end = last = start
        while end < len(text) and kinds[end] != "L":
            # A bracket that opened inside the run closes in it.
            closes = text[end] in ")]}" and text.count(_OPEN[text[end]], start, last) > 0
            last = end if closes or kinds[end] in ("R", "AL", "NSM") else last
            end += 1
        seen.append(_turned(text[start : last + 1]))
        start = last + 1
    return "".join(seen)


def _turned(run: str) -> str:
    """Turn a run round, letter with its marks by letter, number by number."""
    clusters: list[str] = []
    for is_number, letters in groupby(run, lambda c: unicodedata.bidirectional(c) in ("EN", "AN")):
        if is_number:
            clusters.append("".join(letters))
            continue
        for letter in letters:
            if clusters and unicodedata.bidirectional(letter) == "NSM":
                clusters[-1] += letter
            else:
                clusters.append(letter)
    mirrored = str.maketrans("()[]<>{}", ")(][><}{")
    return "".join(c.translate(mirrored) for c in reversed(clusters))
