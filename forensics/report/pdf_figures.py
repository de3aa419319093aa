"""Figures of the printed report: an empty box in the layout, filled with the figure's own PDF or pixels."""

from __future__ import annotations

import io
import struct
from collections.abc import Mapping
from typing import TYPE_CHECKING

from pypdf import PdfReader, PdfWriter
from pypdf.generic import ArrayObject, DictionaryObject, FloatObject, NameObject, NumberObject, StreamObject
from reportlab.platypus import Flowable, Paragraph

from forensics.report.drawing import Drawn
from forensics.report.pdf_text import marked, shortened, style

if TYPE_CHECKING:
    from pypdf import PageObject
    from reportlab.pdfgen.canvas import Canvas

# A figure is made smaller, down to this, rather than leave the rest of a page empty.
_SHRINK = 0.75
_GAP = 5.0
_INCH = 72.0
# Of what the layout says about the document: the rest is blank or a date that never was.
_KEPT = frozenset({"/Title", "/Author", "/Producer"})


class FigureBox(Flowable):
    """A figure with its caption, as large as page and drawing allow; notes the page it comes to stand on."""

    def __init__(self, drawn: Drawn, width: float, height: float, pages: dict[int, int]) -> None:
        super().__init__()
        self.drawn, self.pages = drawn, pages
        self.spaceBefore, self.spaceAfter = 8.0, 10.0
        lead = f"<b>Figure {drawn.number}.</b> "
        self.caption = Paragraph(lead + marked(shortened(drawn.caption, 1500)), style(8.0))
        _, self.under = self.caption.wrap(min(width, 640.0), height)
        self.wide, self.tall = (_INCH * side for side in drawn.size)
        self.full = min(1.0, width / self.wide, (height - self._words - 20.0) / self.tall)
        self.scale = self.full

    @property
    def _words(self) -> float:
        return self.under + _GAP

    @property
    def least(self) -> float:
        """Height under which the figure does not begin on a page [pt]."""
        return _SHRINK * self.full * self.tall + self._words

    def wrap(self, width: float, room: float) -> tuple[float, float]:
        """Take the room there is, if the figure stays fit to read [pt]."""
        fitting = (room - self._words) / self.tall
        self.scale = fitting if _SHRINK * self.full <= fitting < self.full else self.full
        return width, self.scale * self.tall + self._words

    def draw(self) -> None:
        """Leave the box, name what is to fill it, set the caption under it."""
        canvas: Canvas = self.canv
        drawn = self.drawn
        wide, tall = self.scale * self.wide, self.scale * self.tall
        self.pages[drawn.number] = canvas.getPageNumber()
        canvas.bookmarkHorizontal(drawn.anchor, 0, tall + self._words + 6.0)
        alt = (b"\xfe\xff" + drawn.alt.encode("utf-16-be", "replace")).hex()
        # A reader of screens finds the words where the lines are.
        canvas.addLiteral(f"/Span <</Alt <{alt}>>> BDC q {wide:.3f} 0 0 {tall:.3f} 0 {self._words:.3f} cm")
        canvas.addLiteral(f"/{_name(drawn.number)} Do Q EMC")
        self.caption.drawOn(canvas, 0, 0)


def fill_boxes(laid_out: bytes, figures: Mapping[int, Drawn], pages: Mapping[int, int]) -> bytes:
    """Put the figures into the boxes left for them.

    Parameters
    ----------
    laid_out : bytes
        The PDF with empty boxes.
    figures : mapping of int to Drawn
        By number.
    pages : mapping of int to int
        Page each number stands on, from 1.

    Returns
    -------
    bytes
        The whole PDF; nothing in it depends on the hour.
    """
    writer = PdfWriter(clone_from=io.BytesIO(laid_out))
    writer.pdf_header = "%PDF-1.5"
    for number, page in pages.items():
        drawn = figures[number]
        made = _vector(writer, drawn.vector) if drawn.vector else _pixels(writer, drawn.png)
        _add_resource(writer.pages[page - 1], _name(number), made)
    writer.metadata = {name: text for name, text in (writer.metadata or {}).items() if name in _KEPT}
    buffer = io.BytesIO()
    writer.write(buffer)
    return buffer.getvalue()


def _name(number: int) -> str:
    return f"Figure{number}"


def _add_resource(page: PageObject, name: str, made: StreamObject) -> None:
    resources = page["/Resources"].get_object()
    held = resources.get("/XObject")
    objects = DictionaryObject() if held is None else DictionaryObject(held.get_object())
    objects[NameObject(f"/{name}")] = made.indirect_reference
    resources[NameObject("/XObject")] = objects


def _vector(writer: PdfWriter, data: bytes) -> StreamObject:
    """Make a form of a figure's one page, scaled to the unit square; its stream stays packed as it is."""
    page = PdfReader(io.BytesIO(data)).pages[0]
    form = page["/Contents"].get_object().clone(writer)
    left, bottom, right, top = (float(side) for side in page.mediabox)
    scale = (1.0 / (right - left), 0.0, 0.0, 1.0 / (top - bottom), 0.0, 0.0)
    form.update(
        {
            NameObject("/Type"): NameObject("/XObject"),
            NameObject("/Subtype"): NameObject("/Form"),
            NameObject("/BBox"): _numbers(left, bottom, right, top),
            NameObject("/Matrix"): _numbers(*scale),
            NameObject("/Resources"): page["/Resources"].get_object().clone(writer),
        }
    )
    return form


def _pixels(writer: PdfWriter, data: bytes) -> StreamObject:
    """Make an image of a figure's PNG with a palette: a PDF takes the packed rows of a PNG as they are."""
    chunks = _chunks(data)
    width, height, depth = struct.unpack(">IIB", chunks["IHDR"][:9])
    palette = StreamObject()
    palette.set_data(chunks["PLTE"])
    image = StreamObject()
    image.set_data(chunks["IDAT"])
    rows = DictionaryObject(
        {
            NameObject("/Predictor"): NumberObject(15),
            NameObject("/Colors"): NumberObject(1),
            NameObject("/BitsPerComponent"): NumberObject(depth),
            NameObject("/Columns"): NumberObject(width),
        }
    )
    colours = ArrayObject(
        [
            NameObject("/Indexed"),
            NameObject("/DeviceRGB"),
            NumberObject(len(chunks["PLTE"]) // 3 - 1),
            writer._add_object(palette),
        ]
    )
    image.update(
        {
            NameObject("/Type"): NameObject("/XObject"),
            NameObject("/Subtype"): NameObject("/Image"),
            NameObject("/Width"): NumberObject(width),
            NameObject("/Height"): NumberObject(height),
            NameObject("/BitsPerComponent"): NumberObject(depth),
            NameObject("/ColorSpace"): colours,
            NameObject("/Filter"): NameObject("/FlateDecode"),
            NameObject("/DecodeParms"): rows,
        }
    )
    writer._add_object(image)
    return image


def _chunks(data: bytes) -> dict[str, bytes]:
    """Give the chunks of a PNG by name, the pixels' joined (PNG specification, section 5)."""
    chunks: dict[str, bytes] = {}
    at = 8
    while at < len(data):
        (length,) = struct.unpack(">I", data[at : at + 4])
        name = data[at + 4 : at + 8].decode("ascii")
        chunks[name] = chunks.get(name, b"") + data[at + 8 : at + 8 + length]
        at += length + 12
    return chunks


def _numbers(*values: float) -> ArrayObject:
    return ArrayObject([FloatObject(value) for value in values])
