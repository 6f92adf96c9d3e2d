"""The stream of simulated events, synchronous and for asyncio."""

from __future__ import annotations

import asyncio
import time
from typing import TYPE_CHECKING, Any

import grpc

from kinegate import errors
from kinegate.progress import Bar

if TYPE_CHECKING:
    from collections.abc import AsyncIterator, Callable, Iterator

    from kinegate.generation import Generated, Sample
    from kinegate.v1 import generation_pb2

__all__ = ["AsyncGenerationStream", "GenerationStream"]

_PAUSE = 0.3


class _Stream:
    """What both streams share."""

    def __init__(
        self,
        sample: Sample,
        call: Callable[[Any], Any],
        address: str,
        patience: float,
        *,
        progress: bool,
    ) -> None:
        self._sample = sample
        self._call = call
        self._address = address
        self._patience = patience
        self._bar = Bar(sample.total) if progress else None

    @property
    def header(self) -> generation_pb2.GenerationHeader | None:
        """Digests, versions and channels; None before the first block."""
        return self._sample.header

    @property
    def summary(self) -> generation_pb2.GenerationSummary | None:
        """What became of the draws of the last connection; None before the end."""
        return self._sample.summary

    @property
    def reconnects(self) -> int:
        """Connections opened after the first."""
        return self._sample.reconnects

    def _took(self, frame: Any) -> Generated | None:
        found = self._sample.take(frame)
        if self._bar and frame.HasField("block"):
            self._bar.add(frame.block.event_count)
        return found

    def _failed(self, error: grpc.RpcError, since: float) -> None:
        """Raise unless another try may help."""
        failure = errors.from_rpc(error, self._address)
        if not failure.retryable or time.monotonic() - since > self._patience:
            raise failure from None
        self._sample.reconnects += 1

    def _close_bar(self) -> None:
        if self._bar:
            self._bar.close()
            self._bar = None


class GenerationStream(_Stream):
    """An iterator of generated blocks in the order of the events; `Client.generate` makes it."""

    def __iter__(self) -> Iterator[Generated]:
        """Yield the blocks; may be called once."""
        since = time.monotonic()
        while self._sample.summary is None:
            call = self._call(self._sample.request())
            try:
                for frame in call:
                    since = time.monotonic()
                    if (found := self._took(frame)) is not None:
                        yield found
            except grpc.RpcError as error:
                self._failed(error, since)
                time.sleep(_PAUSE)
            finally:
                call.cancel()
        self._close_bar()


class AsyncGenerationStream(_Stream):
    """An asynchronous iterator of generated blocks; `AsyncClient.generate` makes it."""

    def __aiter__(self) -> AsyncIterator[Generated]:
        """Yield the blocks; may be called once."""
        return self._blocks()

    async def _blocks(self) -> AsyncIterator[Generated]:
        since = time.monotonic()
        while self._sample.summary is None:
            call = self._call(self._sample.request())
            try:
                async for frame in call:
                    since = time.monotonic()
                    if (found := self._took(frame)) is not None:
                        yield found
            except grpc.aio.AioRpcError as error:
                self._failed(error, since)
                await asyncio.sleep(_PAUSE)
            finally:
                call.cancel()
        self._close_bar()
