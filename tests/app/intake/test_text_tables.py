"""Whole files: against Python's csv module and pandas, written and read back, and mutilated."""

from __future__ import annotations

import csv
import hashlib
import io
from pathlib import Path

import numpy as np
import pandas as pd
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.intake import FieldworkFile, FieldworkFileError, Reading, read_fieldwork_file

SAMPLES = Path(__file__).resolve().parents[3] / "sample_data"
CELLS = st.text(
    st.characters(codec="utf-8", exclude_categories=["Cc", "Cs"], include_characters="\n,;\"'\t "),
    max_size=12,
)
GRID = st.integers(2, 5).flatmap(
    lambda width: st.lists(st.lists(CELLS, min_size=width, max_size=width), min_size=1, max_size=12)
)


def as_csv(rows: list[list[str]], **options) -> bytes:
    text = io.StringIO(newline="")
    csv.writer(text, **options).writerows(rows)
    return text.getvalue().encode()


def shown(file: FieldworkFile) -> list[list[str]]:
    """Return the answers as they stand in a file: text as it is, whole numbers without a point."""
    return [[cell(value) for value in row] for row in file.answers.itertuples(index=False)]


def cell(value: object) -> str:
    if isinstance(value, float):
        return "" if np.isnan(value) else f"{value:g}"
    return str(value)


@pytest.mark.parametrize(("wave", "encoding"), [("spring", "utf-8-sig"), ("autumn", "cp1252")])
def test_sample_files_agree_with_the_csv_module_cell_by_cell(wave, encoding):
    path = SAMPLES / f"garden_centres_{wave}.csv"
    file = read_fieldwork_file(path, file_name=path.name)
    with path.open(encoding=encoding, newline="") as source:
        codes, texts, *rows = list(csv.reader(source, delimiter=";"))
    rows = [row for row in rows if any(row)]
    assert len(file.answers) == len(rows)
    for i, code in enumerate(codes):
        if not code:
            assert not any(row[i] for row in rows)
            continue
        assert file.question_texts[code] == texts[i]
        for value, row in zip(file.answers[code], rows, strict=True):
            if isinstance(value, float) and row[i]:
                assert value == float(row[i].replace(",", "."))
            else:
                assert (value if isinstance(value, str) else "") == row[i].strip() or value == row[
                    i
                ]


@pytest.mark.parametrize("wave", ["spring", "autumn"])
def test_lines_are_those_of_a_text_editor(wave):
    path = SAMPLES / f"garden_centres_{wave}.csv"
    file = read_fieldwork_file(path, file_name=path.name)
    physical = path.read_bytes().replace(b"\r\n", b"\n").split(b"\n")
    for identifier, line in zip(file.answers["ID"], file.lines, strict=True):
        assert physical[line - 1].startswith(identifier.encode())


def test_numbers_agree_with_pandas(rng):
    n = 400
    frame = pd.DataFrame(
        {
            "id": np.arange(n) + 1,
            "scale": rng.integers(0, 11, n),
            "spend": np.round(rng.gamma(2, 300, n), 2),
            "weight": rng.lognormal(0, 0.4, n),
            "tiny": rng.normal(0, 1e-7, n),
            "place": rng.choice(["North", "South, upper", 'the "old" town', "Île"], n),
        }
    )
    frame.loc[rng.random(n) < 0.2, "scale"] = np.nan
    content = frame.to_csv(index=False).encode()
    file = read_fieldwork_file(content, file_name="s.csv")
    by_pandas = pd.read_csv(io.BytesIO(content))
    for name in ("id", "scale", "spend", "weight", "tiny"):
        np.testing.assert_array_equal(file.answers[name], by_pandas[name].astype(float))
    assert file.answers["place"].tolist() == by_pandas["place"].tolist()


@settings(max_examples=200, deadline=None)
@given(GRID)
def test_what_the_csv_module_writes_is_read_back(rows):
    header = [f"q{i}" for i in range(len(rows[0]))]
    told = Reading(
        delimiter=",",
        quote='"',
        escape="",
        sep_line=False,
        lines_above=0,
        header_rows=1,
        encoding="utf-8",
    )
    wanted = [row for row in rows if any(c.strip() for c in row)]
    content = as_csv([header, *rows], quoting=csv.QUOTE_ALL)
    if not wanted:
        with pytest.raises(FieldworkFileError, match="no answers"):
            read_fieldwork_file(content, file_name="s.csv", reading=told)
        return
    file = read_fieldwork_file(content, file_name="s.csv", reading=told)
    columns = [name for name in header if file.answers[name].dtype == "str"]
    for name in columns:
        cells = [row[header.index(name)] for row in wanted]
        missing = file.answers[name].isna().tolist()
        assert [
            not c.strip() or c.strip("\ufeff\u200b \t\n") == "" for c in cells
        ] == missing or missing == [not c.strip("\u00a0\u202f\u2007\ufeff").strip() for c in cells]
        kept = [c.replace("\ufeff", "") for c, gone in zip(cells, missing, strict=True) if not gone]
        assert file.answers[name].dropna().tolist() == kept
    for name in set(header) - set(columns):
        for value, row in zip(file.answers[name], wanted, strict=True):
            text = row[header.index(name)].strip()
            assert np.isnan(value) if not text else value == number(text)


def number(text: str) -> float:
    text = "".join(text.split()).replace("−", "-").replace("’", "").replace("'", "")
    candidates = (
        text,
        text.replace(",", ""),
        text.replace(".", "").replace(",", "."),
        text.replace(",", "."),
    )
    return next(float(c) for c in candidates if c.count(".") <= 1 and "," not in c)


@settings(max_examples=150, deadline=None)
@given(GRID, st.sampled_from([",", ";", "\t", "|"]), st.sampled_from(["\n", "\r\n"]))
def test_plain_words_are_read_back_whatever_the_dialect(rows, delimiter, end):
    header = [f"name {chr(97 + i)}" for i in range(len(rows[0]))]
    plain = [["w" + "".join(c for c in text if c.isalpha()) for text in row] for row in rows]
    content = as_csv([header, *plain], delimiter=delimiter, lineterminator=end)
    told = Reading(header_rows=1)
    file = read_fieldwork_file(content, file_name="s.csv", reading=told)
    assert file.reading.delimiter == delimiter
    assert shown(file) == plain


def test_the_quick_and_the_careful_way_agree(monkeypatch, rng):
    cells = ["1", "22", "", "x y", 'a "b" c', "p,q", "l\nm", "07", "3.5", "é"]
    rows = [[f"r{i}", *rng.choice(cells, 6).tolist()] for i in range(300)]
    content = as_csv([["id", *"abcdef"], *rows])
    quick = read_fieldwork_file(content, file_name="s.csv")
    monkeypatch.setattr("app.intake.text_tables.parse_regular", lambda *_, **__: None)
    careful = read_fieldwork_file(content, file_name="s.csv")
    pd.testing.assert_frame_equal(quick.answers, careful.answers)
    assert quick.lines.tolist() == careful.lines.tolist()
    assert quick.remarks == careful.remarks


def base_files() -> list[bytes]:
    rows = [["id", "w", "note"]] + [[f"{i:03}", f"{i},5", f"word {i}"] for i in range(1, 25)]
    return [
        as_csv(rows, delimiter=";"),
        as_csv(rows, quoting=csv.QUOTE_ALL),
        as_csv(rows, delimiter="\t").decode().encode("utf-16"),
        (SAMPLES / "garden_centres_autumn.csv").read_bytes()[:4000],
        b"sep=|\r\na|b\r\n1|2\r\n",
    ]


def mutated(content: bytes, rng: np.random.Generator) -> bytes:
    data = bytearray(content)
    for _ in range(int(rng.integers(1, 6))):
        at = int(rng.integers(0, max(len(data), 1)))
        kind = int(rng.integers(0, 5))
        strange = rng.choice([0, 9, 10, 13, 34, 39, 44, 59, 92, 127, 128, 195, 239, 255])
        if kind == 0:
            data[at : at + 1] = bytes([strange])
        elif kind == 1:
            data[at:at] = bytes([strange])
        elif kind == 2:
            del data[at : at + int(rng.integers(1, 40))]
        elif kind == 3:
            piece = data[at : at + int(rng.integers(1, 60))]
            data[at:at] = piece
        else:
            data[at:] = data[at : at + int(rng.integers(0, 400))]
    return bytes(data)


@pytest.mark.parametrize("seed", range(8))
def test_mutilated_files_give_a_result_or_one_sentence(seed):
    rng = np.random.default_rng(seed)
    files = base_files()
    for i in range(60):
        content = mutated(files[i % len(files)], rng)
        try:
            file = read_fieldwork_file(content, file_name="m.csv")
        except FieldworkFileError as error:
            assert str(error).startswith("m.csv")
            assert str(error).count("\n") == 0
            continue
        assert len(file.answers) == len(file.lines)
        assert (np.diff(file.lines) > 0).all()
        again = read_fieldwork_file(content, file_name="m.csv", reading=file.reading)
        pd.testing.assert_frame_equal(again.answers, file.answers)


def test_fingerprint_and_name_are_kept():
    content = b"a,b\n1,2\n"
    file = read_fieldwork_file(content, file_name="folder/s.csv")
    assert file.fingerprint == hashlib.sha256(content).hexdigest()
    assert file.file_name == "folder/s.csv"
    with pytest.raises(ValueError, match="read-only"):
        file.lines[0] = 5
