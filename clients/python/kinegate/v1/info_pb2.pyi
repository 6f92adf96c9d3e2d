from google.protobuf.internal import containers as _containers
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class GetInfoRequest(_message.Message):
    __slots__ = ()
    def __init__(self) -> None: ...

class GetInfoResponse(_message.Message):
    __slots__ = ("version", "numerics_version", "table_version", "table_digest", "caution", "limits", "selections")
    VERSION_FIELD_NUMBER: _ClassVar[int]
    NUMERICS_VERSION_FIELD_NUMBER: _ClassVar[int]
    TABLE_VERSION_FIELD_NUMBER: _ClassVar[int]
    TABLE_DIGEST_FIELD_NUMBER: _ClassVar[int]
    CAUTION_FIELD_NUMBER: _ClassVar[int]
    LIMITS_FIELD_NUMBER: _ClassVar[int]
    SELECTIONS_FIELD_NUMBER: _ClassVar[int]
    version: str
    numerics_version: int
    table_version: str
    table_digest: str
    caution: str
    limits: Limits
    selections: _containers.RepeatedCompositeFieldContainer[NamedSelection]
    def __init__(self, version: _Optional[str] = ..., numerics_version: _Optional[int] = ..., table_version: _Optional[str] = ..., table_digest: _Optional[str] = ..., caution: _Optional[str] = ..., limits: _Optional[_Union[Limits, _Mapping]] = ..., selections: _Optional[_Iterable[_Union[NamedSelection, _Mapping]]] = ...) -> None: ...

class Limits(_message.Message):
    __slots__ = ("block_byte_count", "block_event_count", "block_object_count", "event_object_count", "message_byte_count", "block_candidate_count")
    BLOCK_BYTE_COUNT_FIELD_NUMBER: _ClassVar[int]
    BLOCK_EVENT_COUNT_FIELD_NUMBER: _ClassVar[int]
    BLOCK_OBJECT_COUNT_FIELD_NUMBER: _ClassVar[int]
    EVENT_OBJECT_COUNT_FIELD_NUMBER: _ClassVar[int]
    MESSAGE_BYTE_COUNT_FIELD_NUMBER: _ClassVar[int]
    BLOCK_CANDIDATE_COUNT_FIELD_NUMBER: _ClassVar[int]
    block_byte_count: int
    block_event_count: int
    block_object_count: int
    event_object_count: int
    message_byte_count: int
    block_candidate_count: int
    def __init__(self, block_byte_count: _Optional[int] = ..., block_event_count: _Optional[int] = ..., block_object_count: _Optional[int] = ..., event_object_count: _Optional[int] = ..., message_byte_count: _Optional[int] = ..., block_candidate_count: _Optional[int] = ...) -> None: ...

class NamedSelection(_message.Message):
    __slots__ = ("name", "digests", "description")
    NAME_FIELD_NUMBER: _ClassVar[int]
    DIGESTS_FIELD_NUMBER: _ClassVar[int]
    DESCRIPTION_FIELD_NUMBER: _ClassVar[int]
    name: str
    digests: _containers.RepeatedScalarFieldContainer[str]
    description: str
    def __init__(self, name: _Optional[str] = ..., digests: _Optional[_Iterable[str]] = ..., description: _Optional[str] = ...) -> None: ...
