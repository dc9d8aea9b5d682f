"""Serve the app on this computer only, find a free port, and stop without losing a write."""

import json
import signal
import sys
import threading
import urllib.error
import urllib.request
import webbrowser
from enum import Enum, auto
from types import FrameType
from typing import Any

from cheroot import wsgi
from flask import Flask

from advisor.records.trouble import StoreError
from advisor.web.desk import desk_of

HOST = "127.0.0.1"
FIRST_PORT = 8437
PORTS_TRIED = 20
PROBE_S = 2.0
SHUTDOWN_S = 15  # how long an answer in the making may take once we are told to stop

# Said in the terminal, which speaks English as the command line does.
SERVING = "Twolight is at %(address)s – press Ctrl-C to stop."
RUNNING = "Twolight is already running; opening %(address)s."
TAKEN = "Another program uses port %(port)d; trying the next."
NO_PORT = "No free port from %(first)d to %(last)d; choose another with --port."


class Answer(Enum):
    """Who answers on a port."""

    NOBODY = auto()
    OURS = auto()
    OTHER = auto()


def address(port: int) -> str:
    """Return the address of the start page."""
    return f"http://{HOST}:{port}/"


def who_answers(port: int, *, health: dict[str, str]) -> Answer:
    """Ask a port for its health; ours is the same program on the same records, of whatever version."""
    opener = urllib.request.build_opener(urllib.request.ProxyHandler({}))  # never through a proxy
    try:
        with opener.open(f"{address(port)}health", timeout=PROBE_S) as answer:
            found = json.loads(answer.read(4096))
    except urllib.error.HTTPError as error:
        error.close()
        return Answer.OTHER
    except urllib.error.URLError as error:
        return Answer.NOBODY if isinstance(error.reason, ConnectionRefusedError) else Answer.OTHER
    except Exception:  # noqa: BLE001 - a foreign program may answer with anything at all
        return Answer.OTHER
    if not isinstance(found, dict):
        return Answer.OTHER
    same = all(found.get(key) == health[key] for key in ("program", "records"))
    return Answer.OURS if same else Answer.OTHER


def _bound(app: Flask, port: int) -> Any:
    """Return a server that already listens on the port; raises OSError where it is taken."""
    server = wsgi.Server((HOST, port), app, numthreads=8, server_name="twolight", shutdown_timeout=SHUTDOWN_S)
    server.max_request_body_size = app.config["MAX_CONTENT_LENGTH"] + 1024 * 1024  # beyond it not even a page is sent
    server.prepare()
    return server


def _find_port(app: Flask, first: int) -> tuple[Any, int]:
    """Return a listening server and its port; no server where our own program answers; port 0 where none is free."""
    health = desk_of(app).health()
    for port in range(first, first + PORTS_TRIED):
        answer = who_answers(port, health=health)
        if answer is Answer.NOBODY:
            try:
                return _bound(app, port), port
            except OSError:  # taken since we asked, or held by a program that does not listen
                answer = who_answers(port, health=health)
        if answer is Answer.OURS:
            return None, port
        _say(TAKEN % {"port": port})
    return None, 0


def run(app: Flask, *, port: int = FIRST_PORT, open_browser: bool = True) -> int:
    """Serve until told to stop; return the exit code.

    Where the same program on the same records is running already, its page is opened instead.
    """
    server, found = _find_port(app, port)
    if found == 0:
        return _fail(NO_PORT % {"first": port, "last": port + PORTS_TRIED - 1})
    if server is None:
        _say(RUNNING % {"address": address(found)})
        _open(address(found), wanted=open_browser)
        return 0
    try:
        _ = desk_of(app).store
    except StoreError as error:
        server.stop()
        return _fail(str(error))
    desk_of(app).begin_copies()
    with_signals = _StopOnSignal(server)
    _say(SERVING % {"address": address(found)})
    _open(address(found), wanted=open_browser)
    try:
        server.serve()
    finally:
        with_signals.finish()
        desk_of(app).close()
    return 0


class _StopOnSignal:
    """Stop the server from a thread of its own when a signal asks for it: a handler must not wait for the workers."""

    def __init__(self, server: Any) -> None:
        self._asked = threading.Event()
        self._server = server
        self._thread = threading.Thread(target=self._wait, name="stop", daemon=True)
        self._thread.start()
        if threading.current_thread() is threading.main_thread():
            for name in ("SIGTERM", "SIGINT", "SIGHUP", "SIGBREAK"):  # what each system knows of them
                if hasattr(signal, name):
                    signal.signal(getattr(signal, name), self._handle)

    def _handle(self, _number: int, _frame: FrameType | None) -> None:
        self._asked.set()

    def _wait(self) -> None:
        self._asked.wait()
        self._server.stop()

    def finish(self) -> None:
        """Return when every answer in the making has been given."""
        self._asked.set()
        self._thread.join()


def _open(url: str, *, wanted: bool) -> None:
    if wanted:
        threading.Thread(target=webbrowser.open, args=(url,), daemon=True).start()


def _say(sentence: str) -> None:
    print(sentence, flush=True)


def _fail(sentence: str) -> int:
    print(sentence, file=sys.stderr, flush=True)
    return 1
