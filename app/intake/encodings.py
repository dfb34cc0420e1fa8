"""From bytes to UTF-8: which encoding the file is in, and what could not be told for certain."""

from __future__ import annotations

import codecs
import re
from dataclasses import dataclass, replace

from app.intake.fieldwork_files import FieldworkFileError, Remark, lines_phrase, row_list, short

MIXED = "utf-8 and cp1252"

_MARKS = (
    (codecs.BOM_UTF32_LE, "utf-32-le"),
    (codecs.BOM_UTF32_BE, "utf-32-be"),
    (codecs.BOM_UTF8, "utf-8"),
    (codecs.BOM_UTF16_LE, "utf-16-le"),
    (codecs.BOM_UTF16_BE, "utf-16-be"),
)
_WORD_WITH_ACCENT = re.compile(r"\w*[^\x00-\x7f]\w*")
_NOT_ASCII = re.compile("[^\x00-\x7f]")
_LONE_BYTE = re.compile("[\udc80-\udcff]")
_TWICE_ENCODED = (b"\xc3\x83\xc2", b"\xc3\x83\xc5", b"\xc3\x83\xc6", b"\xc3\xa2\xe2\x82\xac")
_HEAD = 1 << 20
_PIECE = 4 << 20


@dataclass(frozen=True, slots=True)
class DecodedFile:
    """A file as UTF-8.

    Parameters
    ----------
    content : bytes
        UTF-8 without a mark.
    encoding : str
        As in ``Reading.encoding``.
    evidence : str
        Why this encoding.
    remarks : tuple of Remark
        What a person should check.
    """

    content: bytes
    encoding: str
    evidence: str
    remarks: tuple[Remark, ...] = ()


def decode_file(content: bytes, encoding: str | None, file_name: str) -> DecodedFile:
    """Return the file as UTF-8.

    Parameters
    ----------
    content : bytes
        As uploaded.
    encoding : str or None
        None finds it out.
    file_name : str
        For sentences.

    Raises
    ------
    FieldworkFileError
        When the bytes do not fit the encoding, or fit none.
    """
    if encoding is not None:
        return _as_told(content, encoding, file_name)
    found = _from_mark(content) or _from_zero_bytes(content)
    if found is not None:
        encoding, evidence = found
        return _decoded(content, encoding, evidence, file_name)
    if _is_utf8(content):
        evidence = "Every character is plain ASCII, read as UTF-8."
        if not content.isascii():
            evidence = "The whole file is valid UTF-8."
        return DecodedFile(content, "utf-8", evidence, _twice_encoded(content))
    return _not_utf8(content, file_name)


def _as_told(content: bytes, encoding: str, file_name: str) -> DecodedFile:
    if encoding == MIXED:
        return _mixed(content.decode("utf-8", "surrogateescape"), file_name)
    return _decoded(content, encoding, f"Read as {encoding}, as told.", file_name)


def _decoded(content: bytes, encoding: str, evidence: str, file_name: str) -> DecodedFile:
    """Decode with a known encoding; a mark at the start is no part of the first name."""
    if encoding == "utf-8" and _is_utf8(content):
        content = content.removeprefix(codecs.BOM_UTF8)
        return DecodedFile(content, encoding, evidence, _twice_encoded(content))
    try:
        text = content.decode(encoding)
    except UnicodeDecodeError as error:
        line = content[: error.start].count(b"\n") + 1
        raise FieldworkFileError(
            f"{file_name} does not fit the encoding {encoding} (first in line {line:,}): "
            "choose another encoding or save the file as UTF-8."
        ) from error
    except (LookupError, ValueError) as error:
        raise FieldworkFileError(
            f"{file_name} cannot be read as {short(encoding)}, which is no text encoding: "
            "choose UTF-8, UTF-16 or Windows-1252."
        ) from error
    text = text.removeprefix("\ufeff")
    encoded = text.encode("utf-8", "replace")
    return DecodedFile(encoded, encoding, evidence, _twice_encoded(encoded))


def _from_mark(content: bytes) -> tuple[str, str] | None:
    for mark, encoding in _MARKS:
        if content.startswith(mark):
            return encoding, f"The file begins with the byte-order mark of {encoding.upper()}."
    return None


def _from_zero_bytes(content: bytes) -> tuple[str, str] | None:
    """Tell UTF-16 without a mark by zeros in every second byte."""
    sample = content[:65_536]
    half = len(sample) // 2
    even, odd = sample[0::2].count(0), sample[1::2].count(0)
    if half < 2 or max(even, odd) < 0.4 * half or min(even, odd) > 0.05 * half:
        return None
    encoding = "utf-16-le" if odd > even else "utf-16-be"
    return encoding, f"Every second byte is zero, as in {encoding.upper()} without a mark."


def _is_utf8(content: bytes) -> bool:
    """Check piece by piece, so that a large file is not held twice."""
    if content.isascii():
        return True
    decoder = codecs.getincrementaldecoder("utf-8")()
    view = memoryview(content)
    try:
        for start in range(0, len(view), _PIECE):
            decoder.decode(view[start : start + _PIECE])
        decoder.decode(b"", final=True)
    except UnicodeDecodeError:
        return False
    return True


def _not_utf8(content: bytes, file_name: str) -> DecodedFile:
    escaped = content.decode("utf-8", "surrogateescape")
    lone = len(_LONE_BYTE.findall(escaped))
    several = len(_NOT_ASCII.findall(escaped)) - lone
    if several * 10 > lone:
        return _mixed(escaped, file_name)
    evidence = "The file is not valid UTF-8; Windows-1252 gives readable text."
    try:
        decoded = _decoded(content, "cp1252", evidence, file_name)
    except FieldworkFileError as error:
        raise FieldworkFileError(
            f"{file_name} is neither UTF-8 nor Windows-1252 text: save it as UTF-8 and "
            "upload it again."
        ) from error
    guess = _guess_remark(decoded.content[:_HEAD].decode("utf-8", "ignore"))
    return replace(decoded, remarks=guess + decoded.remarks)


def _mixed(escaped: str, file_name: str) -> DecodedFile:
    """Read the bytes that are no UTF-8 as Windows-1252, and name their lines."""
    lines = sorted({escaped.count("\n", 0, m.start()) + 1 for m in _first(escaped)})
    try:
        text = _LONE_BYTE.sub(_from_cp1252, escaped).removeprefix("\ufeff")
    except UnicodeDecodeError as error:
        raise FieldworkFileError(
            f"{file_name} mixes encodings and cannot be read (first in line {lines[0]:,}): "
            "save it as UTF-8 and upload it again."
        ) from error
    remark = Remark(
        "mixed_encodings",
        f"The file mixes UTF-8 and Windows-1252 ({lines_phrase(lines)}); both were read: "
        "check the accented letters there.",
        rows=row_list(lines),
    )
    evidence = "Most of the file is UTF-8, some lines only fit Windows-1252."
    return DecodedFile(text.encode("utf-8"), MIXED, evidence, (remark,) if lines else ())


def _first(escaped: str) -> list[re.Match[str]]:
    return [m for m, _ in zip(_LONE_BYTE.finditer(escaped), range(200), strict=False)]


def _from_cp1252(match: re.Match[str]) -> str:
    return bytes([ord(match.group()) - 0xDC00]).decode("cp1252")


def _guess_remark(text: str) -> tuple[Remark, ...]:
    found = (m.group() for m in _WORD_WITH_ACCENT.finditer(text))
    words = list(dict.fromkeys(word for word, _ in zip(found, range(200), strict=False)))[:6]
    if not words:
        return ()
    sentence = (
        "The file says nothing about its encoding and was read as Windows-1252: check that "
        f"these words look right, or choose another encoding: {', '.join(words)}."
    )
    return (Remark("encoding_guessed", sentence),)


def _twice_encoded(content: bytes) -> tuple[Remark, ...]:
    """Notice accents that an earlier program broke in two ("Ã©"); they are left as they are."""
    if content.isascii():
        return ()
    places = sorted(p for p in (content.find(mark, 0, _HEAD) for mark in _TWICE_ENCODED) if p >= 0)
    if not places:
        return ()
    line = content[: places[0]].count(b"\n") + 1
    return (
        Remark(
            "encoded_twice",
            f"Accented letters look broken from line {line:,} on (“Ã©” for “é”): the program "
            "that wrote the file encoded them twice, so export it again.",
            rows=(line,),
        ),
    )
