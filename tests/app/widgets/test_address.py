from __future__ import annotations

import pytest
from streamlit.testing.v1 import AppTest


def a_list() -> None:
    from app.widgets import address

    chosen = address.select(
        "Colour",
        "colour",
        ["red", "green", "blue"],
        "green",
        also=lambda value: {"page": "", "last": value},
    )
    address.link("To red", "to_red", colour="red")
    assert chosen


def opened(**query: str) -> AppTest:
    app = AppTest.from_function(a_list)
    for name, value in query.items():
        app.query_params[name] = value
    app.run()
    assert not app.exception
    return app


@pytest.mark.parametrize(
    ("query", "shown"),
    [({}, "green"), ({"colour": "blue"}, "blue"), ({"colour": "pink"}, "green")],
)
def test_a_list_shows_what_stands_in_the_address(query, shown):
    assert opened(**query).selectbox[0].value == shown


def test_a_choice_is_written_with_what_goes_with_it():
    app = opened(page="3", kept="1")
    app.selectbox[0].set_value("blue").run()
    assert app.query_params == {"kept": "1", "colour": "blue", "last": "blue"}
    assert app.selectbox[0].value == "blue"


def test_the_default_leaves_the_address():
    app = opened(colour="blue")
    app.selectbox[0].set_value("green").run()
    assert "colour" not in app.query_params


def test_a_link_writes_the_address():
    app = opened(kept="1")
    app.button(key="to_red").click().run()
    assert app.query_params == {"kept": "1", "colour": "red"}
    assert app.selectbox[0].value == "red"
