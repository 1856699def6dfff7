"""The whole build book in a real browser: opened from disk, no network, at three widths, in light and dark, printed."""

import base64
import re

import pytest
import samples
from browser.driver import Browser

from boomwright.design.tomlfile import write_design
from boomwright.pipeline import make

pytestmark = pytest.mark.slow

PARTS = ["boom", "rod", "driven", "cut-list", "drawings", "cradle", "mould", "former", "prediction", "build-book"]
WIDTHS = (360, 800, 1400)
OVERFLOW = """
const wide = [];
for (const e of document.querySelectorAll('main *, header *, nav *')) {
  const box = e.getBoundingClientRect();
  const held = e.closest(".scroll, .bw-view-stage");
  if (box.width && box.right > innerWidth + 1 && !held) wide.push(e.outerHTML.slice(0, 80));
}
return wide;
"""
FAINT = """
const channel = v => { v /= 255; return v <= 0.04045 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4; };
const light = c => 0.2126 * channel(c[0]) + 0.7152 * channel(c[1]) + 0.0722 * channel(c[2]);
const read = text => { const n = text.match(/[\\d.]+/g).map(Number); return n.length < 4 ? [...n, 1] : n; };
const ground = e => {
  for (; e; e = e.parentElement) { const c = read(getComputedStyle(e).backgroundColor); if (c[3] === 1) return c; }
  return [255, 255, 255, 1];
};
const faint = [];
const walk = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
while (walk.nextNode()) {
  const e = walk.currentNode.parentElement;
  if (!walk.currentNode.data.trim() || !e.checkVisibility() || e.closest('script, style, svg')) continue;
  const [a, b] = [light(read(getComputedStyle(e).color)), light(ground(e))].sort((x, y) => y - x);
  if ((a + 0.05) / (b + 0.05) < 4.5) faint.push([walk.currentNode.data.slice(0, 40), (a + 0.05) / (b + 0.05)]);
}
return faint;
"""


@pytest.fixture(scope="module")
def folder(tmp_path_factory):
    """The output of a design with everything that a chapter shows."""
    place = tmp_path_factory.mktemp("book")
    (place / "gauge.toml").write_text(write_design(samples.GAUGE), "utf-8")
    return make(place / "gauge.toml", out=place / "out", only=PARTS).folder


@pytest.fixture(scope="module")
def browser():
    with Browser() as one:
        one.go_offline()
        yield one


@pytest.fixture
def book(browser, folder):
    browser.look(1400, 1000, prefers_reduced_motion="reduce")
    browser.open(folder / "build-book.html")
    browser.wait("return document.querySelectorAll('.bw-view-live svg text').length")
    yield browser
    assert browser.complaints() == []


def test_it_fetches_nothing(folder):
    page = (folder / "build-book.html").read_text("utf-8")
    assert len(page) < 3_000_000
    without_code = re.sub(r"<script.*?</script>", "", page, flags=re.S)
    assert not re.search(r"<link|@import|<iframe|<object", without_code)
    sources = re.findall(r'\b(?:src|href)="([^"]*)"', without_code)
    assert sources and all(source.startswith(("data:", "#")) for source in sources)
    assert not re.search(r"url\((?!['\"]?data:)", without_code)


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("width", WIDTHS)
def test_nothing_runs_over_and_every_text_can_be_read(book, width, scheme):
    book.look(width, 1000, prefers_color_scheme=scheme, prefers_reduced_motion="reduce")
    assert book.run("return document.documentElement.scrollWidth") <= width
    assert book.run(OVERFLOW) == []
    assert book.run(FAINT) == []
    lost = "return [...document.images].filter(i => !i.complete || !i.naturalWidth).map(i => i.alt)"
    assert book.run(lost) == []


def test_no_chapter_is_empty_and_every_link_leads_somewhere(book):
    words = book.run("return [...document.querySelectorAll('section.chapter')].map(s => s.innerText.length)")
    assert len(words) == 14 and min(words) > 80
    broken = (
        "return [...document.querySelectorAll('a[href^=\"#\"]')].filter(a => !document.querySelector(a.hash)).length"
    )
    assert book.run(broken) == 0


def test_a_distance_is_read_in_the_book(book):
    book.run(
        "document.querySelectorAll('.bw-view select').forEach((s, i) => {"
        " s.value = arguments[0][i]; s.dispatchEvent(new Event('change', {bubbles: true})); })",
        ["R", "D2"],
    )
    rods = {rod.tag: rod.at_mm for rod in samples.GAUGE.rods}
    assert f"{rods['D2'] - rods['R']:g}" in book.text(".bw-view-answer")


def test_the_keyboard_reaches_the_switches(book):
    book.run("document.body.focus()")
    for _ in range(60):
        book.type("\ue004")
        if book.run("return document.activeElement.matches('.bw-view input[type=checkbox]')"):
            break
    before = book.run("return document.activeElement.checked")
    book.type(" ")
    assert book.run("return document.activeElement.checked") != before


def test_it_prints(book):
    printed = base64.b64decode(book.command("Page.printToPDF", printBackground=False)["data"])
    assert printed.startswith(b"%PDF") and len(re.findall(rb"/Type\s*/Page\b", printed)) >= 14


def test_the_paper_has_every_chapter_and_the_same_bytes_again(folder, tmp_path):
    again = make(folder.parent / "gauge.toml", out=tmp_path / "again", only=PARTS).folder
    for name in ("build-book.html", "build-book.pdf"):
        assert (again / name).read_bytes() == (folder / name).read_bytes()
