"""The same table in every encoding gives the same answers."""

from __future__ import annotations

import codecs

import pytest

from app.intake import FieldworkFileError, Reading, read_fieldwork_file
from app.intake.encodings import MIXED

TABLE = "id;région;Ö\r\n1;Île café;5\r\n2;Müller – €;6\r\n3;naïve;7\r\n"
MARKS = {
    "utf-8": codecs.BOM_UTF8,
    "utf-16-le": codecs.BOM_UTF16_LE,
    "utf-16-be": codecs.BOM_UTF16_BE,
    "utf-32-le": codecs.BOM_UTF32_LE,
}


def read(content: bytes, **decided):
    return read_fieldwork_file(content, file_name="s.csv", reading=Reading(**decided))


@pytest.mark.parametrize(
    ("encoding", "mark"),
    [
        *(
            (encoding, mark)
            for encoding in ("utf-8", "utf-16-le", "utf-16-be")
            for mark in (True, False)
        ),
        ("cp1252", False),  # has no mark
        ("utf-32-le", True),  # told by its mark alone
    ],
)
def test_every_encoding_gives_the_same_answers(encoding, mark):
    file = read((MARKS[encoding] if mark else b"") + TABLE.encode(encoding))
    assert file.reading.encoding == encoding
    assert list(file.answers.columns) == ["id", "région", "Ö"]
    assert file.answers["région"].tolist() == ["Île café", "Müller – €", "naïve"]
    assert file.answers["id"].tolist() == [1.0, 2.0, 3.0]
    assert {r.code for r in file.remarks} == (
        {"encoding_guessed"} if encoding == "cp1252" else set()
    )


def test_a_guess_shows_words_with_accents():
    (remark,) = read(TABLE.encode("cp1252")).remarks
    assert "région" in remark.sentence
    assert "café" in remark.sentence


def test_an_encoding_that_is_told_is_followed():
    file = read(TABLE.replace("€", "e").replace("–", "-").encode("mac_roman"), encoding="mac_roman")
    assert file.answers["région"].tolist()[0] == "Île café"


@pytest.mark.parametrize("encoding", ["rot13", "no such", "zlib", "", "idna\x00"])
def test_what_is_no_text_encoding_is_refused(encoding):
    with pytest.raises(FieldworkFileError, match="no text encoding"):
        read(b"a,b\n1,2\n", encoding=encoding)


def test_bytes_that_do_not_fit_the_told_encoding_are_refused_with_their_line():
    with pytest.raises(
        FieldworkFileError, match=r"does not fit the encoding utf-8 \(first in line 2"
    ):
        read(
            TABLE.encode("cp1252").replace(b"r\xe9gion", b"region").replace(b"\xd6", b"O"),
            encoding="utf-8",
        )


def test_mixed_encodings_are_read_and_their_lines_named():
    lines = [line.encode("utf-8") for line in TABLE.splitlines(keepends=True)]
    lines[3] = lines[3].decode("utf-8").encode("cp1252")
    file = read(b"".join(lines))
    assert file.reading.encoding == MIXED
    assert file.answers["région"].tolist() == ["Île café", "Müller – €", "naïve"]
    (remark,) = file.remarks
    assert remark.code == "mixed_encodings"
    assert remark.rows == (4,)
    assert read(b"".join(lines), encoding=MIXED).answers.equals(file.answers)


def test_text_encoded_twice_is_noticed_and_left_alone():
    twice = "id,word\n1,plain\n2,café\n".encode().decode("cp1252").encode()
    file = read(twice)
    assert file.answers["word"].tolist() == ["plain", "cafÃ©"]
    (remark,) = file.remarks
    assert (remark.code, remark.rows) == ("encoded_twice", (3,))
