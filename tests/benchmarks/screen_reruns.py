"""A client that asks a running server for a screen again and again, without a browser."""

from __future__ import annotations

import subprocess
import sys
import tempfile
import time
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from urllib.parse import urlsplit

from streamlit.proto.BackMsg_pb2 import BackMsg
from streamlit.proto.ForwardMsg_pb2 import ForwardMsg
from websockets.sync.client import connect

from app.store import open_database
from app.widgets.deliveries import deliver
from tests.benchmarks.timing import Result, in_turn
from tests.support.running_server import ROOT, running_server

_LARGEST_MESSAGE = 64 * 1024 * 1024
_CHART_ONLY = """
import pickle
from pathlib import Path
import streamlit as st

@st.cache_resource
def chart():
    return pickle.loads(Path({chart!r}).read_bytes())

st.plotly_chart(chart(), theme=None, width="stretch", key="fan")
"""
_SERVE = """
import streamlit
from app.serving import listening_socket, serve, warm_up
listener = listening_socket("127.0.0.1", 0)
app = streamlit.App({script!r})
warm_up()
port = listener.getsockname()[1]
serve(app, listener, lambda: print(f"Halfwidth is open at http://127.0.0.1:{{port}}", flush=True))
"""


class Client:
    """One session on one screen."""

    def __init__(self, address: str, screen: str = "", query: str = "") -> None:
        self._socket = connect(
            f"ws://{urlsplit(address).netloc}/_stcore/stream",
            origin=address,
            subprotocols=["streamlit"],
            max_size=_LARGEST_MESSAGE,
            compression=None,
        )
        self._message = BackMsg()
        self._message.rerun_script.query_string = query
        self._message.rerun_script.page_name = screen

    def rerun(self) -> list[ForwardMsg]:
        """Ask for the screen and return every message until it is drawn."""
        self._socket.send(self._message.SerializeToString())
        messages = []
        while True:
            message = ForwardMsg.FromString(self._socket.recv(timeout=60))
            messages.append(message)
            if message.WhichOneof("type") == "script_finished":
                return messages

    def close(self) -> None:
        self._socket.close()


def figure_rerun(data: bytes, runs: int) -> Result:
    """The Figure screen, warm, against a script that shows the same chart and nothing else."""
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        study = deliver(open_database(folder / "data"), "", data, "answers.csv").study_id
        with running_server(folder / "data") as server, _chart_only(folder, data) as other:
            ours = Client(server.address, "figure", f"study={study}")
            bare = Client(other)
            _assert_drawn(ours.rerun(), "data-figure")
            _assert_drawn(bare.rerun(), "plotly_chart")
            seconds, bare_seconds = in_turn(ours.rerun, bare.rerun, runs)
            ours.close(), bare.close()
    note = "from the request on the socket to its last message"
    return Result("warm rerun, Figure", seconds, "the chart alone", bare_seconds, 3.0, note)


def _assert_drawn(messages: list[ForwardMsg], mark: str) -> None:
    text = "".join(str(message) for message in messages)
    assert mark in text, f"the screen did not draw: {text[:2000]}"


@contextmanager
def _chart_only(folder: Path, data: bytes) -> Iterator[str]:
    """Serve a script with nothing but the first figure's chart, ready made."""
    chart, script = folder / "chart.pickle", folder / "chart_only.py"
    chart.write_bytes(_pickled_chart(folder, data))
    script.write_text(_CHART_ONLY.format(chart=str(chart)))
    command = [sys.executable, "-c", _SERVE.format(script=str(script))]
    with subprocess.Popen(command, cwd=ROOT, stdout=subprocess.PIPE, text=True) as process:
        try:
            yield _address_of(process)
        finally:
            process.kill()


def _address_of(process: subprocess.Popen[str]) -> str:
    deadline = time.monotonic() + 30
    while time.monotonic() < deadline:
        line = process.stdout.readline()
        if line.startswith("Halfwidth is open at "):
            return line.rsplit(maxsplit=1)[1]
        assert line or process.poll() is None, "the bare server did not open"
    raise AssertionError("the bare server did not open in time")


def _pickled_chart(folder: Path, data: bytes) -> bytes:
    import pickle

    from app.charts.fan_figure import fan_figure
    from app.charts.palette import LIGHT
    from app.intake import read_fieldwork_file
    from app.study.fans import fan_of
    from app.study.figures import compute_figure, default_request
    from app.study.study_data import prepare_study
    from app.widgets.figure_address import first_question

    database = open_database(folder / "data")
    (summary,) = database.studies()
    answers = read_fieldwork_file(data, file_name="answers.csv").answers
    study, plan = summary.study, database.plan(summary.study.id).plan
    prepared = prepare_study(study, database.questions(study.id), plan, answers)
    figure = compute_figure(prepared, default_request(first_question(prepared)))
    return pickle.dumps(fan_figure(fan_of(prepared, figure), LIGHT))
