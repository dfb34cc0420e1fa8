"""The entry script of the screens: import path, page set-up, list of screens, last resort."""

import sys
from pathlib import Path

# The platform puts app/ first on the import path; the modules live one folder up.
_ROOT = str(Path(__file__).resolve().parents[1])
sys.path[:] = [_ROOT, *(p for p in sys.path if p not in (_ROOT, str(Path(_ROOT) / "app")))]

import streamlit as st

from app.intake import FieldworkFileError
from app.settings import current
from app.store import StoreError
from app.widgets.cached_work import use_data_folder
from app.widgets.layout import store_problem

SCREENS = {
    "studies": "Studies",
    "file": "Fieldwork file",
    "questions": "Questions",
    "plan": "Sampling plan",
    "figure": "Figure",
    "readouts": "Readout",
}

st.set_page_config(
    page_title="Halfwidth",
    page_icon=str(Path(__file__).with_name("icon.png")),
    layout="wide",
    initial_sidebar_state="collapsed",
    menu_items={"Get help": None, "Report a bug": None, "About": None},
)
use_data_folder(current().data)
pages = [
    st.Page(
        str(Path(__file__).parent / "screens" / f"{name}.py"),
        url_path=name,
        title=f"{title} \u00b7 Halfwidth",
        default=name == "studies",
    )
    for name, title in SCREENS.items()
]
screen = st.navigation(pages, position="hidden")
try:
    screen.run()
except (StoreError, FieldworkFileError) as error:
    store_problem(error)
