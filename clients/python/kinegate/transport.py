"""Channels with sane defaults, and the pitfalls of forks and event loops."""

from __future__ import annotations

import asyncio
import json
import os
import weakref
from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING, Any, Final

import grpc

from kinegate.arguments import checked, text_of
from kinegate.errors import ArgumentError, UsageError

if TYPE_CHECKING:
    from collections.abc import Mapping

__all__ = ["DEFAULT_ADDRESS", "DEFAULT_GATE_ADDRESS", "DEFAULT_TIMEOUT", "Target"]

DEFAULT_ADDRESS: Final = "127.0.0.1:8471"
"""Where a server listens for calls by default."""
DEFAULT_GATE_ADDRESS: Final = "127.0.0.1:8470"
"""Where a server listens for judge streams by default."""
DEFAULT_TIMEOUT: Final = 10.0
"""Deadline of a call in second."""

# Streams are kept out of the retry policy: this package resumes them, and a transport that
# replays the frames of a judge stream would judge events twice.
_UNARY: Final = (
    "ParticleService",
    "ReactionService",
    "DecayService",
    "PhotonService",
    "InfoService",
)
_SERVICE_CONFIG: Final = {
    "loadBalancingConfig": [{"round_robin": {}}],
    "retryThrottling": {"maxTokens": 10, "tokenRatio": 0.1},
    "methodConfig": [
        {
            "name": [
                *({"service": f"kinegate.v1.{name}"} for name in _UNARY),
                *(
                    {"service": "kinegate.v1.GenerationService", "method": name}
                    for name in ("CheckGeneration", "CheckDetector", "MeasureBound")
                ),
                *(
                    {"service": "kinegate.v1.SelectionService", "method": name}
                    for name in ("CheckSelection", "JudgeBlock", "ExplainVerdict")
                ),
            ],
            "waitForReady": True,
            "retryPolicy": {
                "maxAttempts": 5,
                "initialBackoff": "0.1s",
                "maxBackoff": "2s",
                "backoffMultiplier": 2,
                "retryableStatusCodes": ["UNAVAILABLE"],
            },
        },
        {
            "name": [
                {"service": "kinegate.v1.SelectionService", "method": "Judge"},
                {"service": "kinegate.v1.GenerationService", "method": "GenerateEvents"},
            ],
            "waitForReady": True,
        },
    ],
}
_MESSAGE_LIMIT: Final = 4 << 20
_OPTIONS: Final[Mapping[str, Any]] = {
    "grpc.service_config": json.dumps(_SERVICE_CONFIG),
    "grpc.enable_retries": 1,
    "grpc.max_receive_message_length": _MESSAGE_LIMIT,
    "grpc.max_send_message_length": _MESSAGE_LIMIT,
    # The server allows a ping every 10 s, also without calls.
    "grpc.keepalive_time_ms": 20_000,
    "grpc.keepalive_timeout_ms": 10_000,
    "grpc.keepalive_permit_without_calls": 1,
    "grpc.http2.max_pings_without_data": 0,
    # A server that restarts is found again at once.
    "grpc.initial_reconnect_backoff_ms": 100,
    "grpc.min_reconnect_backoff_ms": 1_000,
    "grpc.max_reconnect_backoff_ms": 2_000,
    # Two channels to one address do not share a connection: judging stays apart from calls.
    "grpc.use_local_subchannel_pool": 1,
}


@dataclass(frozen=True)
class Target:
    """Where servers are and how to speak to them; it can be pickled, channels cannot."""

    address: str
    """Address for calls: "host:port", "dns:///name:port" or "unix:/path"."""
    gate_address: str
    """Address for judge streams."""
    timeout: float = DEFAULT_TIMEOUT
    """Deadline of a call in second."""
    tls: bool = False
    """Use TLS. Without, a server offers rpcs on loopback and unix sockets only."""
    ca_file: str | None = None
    """PEM file of the authorities to trust; None for those of the system."""
    certificate_file: str | None = None
    """PEM file of the client's own certificate, for servers that ask for one."""
    key_file: str | None = None
    """PEM file of its key."""
    server_name: str | None = None
    """Name that the server's certificate must carry, if not that of the address."""
    options: Mapping[str, Any] = field(default_factory=dict)
    """Channel options of gRPC that override those of this package."""

    def __post_init__(self) -> None:
        if (self.certificate_file is None) != (self.key_file is None):
            raise ArgumentError("a client certificate needs both certificate_file and key_file")
        files = (self.ca_file, self.certificate_file, self.server_name)
        if not self.tls and any(f is not None for f in files):
            raise ArgumentError("ca_file, certificate_file, key_file and server_name need tls=True")
        if not self.timeout > 0:
            raise ArgumentError(f"{self.timeout!r} is not above 0", "timeout", self.timeout)

    @checked
    def with_timeout(self, seconds: float) -> Target:
        """Return this target with another deadline."""
        return replace(self, timeout=seconds)

    def __str__(self) -> str:
        if self.gate_address == self.address:
            return self.address
        return f"{self.address}, judging at {self.gate_address}"

    def channel(self, address: str) -> grpc.Channel:
        """Open a channel for synchronous calls."""
        if (credentials := self._credentials()) is None:
            return grpc.insecure_channel(address, options=self._options())
        return grpc.secure_channel(address, credentials, options=self._options())

    def aio_channel(self, address: str) -> grpc.aio.Channel:
        """Open a channel for asyncio calls."""
        if (credentials := self._credentials()) is None:
            return grpc.aio.insecure_channel(address, options=self._options())
        return grpc.aio.secure_channel(address, credentials, options=self._options())

    def _options(self) -> list[tuple[str, Any]]:
        options = {**_OPTIONS, **self.options}
        if self.server_name is not None:
            options["grpc.ssl_target_name_override"] = self.server_name
        return list(options.items())

    def _credentials(self) -> grpc.ChannelCredentials | None:
        if not self.tls:
            return None
        return grpc.ssl_channel_credentials(
            root_certificates=_read("ca_file", self.ca_file),
            private_key=_read("key_file", self.key_file),
            certificate_chain=_read("certificate_file", self.certificate_file),
        )


def _read(field: str, path: str | None) -> bytes | None:
    return None if path is None else text_of(field, path).encode()


class ProcessGuard:
    """Refuses calls after the end, and in a forked child, where a channel can hang for ever."""

    def __init__(self, what: str = "client") -> None:
        self._owner = os.getpid()
        self._what = what
        self._closed = False

    def __str__(self) -> str:
        return f"{'closed ' if self._closed else ''}{self._what}"

    @property
    def foreign(self) -> bool:
        """True in any process but the one that made the client."""
        return os.getpid() != self._owner

    def close(self) -> None:
        """Refuse all calls from now on."""
        self._closed = True

    def check(self) -> None:
        """Raise UsageError after the end, and in any process but the one that made the client."""
        if self._closed:
            raise UsageError(f"this {self._what} is closed; connect anew")
        if self.foreign:
            raise UsageError(
                f"this {self._what} was made in process {self._owner} and is used in its forked "
                f"child {os.getpid()}, where gRPC can hang; start workers with "
                'multiprocessing.get_context("spawn"), or connect in the child'
            )


_guards: weakref.WeakSet[LoopGuard] = weakref.WeakSet()


class LoopGuard(ProcessGuard):
    """Refuses a second event loop: gRPC's asyncio serves one running loop a process."""

    def __init__(self) -> None:
        super().__init__()
        try:
            self._loop = asyncio.get_running_loop()
        except RuntimeError:
            raise UsageError(
                "connect_async needs a running event loop: call it inside a coroutine, "
                "or use kinegate.connect for synchronous code"
            ) from None
        if any(guard.holds(other=self._loop) for guard in list(_guards)):
            raise UsageError(
                "another event loop of this process already has an asyncio client, and gRPC "
                "serves one loop a process; use that loop, or kinegate.connect in this thread"
            )
        _guards.add(self)

    def holds(self, *, other: asyncio.AbstractEventLoop) -> bool:
        """Tell whether the client is in use by a running event loop that is not this one."""
        return not self._closed and self._loop is not other and self._loop.is_running()

    def check(self) -> None:
        """Raise UsageError after the end, and in another process or loop than the client's."""
        super().check()
        if asyncio.get_running_loop() is not self._loop:
            raise UsageError("this client belongs to another event loop; connect in this one")
