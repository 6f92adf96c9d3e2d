from google.protobuf.internal import containers as _containers
from google.protobuf.internal import enum_type_wrapper as _enum_type_wrapper
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class EventStatus(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    EVENT_STATUS_UNSPECIFIED: _ClassVar[EventStatus]
    EVENT_STATUS_JUDGED: _ClassVar[EventStatus]
    EVENT_STATUS_NON_FINITE: _ClassVar[EventStatus]
    EVENT_STATUS_NEGATIVE_ENERGY: _ClassVar[EventStatus]
    EVENT_STATUS_NEGATIVE_SPREAD: _ClassVar[EventStatus]
    EVENT_STATUS_OUT_OF_RANGE: _ClassVar[EventStatus]
    EVENT_STATUS_OVERSIZED: _ClassVar[EventStatus]
    EVENT_STATUS_EXPIRED: _ClassVar[EventStatus]
    EVENT_STATUS_BUDGET_USED: _ClassVar[EventStatus]

class EntryStatus(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    ENTRY_STATUS_UNSPECIFIED: _ClassVar[EntryStatus]
    ENTRY_STATUS_ACCEPTED: _ClassVar[EntryStatus]
    ENTRY_STATUS_REJECTED: _ClassVar[EntryStatus]
    ENTRY_STATUS_FIT_FAILED: _ClassVar[EntryStatus]
    ENTRY_STATUS_BUDGET_USED: _ClassVar[EntryStatus]
EVENT_STATUS_UNSPECIFIED: EventStatus
EVENT_STATUS_JUDGED: EventStatus
EVENT_STATUS_NON_FINITE: EventStatus
EVENT_STATUS_NEGATIVE_ENERGY: EventStatus
EVENT_STATUS_NEGATIVE_SPREAD: EventStatus
EVENT_STATUS_OUT_OF_RANGE: EventStatus
EVENT_STATUS_OVERSIZED: EventStatus
EVENT_STATUS_EXPIRED: EventStatus
EVENT_STATUS_BUDGET_USED: EventStatus
ENTRY_STATUS_UNSPECIFIED: EntryStatus
ENTRY_STATUS_ACCEPTED: EntryStatus
ENTRY_STATUS_REJECTED: EntryStatus
ENTRY_STATUS_FIT_FAILED: EntryStatus
ENTRY_STATUS_BUDGET_USED: EntryStatus

class VerdictBlock(_message.Message):
    __slots__ = ("sequence", "rejected", "selection_digest", "event_count", "statuses", "gate", "hypotheses", "groups", "entries")
    SEQUENCE_FIELD_NUMBER: _ClassVar[int]
    REJECTED_FIELD_NUMBER: _ClassVar[int]
    SELECTION_DIGEST_FIELD_NUMBER: _ClassVar[int]
    EVENT_COUNT_FIELD_NUMBER: _ClassVar[int]
    STATUSES_FIELD_NUMBER: _ClassVar[int]
    GATE_FIELD_NUMBER: _ClassVar[int]
    HYPOTHESES_FIELD_NUMBER: _ClassVar[int]
    GROUPS_FIELD_NUMBER: _ClassVar[int]
    ENTRIES_FIELD_NUMBER: _ClassVar[int]
    sequence: int
    rejected: Rejection
    selection_digest: str
    event_count: int
    statuses: bytes
    gate: bytes
    hypotheses: _containers.RepeatedCompositeFieldContainer[HypothesisBits]
    groups: _containers.RepeatedCompositeFieldContainer[GroupBest]
    entries: EntryColumns
    def __init__(self, sequence: _Optional[int] = ..., rejected: _Optional[_Union[Rejection, _Mapping]] = ..., selection_digest: _Optional[str] = ..., event_count: _Optional[int] = ..., statuses: _Optional[bytes] = ..., gate: _Optional[bytes] = ..., hypotheses: _Optional[_Iterable[_Union[HypothesisBits, _Mapping]]] = ..., groups: _Optional[_Iterable[_Union[GroupBest, _Mapping]]] = ..., entries: _Optional[_Union[EntryColumns, _Mapping]] = ...) -> None: ...

class Rejection(_message.Message):
    __slots__ = ("reason", "field", "message")
    REASON_FIELD_NUMBER: _ClassVar[int]
    FIELD_FIELD_NUMBER: _ClassVar[int]
    MESSAGE_FIELD_NUMBER: _ClassVar[int]
    reason: str
    field: str
    message: str
    def __init__(self, reason: _Optional[str] = ..., field: _Optional[str] = ..., message: _Optional[str] = ...) -> None: ...

class HypothesisBits(_message.Message):
    __slots__ = ("accepted",)
    ACCEPTED_FIELD_NUMBER: _ClassVar[int]
    accepted: bytes
    def __init__(self, accepted: _Optional[bytes] = ...) -> None: ...

class GroupBest(_message.Message):
    __slots__ = ("best",)
    BEST_FIELD_NUMBER: _ClassVar[int]
    best: bytes
    def __init__(self, best: _Optional[bytes] = ...) -> None: ...

class EntryColumns(_message.Message):
    __slots__ = ("offsets", "hypothesis_indices", "beam_rows", "weights", "statuses", "assignment_counts", "assignment_offsets", "assignments", "observable_offsets", "observables", "observable_uncertainties", "fits")
    OFFSETS_FIELD_NUMBER: _ClassVar[int]
    HYPOTHESIS_INDICES_FIELD_NUMBER: _ClassVar[int]
    BEAM_ROWS_FIELD_NUMBER: _ClassVar[int]
    WEIGHTS_FIELD_NUMBER: _ClassVar[int]
    STATUSES_FIELD_NUMBER: _ClassVar[int]
    ASSIGNMENT_COUNTS_FIELD_NUMBER: _ClassVar[int]
    ASSIGNMENT_OFFSETS_FIELD_NUMBER: _ClassVar[int]
    ASSIGNMENTS_FIELD_NUMBER: _ClassVar[int]
    OBSERVABLE_OFFSETS_FIELD_NUMBER: _ClassVar[int]
    OBSERVABLES_FIELD_NUMBER: _ClassVar[int]
    OBSERVABLE_UNCERTAINTIES_FIELD_NUMBER: _ClassVar[int]
    FITS_FIELD_NUMBER: _ClassVar[int]
    offsets: bytes
    hypothesis_indices: bytes
    beam_rows: bytes
    weights: bytes
    statuses: bytes
    assignment_counts: bytes
    assignment_offsets: bytes
    assignments: bytes
    observable_offsets: bytes
    observables: bytes
    observable_uncertainties: bytes
    fits: FitColumns
    def __init__(self, offsets: _Optional[bytes] = ..., hypothesis_indices: _Optional[bytes] = ..., beam_rows: _Optional[bytes] = ..., weights: _Optional[bytes] = ..., statuses: _Optional[bytes] = ..., assignment_counts: _Optional[bytes] = ..., assignment_offsets: _Optional[bytes] = ..., assignments: _Optional[bytes] = ..., observable_offsets: _Optional[bytes] = ..., observables: _Optional[bytes] = ..., observable_uncertainties: _Optional[bytes] = ..., fits: _Optional[_Union[FitColumns, _Mapping]] = ...) -> None: ...

class FitColumns(_message.Message):
    __slots__ = ("statuses", "chi_squares", "degrees_of_freedom", "probabilities", "iteration_counts")
    STATUSES_FIELD_NUMBER: _ClassVar[int]
    CHI_SQUARES_FIELD_NUMBER: _ClassVar[int]
    DEGREES_OF_FREEDOM_FIELD_NUMBER: _ClassVar[int]
    PROBABILITIES_FIELD_NUMBER: _ClassVar[int]
    ITERATION_COUNTS_FIELD_NUMBER: _ClassVar[int]
    statuses: bytes
    chi_squares: bytes
    degrees_of_freedom: bytes
    probabilities: bytes
    iteration_counts: bytes
    def __init__(self, statuses: _Optional[bytes] = ..., chi_squares: _Optional[bytes] = ..., degrees_of_freedom: _Optional[bytes] = ..., probabilities: _Optional[bytes] = ..., iteration_counts: _Optional[bytes] = ...) -> None: ...
