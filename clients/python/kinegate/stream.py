"""The synchronous judge stream."""

from __future__ import annotations

import contextlib
import threading
import time
import weakref
from collections import deque
from typing import TYPE_CHECKING, Self

import grpc

from kinegate import errors
from kinegate.arguments import checked
from kinegate.events import Events
from kinegate.judge import Protocol, Settings, pause
from kinegate.progress import Bar
from kinegate.transport import ProcessGuard
from kinegate.v1 import selection_pb2_grpc

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator
    from types import TracebackType
    from typing import Any

    from kinegate.transport import Target
    from kinegate.v1 import selection_pb2, verdict_pb2
    from kinegate.verdicts import Verdicts

__all__ = ["JudgeStream"]

_TICK = 0.25


class JudgeStream:
    """An iterator of (block, verdict) pairs in the order of the blocks.

    `Client.judge` makes it. Leaving the loop early, or the `with` block, ends the stream.

    >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv")
    >>> selection = "testdata/selections/dimuon.yaml"
    >>> stream = client.judge(sample, selection, events_per_block=1500)
    >>> [int(verdict.gate.sum()) for block, verdict in stream], stream.reconnects
    ([1500, 1500], 0)
    """

    @checked
    def __init__(
        self, target: Target, events: Events | Iterable[Events], settings: Settings
    ) -> None:
        self._guard = ProcessGuard("stream")
        self._pump = _Pump(target, settings, self._guard)
        self._bar = None
        if settings.progress:
            self._bar = Bar(len(events) if isinstance(events, Events) else None)
        # The threads hold the pump and not this object, so that a stream nobody uses ends.
        self._finalizer = weakref.finalize(self, self._pump.close)
        self._pump.start(settings.blocks(events))

    def __repr__(self) -> str:
        return f"<judge stream: {self._pump.protocol}>"

    def __iter__(self) -> Self:
        return self

    def __next__(self) -> tuple[Events, Verdicts]:
        """Return the next block with its verdict.

        Raises:
            BlockRejected: The block is unsound; the next call goes on after it.
            ServerError: The server ended the stream for good.
            StreamBroken: No server answered within `patience`.
        """
        self._guard.check()
        found = self._pump.take()
        if found is None:
            self.close()
            raise StopIteration
        block, verdict = found
        if self._bar:
            self._bar.add(len(block))
        return block, self._pump.protocol.read(block, verdict)

    def __enter__(self) -> Self:
        return self

    def __exit__(
        self,
        kind: type[BaseException] | None,
        error: BaseException | None,
        trace: TracebackType | None,
    ) -> None:
        self.close()

    def close(self) -> None:
        """End the stream at once; verdicts not yet taken are lost."""
        self._finalizer()
        if self._bar:
            self._bar.close()
            self._bar = None

    @property
    def digest(self) -> str:
        """Digest of the selection that judges, in hexadecimal."""
        return self._pump.protocol.digest

    @property
    def late_count(self) -> int:
        """Events so far that were not judged in time."""
        return self._pump.protocol.late_count

    @property
    def reconnects(self) -> int:
        """Connections opened after the first."""
        return self._pump.protocol.reconnects


class _Pump:
    """Three threads around the protocol: one reads events, one frames, one the clock.

    gRPC runs a fourth, in which frames are written. All state is behind one condition.
    """

    def __init__(self, target: Target, settings: Settings, guard: ProcessGuard) -> None:
        self._guard = guard
        self.protocol = Protocol(settings)
        self._target = target
        self._changed = threading.Condition()
        # Apart from the condition, so that the clock does not wake with every frame.
        self._stopped = threading.Event()
        self._taken: deque[tuple[Events, verdict_pb2.VerdictBlock]] = deque()
        self._error: BaseException | None = None
        self._ended = False
        self._closed = False
        self._attempt = 0
        self._call: Any = None

    def start(self, blocks: Iterator[Events]) -> None:
        for run, arguments in ((self._feed, (blocks,)), (self._connect, ()), (self._watch, ())):
            threading.Thread(target=run, args=arguments, daemon=True, name="kinegate-judge").start()

    def close(self) -> None:
        if self._guard.foreign:  # the threads are the parent's, and so may be the lock
            return
        with self._changed:
            self._closed = True
            self._stopped.set()
            call = self._call
            self._changed.notify_all()
        if call is not None:
            call.cancel()

    def take(self) -> tuple[Events, verdict_pb2.VerdictBlock] | None:
        """Wait for the next verdict; None at the end."""
        with self._changed:
            while not self._taken:
                if self._error is not None:
                    raise self._error
                if self._ended or self._closed:
                    return None
                self._changed.wait()
            found = self._taken.popleft()
            self._changed.notify_all()
            return found

    def _end(self, error: BaseException | None = None) -> None:
        with self._changed:
            self._error = self._error or error
            self._ended = True
            self._stopped.set()
            self._changed.notify_all()

    def _feed(self, blocks: Iterator[Events]) -> None:
        """Read events, never further ahead than the window."""
        try:
            for block in blocks:
                with self._changed:
                    while (
                        self.protocol.waiting_count + len(self._taken) >= self.protocol.window
                        and not self._over()
                    ):
                        self._changed.wait()
                    if self._over():
                        return
                    self.protocol.add(block)
                    self._changed.notify_all()
        except BaseException as error:  # noqa: BLE001  # the caller's own, raised where it iterates
            self._end(error)
            return
        with self._changed:
            self.protocol.finish()
            self._changed.notify_all()

    def _over(self) -> bool:
        return self._closed or self._ended

    def _connect(self) -> None:
        """Keep a stream open until all is answered."""
        try:
            self._keep_open()
        except BaseException as error:  # noqa: BLE001  # raised where the caller iterates
            self._end(error)
        else:
            self._end()

    def _keep_open(self) -> None:
        failures = 0
        channel = self._target.channel(self._target.gate_address)
        try:
            while not self._over():
                before = self.protocol.waiting_count
                error = self._run(channel)
                if self._over():
                    return
                self.protocol.fail_if_hopeless(error, self._target.gate_address, time.monotonic())
                if self.protocol.done():
                    return
                # A silent peer may be cut off: a new connection, maybe to another replica.
                if self.protocol.lost:
                    channel.close()
                    channel = self._target.channel(self._target.gate_address)
                moved = error is None or self.protocol.waiting_count < before
                failures = 0 if moved else failures + 1
                with self._changed:
                    self.protocol.reconnects += 1
                    self._changed.wait_for(lambda: self._closed, pause(failures))
        finally:
            channel.close()

    def _run(self, channel: grpc.Channel) -> errors.ServerError | None:
        """Run one stream to its end; returns why it failed."""
        with self._changed:
            self._attempt += 1
            opening = self.protocol.connect(time.monotonic())
        stub = selection_pb2_grpc.SelectionServiceStub(channel)
        call = stub.Judge(self._frames(opening, self._attempt), wait_for_ready=True)
        with self._changed:
            self._call = call
            if self._closed:
                call.cancel()
        try:
            for response in call:
                with self._changed:
                    found = self.protocol.incoming(response, time.monotonic())
                    if found is not None:
                        self._taken.append(found)
                    self._changed.notify_all()
        except grpc.RpcError as error:
            return self.protocol.failure(errors.from_rpc(error, self._target.gate_address))
        finally:
            with self._changed:
                self._attempt += 1
                self._call = None
                self._changed.notify_all()
            call.cancel()
        return None

    def _frames(
        self, opening: selection_pb2.JudgeRequest, attempt: int
    ) -> Iterator[selection_pb2.JudgeRequest]:
        """Yield the frames of one stream; gRPC reads them in a thread of its own."""
        yield opening
        while True:
            with self._changed:
                while True:
                    if self._attempt != attempt or self._over() or self.protocol.half_close():
                        return
                    frame = self.protocol.outgoing(time.monotonic())
                    if frame is not None:
                        break
                    self._changed.wait(max(0.01, self.protocol.until_heartbeat(time.monotonic())))
            yield frame

    def _watch(self) -> None:
        """Give a silent or stuck connection up: a transport does not notice a frozen peer."""
        while not self._stopped.wait(_TICK):
            with self._changed:
                call = self._call
                if call is None or not self.protocol.dead(time.monotonic()):
                    continue
            with contextlib.suppress(Exception):
                call.cancel()
