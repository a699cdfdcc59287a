"""The record: what the manager knows about one population, read from and saved to a folder of two files."""

from __future__ import annotations

from harvest.record.check import check_record
from harvest.record.model import Record
from harvest.record.read import read_record
from harvest.record.save import save_record
from harvest.record.template import demo_folder, demo_names, make_record

__all__ = [
    "Record",
    "check_record",
    "demo_folder",
    "demo_names",
    "make_record",
    "read_record",
    "save_record",
]
