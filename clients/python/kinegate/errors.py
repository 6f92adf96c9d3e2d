"""What can go wrong, as exceptions that say which field and why.

Every answer of a server that is no result becomes a :class:`ServerError` with the code of
the call, the registered reason, the fields at fault and the values that matter:

>>> try:
...     client.reaction("gamma p -> K+ Lamda")
... except kinegate.InvalidArgument as error:
...     print(error.reason, error.field)
FIELD_INVALID reaction
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any, Final

import grpc
from google.rpc import error_details_pb2, status_pb2

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping, Sequence

__all__ = [
    "ArgumentError",
    "BlockRejected",
    "Cancelled",
    "DeadlineExceeded",
    "FailedPrecondition",
    "FieldViolation",
    "Internal",
    "InvalidArgument",
    "KinegateError",
    "NotFound",
    "PermissionDenied",
    "ResourceExhausted",
    "SelectionFaulty",
    "ServerError",
    "StreamBroken",
    "Unauthenticated",
    "Unavailable",
    "Unimplemented",
    "UsageError",
]


_LONGEST: Final = 60  # characters of a value in a sentence


class KinegateError(Exception):
    """The base of every exception of this package.

    >>> try:
    ...     client.particle("graviton")
    ... except kinegate.KinegateError as error:
    ...     print(type(error).__name__)
    NotFound
    """


class UsageError(KinegateError):
    """The package was used in a way that cannot work: forks, event loops, arguments.

    >>> kinegate.connect_async(server.address)
    Traceback (most recent call last):
    kinegate.errors.UsageError: connect_async needs a running event loop: ...
    """


class ArgumentError(UsageError, ValueError):
    """An argument is of the wrong kind, out of range or unknown; nothing was sent.

    >>> try:
    ...     client.reaction("gamma p -> p eta", beam=[1, 2])
    ... except kinegate.ArgumentError as error:
    ...     print(error.field, error.value)
    ...     print(error)
    beam [1, 2]
    beam: [1, 2] is not a number in the base unit or a text with a unit, such as "1.2 GeV"
    """

    def __init__(self, message: str, field: str = "", value: Any = None) -> None:
        super().__init__(f"{field}: {message}" if field else message)
        self.message = message
        """The value and what is allowed."""
        self.field = field
        """The argument at fault, such as "beam" or "energies[2]"; empty where it is several."""
        self.value = value
        """What was given."""

    def __reduce__(self) -> tuple[object, ...]:
        return type(self), (self.message, self.field, self.value)


def shortened(value: object) -> str:
    """Write a value into a sentence: long ones are cut."""
    text = " ".join(repr(value).split())
    return text if len(text) <= _LONGEST else f"{text[: _LONGEST - 3]}..."


class StreamBroken(KinegateError):
    """A judge stream broke and could not be resumed, or its server broke the protocol.

    >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv")
    >>> chosen = client.selection("testdata/selections/dimuon.yaml")
    >>> with kinegate.connect("127.0.0.1:1") as nobody:
    ...     list(nobody.judge(sample, chosen, patience=0.1))
    Traceback (most recent call last):
    kinegate.errors.StreamBroken: no verdict from 127.0.0.1:1 for 0.1 s: ...
    """


@dataclass(frozen=True)
class FieldViolation:
    """One field of a request that is at fault.

    >>> client.check({"name": "no good"}).faults[0].field
    'name'
    """

    field: str
    """Path of the field, such as "reaction"."""
    description: str
    """The value and what is allowed."""


@dataclass(eq=False, repr=False)
class ServerError(KinegateError):
    """The answer of a server that is no result.

    >>> try:
    ...     client.reaction("gamma p -> p pi+")
    ... except kinegate.ServerError as error:
    ...     print(error.code, error.reason, error.retryable)
    INVALID_ARGUMENT LAW_BROKEN False
    """

    message: str
    """What is wrong, in words."""
    code: str = "UNKNOWN"
    """Name of the gRPC status code."""
    reason: str = ""
    """Registered reason, such as "LAW_BROKEN"; empty where no server answered."""
    metadata: Mapping[str, str] = field(default_factory=dict)
    """Values that matter, by name."""
    violations: Sequence[FieldViolation] = ()
    """The fields at fault."""
    retryable: bool = False
    """The same call may succeed later or on another replica, unchanged."""

    def __post_init__(self) -> None:
        super().__init__(self.message)

    def __str__(self) -> str:
        return self.message

    def __reduce__(self) -> tuple[object, ...]:
        state = (self.message, self.code, self.reason, dict(self.metadata))
        return type(self), (*state, tuple(self.violations), self.retryable)

    @property
    def field(self) -> str:
        """Path of the first field at fault; empty where there is none."""
        return self.violations[0].field if self.violations else ""


class InvalidArgument(ServerError):
    """A field is malformed or out of range, a name unknown, a conservation law broken.

    >>> client.reaction("gamma p -> K+ Lamda")
    Traceback (most recent call last):
    kinegate.errors.InvalidArgument: ...
    """


class NotFound(ServerError):
    """What was asked for by name is not known.

    >>> client.particle("graviton")
    Traceback (most recent call last):
    kinegate.errors.NotFound: ...
    """


class FailedPrecondition(ServerError):
    """The state does not allow the call: a channel closed, a digest gone, a protocol fault.

    >>> beam = {"beam_on_target": {"beam": {"even": {"min_gev": 1, "max_gev": 2}}}}
    >>> client.generate({"initial_state": beam,
    ...                  "channels": [{"reaction": "gamma p -> p J/psi"}]}, 1).read()
    Traceback (most recent call last):
    kinegate.errors.FailedPrecondition: ...
    """


class ResourceExhausted(ServerError):
    """A message over its limit, work over its budget, a caller over its quota.

    >>> client.particles("x" * 5_000_000)
    Traceback (most recent call last):
    kinegate.errors.ResourceExhausted: ...
    """


class Unavailable(ServerError):
    """No server, or one that is overloaded or about to leave.

    >>> generation = {"channels": [{"reaction": "pi0 -> gamma gamma"}]}
    >>> with kinegate.connect("127.0.0.1:1") as nobody:
    ...     nobody.generate(generation, 1, patience=0.1).read()
    Traceback (most recent call last):
    kinegate.errors.Unavailable: no word from a server at 127.0.0.1:1 for 3 s
    """


class DeadlineExceeded(ServerError):
    """The answer did not come in time; maybe no server is there at all.

    >>> with kinegate.connect("127.0.0.1:1", timeout=0.1) as nobody:
    ...     nobody.particle("p")
    Traceback (most recent call last):
    kinegate.errors.DeadlineExceeded: no answer from a server at 127.0.0.1:1 ...
    """


class Cancelled(ServerError):
    """The call was given up.

    >>> generation = {"channels": [{"reaction": "pi0 -> gamma gamma"}]}
    >>> with server.connect() as leaving:
    ...     blocks = iter(leaving.generate(generation, 1_000_000))
    ...     _ = next(blocks)
    >>> next(blocks)  # the client was closed before the end
    Traceback (most recent call last):
    kinegate.errors.Cancelled: ...
    """


class PermissionDenied(ServerError):
    """The caller's identity may not call the method.

    >>> error = kinegate.PermissionDenied(
    ...     "spiffe://hall/shift may not call Judge", "PERMISSION_DENIED", "CALLER_NOT_ALLOWED")
    >>> error.reason, error.retryable
    ('CALLER_NOT_ALLOWED', False)
    """


class Unauthenticated(ServerError):
    """The server knows its callers by certificate, and the caller's names nobody.

    >>> error = kinegate.Unauthenticated("no identity", "UNAUTHENTICATED", "CALLER_UNKNOWN")
    >>> error.reason, error.retryable
    ('CALLER_UNKNOWN', False)
    """


class Unimplemented(ServerError):
    """The server does not know the method; it may be older than this client.

    >>> error = kinegate.Unimplemented("no such method", "UNIMPLEMENTED", "METHOD_UNKNOWN")
    >>> error.reason, error.retryable
    ('METHOD_UNKNOWN', False)
    """


class Internal(ServerError):
    """A fault of the server; the message carries the reference number of its log.

    >>> error = kinegate.Internal("fault 17cd3e46-2", "INTERNAL", "INTERNAL_FAULT")
    >>> error.reason, error.retryable
    ('INTERNAL_FAULT', False)
    """


class BlockRejected(InvalidArgument):
    """A block of events is structurally unsound; the stream goes on after it.

    >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv").cut(0, 10)
    >>> sample.offsets.flags.writeable = True
    >>> sample.offsets[5] = 1  # an event would have fewer than no objects
    >>> next(client.judge(sample, "testdata/selections/dimuon.yaml"))
    Traceback (most recent call last):
    kinegate.errors.BlockRejected: block 0 was rejected: ...
    """


class SelectionFaulty(InvalidArgument):
    """A selection has faults; `violations` holds all of them.

    >>> client.selection("testdata/selections/faulty.yaml")
    Traceback (most recent call last):
    kinegate.errors.SelectionFaulty: the selection has 3 faults: ...
    """


_KINDS: Final[Mapping[grpc.StatusCode, type[ServerError]]] = {
    grpc.StatusCode.INVALID_ARGUMENT: InvalidArgument,
    grpc.StatusCode.NOT_FOUND: NotFound,
    grpc.StatusCode.FAILED_PRECONDITION: FailedPrecondition,
    grpc.StatusCode.RESOURCE_EXHAUSTED: ResourceExhausted,
    grpc.StatusCode.UNAVAILABLE: Unavailable,
    grpc.StatusCode.DEADLINE_EXCEEDED: DeadlineExceeded,
    grpc.StatusCode.CANCELLED: Cancelled,
    grpc.StatusCode.PERMISSION_DENIED: PermissionDenied,
    grpc.StatusCode.UNAUTHENTICATED: Unauthenticated,
    grpc.StatusCode.UNIMPLEMENTED: Unimplemented,
    grpc.StatusCode.INTERNAL: Internal,
}


def from_rpc(error: grpc.RpcError, address: str) -> ServerError:
    """Turn the failure of a call to a server into an exception of this package."""
    call: Any = error  # every RpcError of a call is a Call too
    code: grpc.StatusCode = call.code() or grpc.StatusCode.UNKNOWN
    reason, metadata, violations = _details(call.trailing_metadata() or ())
    message: str = call.details() or code.name
    if not reason and code in (grpc.StatusCode.DEADLINE_EXCEEDED, grpc.StatusCode.UNAVAILABLE):
        message = f"no answer from a server at {address} ({message}); does it run there?"
    return _KINDS.get(code, ServerError)(
        message,
        code=code.name,
        reason=reason,
        metadata=metadata,
        violations=violations,
        retryable=code is grpc.StatusCode.UNAVAILABLE,
    )


def _details(
    trailers: Iterable[tuple[str, str | bytes]],
) -> tuple[str, dict[str, str], tuple[FieldViolation, ...]]:
    """Read reason, metadata and fields from the details that travel in the trailers."""
    for key, value in trailers:
        if key == "grpc-status-details-bin" and isinstance(value, bytes):
            break
    else:
        return "", {}, ()
    reason, metadata = "", {}
    violations: tuple[FieldViolation, ...] = ()
    for detail in status_pb2.Status.FromString(value).details:
        info = error_details_pb2.ErrorInfo()
        request = error_details_pb2.BadRequest()
        if detail.Unpack(info):
            reason, metadata = info.reason, dict(info.metadata)
        elif detail.Unpack(request):
            violations = tuple(
                FieldViolation(v.field, v.description) for v in request.field_violations
            )
    return reason, metadata, violations
