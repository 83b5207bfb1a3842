"""A person at the page, for browser tests: looks, types, clicks and waits like one."""

from __future__ import annotations

import time

from selenium.common.exceptions import WebDriverException
from selenium.webdriver.common.by import By
from selenium.webdriver.common.keys import Keys

PATIENCE = 30.0
"""Seconds a person waits before giving up; a test passes as soon as the thing is there."""


class Visitor:
    def __init__(self, browser, served):
        self.browser = browser
        self.served = served

    def until(self, look, why=""):
        """Look again and again until there is something; the page may be redrawn meanwhile."""
        end = time.monotonic() + PATIENCE
        while time.monotonic() < end:
            try:
                found = look()
            except WebDriverException:
                found = None
            if found:
                return found
            time.sleep(0.05)
        raise AssertionError(f"waited in vain: {why or look}")

    def all(self, css):
        return self.browser.find_elements(By.CSS_SELECTOR, css)

    def one(self, css):
        return self.until(lambda: self.all(css), css)[0]

    def text(self, name):
        return self.browser.find_element(By.ID, name).text

    def shows(self, name, part):
        """Wait until an element holds some text."""
        return self.until(lambda: part in self.text(name), f"{part!r} in #{name}")

    def click(self, css):
        self.until(lambda: self._clicked(css), f"click {css}")

    def _clicked(self, css):
        found = self.browser.find_element(By.CSS_SELECTOR, css)
        self.browser.execute_script("arguments[0].scrollIntoView({block: 'center'})", found)
        found.click()
        return True

    def open(self, name):
        """Open a design from the welcome page."""
        self.until(lambda: [one.click() or True for one in self.all("#welcome button.open") if one.text == name], name)
        self.until(lambda: self.text("verdict-word"), "a verdict")

    def control(self, path):
        """The field of an input."""
        find = f'//input[contains(@id, \'"path":"{path}"\')]'
        return self.until(lambda: self.browser.find_elements(By.XPATH, find), path)[0]

    def value(self, path):
        return self.control(path).get_attribute("value")

    def type(self, path, text, leave=Keys.TAB):
        """Replace what a field holds; again, where the form was redrawn under the hand."""
        self.until(lambda: self._typed(path, text, leave), f"type into {path}")

    def _typed(self, path, text, leave):
        field = self.control(path)
        self.browser.execute_script("arguments[0].scrollIntoView({block: 'center'})", field)
        field.send_keys(Keys.CONTROL, "a")
        field.send_keys(text, leave)
        return True

    def trace(self, graph, at=0):
        """x of one trace of a picture, as the browser holds it."""
        script = """
            const graph = document.querySelector('#' + arguments[0] + ' .js-plotly-plot');
            return graph ? Array.from(graph.data[arguments[1]].x) : null;
        """
        return self.browser.execute_script(script, graph, at)

    def outside(self):
        """Addresses the page asked for that are not its own."""
        script = "return performance.getEntriesByType('resource').map(e => e.name)"
        own = f"//localhost:{self.served.port}/"
        return [
            name for name in self.browser.execute_script(script) if own not in name and not name.startswith("data:")
        ]
