"""Files that are no text tables at all, told by their first bytes."""

from __future__ import annotations

import re

from app.intake.fieldwork_files import FieldworkFileError

_AS_CSV = "save the table as CSV and upload that file"
_WORKBOOK = f"is a spreadsheet workbook: {_AS_CSV}"

_SIGNATURES = (
    (b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1", _WORKBOOK),
    (b"%PDF", f"is a PDF document: {_AS_CSV}"),
    (b"\x89PNG", f"is a picture, not a table: {_AS_CSV}"),
    (b"\xff\xd8\xff", f"is a picture, not a table: {_AS_CSV}"),
    (b"GIF8", f"is a picture, not a table: {_AS_CSV}"),
    (b"\x1f\x8b", "is compressed: unpack it and upload the CSV file inside"),
    (b"BZh", "is compressed: unpack it and upload the CSV file inside"),
    (b"\xfd7zXZ\x00", "is compressed: unpack it and upload the CSV file inside"),
    (b"7z\xbc\xaf\x27\x1c", "is a compressed folder: unpack it and upload the CSV file inside"),
    (b"Rar!", "is a compressed folder: unpack it and upload the CSV file inside"),
    (b"PAR1", f"is a Parquet file: {_AS_CSV}"),
    (b"SQLite format 3\x00", f"is a database: {_AS_CSV}"),
    (b"{\\rtf", f"is a text document with formatting: {_AS_CSV}"),
)
_WORKBOOK_PARTS = (b"xl/", b"[Content_Types].xml", b"mimetypeapplication/vnd.oasis")
_MARKUP = (
    (
        re.compile(r"<(!doctype html|html|head|body|table|div|meta)\b", re.IGNORECASE),
        "is a web page, not a table: open it in a spreadsheet, save it as CSV and upload that file",
    ),
    (re.compile(r"<\?xml\b", re.IGNORECASE), f"is an XML document, not a table: {_AS_CSV}"),
    (re.compile(r"(\{|\[\s*\{)\s*\"[^\"]*\"\s*:"), f"holds JSON, not a table: {_AS_CSV}"),
)
_CONTROLS = bytes(c for c in range(32) if c not in (9, 10, 12, 13))
_SAMPLE = 65_536


def plain_name(file_name: str) -> str:
    """Return the file name without folders or control characters, short enough for a sentence."""
    last = re.split(r"[/\\]", file_name)[-1]
    readable = "".join(c for c in last if c.isprintable()).strip() or "The file"
    return readable if len(readable) <= 80 else f"{readable[:79]}…"


def check_bytes(content: bytes, file_name: str) -> None:
    """Refuse empty files and known formats that hold no text.

    Raises
    ------
    FieldworkFileError
        One sentence that says what the file is and what to upload in its place.
    """
    if not content[:_SAMPLE].strip(b" \t\r\n\x00") and not content.strip(b" \t\r\n\x00"):
        raise FieldworkFileError(f"{file_name} is empty: export it again and upload it.")
    reason = _signature(content)
    if reason:
        raise FieldworkFileError(f"{file_name} {reason}.")


def check_not_binary(content: bytes, file_name: str) -> None:
    """Refuse bytes that are mostly control characters, after UTF-16 has been ruled out."""
    sample = content[:_SAMPLE]
    controls = len(sample) - len(sample.translate(None, _CONTROLS))
    if controls > 0.05 * len(sample) and controls > 8:
        raise FieldworkFileError(f"{file_name} holds no readable text: {_AS_CSV}.")


def check_text(head: str, file_name: str) -> None:
    """Refuse web pages, XML and JSON.

    Parameters
    ----------
    head : str
        The first characters of the decoded file.
    file_name : str
        For the sentence.
    """
    start = head.lstrip()[:2000]
    if not start:
        raise FieldworkFileError(f"{file_name} is empty: export it again and upload it.")
    for pattern, reason in _MARKUP:
        if pattern.match(start):
            raise FieldworkFileError(f"{file_name} {reason}.")


def _signature(content: bytes) -> str:
    if content[:4] in (b"PK\x03\x04", b"PK\x05\x06"):
        head = content[:4096]
        if any(part in head for part in _WORKBOOK_PARTS):
            return _WORKBOOK
        return "is a compressed folder: unpack it and upload the CSV file inside"
    return next((why for start, why in _SIGNATURES if content.startswith(start)), "")
