"""What readers are told is there, and what is there is told."""

from __future__ import annotations

import re
from pathlib import Path

import estimators
from app.screen_list import SCREEN_PATHS

ROOT = Path(__file__).resolve().parents[1]
GUIDE = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
README = (ROOT / "README.md").read_text(encoding="utf-8")


def missing(names, text):
    return [name for name in names if not re.search(rf"(?<![\w.]){re.escape(name)}(?!\w)", text)]


def required(path):
    lines = path.read_text(encoding="utf-8").splitlines()
    return [re.split(r"[><=]", line)[0] for line in lines if line and not line.startswith("#")]


def test_every_public_name_of_the_core_is_in_the_guide():
    assert missing(estimators.__all__, GUIDE) == []


def test_every_screen_is_in_the_guide():
    assert missing([f"screens/{name}.py" for name in SCREEN_PATHS], GUIDE) == []


def test_every_library_has_its_reason_and_a_bound():
    for path in (ROOT / "requirements.txt", ROOT / "tests/requirements.txt"):
        assert missing(required(path), GUIDE) == []
        for line in path.read_text(encoding="utf-8").splitlines():
            assert not line or line.startswith("#") or re.fullmatch(r"[a-z]+>=[\d.]+,<[\d.]+", line)


def test_every_sample_file_is_described():
    files = [p.name for p in (ROOT / "sample_data").iterdir() if p.is_file()]
    assert len(files) >= 3
    assert missing([f"sample_data/{name}" for name in files], README) == []


def test_the_methods_version_has_a_line():
    assert f"| {estimators.METHODS_VERSION} |" in GUIDE.split("## Changes that alter numbers")[1]


def test_files_named_in_the_guide_are_there():
    named = re.findall(r"`((?:tests|app|estimators|sample_data)/[\w/.]+)`", GUIDE + README)
    assert len(named) > 10
    assert [name for name in named if not (ROOT / name).exists()] == []


def test_the_commands_stand_under_their_marks():
    for mark in ("start", "tests"):
        block = README.split(f"<!-- {mark} -->")[1].split("```")[1]
        assert block.strip().splitlines()[1].startswith("python3 -m venv .venv && ")
        assert len(block.strip().splitlines()) == 2
