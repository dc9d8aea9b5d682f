import http.client
import http.server
import json
import os
import signal
import socket
import subprocess
import sys
import threading
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

import pytest

from advisor.records.store import Store
from advisor.web import server
from advisor.web.server import Answer, who_answers

# The program with one slow address that writes: it says that it has begun, then saves a setting.
PROGRAM = """
import sys, time, webbrowser
from pathlib import Path
from advisor.web.app import create_app
from advisor.web.desk import current_desk
from advisor.web.server import run

webbrowser.open = lambda url: print("opened", url, flush=True)
app = create_app(data_dir=Path(sys.argv[1]))

@app.post("/slow")
def slow():
    print("begun", flush=True)
    time.sleep(1.0)
    current_desk().store.set_setting("slow", "written")
    return "finished"

sys.exit(run(app, port=int(sys.argv[2]), open_browser=len(sys.argv) > 3))
"""


def free_port() -> int:
    """Return a port with the next one free as well."""
    while True:
        with socket.socket() as one, socket.socket() as two:
            one.bind(("127.0.0.1", 0))
            port = int(one.getsockname()[1])
            try:
                two.bind(("127.0.0.1", port + 1))
            except (OSError, OverflowError):
                continue
            return port


@contextmanager
def started(folder: Path, port: int, *more: str) -> Iterator[subprocess.Popen[str]]:
    command = [sys.executable, "-c", PROGRAM, str(folder), str(port), *more]
    process = subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True)
    try:
        yield process
    finally:
        process.kill()
        process.communicate()


def line(process: subprocess.Popen[str]) -> str:
    assert process.stdout is not None
    return process.stdout.readline()


def ask(port: int, method: str, path: str) -> tuple[int, str]:
    connection = http.client.HTTPConnection("127.0.0.1", port, timeout=20)
    try:
        connection.request(method, path, headers={"Sec-Fetch-Site": "same-origin"})
        answer = connection.getresponse()
        return answer.status, answer.read().decode()
    finally:
        connection.close()


class _Foreign(http.server.BaseHTTPRequestHandler):
    body = b"{}"

    def do_GET(self) -> None:
        self.send_response(200)
        self.send_header("Content-Length", str(len(self.body)))
        self.end_headers()
        self.wfile.write(self.body)

    def log_message(self, *_arguments: object) -> None:
        pass


@contextmanager
def foreign_program(body: bytes) -> Iterator[int]:
    handler = type("Handler", (_Foreign,), {"body": body})
    with http.server.HTTPServer(("127.0.0.1", free_port()), handler) as foreign:
        thread = threading.Thread(target=foreign.serve_forever)
        thread.start()
        try:
            yield foreign.server_port
        finally:
            foreign.shutdown()
            thread.join()


def test_it_says_its_address_opens_it_and_answers(tmp_path: Path) -> None:
    port = free_port()
    with started(tmp_path, port, "browser") as process:
        assert line(process) == f"Twolight is at http://127.0.0.1:{port}/ – press Ctrl-C to stop.\n"
        assert line(process) == f"opened http://127.0.0.1:{port}/\n"
        code, text = ask(port, "GET", "/health")
        assert (code, json.loads(text)["program"]) == (200, "twolight")


def test_it_listens_on_this_computer_only(tmp_path: Path) -> None:
    port = free_port()
    with started(tmp_path, port) as process:
        line(process)
        with socket.socket() as other, pytest.raises(ConnectionRefusedError):
            other.connect(("127.0.0.2", port))  # an address of this computer that a wider binding would answer on


def test_a_second_start_opens_the_first(tmp_path: Path) -> None:
    port = free_port()
    with started(tmp_path, port) as first:
        line(first)
        with started(tmp_path, port, "browser") as second:
            said, complaint = second.communicate(timeout=20)
            assert said.startswith(f"Twolight is already running; opening http://127.0.0.1:{port}/.\n")
            assert (second.returncode, complaint) == (0, "")
        assert first.poll() is None


def test_a_second_start_on_other_records_takes_the_next_port(tmp_path: Path) -> None:
    port = free_port()
    with started(tmp_path / "one", port) as first:
        line(first)
        with started(tmp_path / "two", port) as second:
            assert line(second) == f"Another program uses port {port}; trying the next.\n"
            assert f":{port + 1}/" in line(second)


def test_a_foreign_program_on_the_port_is_left_alone(tmp_path: Path) -> None:
    with foreign_program(b'{"program": "else"}') as port, started(tmp_path, port) as process:
        assert line(process) == f"Another program uses port {port}; trying the next.\n"
        assert f"http://127.0.0.1:{port + 1}/" in line(process)
        assert ask(port + 1, "GET", "/health")[0] == 200


HEALTH = {"program": "twolight", "version": "2", "records": "r"}


@pytest.mark.parametrize(
    ("body", "expected"),
    [
        (b'{"program": "twolight", "version": "1", "records": "r"}', Answer.OURS),
        (b'{"program": "twolight", "version": "1", "records": "s"}', Answer.OTHER),
        (b'{"program": "twolight"}', Answer.OTHER),
        (b'["twolight"]', Answer.OTHER),
        (b"<html>hello</html>", Answer.OTHER),
        (b"\xff\xfe", Answer.OTHER),
        (b"", Answer.OTHER),
    ],
)
def test_ours_is_the_same_program_on_the_same_records(body: bytes, expected: Answer) -> None:
    with foreign_program(body) as port:
        assert who_answers(port, health=HEALTH) is expected


def test_nobody_answers_on_a_free_port() -> None:
    assert who_answers(free_port(), health=HEALTH) is Answer.NOBODY


def test_a_port_that_listens_in_silence_is_another_programs(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(server, "PROBE_S", 0.1)
    with socket.socket() as silent:
        silent.bind(("127.0.0.1", 0))
        silent.listen()
        assert who_answers(silent.getsockname()[1], health=HEALTH) is Answer.OTHER


def test_damaged_records_end_it_with_one_sentence(tmp_path: Path) -> None:
    (tmp_path / "twolight.sqlite3").write_bytes(b"no records" * 500)
    with started(tmp_path, free_port()) as process:
        said, complaint = process.communicate(timeout=20)
    assert (process.returncode, said) == (1, "")
    assert complaint.count("\n") == 1
    assert "damaged" in complaint


@pytest.mark.skipif(os.name != "posix", reason="Windows has no SIGTERM to send")
@pytest.mark.parametrize("number", [signal.SIGTERM, signal.SIGINT])
def test_a_signal_lets_the_answer_in_the_making_be_finished(tmp_path: Path, number: signal.Signals) -> None:
    port = free_port()
    answers: list[tuple[int, str]] = []
    with started(tmp_path, port) as process:
        line(process)
        asking = threading.Thread(target=lambda: answers.append(ask(port, "POST", "/slow")))
        asking.start()
        assert line(process) == "begun\n"
        process.send_signal(number)
        asking.join(timeout=20)
        said, complaint = process.communicate(timeout=20)
    assert answers == [(200, "finished")]
    assert (process.returncode, said, complaint) == (0, "", "")
    with Store.open(tmp_path) as store:
        assert store.get_setting("slow") == "written"
    names = sorted(path.name for path in tmp_path.iterdir())
    assert names == ["copies", "twolight.sqlite3"]  # closed: no side files remain


@pytest.mark.skipif(os.name != "posix", reason="Windows has no SIGTERM to send")
def test_an_idle_server_stops(tmp_path: Path) -> None:
    with started(tmp_path, free_port()) as process:
        line(process)
        process.send_signal(signal.SIGTERM)
        assert process.wait(timeout=20) == 0
