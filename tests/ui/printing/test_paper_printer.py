"""Papers on pages: whole, searchable, header repeated, file replaced only when complete."""

from __future__ import annotations

import io

import pytest
from pypdf import PdfReader
from PySide6.QtGui import QPageLayout
from PySide6.QtPrintSupport import QPrinter

from kitplanner.report.content import Heading, PageBreak, Paper, Paragraph, Table, cell
from kitplanner.ui.printing import paper_printer
from kitplanner.ui.printing.blocks import Piece, paginate
from kitplanner.ui.printing.paper_printer import pdf_bytes, print_paper, write_pdf
from kitplanner.ui.printing.print_dialogs import PaperPreview, new_printer
from kitplanner.ui.printing.print_effort import NothingToPrintError, export_effort_pdf, paper_of
from tests.ui.sample_answers import demo_answers


def long_paper(rows=120):
    header = ((cell("Device", strong=True), cell("Minutes", "direct", align="right")),)
    body = tuple((cell(f"Officeradio {n}"), cell(f"{n} min", "range", align="right")) for n in range(rows))
    table = Table(title="Full charge", header=header, rows=body, footnotes=("(p) the person is the limit.",))
    blocks = (Paragraph(text="How to read it.", style="lead"), Heading(text="Table"), table)
    return Paper(key="effort", title="Minutes per charge", subtitle="Fluffy flats", blocks=blocks, foot="valid")


def pages(data):
    """Text of each page; what separates words does not matter."""
    texts = [page.extract_text() for page in PdfReader(io.BytesIO(data)).pages]
    return [text.replace("\t", " ") for text in texts]


@pytest.mark.usefixtures("qapp")
class TestPdf:
    def test_every_row_once_and_header_on_every_page(self):
        texts = pages(pdf_bytes(long_paper()))
        assert len(texts) >= 3
        whole = "\n".join(texts)
        for n in range(120):
            assert whole.count(f"Officeradio {n}\n") == 1, n
        assert all("Device" in text for text in texts)
        assert all(f"page {n} of {len(texts)}" in text for n, text in enumerate(texts, start=1))
        assert all("Minutes per charge" in text for text in texts)
        assert whole.count("(p) the person is the limit.") == 1

    def test_ligatures_stay_letters(self):
        text = "\n".join(pages(pdf_bytes(long_paper(3))))
        assert "Officeradio 1" in text
        assert "Fluffy flats" in text
        assert not set("ﬀﬁﬂﬃﬄ") & set(text)

    @pytest.mark.parametrize(("size", "points"), [("A4", (595, 842)), ("Letter", (612, 792)), ("A3", (842, 1191))])
    def test_page_sizes(self, size, points):
        # ISO 216 and ANSI/ASME Y14.1 sizes at 72 points an inch.
        box = PdfReader(io.BytesIO(pdf_bytes(long_paper(3), size))).pages[0].mediabox
        assert (round(box.width), round(box.height)) == pytest.approx(points, abs=1)

    def test_fonts_are_embedded(self):
        reader = PdfReader(io.BytesIO(pdf_bytes(long_paper(3))))
        fonts = [font.get_object() for font in reader.pages[0]["/Resources"]["/Font"].values()]
        assert fonts
        for font in fonts:
            below = font["/DescendantFonts"][0].get_object()["/FontDescriptor"].get_object()
            assert "/FontFile2" in below or "/FontFile3" in below

    def test_page_break_and_long_word(self):
        blocks = (
            Paragraph(text="one"),
            PageBreak(),
            Paragraph(text="x" * 400),
            Paragraph(text="C1 words", label="C1", style="caution"),
        )
        texts = pages(pdf_bytes(Paper(key="k", title="T", blocks=blocks)))
        assert len(texts) == 2
        assert texts[1].count("x") == 400

    def test_printer_and_pdf_have_the_same_pages(self, tmp_path):
        printer = new_printer("A4")
        printer.setOutputFormat(QPrinter.OutputFormat.PdfFormat)
        printer.setOutputFileName(str(tmp_path / "out.pdf"))
        count = print_paper(long_paper(), printer)
        assert count == len(pages(pdf_bytes(long_paper())))
        assert pages((tmp_path / "out.pdf").read_bytes())[1] == pages(pdf_bytes(long_paper()))[1]
        assert printer.pageLayout().orientation() == QPageLayout.Orientation.Portrait

    def test_failed_write_keeps_the_old_file(self, tmp_path, monkeypatch):
        path = tmp_path / "effort.pdf"
        path.write_bytes(b"old")

        def full(_handle):
            raise OSError(28, "No space left on device")

        monkeypatch.setattr(paper_printer.os, "fsync", full)
        with pytest.raises(OSError, match="No space left"):
            write_pdf(long_paper(2), path)
        assert path.read_bytes() == b"old"
        assert [one.name for one in tmp_path.iterdir()] == ["effort.pdf"]

    def test_a_folder_is_no_file(self, tmp_path):
        with pytest.raises(OSError, match="no ordinary file"):
            write_pdf(long_paper(2), tmp_path)

    def test_effort_table_of_a_demo(self, tmp_path):
        plan, results = demo_answers("camp")
        export_effort_pdf(tmp_path / "camp.pdf", plan, results)
        text = " ".join("\n".join(pages((tmp_path / "camp.pdf").read_bytes())).split())
        for device in plan.devices:
            assert (device.name.split(",")[0] in text) == (device.battery_wh is not None), device.name
        assert "Planning aid" in text
        assert not any(person.name in text for person in plan.people)

    def test_plan_with_errors_prints_nothing(self, tmp_path):
        from kitplanner.plan.checks import Problem

        plan, results = demo_answers("camp")
        from msgspec.structs import replace

        wrong = Problem(place=("stores",), severity="error", text="x.", remedy="")
        with pytest.raises(NothingToPrintError):
            export_effort_pdf(tmp_path / "camp.pdf", plan, replace(results, problems=(wrong,)))
        assert not (tmp_path / "camp.pdf").exists()

    def test_stale_effort_is_worked_out_again(self):
        from msgspec.structs import replace

        plan, results = demo_answers("household")
        fewer = replace(plan, devices=plan.devices[:2])
        paper = paper_of(fewer, results)
        table = next(block for block in paper.blocks if isinstance(block, Table))
        assert len(table.rows) == len([device for device in fewer.devices if device.battery_wh])


def test_preview_shows_the_paper(qtbot):
    preview = PaperPreview(long_paper(5), None)
    painted = []
    preview.dialog.paintRequested.connect(lambda printer: painted.append(printer.isValid()))
    preview.open()
    qtbot.waitUntil(lambda: bool(painted))
    preview.dialog.close()


def piece(height, **more):
    return Piece(height, lambda _painter, _y: None, **more)


def test_heading_never_ends_a_page():
    sheets = paginate(iter([piece(80.0), piece(15.0, keep=True), piece(30.0)]), 100.0)
    assert [len(sheet.pieces) for sheet in sheets] == [1, 2]


def test_header_repeats_only_inside_its_table():
    head = piece(10.0, keep=True)
    rows = [piece(30.0, repeat=(head,)) for _ in range(6)]
    sheets = paginate(iter([head, *rows, piece(20.0)]), 100.0)
    for sheet in sheets:
        if any(one.repeat for _y, one in sheet.pieces):
            assert sheet.pieces[0][1] is head
        assert max(y + one.height_mm for y, one in sheet.pieces) <= 100.0
    assert sum(one is not head for sheet in sheets for _y, one in sheet.pieces) == 7


def test_a_piece_taller_than_a_page_stands_alone():
    sheets = paginate(iter([piece(150.0), piece(10.0)]), 100.0)
    assert [len(sheet.pieces) for sheet in sheets] == [1, 1]
