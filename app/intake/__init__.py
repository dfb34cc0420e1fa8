"""From the bytes of a fieldwork file to answers, with every decision and every repair named.

``read_fieldwork_file`` is the door for files, ``read_pasted_counts`` the one for a text box.
"""

from __future__ import annotations

from app.intake.fieldwork_files import FieldworkFile, FieldworkFileError, Remark, SetAsideRow
from app.intake.pasted_counts import PastedCount, PastedCounts, read_pasted_counts
from app.intake.reading import ColumnReading, Reading
from app.intake.text_tables import read_fieldwork_file

__all__ = [
    "ColumnReading",
    "FieldworkFile",
    "FieldworkFileError",
    "PastedCount",
    "PastedCounts",
    "Reading",
    "Remark",
    "SetAsideRow",
    "read_fieldwork_file",
    "read_pasted_counts",
]
