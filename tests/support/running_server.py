"""The real server in a process of its own, on a free port."""

from __future__ import annotations

import os
import re
import subprocess
import sys
import tempfile
import time
from collections.abc import Iterator, Mapping, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import IO
from urllib.parse import urlsplit

ROOT = Path(__file__).resolve().parents[2]
OPEN_LINE = re.compile(r"^Halfwidth is open at (http://\S+)$", re.MULTILINE)
PATIENCE = 30.0


@dataclass(slots=True)
class RunningServer:
    """One started server: where it is open, its process, and what it printed."""

    address: str
    process: subprocess.Popen[bytes]
    log: IO[bytes]

    @property
    def port(self) -> int:
        return urlsplit(self.address).port or 80

    def output(self) -> str:
        return _text(self.log)

    def kill(self) -> None:
        """End it as a power cut would: no time to tidy up."""
        self.process.kill()
        self.process.wait(10)

    def stop(self) -> float:
        """Ask it to stop, and give the seconds it took."""
        begin = time.monotonic()
        self.process.terminate()
        self.process.wait(10)
        return time.monotonic() - begin


@contextmanager
def running_server(
    data: Path,
    *,
    port: int = 0,
    options: Sequence[str] = (),
    environment: Mapping[str, str] | None = None,
    folder: Path = ROOT,
) -> Iterator[RunningServer]:
    """Start ``python -m app`` over a data folder and end it afterwards.

    ``port`` 0 takes a free one; give the port of an earlier server to start it again in place.
    """
    command = [sys.executable, "-m", "app", "--port", str(port), "--data", str(data), *options]
    own = {name: text for name, text in os.environ.items() if not name.startswith("HALFWIDTH_")}
    own["PYTHONPATH"] = str(ROOT)
    with tempfile.TemporaryFile() as log:
        process = subprocess.Popen(
            command, cwd=folder, env={**own, **(environment or {})}, stdout=log, stderr=log
        )
        try:
            yield RunningServer(_address_once_open(process, log), process, log)
        finally:
            process.kill()
            process.wait(10)


def _address_once_open(process: subprocess.Popen[bytes], log: IO[bytes]) -> str:
    deadline = time.monotonic() + PATIENCE
    while time.monotonic() < deadline and process.poll() is None:
        opened = OPEN_LINE.search(_text(log))
        if opened:
            return opened[1]
        time.sleep(0.05)
    raise AssertionError(f"the server did not open; it said:\n{_text(log)}")


def _text(log: IO[bytes]) -> str:
    return os.pread(log.fileno(), 1_000_000, 0).decode()
