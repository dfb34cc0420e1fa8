"""What the command line and the environment say, read once into a frozen ``Settings``."""

from __future__ import annotations

import argparse
import ipaddress
import os
import tempfile
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import NoReturn
from urllib.parse import urlsplit

from platformdirs import user_data_path

VERSION = "0.1.0"
DEFAULT_HOST = "127.0.0.1"
DEFAULT_PORT = 8501
LOOPBACK_NAMES = ("127.0.0.1", "localhost", "[::1]")


class StartError(ValueError):
    """The program cannot start as asked; the message is one plain sentence."""


@dataclass(frozen=True, slots=True)
class Settings:
    """How this process was started.

    Attributes
    ----------
    host : str
        Loopback address the server listens on.
    port : int
        Port it listens on; 0 before the system has picked a free one.
    data : Path
        Absolute folder that holds the database and the uploaded files.
    public_address : str or None
        Origin (scheme, name, port) of a proxy in front, without a trailing slash.
    """

    host: str
    port: int
    data: Path
    public_address: str | None = None

    @property
    def address(self) -> str:
        """Where a browser on this computer opens the program."""
        return f"http://{_bracketed(self.host)}:{self.port}"

    @property
    def host_values(self) -> frozenset[str]:
        """Every ``Host`` header this process answers to, in lower case."""
        names = {*LOOPBACK_NAMES, _bracketed(self.host).lower()}
        bare = names if self.port == 80 else set()
        return frozenset({f"{name}:{self.port}" for name in names} | bare)


def read_settings(arguments: Sequence[str], environment: Mapping[str, str]) -> Settings:
    """Read the command line and the environment.

    Parameters
    ----------
    arguments : sequence of str
        Command line without the program name.
    environment : mapping of str to str
        Usually ``os.environ``.

    Returns
    -------
    Settings
        Checked values; the data folder is absolute but need not exist yet.

    Raises
    ------
    StartError
        For an unknown option, an address other than loopback, a port that is no port, or a
        public address that is no web address.
    """
    options = _parser().parse_args(list(arguments))
    return Settings(
        host=_loopback_host(options.host),
        port=_port(options.port),
        data=_data_folder(options.data, environment),
        public_address=_public_address(environment.get("HALFWIDTH_PUBLIC_ADDRESS", "")),
    )


def prepare_data_folder(folder: Path) -> None:
    """Create the data folder for this user alone and prove that it can be written to.

    Parameters
    ----------
    folder : Path
        Absolute path of the data folder.

    Raises
    ------
    StartError
        If the folder cannot be created or written to.
    """
    try:
        folder.mkdir(mode=0o700, parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=folder):
            pass
    except OSError as error:
        reason = (error.strerror or "it cannot be used").lower()
        raise StartError(
            f"Halfwidth cannot write to its data folder {folder} ({reason}): "
            "name another folder with --data."
        ) from error


_in_use: Settings | None = None


def use(settings: Settings) -> None:
    """Make these the settings of this process; the server calls it once before it serves."""
    global _in_use
    _in_use = settings


def current() -> Settings:
    """Give the settings in use; without a server (a test of a screen) those of the environment."""
    return _in_use if _in_use is not None else read_settings([], os.environ)


class _Parser(argparse.ArgumentParser):
    def error(self, message: str) -> NoReturn:
        raise StartError(f"Halfwidth cannot start: {message}; python -m app --help lists options.")


def _parser() -> argparse.ArgumentParser:
    parser = _Parser(prog="python -m app", description="Start Halfwidth on this computer.")
    parser.add_argument("--host", default=DEFAULT_HOST, help="loopback address (127.0.0.1)")
    parser.add_argument("--port", default=str(DEFAULT_PORT), help="port (8501), 0 for a free one")
    parser.add_argument("--data", help="folder for studies and files (user data folder)")
    return parser


def _loopback_host(host: str) -> str:
    if host.lower() == "localhost":
        return DEFAULT_HOST
    try:
        loopback = ipaddress.ip_address(host.strip("[]")).is_loopback
    except ValueError:
        loopback = False
    if loopback and "%" not in host:
        return host.strip("[]")
    raise StartError(
        f"Halfwidth does not open at {host or 'an empty address'}, only on this computer "
        "(127.0.0.1, ::1 or localhost): elsewhere its studies and links would be open to the "
        "network, because sign-in and TLS are not part of this version."
    )


def _port(text: str) -> int:
    if text.isascii() and text.isdigit() and int(text) <= 65535:
        return int(text)
    raise StartError(
        f"Halfwidth cannot use port {text!r}: give a whole number from 1 to 65535, or 0 for any "
        "free port."
    )


def _data_folder(option: str | None, environment: Mapping[str, str]) -> Path:
    named = option or environment.get("HALFWIDTH_DATA")
    folder = Path(named).expanduser() if named else user_data_path("Halfwidth", appauthor=False)
    return Path.cwd() / folder


def _public_address(text: str) -> str | None:
    if not text:
        return None
    parts = urlsplit(text)
    if parts.scheme in {"http", "https"} and parts.hostname and parts.path in {"", "/"}:
        return f"{parts.scheme}://{parts.netloc.lower()}"
    raise StartError(
        f"HALFWIDTH_PUBLIC_ADDRESS is {text!r}, which is no web address: write it like "
        "https://survey.example.org, or leave it empty."
    )


def _bracketed(host: str) -> str:
    return f"[{host}]" if ":" in host else host
