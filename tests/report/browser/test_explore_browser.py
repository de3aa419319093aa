"""The explorer in a real browser: it draws, asks for nothing, complains of nothing, obeys keys and mouse."""

import io
import shutil

import numpy as np
import pytest
from PIL import Image
from playwright.sync_api import sync_playwright

from explored import with_course
from forensics.report.describe import make_scene
from forensics.report.explore.page import render_explorer

BROWSERS = ("chromium", "chromium-browser", "google-chrome", "chrome")
DRAWN = "() => new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(done)))"
FOCUS = "() => document.activeElement.id || document.activeElement.innerText"
WAIT = 30_000.0  # ms; a busy machine is slow, not wrong


def browser_path():
    found = next((path for path in map(shutil.which, BROWSERS) if path), None)
    assert found, "these tests drive Chromium, which is not installed; on Debian: apt-get install chromium"
    return found


@pytest.fixture(scope="module")
def browser():
    with sync_playwright() as driver:
        plain = ["--no-sandbox", "--disable-gpu"]
        started = driver.chromium.launch(executable_path=browser_path(), args=plain)
        yield started
        started.close()


class Shown:
    """The page of some findings as the browser shows it, with all that the browser had to say."""

    def __init__(self, browser, path, found):
        path.write_text(render_explorer(make_scene(found, "metric")), encoding="utf-8")
        self.said, self.asked = [], []
        self.tab = browser.new_page(viewport={"width": 1400, "height": 1200})
        self.tab.on("console", lambda message: self.said.append((message.type, message.text)))
        self.tab.on("pageerror", lambda error: self.said.append(("error", str(error))))
        self.tab.on("request", lambda request: self.asked.append(request.url))
        self.tab.goto(path.as_uri())
        self.tab.wait_for_selector("html[data-ready]", timeout=WAIT)

    def press(self, *keys):
        """Press keys and let the page draw."""
        for key in keys:
            self.tab.keyboard.press(key)
        self.tab.evaluate(DRAWN)

    def text(self, selector):
        """Words of an element."""
        return self.tab.inner_text(selector)

    def seconds(self):
        """Time of the cursor since the start of the run [s]."""
        return float(self.tab.get_attribute("#clock", "aria-valuenow"))

    def step(self):
        """Rows that a point drawn stands for."""
        return int(self.tab.get_attribute("html", "data-level"))

    def complaints(self):
        """Errors and warnings in the console."""
        return [words for kind, words in self.said if kind in {"error", "warning"}]


@pytest.fixture
def show(browser, tmp_path):
    pages = []

    def open_page(found):
        pages.append(Shown(browser, tmp_path / "explore.html", found))
        return pages[-1]

    yield open_page
    for page in pages:
        page.tab.close()


@pytest.fixture
def shown(show, build):
    return show(with_course(build(n=20_000)))


def test_keys_move_the_cursor_and_the_profile_with_it(shown):
    shown.press("Home")
    assert shown.seconds() == 0.0
    start, first = shown.text("#clock"), shown.text("#profile-told")
    assert start == "2024-05-03 10:00:00", "in the case's zone"
    assert "Profile of 2024-05-03 10:00:00, at the cursor" in first
    shown.press("ArrowRight")
    near = shown.seconds()
    shown.press("Shift+ArrowRight")
    assert 0.0 < 5 * near < shown.seconds()
    assert shown.text("#profile-told") != first
    assert shown.text("#clock") == shown.tab.get_attribute("#clock", "aria-valuetext")
    shown.press("ArrowLeft", "Shift+ArrowLeft")
    assert shown.seconds() == pytest.approx(0.0, abs=2.0)
    shown.press("End")
    assert "no value" not in shown.text(".track:nth-of-type(4)")
    assert shown.complaints() == []
    assert shown.asked == [shown.tab.url], "nothing is loaded"
    assert shown.tab.is_hidden("#trouble")


def test_keys_go_from_episode_to_episode_and_zoom(shown):
    shown.press("0")
    whole = shown.step()
    chosen = shown.tab.locator("#episodes")
    before = chosen.input_value()
    shown.press("n")
    assert chosen.input_value() > before
    assert shown.step() == 1 < whole
    assert shown.tab.is_visible("#span")
    first = shown.text("#clock")
    shown.press("p")
    assert chosen.input_value() == before
    assert shown.text("#clock") != first
    shown.press("-", "-", "-", "-", "-", "-", "-", "-")
    assert shown.step() == whole
    shown.press(*["+"] * 8)
    assert shown.step() == 1
    stamps = []
    for k in range(3):
        chosen.select_option(index=k)
        stamps.append(shown.text("#clock"))
    assert stamps == sorted(set(stamps)), "each episode's own time, in order"
    assert shown.complaints() == []


def test_a_click_puts_the_cursor_and_a_drag_moves_the_window(shown):
    shown.press("0", "Home")
    plot = shown.tab.locator(".track").nth(2).bounding_box()
    x, y = plot["x"] + 0.3 * plot["width"], plot["y"] + 0.5 * plot["height"]
    shown.tab.mouse.click(x, y)
    clicked = shown.seconds()
    assert clicked > 1000.0
    assert shown.tab.locator("#cursor").bounding_box()["x"] == pytest.approx(x, abs=12.0)
    shown.press(*["+"] * 5)
    there = shown.tab.locator("#cursor").bounding_box()["x"]
    shown.tab.mouse.move(x, y)
    shown.tab.mouse.down()
    shown.tab.mouse.move(x - 40.0, y, steps=4)
    shown.tab.mouse.up()
    shown.press("Shift")
    assert shown.seconds() == clicked, "a drag leaves the cursor at its time"
    assert shown.tab.locator("#cursor").bounding_box()["x"] == pytest.approx(there - 40.0, abs=6.0)


def test_tracks_map_and_profile_are_drawn(shown):
    for selector, least in ((".track:has-text('hookload')", 0.004), ("#profile", 0.01)):
        picture = Image.open(io.BytesIO(shown.tab.locator(selector).screenshot())).convert("L")
        dark = np.mean(np.asarray(picture) < 110)
        assert dark > least, selector
    charted = shown.tab.locator(".track:has-text('load ratio by depth')")
    picture = np.asarray(Image.open(io.BytesIO(charted.screenshot())).convert("RGB"), dtype=int)
    ochre = np.abs(picture - np.array([0xE8, 0xA8, 0x24])).max(axis=2) < 12
    assert ochre.mean() > 0.01, "what lies above the threshold is coloured"


def test_frames_of_all_tracks_line_up(shown):
    left = shown.tab.evaluate(
        """() => Bokeh.documents[0].roots().slice(0, -1)
             .map((root) => Bokeh.index.get(root).frame.bbox).map((box) => [box.left, box.width])"""
    )
    assert len(left) >= 9
    assert np.ptp(np.array(left), axis=0).max() <= 1.0


@pytest.mark.parametrize("episodes", [0, 3000])
def test_page_opens_with_none_and_with_thousands_of_episodes(show, build, episodes):
    page = show(build(n=9000, episodes=episodes))
    page.press("n", "n", "p", "0", "ArrowRight")
    assert page.complaints() == []
    assert "No profile was kept" in page.text("#profile-told")
    assert (page.tab.locator("#episodes option").count()) == episodes


def test_every_control_is_reached_by_tab_and_shows_it(shown):
    names, outlines = [], set()
    for _ in range(9):
        shown.press("Tab")
        names.append(shown.tab.evaluate(FOCUS))
        outlines.add(
            shown.tab.evaluate("() => getComputedStyle(document.activeElement).outlineStyle") != "none"
        )
    words = " | ".join(names)
    for name in ("Skip to", "Back to the report", "Previous", "Next", "Zoom in", "Zoom out", "Whole run"):
        assert name in words
    assert names[-2:] == ["clock", "episodes"], "the plots are no stops on the way"
    assert outlines == {True}
