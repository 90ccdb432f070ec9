"""A PDF written page by page: what is drawn is given away at once, so no sheet is too long.

Notes
-----
A canvas of reportlab keeps every page until the end and writes them all in one go: ten thousand
tags take hundreds of megabytes, and nobody sees a byte for a minute. The order in which objects
stand in a file is free, since a table at its end says where each begins.

References
----------
ISO 32000-1, Document management: Portable document format, 7.5 (file structure).
"""

from reportlab.pdfbase.pdfdoc import (
    PDFCrossReferenceTable,
    PDFDocument,
    PDFFile,
    PDFIndirectObject,
    PDFStream,
    PDFTrailer,
    PDFZCompress,
)
from reportlab.pdfgen.canvas import Canvas


class PageStream:
    """Takes the pages from a canvas as they are closed.

    Parameters
    ----------
    canvas
        What the pages are drawn on; it must not be saved itself.
    """

    def __init__(self, canvas: Canvas) -> None:
        self._canvas = canvas
        self._document: PDFDocument = canvas._doc
        self._file = PDFFile(self._document._pdfVersion)
        self._written: set[str] = set()

    def close_page(self) -> None:
        """Close the page that is being drawn, and write what is on it."""
        self._canvas.showPage()
        page = self._document.Pages.pages[-1]
        content = PDFStream(content=page.stream, filters=[PDFZCompress])
        page.Contents, page.stream = self._document.Reference(content), None
        self._write(page.Contents.name)
        self._document.idToObject[page.Contents.name] = None  # it has been given away

    def taken(self) -> bytes:
        """Give away what was written since it was last asked."""
        written = b"".join(self._file.strings)
        self._file.strings.clear()
        return written

    def finish(self) -> bytes:
        """Write everything but the pages' contents, and give away what was not yet."""
        document = self._document
        for font in document.delayedFonts:
            font.addObjects(document)
        document.info.invariant = document.invariant
        document.info.digest(document.signature)
        root, info = document.Reference(document.Catalog), document.Reference(document.info)
        document.Outlines.prepare(document, self._canvas)
        if document.Outlines.ready < 0:
            document.Catalog.Outlines = None
        document.__accum__ = self._file
        names = self._write_the_rest()
        table = PDFCrossReferenceTable()
        table.addsection(0, names)
        start = self._file.add(table.format(document))
        trailer = PDFTrailer(
            startxref=start, Size=len(names) + 1, Root=root, Info=info, ID=document.ID()
        )
        self._file.add(trailer.format(document))
        return self.taken()

    def _write_the_rest(self) -> list[str]:
        """Write all objects by number; some appear only while others are written."""
        names: list[str] = []
        while (number := len(names) + 1) in self._document.numberToId:
            name = self._document.numberToId[number]
            if name not in self._written:
                self._write(name)
            names.append(name)
        return names

    def _write(self, name: str) -> None:
        written = PDFIndirectObject(name, self._document.idToObject[name])
        offset = self._file.add(written.format(self._document))
        self._document.idToOffset[name] = offset
        self._written.add(name)
