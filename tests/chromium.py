"""The system's Chromium and a served app, as the tests in a browser use them."""

import os
import shutil
import threading
from collections.abc import Iterator
from contextlib import contextmanager

import pytest
from cheroot import wsgi
from flask import Flask
from playwright.sync_api import Browser, sync_playwright

CHROMIUM = "/usr/bin/chromium"
FLAGS = [
    "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
    "--disable-component-update", "--disable-sync",
]  # fmt: skip


@contextmanager
def chromium() -> Iterator[Browser]:
    """Start the system's browser; where there is none, skip, unless everything is required."""
    if not shutil.which(CHROMIUM):
        if os.environ.get("TWOLIGHT_REQUIRE_ALL"):
            raise RuntimeError(f"{CHROMIUM} is missing and TWOLIGHT_REQUIRE_ALL is set")
        pytest.skip(f"{CHROMIUM} is missing")
    with sync_playwright() as driver:
        browser = driver.chromium.launch(executable_path=CHROMIUM, args=FLAGS)
        yield browser
        browser.close()


@contextmanager
def served(app: Flask, *, threads: int = 4) -> Iterator[str]:
    """Serve an app on a free port of this computer and give its address."""
    server = wsgi.Server(("127.0.0.1", 0), app, numthreads=threads)
    server.prepare()
    thread = threading.Thread(target=server.serve, daemon=True)
    thread.start()
    try:
        yield f"http://127.0.0.1:{server.bind_addr[1]}"
    finally:
        server.stop()
        thread.join()
