"""Reading a record."""

from __future__ import annotations

import os

from harvest.errors import RecordError
from harvest.record.check import check_record
from harvest.record.model import Record


def read_record(folder: str | os.PathLike[str]) -> Record:
    """The record in a folder.

    Parameters
    ----------
    folder : path
        The record's folder.

    Raises
    ------
    RecordError
        Holding every problem, when there is any error.
    """
    record, problems = check_record(folder)
    if record is None:
        raise RecordError(problems)
    return record
