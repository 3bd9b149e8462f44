"""A real server in a process of its own, that can be killed and started again."""

from __future__ import annotations

import os
import signal
import socket
import subprocess
import sys
import time
from pathlib import Path
from urllib.error import URLError
from urllib.request import urlopen

ROOT = Path(__file__).resolve().parents[2]
PATIENCE_S = 30.0


def free_port() -> int:
    """Return a port of this machine that nobody listens on."""
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        port: int = probe.getsockname()[1]
        return port


class Server:
    """``python -m app serve`` on one store and one port, through any number of lives."""

    def __init__(self, store: Path, port: int, log: Path, house: Path = ROOT) -> None:
        self.store = store
        self.port = port
        self.log = log
        self.house = house
        self.url = f"http://localhost:{port}"
        self._process: subprocess.Popen[bytes] | None = None

    def start(self, *options: str) -> None:
        """Start the server and wait until it answers; ``options`` go to the verb."""
        self._refuse_a_stranger()
        command = [sys.executable, "-m", "app", "serve", "--store", str(self.store), "--port", str(self.port)]
        with self.log.open("ab") as log:
            self._process = subprocess.Popen(
                [*command, *options],
                cwd=self.house,
                env=os.environ | {"WEIRBOOK_FAST_PASSWORDS": "1", "PYTHONUNBUFFERED": "1"},
                stdin=subprocess.DEVNULL,
                stdout=log,
                stderr=subprocess.STDOUT,
                start_new_session=True,
            )
        self._wait()

    def kill(self) -> None:
        """End the server as a power cut would: SIGKILL, nothing tidied."""
        self._end(signal.SIGKILL)

    def stop(self) -> None:
        """End the server as a person would."""
        self._end(signal.SIGTERM)

    def said(self) -> str:
        """Return everything the server printed, over all its lives."""
        return self.log.read_text("utf-8", errors="replace") if self.log.exists() else ""

    def _end(self, how: signal.Signals) -> None:
        if self._process is None:
            return
        if self._process.poll() is None:
            os.killpg(self._process.pid, how)
        self._process.wait(timeout=PATIENCE_S)
        self._process = None

    def _refuse_a_stranger(self) -> None:
        """A server left over from a broken run would answer in ours' place."""
        with socket.socket() as probe:
            probe.settimeout(1)
            if probe.connect_ex(("127.0.0.1", self.port)) == 0:
                raise RuntimeError(f"Something already listens on port {self.port}.")

    def _wait(self) -> None:
        assert self._process is not None
        until = time.monotonic() + PATIENCE_S
        while time.monotonic() < until:
            if self._process.poll() is not None:
                raise RuntimeError(f"The server ended at once. It said:\n{self.said()[-3000:]}")
            try:
                with urlopen(f"{self.url}/healthz", timeout=2) as answer:
                    if answer.status == 200:
                        return
            except (URLError, OSError):
                time.sleep(0.05)
        self.kill()
        raise RuntimeError(f"No answer from {self.url}/healthz. The server said:\n{self.said()[-3000:]}")
