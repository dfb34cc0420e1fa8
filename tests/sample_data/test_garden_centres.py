"""The sample files are what the generator's docstring says: counted again with the csv module."""

from __future__ import annotations

import csv
import importlib.util
from collections import Counter
from pathlib import Path
from types import ModuleType

import pytest

FOLDER = Path(__file__).resolve().parents[2] / "sample_data"
REGIONS = {"Northmark": 402, "Lowmere": 331, "Eastreach": 268, "Westholm": 183}


def generator() -> ModuleType:
    spec = importlib.util.spec_from_file_location(
        "make_garden_centres", FOLDER / "make_garden_centres.py"
    )
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def rows_of(wave: str, encoding: str) -> tuple[list[str], list[str], list[dict[str, str]]]:
    with (FOLDER / f"garden_centres_{wave}.csv").open(encoding=encoding, newline="") as file:
        lines = list(csv.reader(file, delimiter=";"))
    codes, texts, *rest = lines
    return codes, texts, [dict(zip(codes, line, strict=True)) for line in rest if line]


@pytest.fixture(scope="module")
def spring() -> list[dict[str, str]]:
    return rows_of("spring", "utf-8-sig")[2]


@pytest.fixture(scope="module")
def autumn() -> list[dict[str, str]]:
    return rows_of("autumn", "cp1252")[2]


def spends(rows: list[dict[str, str]]) -> list[float]:
    return [float(row["Q5"].replace(",", ".")) for row in rows]


def test_a_new_run_writes_the_committed_files_byte_for_byte(tmp_path):
    written = generator().write_files(tmp_path)
    assert len(written) == 3
    for path in written:
        assert path.read_bytes() == (FOLDER / path.name).read_bytes(), path.name


def test_respondents_by_region(spring, autumn):
    assert Counter(row["REGION"] for row in spring) == {
        "Northmark": 118,
        "Lowmere": 150,
        "Eastreach": 87,
        "Westholm": 40,
    }
    assert len(spring) == 395
    assert len(autumn) == 380
    assert sum(REGIONS.values()) == 1184


@pytest.mark.parametrize(("wave", "encoding"), [("spring", "utf-8-sig"), ("autumn", "cp1252")])
def test_nobody_is_drawn_twice_and_numbers_keep_their_zeros(wave, encoding):
    ids = [row["ID"] for row in rows_of(wave, encoding)[2]]
    assert len(set(ids)) == len(ids)
    assert all(len(x) == 5 and x.startswith("0") and 1 <= int(x) <= 1184 for x in ids)


def test_part_of_the_panel_stays_and_keeps_its_region(spring, autumn):
    region = {row["ID"]: row["REGION"] for row in spring}
    both = [row for row in autumn if row["ID"] in region]
    assert len(both) == 227  # 0.6 of 112, 142, 84, 42, each rounded: 67 + 85 + 50 + 25
    assert all(row["REGION"] == region[row["ID"]] for row in both)


def test_refused_spending_is_a_plausible_trap(spring):
    spent = spends(spring)
    told = [x for x in spent if x != 99999]
    assert len(spent) - len(told) == 26
    assert max(told) < 99999 / 2
    assert 2000 < sum(told) / len(told) < 2300
    assert sum(spent) / len(spent) > 3.5 * sum(told) / len(told)


def test_spending_is_very_skewed(spring):
    told = sorted(x for x in spends(spring) if x != 99999)
    assert sum(told) / len(told) > 1.7 * told[len(told) // 2]


def test_a_rare_answer_and_a_size_class_with_few_answers(spring):
    closed = Counter(row["Q8"] for row in spring if row["REGION"] == "Westholm")
    assert closed["Yes"] == 3
    assert sum(closed.values()) == 40
    assert Counter(row["SIZE"] for row in spring)["very large"] == 21


def test_codes_are_those_the_docstring_names(spring, autumn):
    for rows in (spring, autumn):
        assert {row["Q1"] for row in rows} <= {str(x) for x in (*range(11), 98, 99)}
        assert {"98", "99"} < {row["Q1"] for row in rows}
        assert {row["Q13"] for row in rows if row["Q12"] == "0"} == {"-1"}
        assert {row["Q13"] for row in rows if row["Q12"] not in ("0", "")} <= set("123459")
        assert {row[f"Q7_{i}"] for row in rows for i in range(1, 9)} == {"0", "1", ""}


def test_a_broken_off_interview_is_empty_from_q7_on(spring):
    broken = [row for row in spring if row["Q8"] == ""]
    assert broken
    assert all(row["Q7_1"] == row["Q9"] == row["Q14"] == "" and row["Q6"] for row in broken)


def test_regions_differ_in_satisfaction(spring):
    def average(region: str) -> float:
        told = [int(r["Q1"]) for r in spring if r["REGION"] == region and int(r["Q1"]) <= 10]
        return sum(told) / len(told)

    assert average("Lowmere") > average("Northmark") > average("Eastreach")


def test_the_autumn_file_renames_one_column_and_has_one_more(spring, autumn):
    assert set(spring[0]) - set(autumn[0]) == {"Q6"}
    assert set(autumn[0]) - set(spring[0]) == {"STAFF", "Q15"}
    assert "Online marketplace" in {row["Q9"] for row in autumn}
    assert "Online marketplace" not in {row["Q9"] for row in spring}


def test_the_files_have_the_faults_of_real_deliveries():
    raw = (FOLDER / "garden_centres_spring.csv").read_bytes()
    assert raw.startswith(b"\xef\xbb\xbf")
    assert raw.count(b"\r\n\r\n") == 1
    codes, texts, rows = rows_of("spring", "utf-8-sig")
    assert codes[-1] == "" == texts[-1]
    assert all(row[""] == "" for row in rows)
    comments = [row["Q14"] for row in rows]
    assert any(";" in c for c in comments)
    assert any("\n" in c for c in comments)
    assert any('"' in c for c in comments)
    with pytest.raises(UnicodeDecodeError):
        (FOLDER / "garden_centres_autumn.csv").read_bytes().decode("utf-8")
