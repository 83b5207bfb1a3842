"""Vary, Compare and a stranger's sensor in a real browser."""

from __future__ import annotations

import threading

import pytest
from selenium.webdriver.common.by import By
from selenium.webdriver.common.keys import Keys

from outcouple_dashboard.server import Served

from .conftest import TANK
from .visitor import Visitor


def choose(visitor, name, text):
    """Pick from a list with search by keyboard alone."""
    visitor.click(f"#{name}")
    field = visitor.one(f"#{name}")
    field.send_keys(Keys.CONTROL, "a")
    field.send_keys(text)
    visitor.until(lambda: visitor.all("[role=option]"), "options")
    field.send_keys(Keys.ARROW_DOWN, Keys.ENTER)


def test_vary_an_input_and_take_a_point_over(visitor):
    visitor.open(TANK)
    visitor.click("#nav-vary")
    visitor.until(lambda: visitor.browser.find_element(By.ID, "vary-result").is_displayed(), "a curve")
    choose(visitor, "vary-x", "crosstalk")
    visitor.shows("vary-heading", "prism.crosstalk")
    visitor.until(lambda: visitor.trace("vary-picture"), "a curve of crosstalk")
    visitor.until(lambda: visitor.all("#vary-points .ag-row[row-index='3'] .ag-cell"), "rows")
    visitor.click("#vary-points .ag-row[row-index='3'] .ag-cell")
    visitor.shows("vary-picked-text", "prism.crosstalk =")
    visitor.click("#vary-take")
    visitor.until(lambda: visitor.value("prism/crosstalk") != "2 %", "the point in the form")
    visitor.shows("file-standing", "changed")


def test_pin_variants_and_compare_them(visitor):
    visitor.open(TANK)
    visitor.click("#nav-compare")
    visitor.click("#pin-add")
    visitor.until(lambda: len(visitor.all("#pin-list li")) == 1, "a pin")
    visitor.type("prism/crosstalk", "30 %")
    visitor.shows("compare-told", "as it stands misses by most")
    visitor.shows("compare-differences", "prism.crosstalk")
    visitor.until(lambda: visitor.trace("compare-margins"), "margins")
    visitor.click("#pin-list li button[aria-label^='Work on']")
    visitor.until(lambda: visitor.value("prism/crosstalk") == "2 %", "the pinned design back")
    visitor.click("#pin-list li button[aria-label^='Remove']")
    visitor.until(lambda: not visitor.all("#pin-list li"), "no pins")


def test_a_file_of_this_computer_is_taken_or_refused_in_words(visitor, tmp_path, tank):
    visitor.open(TANK)
    visitor.click("#shelf-open")
    long, mine = tmp_path / "long.toml", tmp_path / "mine.toml"
    long.write_text("#" * 300_000)
    visitor.one("#upload input[type=file]").send_keys(str(long))
    visitor.shows("message", "too long for a design")
    mine.write_text(tank.replace('title = "Day tank', 'title = "My own tank'))
    visitor.one("#upload input[type=file]").send_keys(str(mine))
    visitor.shows("headline-title", "My own tank")
    visitor.shows("file-standing", "not saved yet")


@pytest.fixture
def strange_visitor(chromium, folder, stranger):
    served = Served(folder)
    threading.Thread(target=served.server.run, daemon=True).start()
    chromium.get(served.address)
    yield Visitor(chromium, served)
    chromium.get("about:blank")
    served.close()


def test_a_strangers_sensor_has_the_whole_page(strange_visitor):
    visitor = strange_visitor
    choose(visitor, "welcome-start", "flood")
    visitor.click("#welcome-go")
    visitor.shows("verdict-word", "Pass")
    visitor.until(lambda: visitor.trace("section"), "its drawing")
    visitor.type("window/slope", "75 deg")
    visitor.shows("verdict-word", "Fail")
    visitor.shows("views", "Tally of states")
    assert visitor.outside() == []
