"""A screen opened without a browser: one window of one person, checked after every run."""

from __future__ import annotations

import pickle
import re
from collections.abc import Iterator
from contextlib import contextmanager
from html import unescape
from pathlib import Path

import streamlit as st
from streamlit import config
from streamlit.testing.v1 import AppTest

from app.store import Database
from app.widgets import cached_work

MAIN = Path(__file__).resolve().parents[2] / "app" / "main.py"
_TAGS = re.compile(r"<style>.*?</style>|<svg.*?</svg>|<[^>]*>", re.DOTALL)


@contextmanager
def screens_on(folder: Path, monkeypatch) -> Iterator[Database]:
    """Open the store of a folder for the screens, and close it afterwards."""
    monkeypatch.setenv("HALFWIDTH_DATA", str(folder))
    # The test harness keeps functions of its own in the state; `Window` checks the rest instead.
    before = config.get_option("runner.enforceSerializableSessionState")
    config.set_option("runner.enforceSerializableSessionState", False)
    cached_work.use_data_folder(folder)
    store = cached_work.database()
    try:
        yield store
    finally:
        store.close()
        st.cache_resource.clear()
        config.set_option("runner.enforceSerializableSessionState", before)


class Window:
    """One browser window; every run must end without an error on the screen.

    Parameters
    ----------
    screen : str
        Where it opens: "studies", "file", "questions", "plan", "figure", "readouts".
    query : str
        Values of the address.
    """

    def __init__(self, screen: str = "studies", **query: str) -> None:
        self.test = AppTest.from_file(str(MAIN), default_timeout=60)
        self.go(screen, **query)

    def go(self, screen: str, **query: str) -> Window:
        """Open a screen of the program in this window."""
        self.test.switch_page(f"screens/{screen}.py")
        self.test.query_params.clear()
        for name, value in query.items():
            self.test.query_params[name] = value
        return self.run()

    def run(self) -> Window:
        """Run the screen again, as any action in the window does."""
        self.test.run()
        assert [e.message for e in self.test.exception] == []
        for name, value in self.test.session_state.to_dict().items():
            assert pickle.loads(pickle.dumps(value)) == value or name.startswith("upload"), name
        return self

    def press(self, key: str) -> Window:
        """Press the button with this key."""
        self.test.button(key=key).click()
        return self.run()

    def submit(self, label: str) -> Window:
        """Press the button of a form, by its label."""
        next(b for b in self.test.button if b.label == label).click()
        return self.run()

    def type(self, key: str, text: str) -> Window:
        """Type into a field and leave it."""
        self.enter(key, text)
        return self.run()

    def enter(self, key: str, text: str) -> Window:
        """Type into a field without leaving it."""
        self.field(key).set_value(text)
        return self

    def field(self, key: str):
        """Return a field to type into, one line or several."""
        fields = [f for f in (*self.test.text_input, *self.test.text_area) if f.key == key]
        assert fields, f"no field {key}: {[f.key for f in self.test.text_input]}"
        return fields[0]

    def typed(self, key: str) -> str:
        """Return what stands in a field."""
        return self.field(key).value

    def choose(self, key: str, option: object) -> Window:
        """Choose an option of a list or of round buttons, by its value."""
        lists = [w for w in (*self.test.selectbox, *self.test.radio) if w.key == key]
        assert lists, f"no list {key}"
        lists[0].set_value(option)
        return self.run()

    def chosen(self, key: str) -> object:
        """Return what a list or round buttons stand on."""
        return next(w for w in (*self.test.selectbox, *self.test.radio) if w.key == key).value

    def tick(self, key: str, *, on: bool = True) -> Window:
        """Set a tick box."""
        self.test.checkbox(key=key).set_value(on)
        return self.run()

    def drop(self, data: bytes, name: str) -> Window:
        """Drop a file."""
        self.test.file_uploader[0].upload(name, data, "application/octet-stream")
        return self.run()

    def buttons(self) -> set[str]:
        """Return the keys of all buttons."""
        return {b.key for b in self.test.button}

    @property
    def address(self) -> dict[str, str]:
        """What stands in the query string."""
        return {k: v if isinstance(v, str) else v[-1] for k, v in self.test.query_params.items()}

    @property
    def title(self) -> str:
        """The head of the screen; "" where it has none."""
        return next((t.value for t in self.test.title), "")

    @property
    def html(self) -> str:
        """Everything the screen shows as HTML, styles apart."""
        return "\n".join(h.body for h in self.test.get("html") if "<style>" not in h.body)

    @property
    def text(self) -> str:
        """Everything a person can read, with plain spaces."""
        labels = (*self.test.button, *self.test.expander, *self.test.subheader)
        parts = [
            self.title,
            unescape(_TAGS.sub(" ", self.html)),
            *(i.value for i in self.test.info),
            *(getattr(e, "value", "") if hasattr(e, "anchor") else e.label for e in labels),
            *self.links,
            *(c.value for c in self.test.code),
        ]
        return " ".join(" ".join(str(p) for p in parts).replace("\\", "").split())

    @property
    def problems(self) -> list[str]:
        """Every sentence that says what is wrong."""
        found = re.findall(r'<p class="hr-problem[^"]*" role="alert">(.*?)</p>', self.html, re.S)
        return [" ".join(unescape(_TAGS.sub(" ", text)).split()) for text in found]

    @property
    def messages(self) -> list[str]:
        """What the action before left to be said."""
        return [i.value.replace("\\", "") for i in self.test.info]

    @property
    def links(self) -> list[str]:
        """Labels of the links to other screens."""
        return [p.proto.label.replace("\\", "") for p in self.test.get("page_link")]

    def link_to(self, label: str) -> str:
        """Return the query string of the link with a label."""
        found = (p.proto for p in self.test.get("page_link") if label in p.proto.label)
        return next(found).query_string
