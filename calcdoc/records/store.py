"""The record as canonical JSON, and back."""

import msgspec

from calcdoc.errors import CalcdocError
from calcdoc.records.record import SCHEMA, Record


class RecordTrouble(CalcdocError):
    """A file is no record this version can read."""


def to_json(record: object) -> bytes:
    """Plain data as JSON with sorted keys, one space of indent and a final line end."""
    packed = msgspec.json.encode(record, order="sorted")
    return msgspec.json.format(packed, indent=1) + b"\n"


def from_json(data: bytes) -> Record:
    """A record that was stored; unknown keys are left out.

    Raises:
        RecordTrouble: when it is no record, or one of a newer schema.
    """
    try:
        record = msgspec.json.decode(data, type=Record)
    except msgspec.MsgspecError as trouble:
        raise RecordTrouble(f"this is no calculation record: {trouble}") from trouble
    if record.schema != SCHEMA:
        raise RecordTrouble(f"this record has the schema {record.schema}, known is {SCHEMA}")
    return record
