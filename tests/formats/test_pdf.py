"""PDF: lines come back where they were drawn, words as they were, and a damaged file is a finding."""

import re

import pytest

from boomwright.errors import MeasureError
from boomwright.formats.format import FileEntry
from boomwright.formats.pdf import PDF
from boomwright.pieces import IDENTITY, Contour, Lettering, Mark, Page, PagesPiece, Probe
from boomwright.shop.profile import Shop

HOSTILE = 'Hill (north) \\ <b>R&D</b> 5 % ) Tj ET "ä" \n /SEAT BMC 0 0 m'


def line(layer, x0, y0, x1, y1):
    return Mark(Contour(((x0, y0, 0.0), (x1, y1, 0.0)), closed=False), layer)


def piece(title=HOSTILE, x_mm=33.333):
    marks = (line("SEAT", x_mm, 20.0, x_mm, 60.0), line("CHECK-BAR", 10.0, 15.0, 110.0, 15.0))
    page = Page(marks, (Lettering(title, 10.0, 190.0, 4.0, "WORDS"),))
    return PagesPiece("template", "bench", title, (297.0, 210.0), (page, Page((), ())))


def saved(folder, made):
    PDF.write(made, folder / "t.pdf")
    return PDF.read(folder / "t.pdf")


def test_lines_words_and_sizes_come_back(tmp_path):
    reading = saved(tmp_path, piece())
    assert [page.size_mm for page in reading.pages] == [pytest.approx((297.0, 210.0), abs=1e-4)] * 2
    assert [mark.layer for mark in reading.pages[0].lines] == ["SEAT", "CHECK-BAR"]
    assert reading.pages[0].words == (HOSTILE.replace("\n", " "),)
    arguments = {"page": 0, "x_mm": 33.0, "layer": "SEAT"}
    assert PDF.measure(reading, Probe("line_at", arguments), []) == pytest.approx(33.333, abs=1e-4)
    assert PDF.measure(reading, Probe("check_bar_mm", {"page": 0}), []) == pytest.approx(100.0, abs=1e-6)
    assert PDF.measure(reading, Probe("page_count"), []) == 2.0


def test_the_page_is_a4_in_points(tmp_path):
    """ISO 216 A4 is 210 x 297 mm; a point is 1/72 inch: 841.8898 x 595.2756."""
    saved(tmp_path, piece())
    box = re.search(rb"/MediaBox \[(.*?)\]", (tmp_path / "t.pdf").read_bytes())
    assert box is not None
    assert box[1].decode() == "0 0 841.8898 595.2756"


def test_a_document_printed_smaller_is_noticed(tmp_path):
    saved(tmp_path, piece())
    path = tmp_path / "t.pdf"
    path.write_bytes(path.read_bytes().replace(b"2.8346456693 0 0 2.8346456693", b"2.7346456693 0 0 2.7346456693"))
    reading = PDF.read(path)
    assert PDF.measure(reading, Probe("check_bar_mm", {"page": 0}), []) == pytest.approx(96.472, abs=1e-3)


def test_the_same_piece_gives_the_same_bytes(tmp_path):
    saved(tmp_path, piece())
    first = (tmp_path / "t.pdf").read_bytes()
    saved(tmp_path, piece())
    assert (tmp_path / "t.pdf").read_bytes() == first


@pytest.mark.parametrize("share", [0.0, 0.3, 0.9, 0.999])
def test_a_file_cut_short_is_a_finding(share, tmp_path):
    saved(tmp_path, piece())
    path = tmp_path / "t.pdf"
    data = path.read_bytes()
    path.write_bytes(data[: int(len(data) * share)])
    with pytest.raises(MeasureError, match=r"^t\.pdf: not a readable PDF file"):
        PDF.read(path)


@pytest.mark.parametrize("junk", [b"%PDF-1.4\nnonsense\n%%EOF\n", b"%PDF-1.4\nstartxref\n9\n%%EOF", bytes(range(256))])
def test_junk_is_a_finding(junk, tmp_path):
    (tmp_path / "j.pdf").write_bytes(junk)
    with pytest.raises(MeasureError, match=r"^j\.pdf"):
        PDF.read(tmp_path / "j.pdf")


def test_what_is_not_there_is_not_measured(tmp_path):
    reading = saved(tmp_path, piece())
    for measure, arguments, message in (
        ("line_at", {"page": 0, "x_mm": 50.0, "layer": "SEAT"}, "no line of SEAT near x = 50"),
        ("line_at", {"page": 7, "x_mm": 50.0, "layer": "SEAT"}, "no page 8"),
        ("check_bar_mm", {"page": 1}, "0 check bars"),
    ):
        with pytest.raises(MeasureError, match=message):
            PDF.measure(reading, Probe(measure, arguments), [])


def test_a_line_over_the_edge_breaks_the_formats_rule(tmp_path):
    reading = saved(tmp_path, piece(x_mm=299.0))
    entry = FileEntry("t.pdf", "wrap-template", "bench", "pdf", "mm", IDENTITY)
    over = {e.what: PDF.measure(reading, e.probe, []) for e in PDF.expect(entry, Shop())}
    assert over["overrun of the pages"] == pytest.approx(2.0, abs=1e-3)


def test_a_layer_that_would_break_the_content_is_refused(tmp_path):
    made = PagesPiece("t", "bench", "t", (100.0, 100.0), (Page((line("A EMC", 1, 1, 2, 2),)),))
    with pytest.raises(ValueError, match="no layer's name"):
        PDF.write(made, tmp_path / "t.pdf")
