"""The Design page in a real browser: the ways a person goes."""

from __future__ import annotations

from pathlib import Path

import pytest
from selenium.webdriver.common.keys import Keys

from .conftest import TANK


def test_a_changed_value_changes_verdict_and_drawing(visitor):
    visitor.open(TANK)
    assert "Pass" in visitor.text("verdict-word")
    before = visitor.until(lambda: visitor.trace("section"), "a drawing")
    visitor.type("prism/base", "12 mm")
    visitor.until(lambda: visitor.trace("section") != before, "another drawing")
    visitor.type("prism/crosstalk", "30 %")
    visitor.shows("verdict-word", "Fail")
    visitor.shows("consequence", "Heating oil reads dry")
    assert visitor.text("file-standing") == "changed"


def test_first_screen_needs_no_scrolling(visitor):
    visitor.open(TANK)
    visitor.until(lambda: visitor.trace("section"), "a drawing")
    visitor.shows("advice", "One change that would help")
    bottom = "return document.getElementById(arguments[0]).getBoundingClientRect().bottom"
    for name in ("verdict-word", "worst-state", "limiting", "advice-text", "section"):
        assert visitor.browser.execute_script(bottom, name) <= 800, name


def test_a_bad_value_is_told_beside_its_field_and_changes_nothing(visitor):
    visitor.open(TANK)
    visitor.type("prism/base", "eight")
    message = visitor.one(".mantine-InputWrapper-error").text
    assert message.startswith("no number; a length is wanted")
    assert message.endswith("Everything shown keeps 8 mm.")
    visitor.type("emitter/power", "1e9 W")
    visitor.until(lambda: len(visitor.all(".mantine-InputWrapper-error")) == 2, "a second message")
    assert "Pass" in visitor.text("verdict-word")
    assert visitor.text("file-standing") == "saved"
    visitor.type("prism/base", "9 mm")
    visitor.shows("file-standing", "changed")
    visitor.until(lambda: len(visitor.all(".mantine-InputWrapper-error")) == 1, "one message gone")


def test_undo_redo_back_to_file_and_the_link(visitor):
    visitor.open(TANK)
    visitor.type("prism/crosstalk", "5 %")
    visitor.shows("file-standing", "changed")
    visitor.click("#undo")
    visitor.until(lambda: visitor.value("prism/crosstalk") == "2 %", "undone")
    visitor.click("#redo")
    visitor.until(lambda: visitor.value("prism/crosstalk") == "5 %", "done again")
    link = visitor.until(lambda: "?d=" in visitor.browser.current_url and visitor.browser.current_url, "a link")
    visitor.click("button[aria-label='crosstalk: back to the value of the file']")
    visitor.shows("file-standing", "saved")
    visitor.browser.get("about:blank")
    visitor.browser.get(link)
    visitor.until(lambda: visitor.value("prism/crosstalk") == "5 %", "the state of the link")
    visitor.shows("file-standing", "changed")


def test_the_slider_moves_with_the_keyboard(visitor):
    visitor.open(TANK)
    slider = visitor.one("[aria-label='base, slider']")
    slider.send_keys(Keys.ARROW_RIGHT * 10)
    visitor.until(lambda: visitor.value("prism/base") not in ("8 mm", ""), "another base")
    assert float(visitor.value("prism/base").split()[0]) > 8


def test_dark_theme_reaches_the_pictures(visitor):
    visitor.open(TANK)
    visitor.until(lambda: visitor.trace("section"), "a drawing")
    paper = "return document.querySelector('#section .js-plotly-plot').layout.paper_bgcolor"
    theme = "return document.documentElement.getAttribute('data-mantine-color-scheme')"
    assert visitor.browser.execute_script(theme) == "light"
    light = visitor.browser.execute_script(paper)
    visitor.click("#theme-switch")
    visitor.until(lambda: visitor.browser.execute_script(theme) == "dark", "dark")
    visitor.until(lambda: visitor.browser.execute_script(paper) != light, "dark pictures")


def test_a_job_runs_and_can_be_stopped(visitor):
    visitor.open("force_cell.toml")
    visitor.until(lambda: visitor.browser.find_element("id", "follow-stop").is_displayed(), "work under way")
    visitor.click("#follow-stop")
    visitor.shows("follow-step", "Stopped")
    assert visitor.text("verdict-word")
    assert not visitor.browser.find_element("id", "follow-stop").is_displayed()


def test_a_save_over_somebody_elses_change_is_refused(visitor, folder):
    visitor.open(TANK)
    visitor.type("prism/crosstalk", "5 %")
    visitor.shows("file-standing", "changed")
    theirs = (folder / TANK).read_text().replace('title = "Day', 'title = "Their day')
    (folder / TANK).write_text(theirs)
    visitor.click("#save")
    visitor.shows("message", "was changed by somebody else")
    assert (folder / TANK).read_text() == theirs
    name = visitor.until(lambda: visitor.one("#save-name").get_attribute("value"), "another name offered")
    visitor.until(lambda: visitor.browser.find_element("id", "save-as").is_displayed(), "the drawer")
    visitor.click("#save-as")
    visitor.shows("file-name", name)
    assert 'crosstalk = "5 %"' in (folder / name).read_text()
    assert (folder / TANK).read_text() == theirs


def test_every_control_has_a_name_and_the_page_its_landmarks(visitor):
    visitor.open(TANK)
    script = """
        const named = (e) => e.getAttribute('aria-label') || e.getAttribute('aria-labelledby')
          || (e.labels && e.labels.length) || e.textContent.trim() || e.getAttribute('title');
        const shown = (e) => e.offsetParent !== null;
        return Array.from(document.querySelectorAll("input:not([type=hidden]), button, a, textarea, [role=slider]"))
          .filter((e) => shown(e) && !e.ariaHidden).filter((e) => !named(e)).map((e) => e.outerHTML.slice(0, 160));
    """
    assert visitor.browser.execute_script(script) == []
    assert visitor.browser.execute_script("return document.documentElement.lang") == "en"
    for css, count in (("main", 1), ("header.bar", 1), ("nav", 1), ("aside", 1)):
        assert len(visitor.all(css)) == count, css
    visible = "return Array.from(document.querySelectorAll('h1')).filter(e => e.offsetParent).length"
    assert visitor.browser.execute_script(visible) == 1


CONTRAST = (Path(__file__).parent / "contrast.js").read_text(encoding="utf-8")


@pytest.mark.parametrize("theme", ["light", "dark"])
def test_all_text_stands_out_from_its_ground(visitor, theme):
    """Contrast of at least 4.5 to 1 (WCAG 2.1, success criterion 1.4.3), computed from the colours as drawn."""
    visitor.open(TANK)
    scheme = "return document.documentElement.getAttribute('data-mantine-color-scheme')"
    visitor.until(lambda: visitor.browser.execute_script(scheme), "a theme")
    if visitor.browser.execute_script(scheme) != theme:
        visitor.click("#theme-switch")
        visitor.until(lambda: visitor.browser.execute_script(scheme) == theme, theme)
    for page, sign in (("design", "cautions"), ("vary", "vary-heading"), ("compare", "pin-list")):
        visitor.click(f"#nav-{page}")
        visitor.until(lambda sign=sign: visitor.text(sign), page)
        assert visitor.browser.execute_script(CONTRAST) == []
