"""The stream of simulated events, synchronous and for asyncio.

The server gives word at least once a second while events are made, so a silence is that of
a server that froze or a connection that was cut: it is given up, and the rest is fetched
through another one.
"""

from __future__ import annotations

import asyncio
import contextlib
import threading
import time
from typing import TYPE_CHECKING, Any, Final

import grpc

from kinegate import errors
from kinegate.arguments import checked
from kinegate.generation import Generated
from kinegate.judge import DEAD
from kinegate.progress import Bar
from kinegate.tables import Table
from kinegate.transport import ProcessGuard

if TYPE_CHECKING:
    from collections.abc import AsyncIterator, Callable, Iterator

    from kinegate.events import Events
    from kinegate.generation import Sample
    from kinegate.v1 import generation_pb2

__all__ = ["AsyncGenerationStream", "GenerationStream"]

_PAUSE: Final = 0.3
_TICK: Final = 0.25


class _Stream:
    """What both streams share."""

    @checked
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
        self._begun = False
        self._guard = ProcessGuard("stream")
        # When the wait for the next frame began and how long it may take; 0 for no wait.
        self._waiting_since = 0.0
        self._allowed = DEAD
        # The first frame also waits for a server to be ready and to make its tables: each
        # silent try is longer than the one before.
        self._silent_tries = 0

    @property
    def header(self) -> generation_pb2.GenerationHeader | None:
        """Digests, versions and channels; None before the first block."""
        return self._sample.header

    @property
    def summary(self) -> generation_pb2.GenerationSummary | None:
        """What became of the draws of the last connection; None before the end."""
        return self._sample.summary

    @property
    def products(self) -> dict[str, list[str]]:
        """References of the products of each channel: the rows of an event's truth."""
        header = self._sample.header
        return {c.name: list(c.products) for c in header.channels} if header else {}

    @property
    def reconnects(self) -> int:
        """Connections opened after the first."""
        return self._sample.reconnects

    def table(self) -> Table:
        """Return the channels, and what became of the draws."""
        header, summary = self.header, self.summary
        if header is None:
            return Table(f"{self._sample.total} events, none fetched yet")
        rows = [[c.name, ", ".join(c.products), "; ".join(c.remarks)] for c in header.channels]
        title = f"{header.event_count} events of seed {header.seed}"
        note = f"digest {header.generation_digest[:16]}..."
        if summary is not None:
            kept = f"{summary.efficiency:.2%} of {summary.attempt_count} draws"
            note = " ".join([f"{kept}; {note}", *summary.remarks])
        return Table(title, ("channel", "rows of the truth", "remarks"), rows, note)

    def __repr__(self) -> str:
        return str(self.table())

    def _repr_html_(self) -> str:
        return self.table()._repr_html_()

    def _begin(self) -> None:
        if self._begun:
            raise errors.UsageError("the blocks of this stream were fetched; generate anew")
        self._begun = True

    def _silent(self) -> bool:
        since = self._waiting_since
        return since > 0 and time.monotonic() - since > self._allowed

    def _wait(self) -> None:
        self._guard.check()
        self._allowed = DEAD * (1 + self._silent_tries)
        self._waiting_since = time.monotonic()

    def _took(self, frame: Any) -> Generated | None:
        self._waiting_since = 0.0
        if not frame.HasField("header"):
            self._silent_tries = 0
        found = self._sample.take(frame)
        if self._bar and frame.HasField("block"):
            self._bar.add(frame.block.event_count)
        return found

    def _failed(self, error: grpc.RpcError, since: float) -> None:
        """Raise unless another try may help."""
        silent = self._silent()
        self._waiting_since = 0.0
        failure = errors.from_rpc(error, self._address)
        if silent:
            self._silent_tries += 1
            failure = errors.Unavailable(
                f"no word from a server at {self._address} for {self._allowed:g} s",
                code="UNAVAILABLE",
                retryable=True,
            )
        if not failure.retryable or time.monotonic() - since > self._patience:
            raise failure from None
        self._sample.reconnects += 1

    def _close_bar(self) -> None:
        if self._bar:
            self._bar.close()
            self._bar = None


class GenerationStream(_Stream):
    """An iterator of generated blocks in the order of the events; `Client.generate` makes it.

    >>> stream = client.generate({"channels": [{"reaction": "omega -> pi0 gamma"}]}, 100)
    >>> [len(block) for block in stream], stream.summary.event_count
    ([100], 100)
    >>> stream.products
    {'omega -> pi0 gamma': ['pi0', 'gamma']}
    """

    def __iter__(self) -> Iterator[Generated]:
        """Yield the blocks; may be called once."""
        self._begin()
        since = time.monotonic()
        over = threading.Event()
        watched: list[Any] = []
        watch = threading.Thread(
            target=self._watch, args=(watched, over), daemon=True, name="kinegate-generate"
        )
        watch.start()
        try:
            while self._sample.summary is None:
                self._wait()
                call = self._call(self._sample.request())
                watched[:] = [call]
                try:
                    for frame in call:
                        if (found := self._took(frame)) is not None:
                            yield found
                        # A header alone is no progress: it comes again with every try. What
                        # the caller does with a block takes nothing from its patience.
                        if not frame.HasField("header"):
                            since = time.monotonic()
                        self._wait()
                except grpc.RpcError as error:
                    self._failed(error, since)
                    time.sleep(_PAUSE)
                finally:
                    watched.clear()
                    call.cancel()
        finally:
            over.set()
            self._close_bar()

    def _watch(self, watched: list[Any], over: threading.Event) -> None:
        while not over.wait(_TICK):
            if self._silent():
                for call in list(watched):
                    with contextlib.suppress(Exception):
                        call.cancel()

    def read(self) -> Generated:
        """Fetch all events and join them."""
        return Generated.concatenate(list(self))

    def measured(self) -> Iterator[Events]:
        """Yield the events of each block as measured, for `Client.judge`."""
        for block in self:
            if block.events is not None:
                yield block.events


class AsyncGenerationStream(_Stream):
    """An asynchronous iterator of generated blocks; `AsyncClient.generate` makes it.

    >>> generation = {"channels": [{"reaction": "omega -> pi0 gamma"}]}
    >>> async def fetch():
    ...     async with kinegate.connect_async(server.address) as client:
    ...         return [len(block) async for block in await client.generate(generation, 9)]
    >>> import asyncio
    >>> asyncio.run(fetch())
    [9]
    """

    def __aiter__(self) -> AsyncIterator[Generated]:
        """Yield the blocks; may be called once."""
        self._begin()
        return self._blocks()

    async def _blocks(self) -> AsyncIterator[Generated]:
        since = time.monotonic()
        try:
            while self._sample.summary is None:
                self._wait()
                call = self._call(self._sample.request())
                watch = asyncio.create_task(self._watch(call))
                try:
                    async for frame in call:
                        if (found := self._took(frame)) is not None:
                            yield found
                        # A header alone is no progress: it comes again with every try. What
                        # the caller does with a block takes nothing from its patience.
                        if not frame.HasField("header"):
                            since = time.monotonic()
                        self._wait()
                except grpc.aio.AioRpcError as error:
                    self._failed(error, since)
                    await asyncio.sleep(_PAUSE)
                except asyncio.CancelledError:
                    # Of the call by the watch, or of this task by its owner.
                    task = asyncio.current_task()
                    if not self._silent() or (task is not None and task.cancelling()):
                        raise
                    self._failed(_Silence(), since)
                    await asyncio.sleep(_PAUSE)
                finally:
                    watch.cancel()
                    call.cancel()
        finally:
            self._close_bar()

    async def _watch(self, call: Any) -> None:
        while not self._silent():  # noqa: ASYNC110  # a clock
            await asyncio.sleep(_TICK)
        call.cancel()

    async def read(self) -> Generated:
        """Fetch all events and join them."""
        return Generated.concatenate([block async for block in self])

    async def measured(self) -> AsyncIterator[Events]:
        """Yield the events of each block as measured, for `AsyncClient.judge`."""
        async for block in self:
            if block.events is not None:
                yield block.events


class _Silence(grpc.RpcError):
    """Stands for the failure of a call that its watch cancelled."""

    def code(self) -> grpc.StatusCode:
        return grpc.StatusCode.CANCELLED

    def details(self) -> str:
        return ""

    def trailing_metadata(self) -> tuple[()]:
        return ()
