"""A server whose handler hangs: it opens streams and beats, and never answers a block."""

from __future__ import annotations

import asyncio
import contextlib
import time
from concurrent.futures import ThreadPoolExecutor
from typing import TYPE_CHECKING, Any

import grpc
import pytest

import kinegate
from kinegate.v1 import selection_pb2, selection_pb2_grpc
from tests.test_protocol import block, opened

if TYPE_CHECKING:
    from collections.abc import Iterator

FOUND = 3.5  # S6


class Stuck(selection_pb2_grpc.SelectionServiceServicer):
    """Notes how long each stream stayed."""

    def __init__(self, *, beats: bool) -> None:
        self.beats = beats
        self.stays: list[float] = []

    def Judge(self, request_iterator: Any, context: Any) -> Iterator[Any]:  # noqa: N802  # gRPC's
        next(request_iterator)
        yield opened()
        next(request_iterator)
        since = time.monotonic()
        context.add_callback(lambda: self.stays.append(time.monotonic() - since))
        while context.is_active():
            if self.beats:
                yield selection_pb2.JudgeResponse(heartbeat=selection_pb2.Heartbeat())
            time.sleep(0.5)


@contextlib.contextmanager
def served(servicer: Stuck) -> Iterator[str]:
    server = grpc.server(ThreadPoolExecutor(4))
    selection_pb2_grpc.add_SelectionServiceServicer_to_server(servicer, server)
    port = server.add_insecure_port("127.0.0.1:0")
    server.start()
    try:
        yield f"127.0.0.1:{port}"
    finally:
        server.stop(None).wait()


def judge(kind: str, address: str) -> None:
    chosen = kinegate.Selection.named("s")
    if kind == "synchronous":
        with kinegate.connect(address) as client:
            list(client.judge([block()], chosen, patience=1))
        return

    async def wait() -> None:
        async with kinegate.connect_async(address) as client:
            async for _ in client.judge([block()], chosen, patience=1):
                pass

    asyncio.run(wait())


@pytest.mark.parametrize("kind", ["synchronous", "asyncio"])
@pytest.mark.parametrize(
    ("beats", "why"), [(True, "the server is stuck: alive"), (False, "the server was silent")]
)
def test_a_server_that_hangs_is_left(kind: str, why: str, *, beats: bool) -> None:
    servicer = Stuck(beats=beats)  # type: ignore[abstract]  # gRPC refuses what is not there
    with served(servicer) as address:
        with pytest.raises(kinegate.StreamBroken, match=why) as caught:
            judge(kind, address)
        assert "ancelled" not in str(caught.value)
        deadline = time.monotonic() + 2
        while not servicer.stays:
            assert time.monotonic() < deadline
            time.sleep(0.01)
    assert 2.9 < servicer.stays[0] < FOUND
