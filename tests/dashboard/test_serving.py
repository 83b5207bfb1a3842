"""``outcouple dashboard`` as a user starts it."""

from __future__ import annotations

import os
import signal
import socket
import subprocess
import sys
import urllib.error
import urllib.request

import pytest


def command(*args, **options):
    line = [sys.executable, "-m", "outcouple", "dashboard", *map(str, args)]
    return subprocess.Popen(line, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True, **options)


def status(address, data=None, **headers):
    """Status of a request, POST where there is data."""
    try:
        with urllib.request.urlopen(urllib.request.Request(address, data, headers), timeout=30) as answer:
            return answer.status
    except urllib.error.HTTPError as error:
        return error.code


@pytest.fixture
def started(request):
    running = []

    def start(*args):
        process = command(*args)
        running.append(process)
        return process, process.stdout.readline().split()[-1]

    yield start
    for process in running:
        process.kill()
        process.communicate()


def test_it_serves_a_folder_to_this_machine_and_ends_quietly(started, folder):
    process, address = started(folder, "--port", "0")
    assert address.startswith("http://localhost:")
    assert status(address) == 200
    assert status(address, Host="evil.example") == 400
    assert status(f"{address}_dash-layout", Origin="http://evil.example") == 403
    process.send_signal(signal.SIGINT)
    out, err = process.communicate(timeout=30)
    assert process.returncode == 0
    assert "Traceback" not in out + err


def test_others_need_a_flag_and_a_token(started, folder):
    _, address = started(folder, "--port", "0", "--listen", "0.0.0.0", "--name", "localhost", "--token", "sesame")
    assert address.endswith("?token=sesame")
    page = address.partition("?")[0]
    assert status(page) == 403
    assert status(page, Cookie="outcouple-token=sesame") == 200


def test_a_token_is_made_up_where_none_is_given(started, folder):
    _, address = started(folder, "--port", "0", "--listen", "0.0.0.0", "--name", "localhost")
    assert len(address.partition("token=")[2]) >= 24


def test_the_environment_opens_no_other_door(folder):
    process = command(folder, "--port", "0", env={**os.environ, "DASH_MCP_ENABLED": "true"})
    try:
        address = process.stdout.readline().split()[-1]
        assert status(f"{address}_mcp", data=b"{}", **{"Content-Type": "application/json"}) == 405
    finally:
        process.kill()
        process.communicate()


def test_what_cannot_be_served_is_said(folder):
    process = command(folder / "nothing")
    _, err = process.communicate(timeout=60)
    assert (process.returncode, err.strip()) == (2, f"{folder / 'nothing'}: no such folder")
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        port = taken.getsockname()[1]
        process = command(folder, "--port", port)
        _, err = process.communicate(timeout=60)
    assert process.returncode == 2
    assert err.startswith(f"cannot listen on 127.0.0.1:{port}:")
