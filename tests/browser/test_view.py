"""The 3D view in a real browser: a page on disk, no network, WebGL drawn in software."""

from itertools import permutations, product

import pytest
import samples
from browser.driver import Browser
from scene_cases import NASTY, plain

from boomwright.book.pictures import Shot, picture
from boomwright.book.view.section import view_html

pytestmark = pytest.mark.slow

TAB, SPACE, LEFT = "\ue004", " ", "\ue012"
KEYS = [rod.tag for rod in samples.GAUGE.rods]
STAGE = ".bw-view-stage"
TAGS = """
return [...document.querySelectorAll('.bw-view svg text')]
  .map(t => [t.textContent, Number(t.getAttribute('x')), Number(t.getAttribute('y'))]);
"""


@pytest.fixture(scope="module")
def page(tmp_path_factory):
    scene = plain()
    html = view_html(scene, picture(scene, Shot(scene.keys("Antenna")), 300))
    path = tmp_path_factory.mktemp("page") / "view.html"
    head = '<!doctype html><html lang="en"><meta charset="utf-8"><meta name="color-scheme" content="light dark">'
    head += "<style>body { font: 18px/1.6 'DejaVu Sans', sans-serif }</style>"
    names = "<script>var names{} = Object.getOwnPropertyNames(window);</script>"
    body = f"<p>Before.</p>{names.format('Before')}{html}{names.format('After')}<p>After.</p>"
    path.write_text(f"{head}<title>view</title><body>{body}</body></html>", "utf-8")
    return path


@pytest.fixture(scope="module")
def browser():
    with Browser() as one:
        one.go_offline()
        yield one


@pytest.fixture
def view(browser, page):
    browser.look(prefers_reduced_motion="reduce")
    browser.open(page)
    settle(browser)
    yield browser
    assert browser.complaints() == []


def settle(browser):
    """Wait until the tags are drawn, which they are once the view has come to rest."""
    browser.wait("return document.querySelectorAll('.bw-view-live svg text').length")
    browser.wait("return new Promise(done => requestAnimationFrame(() => requestAnimationFrame(() => done(true))))")


def choose(browser, *keys):
    browser.run(
        "document.querySelectorAll('.bw-view select').forEach((s, i) => {"
        " s.value = arguments[0][i]; s.dispatchEvent(new Event('change', {bubbles: true})); })",
        list(keys),
    )
    return browser.text(".bw-view-answer")


def at(tag):
    design = samples.GAUGE
    return next((rod.at_mm for rod in design.rods if rod.tag == tag), design.driven.at_mm)


def test_words_of_the_user_stand_as_they_were_written(view):
    assert NASTY in view.run("return document.querySelector('.bw-view').getAttribute('aria-label')")


def test_a_part_is_switched_off_and_on_by_mouse_and_keyboard(view):
    whole = view.picture(STAGE)
    view.click("input[data-part='D1']")
    settle(view)
    without = view.picture(STAGE)
    assert without != whole
    assert [text for text, _, _ in view.run(TAGS)] == ["R", "DE", "D2"]
    view.run("document.querySelector(\"input[data-part='D1']\").focus()")
    view.type(SPACE)
    settle(view)
    assert view.picture(STAGE) == whole


def test_the_keyboard_reaches_every_control_and_shows_where_it_is(view):
    wanted = view.run("return document.querySelectorAll('.bw-view :is(canvas, button, select, input)').length")
    seen = []
    for _ in range(wanted):
        view.type(TAB)
        now = "const e = document.activeElement; return "
        seen.append(view.run(now + "e.tagName + (e.dataset.pose || e.dataset.part || e.ariaLabel)"))
        assert view.run(now + "getComputedStyle(e).outlineStyle + getComputedStyle(e).outlineWidth") == "solid3px"
    assert len(set(seen)) == wanted


def test_poses_show_their_parts(view):
    assembled = view.picture(STAGE)
    view.click("button[data-pose='laid']")
    settle(view)
    assert view.run("return document.querySelector(\"button[data-pose='laid']\").ariaPressed") == "true"
    assert view.run("return document.querySelector(\"[data-part='cradle-1']\").checked")
    laid = view.picture(STAGE)
    view.click("button[data-pose='exploded']")
    settle(view)
    assert len({assembled, laid, view.picture(STAGE)}) == 3
    view.click("button[data-pose='assembled']")
    settle(view)
    assert not view.run("return document.querySelector(\"[data-part='cradle-1']\").checked")
    assert view.picture(STAGE) == assembled


def test_a_pose_glides_for_those_who_do_not_mind_and_comes_to_rest(view):
    view.look()
    view.click("button[data-pose='exploded']")
    settle(view)
    assert view.run("return document.querySelector('.bw-view').dataset.pose") == "exploded"


def test_distances_from_the_lists_are_the_design_s(view):
    for one, other in permutations(["DE", *KEYS], 2):
        apart = f"{abs(at(one) - at(other)):g} mm"
        assert choose(view, one, other) == f"{apart} along the boom; {apart} from axis to axis."
    assert choose(view, "R", "R") == "Choose two different axes."
    assert choose(view, "R", "") == "rod R: now the second axis."


def test_a_rod_and_the_boom_cross(view):
    height = abs(samples.GAUGE.boom.width_mm / 2.0 - samples.GAUGE.rods[0].diameter_mm / 2.0)
    assert choose(view, "R", "boom") == f"The axes cross at right angles, {height:g} mm apart."


def test_two_rods_picked_in_the_picture_are_measured(view):
    for tag in ("R", "D2"):
        x, y = next((x, y) for text, x, y in view.run(TAGS) if text == tag)
        view.press_at(".bw-view canvas", x, y - 5)
        settle(view)
    apart = f"{at('D2') - at('R'):g} mm"
    assert view.text(".bw-view-answer") == f"{apart} along the boom; {apart} from axis to axis."
    assert apart in [text for text, _, _ in view.run(TAGS)]
    assert view.run("return [...document.querySelectorAll('.bw-view select')].map(s => s.value)") == ["R", "D2"]


def test_turning_zooming_and_going_back(view):
    home = view.picture(STAGE)
    view.drag(".bw-view canvas", [(100, 100), (160, 120), (200, 130)])
    settle(view)
    turned = view.picture(STAGE)
    view.run("document.querySelector('.bw-view canvas').focus()")
    view.type(LEFT, "+", "+")
    settle(view)
    near = view.picture(STAGE)
    view.type("0")
    view.run("document.activeElement.blur()")
    settle(view)
    assert len({home, turned, near}) == 3
    assert view.picture(STAGE) == home


def test_nothing_is_left_in_the_page_s_own_names(view):
    before, after = view.run("return [namesBefore, namesAfter]")
    assert set(after) - set(before) == {"namesAfter"}


CONTRASTS = """
const level = (text) => text.match(/[\\d.]+/g).slice(0, 3).map(v => v / 255)
  .map(v => v <= 0.04045 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4)
  .reduce((sum, v, i) => sum + v * [0.2126, 0.7152, 0.0722][i], 0);
const ratio = (a, b) => (Math.max(a, b) + 0.05) / (Math.min(a, b) + 0.05);
const style = (q) => getComputedStyle(document.querySelector(q));
const paper = level(style('.bw-view').backgroundColor), ground = level(style('.bw-view-stage').backgroundColor);
const words = ['.bw-view-help', '.bw-view legend', '.bw-view-answer', '.bw-view select', '.bw-view label'];
const tags = ['.bw-view-tag', '.bw-view-chosen'];
return [...words.map(q => ratio(level(style(q).color), paper)), ...tags.map(q => ratio(level(style(q).fill), ground))];
"""
"""Of every kind of word in the view, by WCAG 2's formula of relative luminance."""


def test_it_fits_and_its_words_can_be_read(view):
    choose(view, "R", "D1")
    for width, scheme in product((360, 800, 1400), ("light", "dark")):
        view.look(width, prefers_color_scheme=scheme, prefers_reduced_motion="reduce")
        settle(view)
        assert view.run("return document.documentElement.scrollWidth") <= width
        assert min(view.run(CONTRASTS)) >= 4.5, (width, scheme)


def test_paper_gets_the_still_picture(view):
    assert not view.shown(".bw-view-still")
    view.look(media="print")
    assert view.shown(".bw-view-still")
    assert not view.shown(".bw-view canvas")
    assert not view.shown(".bw-view-desk")


def test_without_webgl_the_still_picture_stays_and_distances_can_be_read(page):
    with Browser(webgl=False) as browser:
        browser.open(page)
        assert browser.shown(".bw-view-still")
        assert browser.shown(".bw-view-fallback")
        assert not browser.shown(".bw-view-poses")
        assert not browser.shown(".bw-view-parts")
        apart = f"{at('D1') - at('R'):g} mm"
        assert choose(browser, "R", "D1") == f"{apart} along the boom; {apart} from axis to axis."
        assert browser.complaints() == []
