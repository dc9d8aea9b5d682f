"""How long from the command to the first page: a fresh process on an empty data folder, asked until it answers.

Run as ``python tests/benchmarks/bench_start.py``; ends with status 1 above the ceiling.
"""

import socket
import statistics
import subprocess
import sys
import tempfile
import time
import urllib.request
from urllib.error import URLError

CEILING_S = 1.5
RUNS = 5


def free_port() -> int:
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        port: int = probe.getsockname()[1]
    return port


def first_page_s() -> float:
    """Start the program, fetch the Counter as soon as it answers, stop it."""
    port = free_port()
    with tempfile.TemporaryDirectory() as folder:
        begun = time.perf_counter()
        process = subprocess.Popen(
            [sys.executable, "-m", "advisor", "--data", folder, "--port", str(port), "--no-browser"],
            stdout=subprocess.DEVNULL,
        )
        try:
            while True:
                try:
                    with urllib.request.urlopen(f"http://127.0.0.1:{port}/", timeout=10) as page:  # our own server
                        page.read()
                    return time.perf_counter() - begun
                except URLError:
                    if process.poll() is not None:
                        raise
                    time.sleep(0.01)
        finally:
            process.terminate()
            process.wait()


def numpy_s() -> float:
    begun = time.perf_counter()
    subprocess.run([sys.executable, "-c", "import numpy"], check=True)
    return time.perf_counter() - begun


def main() -> int:
    pairs = [(first_page_s(), numpy_s()) for _ in range(RUNS)]
    start = statistics.median(first for first, _ in pairs)
    ratio = statistics.median(first / other for first, other in pairs)
    print(f"start to first page: {start:.2f} s (ceiling {CEILING_S} s), {ratio:.1f} times importing numpy")
    return int(start > CEILING_S)


if __name__ == "__main__":
    sys.exit(main())
