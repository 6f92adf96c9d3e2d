from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from typing import ClassVar as _ClassVar, Optional as _Optional

DESCRIPTOR: _descriptor.FileDescriptor

class FieldFault(_message.Message):
    __slots__ = ("field", "message", "line", "column", "reason")
    FIELD_FIELD_NUMBER: _ClassVar[int]
    MESSAGE_FIELD_NUMBER: _ClassVar[int]
    LINE_FIELD_NUMBER: _ClassVar[int]
    COLUMN_FIELD_NUMBER: _ClassVar[int]
    REASON_FIELD_NUMBER: _ClassVar[int]
    field: str
    message: str
    line: int
    column: int
    reason: str
    def __init__(self, field: _Optional[str] = ..., message: _Optional[str] = ..., line: _Optional[int] = ..., column: _Optional[int] = ..., reason: _Optional[str] = ...) -> None: ...
