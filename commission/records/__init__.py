"""What was done and read on site: read it, judge it, freeze it, file it once; open items and history."""

from commission.records.disk import ExistsError, FolderError, digest_of_file
from commission.records.drift import Drift, Family, drifts, families, find_drifts
from commission.records.filed import FiledBlock, FiledRecord, FiledRecordError, RecordsFolder, read_filed, read_folder
from commission.records.filing import check_files, file_record, file_sheet
from commission.records.form import record_form
from commission.records.freeze import guarantee_sentence, versions
from commission.records.history import (
    Point,
    Series,
    baseline_of,
    damaged,
    history,
    in_force,
    recomputed_series,
    series,
)
from commission.records.items import OpenItem, items_csv, open_items
from commission.records.judge import judge_record
from commission.records.model import RecordFile
from commission.records.read import RecordError, read_record, records_folder
from commission.records.recomputation import Recomputation, recompute
from commission.records.record import CheckedAnswer, Record, SiteReading
from commission.records.sums import FileFinding, SumsError
from commission.records.text import is_filed
from commission.records.unanswered import Unanswered, unanswered

__all__ = [
    "CheckedAnswer",
    "Drift",
    "ExistsError",
    "Family",
    "FileFinding",
    "FiledBlock",
    "FiledRecord",
    "FiledRecordError",
    "FolderError",
    "OpenItem",
    "Point",
    "Recomputation",
    "Record",
    "RecordError",
    "RecordFile",
    "RecordsFolder",
    "Series",
    "SiteReading",
    "SumsError",
    "Unanswered",
    "baseline_of",
    "check_files",
    "damaged",
    "digest_of_file",
    "drifts",
    "families",
    "file_record",
    "file_sheet",
    "find_drifts",
    "guarantee_sentence",
    "history",
    "in_force",
    "is_filed",
    "items_csv",
    "judge_record",
    "open_items",
    "read_filed",
    "read_folder",
    "read_record",
    "recompute",
    "recomputed_series",
    "record_form",
    "records_folder",
    "series",
    "unanswered",
    "versions",
]
