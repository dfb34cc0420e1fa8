"""``python -m app``: read the settings, take the port, load, and serve until told to stop."""

from __future__ import annotations

import os
import sys
from collections.abc import Mapping, Sequence
from dataclasses import replace
from pathlib import Path

from app.published import page_finder
from app.serving import listening_socket, serve, warm_up
from app.settings import Settings, StartError, prepare_data_folder, read_settings, use
from app.sharing.readout_style import READOUT_STYLE
from app.store import StoreError, open_database

ROOT = Path(__file__).resolve().parents[1]
CANNOT_START = 2


def main(arguments: Sequence[str], environment: Mapping[str, str]) -> int:
    """Start Halfwidth and serve until the process is told to stop.

    Parameters
    ----------
    arguments : sequence of str
        Command line without the program name.
    environment : mapping of str to str
        Usually ``os.environ``.

    Returns
    -------
    int
        Exit code: 0 after a stop from the keyboard, 2 if it cannot start as asked.
    """
    try:
        settings = read_settings(arguments, environment)
        prepare_data_folder(settings.data)
        listener = listening_socket(settings.host, settings.port)
    except StartError as error:
        print(error, file=sys.stderr)
        return CANNOT_START
    settings = replace(settings, port=listener.getsockname()[1])
    use(settings)
    os.chdir(ROOT)  # Streamlit reads .streamlit/config.toml from the current folder
    from app.server import build_app  # after the change of folder, because it reads that file

    try:
        database = open_database(settings.data)
    except StoreError as error:
        print(error.sentence, file=sys.stderr)
        return CANNOT_START
    app = build_app(settings, page_finder(database), styles=(READOUT_STYLE,))
    warm_up()
    try:
        serve(app, listener, lambda: _announce(settings))
    except KeyboardInterrupt:
        return 0
    return 0


def _announce(settings: Settings) -> None:
    print(f"Halfwidth is open at {settings.address}", flush=True)
    if settings.public_address is not None:
        print(
            f"HALFWIDTH_PUBLIC_ADDRESS is {settings.public_address}, but this version has no "
            "sign-in: every page refuses until it is unset.",
            file=sys.stderr,
            flush=True,
        )


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:], os.environ))
