"""Import directions, homes of libraries, absolute imports and the size of modules."""

from __future__ import annotations

import ast
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
LINES = 400
STEPS = (
    ("estimators",),
    ("app.study",),
    ("app.intake", "app.charts", "app.handouts", "app.store"),
    ("app.sharing",),
    ("app.widgets",),
    ("app.screens",),
    ("app.gate", "app.screen_list"),
    ("app.settings", "app.published"),
    ("app.serving",),
    ("app.server",),
    ("app.main", "app.__main__"),
)
HOMES = {
    "streamlit": ("app.widgets", "app.screens", "app.main", "app.server"),
    "plotly": ("app.charts",),
    "sqlalchemy": ("app.store",),
    "alembic": ("app.store",),
    "scipy": ("estimators",),
    "pyarrow": ("app.intake",),
    "pandas": (
        "app.study",
        "app.intake",
        "app.charts",
        "app.handouts",
        "app.store",
        "app.widgets",
    ),
    "starlette": ("app.server", "app.sharing"),
    "uvicorn": ("app.serving",),
    "platformdirs": ("app.settings",),
}


def modules() -> dict[str, Path]:
    files = [*(ROOT / "app").rglob("*.py"), *(ROOT / "estimators").rglob("*.py")]
    names = {}
    for path in files:
        parts = path.relative_to(ROOT).with_suffix("").parts
        names[".".join(parts[:-1] if parts[-1] == "__init__" else parts)] = path
    return names


def imports(path: Path) -> set[str]:
    found = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}: relative import"
            found.add(node.module or "")
            found |= {f"{node.module}.{alias.name}" for alias in node.names}
    return found


def shelf_of(name: str) -> str | None:
    shelves = [shelf for step in STEPS for shelf in step]
    return next((s for s in shelves if name == s or name.startswith(f"{s}.")), None)


def step_of(shelf: str) -> int:
    return next(i for i, step in enumerate(STEPS) if shelf in step)


MODULES = modules()


def test_every_module_has_a_shelf():
    assert [m for m in MODULES if shelf_of(m) is None and m != "app"] == []


@pytest.mark.parametrize("name", [m for m in MODULES if m != "app"])
def test_imports_go_down_only(name):
    shelf = shelf_of(name)
    for imported in imports(MODULES[name]):
        other = shelf_of(imported)
        if other is None or other == shelf:
            continue
        assert step_of(other) < step_of(shelf), f"{name} imports {imported}"
        assert other != "app.screens", f"{name} imports a screen"


@pytest.mark.parametrize("library", HOMES)
def test_each_library_stays_at_home(library):
    users = {
        name
        for name, path in MODULES.items()
        if any(i == library or i.startswith(f"{library}.") for i in imports(path))
    }
    strangers = {
        u for u in users if not any(u == h or u.startswith(f"{h}.") for h in HOMES[library])
    }
    assert users, f"nobody uses {library}: take it out of requirements.txt"
    assert strangers == set()


@pytest.mark.parametrize("name", MODULES)
def test_modules_stay_small(name):
    assert MODULES[name].read_text(encoding="utf-8").count("\n") <= LINES


def test_screens_stay_scripts_of_one_page():
    long = {p.name for p in (ROOT / "app/screens").glob("*.py") if p.read_text().count("\n") > 120}
    assert long == set()
