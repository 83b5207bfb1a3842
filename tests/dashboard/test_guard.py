"""Who may call, and what a page may load."""

from __future__ import annotations

import pytest

from outcouple_dashboard import create_app
from outcouple_dashboard.guard import LARGEST

HOST = "http://localhost"


@pytest.fixture
def client(app):
    return app.server.test_client()


def test_the_own_page_is_served_with_its_policy(client):
    answer = client.get("/", base_url=HOST)
    assert answer.status_code == 200
    policy = answer.headers["Content-Security-Policy"]
    assert "default-src 'self'" in policy
    assert "connect-src 'self'" in policy
    assert "frame-ancestors 'none'" in policy
    scripts = next(part for part in policy.split("; ") if part.startswith("script-src"))
    assert "unsafe" not in scripts
    assert "http" not in scripts
    assert answer.headers["X-Content-Type-Options"] == "nosniff"


@pytest.mark.parametrize("host", ["http://127.0.0.1:8050", "http://localhost:1"])
def test_names_of_this_machine_are_taken(client, host):
    assert client.get("/", base_url=host).status_code == 200


@pytest.mark.parametrize("host", ["http://evil.example", "http://localhost.evil.example", "http://192.0.2.7"])
def test_a_foreign_host_is_refused(client, host):
    assert client.get("/", base_url=host).status_code == 400


@pytest.mark.parametrize(
    "headers",
    [
        {"Origin": "http://evil.example"},
        {"Origin": "null"},
        {"Origin": "http://localhost:9999"},
        {"Sec-Fetch-Site": "cross-site"},
        {"Sec-Fetch-Site": "same-site"},
        {"Sec-Fetch-Site": "cross-site", "Sec-Fetch-Mode": "navigate"},
    ],
)
def test_a_foreign_page_can_do_nothing(client, headers):
    assert client.post("/_dash-update-component", json={}, headers=headers, base_url=HOST).status_code == 403


def test_a_foreign_page_may_link_here(client):
    headers = {"Sec-Fetch-Site": "cross-site", "Sec-Fetch-Mode": "navigate"}
    assert client.get("/", headers=headers, base_url=HOST).status_code == 200


def test_too_much_is_refused(client):
    answer = client.post(
        "/_dash-update-component", data=b"1" * (LARGEST + 1), base_url=HOST, content_type="application/json"
    )
    assert answer.status_code == 413


def test_others_need_the_token(folder):
    app = create_app(folder, hosts=["tank.example"], token="sesame")
    client = app.server.test_client()
    there = "http://tank.example"
    assert client.get("/", base_url=there).status_code == 403
    assert client.get("/?token=wrong", base_url=there).status_code == 403
    assert client.get("/_dash-layout", base_url=there).status_code == 403
    answer = client.get("/?token=sesame", base_url=there)
    assert answer.status_code == 302
    assert "token" not in answer.headers["Location"]
    assert "HttpOnly" in answer.headers["Set-Cookie"]
    assert client.get("/", base_url=there).status_code == 200
    app.desk.jobs.close()


def test_nothing_that_phones_home(app):
    from outcouple.report.figures import CONFIG
    from outcouple_dashboard.parts import GRAPH

    for config in (CONFIG, GRAPH):
        assert config["showSendToCloud"] is False
        assert config["displaylogo"] is False
    page = app.server.test_client().get("/", base_url=HOST).get_data(as_text=True)
    assert "//cdn" not in page
    assert "unpkg" not in page


def test_every_picture_of_the_page_has_the_safe_options(app):
    graphs = [part for part in app.layout._traverse() if type(part).__name__ == "Graph"]
    assert graphs
    for part in graphs:
        assert part.config["showSendToCloud"] is False
        assert part.config["displaylogo"] is False
