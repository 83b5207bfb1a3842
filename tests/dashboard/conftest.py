"""What the page's tests share: a folder of designs, a page on it, and a browser where there is one."""

from __future__ import annotations

import os
import shutil
import sys
import tempfile
import threading
from pathlib import Path

import pytest

from outcouple_dashboard import create_app
from outcouple_dashboard.server import Served

from .calls import Calls
from .visitor import Visitor

DEMOS = Path(__file__).parents[2] / "demo_configs"
TANK = "oil_tank_overfill.toml"
FLAGS = (
    "--headless",
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
)


@pytest.fixture
def folder(tmp_path):
    """A folder with two designs."""
    for name in (TANK, "force_cell.toml"):
        shutil.copy(DEMOS / name, tmp_path / name)
    return tmp_path


@pytest.fixture
def tank():
    return (DEMOS / TANK).read_text(encoding="utf-8")


@pytest.fixture
def app(folder):
    made = create_app(folder)
    yield made
    made.desk.jobs.close()


@pytest.fixture
def calls(app):
    return Calls(app)


@pytest.fixture
def served(folder):
    """The page as users get it: waitress, loopback, a free port."""
    found = Served(folder)
    thread = threading.Thread(target=found.server.run, daemon=True)
    thread.start()
    yield found
    found.close()


@pytest.fixture(scope="session")
def chromium():
    """One headless Chromium for all browser tests; without one they are skipped, or fail where it is required."""
    required = os.environ.get("OUTCOUPLE_BROWSER") == "required"
    binary = shutil.which("chromium") or shutil.which("chromium-browser") or shutil.which("google-chrome")
    driver = shutil.which("chromedriver")
    if binary is None or driver is None:
        why = "no Chromium with its driver here (set OUTCOUPLE_BROWSER=required to make that a failure)"
        pytest.fail(why) if required else pytest.skip(why)
    from selenium import webdriver
    from selenium.webdriver.chrome.options import Options
    from selenium.webdriver.chrome.service import Service

    profile = tempfile.mkdtemp(prefix="outcouple-chromium-")
    options = Options()
    options.binary_location = binary
    for flag in (*FLAGS, f"--user-data-dir={profile}"):
        options.add_argument(flag)
    options.set_capability("goog:loggingPrefs", {"browser": "ALL"})
    browser = webdriver.Chrome(options=options, service=Service(driver))
    yield browser
    browser.quit()
    shutil.rmtree(profile, ignore_errors=True)


@pytest.fixture
def visitor(chromium, served):
    """A person at the page, 1280 x 800, nothing remembered from before; the console must stay clean."""
    chromium.execute_cdp_cmd(
        "Emulation.setDeviceMetricsOverride", {"width": 1280, "height": 800, "deviceScaleFactor": 1, "mobile": False}
    )
    chromium.get(served.address)
    chromium.execute_script("localStorage.clear()")
    chromium.get_log("browser")
    chromium.get(served.address)
    found = Visitor(chromium, served)
    yield found
    complaints = [row["message"] for row in chromium.get_log("browser") if row["level"] == "SEVERE"]
    outside = found.outside()
    chromium.get("about:blank")
    assert complaints == []
    assert outside == []


@pytest.fixture
def stranger(tmp_path_factory, monkeypatch):
    """A plugin as a stranger installs it: a module and its entry point, on the path of this process and its workers."""
    site = tmp_path_factory.mktemp("site")
    shutil.copy(Path(__file__).parent / "stranger" / "stranger_sensor.py", site)
    info = site / "stranger_sensor-1.0.dist-info"
    info.mkdir()
    (info / "METADATA").write_text("Metadata-Version: 2.1\nName: stranger-sensor\nVersion: 1.0\n")
    (info / "entry_points.txt").write_text("[outcouple]\nstranger = stranger_sensor\n")
    monkeypatch.syspath_prepend(str(site))
    yield site
    sys.modules.pop("stranger_sensor", None)
