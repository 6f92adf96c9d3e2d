"""The asyncio client: the same questions, awaited."""

from __future__ import annotations

import asyncio
import copy
import functools
import time
import weakref
from collections import deque
from collections.abc import AsyncIterable
from pathlib import Path
from typing import TYPE_CHECKING, Any, Concatenate, ParamSpec, Self, TypeVar, Unpack

import grpc

from kinegate import errors, questions
from kinegate.arguments import checked
from kinegate.client import described, target
from kinegate.events import Events
from kinegate.generation import GenerationLike, sample
from kinegate.generationstream import AsyncGenerationStream
from kinegate.judge import JudgeSettings, Protocol, Settings, pause
from kinegate.progress import Bar
from kinegate.pulls import accepted_rows, of_best
from kinegate.selection import Selection, SelectionLike
from kinegate.stubs import Stubs
from kinegate.transport import LoopGuard, Target
from kinegate.v1 import selection_pb2_grpc

if TYPE_CHECKING:
    from collections.abc import AsyncIterator, Awaitable, Callable, Coroutine, Iterable, Mapping
    from types import TracebackType

    from kinegate.bound import Bound
    from kinegate.explanation import Explanation
    from kinegate.pulls import Pulls
    from kinegate.question import Question
    from kinegate.v1 import generation_pb2, verdict_pb2
    from kinegate.verdicts import Verdicts

__all__ = ["AsyncClient", "AsyncJudgeStream", "connect_async"]

P = ParamSpec("P")
A = TypeVar("A")
_TICK = 0.25


def _asks(
    question: Callable[P, Question[A]],
) -> Callable[Concatenate[AsyncClient, P], Coroutine[Any, Any, A]]:
    """Make a method that asks a question from the function that makes the question."""

    @functools.wraps(question)
    async def method(self: AsyncClient, /, *args: P.args, **kwargs: P.kwargs) -> A:
        return await self.ask(question(*args, **kwargs))

    method.__doc__ = (question.__doc__ or "").partition(">>>")[0] + "Await it."
    return described(method, question)


class AsyncClient:
    """A connection to a server for one event loop; :func:`connect_async` makes it.

    Its methods are those of :class:`kinegate.Client`, awaited.

    >>> async def masses():
    ...     async with kinegate.connect_async(server.address) as client:
    ...         return [p.mass for p in await asyncio.gather(
    ...             client.particle("eta"), client.particle("omega"))]
    >>> import asyncio
    >>> asyncio.run(masses())
    [0.547..., 0.782...]
    """

    def __init__(self, target: Target) -> None:
        self._guard = LoopGuard()
        self._target = target
        self._channel = target.aio_channel(target.address)
        self._stubs = Stubs(self._channel)
        self._streams: weakref.WeakSet[AsyncJudgeStream] = weakref.WeakSet()

    def __repr__(self) -> str:
        return f"<asyncio {self._guard} of {self._target}>"

    async def __aenter__(self) -> Self:
        return self

    async def __aexit__(
        self,
        kind: type[BaseException] | None,
        error: BaseException | None,
        trace: TracebackType | None,
    ) -> None:
        await self.close()

    async def close(self) -> None:
        """Close the connection and with it every stream."""
        for stream in list(self._streams):
            await stream.close()
        self._guard.close()
        await self._channel.close()

    @property
    def stubs(self) -> Stubs:
        """The bare generated stubs of all services, on the client's own channel."""
        self._guard.check()
        return self._stubs

    def with_timeout(self, seconds: float) -> AsyncClient:
        """Return this client with another deadline for its calls; the connection is shared."""
        other = copy.copy(self)
        other._target = self._target.with_timeout(seconds)  # noqa: SLF001  # its own copy
        return other

    async def ask(self, question: Question[A]) -> A:
        """Ask a question and return its answer; the other methods are made of this."""
        rpc = self.stubs.rpc(question.service, question.method)
        request, replies = question.request, []
        while True:
            try:
                reply = await rpc(request, timeout=self._target.timeout, wait_for_ready=True)
            except grpc.aio.AioRpcError as error:
                raise errors.from_rpc(error, self._target.address) from None
            replies.append(reply)
            token: str = getattr(reply, "next_page_token", "")
            if not token or (question.enough and question.enough(replies)):
                return question.read(replies)
            request = copy.deepcopy(request)
            request.page_token = token

    particle = _asks(questions.particle)
    particles = _asks(questions.particles)
    reaction = _asks(questions.reaction)
    open_channels = _asks(questions.open_channels)
    two_body = _asks(questions.two_body)
    motion = _asks(questions.motion)
    decay = _asks(questions.decay)
    dalitz = _asks(questions.dalitz)
    photon_field = _asks(questions.photon_field)
    pair_creation = _asks(questions.pair_creation)
    field_pair = _asks(questions.field_pair)
    annihilation = _asks(questions.annihilation)
    compton = _asks(questions.compton)
    backscatter = _asks(questions.backscatter)
    info = _asks(questions.info)
    check = _asks(questions.check)
    check_generation = _asks(questions.check_generation)
    check_detector = _asks(questions.check_detector)

    async def selection(self, source: SelectionLike) -> Selection:
        """Check a selection and return it ready to judge with."""
        if isinstance(source, Selection):
            return source
        return (await self.check(source)).selection()

    async def generation(self, source: GenerationLike) -> generation_pb2.Generation:
        """Check a generation and return it as understood."""
        return (await self.check_generation(source)).generation()

    async def bound(self, source: GenerationLike, channel: int = 0, draws: int = 100_000) -> Bound:
        """Measure the weights of a channel, to choose its unweighting bound."""
        return await self.ask(questions.bound(await self.generation(source), channel, draws))

    async def judge_block(
        self, events: Events, selection: SelectionLike, *, entries: str = "accepted"
    ) -> Verdicts:
        """Judge one block of events, at most 4,096, without opening a stream."""
        chosen = await self.selection(selection)
        return await self.ask(chosen.judging(events, entries))

    async def explain(
        self, events: Events, selection: SelectionLike, *, event: int = 0, most: int = 0
    ) -> Explanation:
        """Lay the verdict on one event open; arguments as for :meth:`kinegate.Client.explain`."""
        chosen = await self.selection(selection)
        return await self.ask(chosen.explaining(events, event, most))

    async def pulls(
        self, events: Events, selection: SelectionLike, hypothesis: str, *, most: int = 1000
    ) -> Pulls:
        """Collect the pulls of the fits of accepted events; as :meth:`kinegate.Client.pulls`."""
        chosen = await self.selection(selection)
        blocks = [v.accepted async for _, v in self.judge(events, chosen, entries="none")]
        rows = accepted_rows(blocks, hypothesis, most)
        explained = [await self.explain(events, chosen, event=int(row)) for row in rows]
        return of_best(hypothesis, rows, explained)

    async def generate(
        self,
        source: GenerationLike,
        count: int,
        *,
        first: int = 0,
        truth: bool = True,
        events_per_block: int = 0,
        patience: float = 60.0,
        progress: bool = False,
    ) -> AsyncGenerationStream:
        """Generate simulated events: `async for part in await client.generate(...)`.

        Arguments as for :meth:`kinegate.Client.generate`.
        """
        chosen = await self.generation(source) if isinstance(source, (str, Path)) else source
        wanted = sample(chosen, count, first, truth=truth, events_per_block=events_per_block)

        def call(request: Any) -> Any:
            return self.stubs.generation.GenerateEvents(request, wait_for_ready=True)

        address = self._target.address
        return AsyncGenerationStream(wanted, call, address, patience, progress=progress)

    def judge(
        self,
        events: Events | Iterable[Events] | AsyncIterable[Events],
        selection: SelectionLike,
        **settings: Unpack[JudgeSettings],
    ) -> AsyncJudgeStream:
        """Judge events through a stream: `async for block, verdict in client.judge(...)`.

        Args:
            events: A sample, or an iterable or asynchronous iterable of blocks.
            selection: Anything that :meth:`selection` takes.
            settings: Any of :class:`kinegate.JudgeSettings`.
        """
        self._guard.check()
        stream = AsyncJudgeStream(self, events, selection, settings)
        self._streams.add(stream)
        return stream


class AsyncJudgeStream:
    """An asynchronous iterator of (block, verdict) pairs in the order of the blocks.

    >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv")
    >>> async def judge():
    ...     async with kinegate.connect_async(
    ...         server.address, gate_address=server.gate_address) as client:
    ...         stream = client.judge(sample, "testdata/selections/dimuon.yaml")
    ...         return [int(verdict.gate.sum()) async for block, verdict in stream]
    >>> import asyncio
    >>> asyncio.run(judge())
    [1000, 1000, 1000]
    """

    @checked
    def __init__(
        self,
        client: AsyncClient,
        events: Events | Iterable[Events] | AsyncIterable[Events],
        selection: SelectionLike,
        settings: JudgeSettings,
    ) -> None:
        self._client = client
        self._events = events
        self._selection = selection
        self._settings = settings
        self._pump: _Pump | None = None
        self._bar: Bar | None = None

    def __repr__(self) -> str:
        return f"<asyncio judge stream: {self._pump.protocol if self._pump else 'not begun'}>"

    def __aiter__(self) -> Self:
        return self

    async def __anext__(self) -> tuple[Events, Verdicts]:
        """Return the next block with its verdict; errors are those of `JudgeStream`."""
        self._client._guard.check()  # noqa: SLF001  # of one house
        if self._pump is None:
            chosen = await self._client.selection(self._selection)
            settings = checked(Settings)(chosen, **self._settings)
            self._pump = _Pump(self._client._target, settings)  # noqa: SLF001  # of one house
            self._pump.start(self._events)
            if settings.progress:
                self._bar = Bar(len(self._events) if isinstance(self._events, Events) else None)
        found = await self._pump.take()
        if found is None:
            await self.close()
            raise StopAsyncIteration
        block, verdict = found
        if self._bar:
            self._bar.add(len(block))
        return block, self._pump.protocol.read(block, verdict)

    async def __aenter__(self) -> Self:
        return self

    async def __aexit__(
        self,
        kind: type[BaseException] | None,
        error: BaseException | None,
        trace: TracebackType | None,
    ) -> None:
        await self.close()

    async def close(self) -> None:
        """End the stream at once; verdicts not yet taken are lost."""
        if self._pump is not None:
            await self._pump.close()
        if self._bar:
            self._bar.close()
            self._bar = None

    @property
    def digest(self) -> str:
        """Digest of the selection that judges, in hexadecimal; empty before the first block."""
        return self._pump.protocol.digest if self._pump else ""

    @property
    def reconnects(self) -> int:
        """Connections opened after the first."""
        return self._pump.protocol.reconnects if self._pump else 0

    @property
    def late_count(self) -> int:
        """Events so far that were not judged in time."""
        return self._pump.protocol.late_count if self._pump else 0


class _Pump:
    """Two tasks around the protocol, one that reads events and one that keeps a stream."""

    def __init__(self, target: Target, settings: Settings) -> None:
        self.protocol = Protocol(settings)
        self._target = target
        self._changed = asyncio.Condition()
        self._taken: deque[tuple[Events, verdict_pb2.VerdictBlock]] = deque()
        self._error: BaseException | None = None
        self._ended = False
        self._tasks: list[asyncio.Task[None]] = []

    def start(self, events: Events | Iterable[Events] | AsyncIterable[Events]) -> None:
        self._tasks = [
            asyncio.create_task(self._guarded(self._feed(events), last=False)),
            asyncio.create_task(self._guarded(self._connect(), last=True)),
        ]

    async def close(self) -> None:
        for task in self._tasks:
            task.cancel()
        await asyncio.gather(*self._tasks, return_exceptions=True)

    async def take(self) -> tuple[Events, verdict_pb2.VerdictBlock] | None:
        """Wait for the next verdict; None at the end."""
        async with self._changed:
            await self._changed.wait_for(lambda: self._taken or self._ended)
            if not self._taken:
                if self._error is not None:
                    raise self._error
                return None
            self._changed.notify_all()
            return self._taken.popleft()

    async def _guarded(self, run: Awaitable[None], *, last: bool) -> None:
        """Keep the first error for the caller."""
        try:
            await run
        except asyncio.CancelledError:
            raise
        except BaseException as error:  # noqa: BLE001  # raised where the caller iterates
            self._error = self._error or error
            last = True
        if last:
            async with self._changed:
                self._ended = True
                self._changed.notify_all()

    async def _blocks(
        self, events: Events | Iterable[Events] | AsyncIterable[Events]
    ) -> AsyncIterator[Events]:
        if isinstance(events, AsyncIterable):
            async for part in events:
                for block in self.protocol.settings.blocks(part):
                    yield block
        else:
            for block in self.protocol.settings.blocks(events):
                yield block

    async def _feed(self, events: Events | Iterable[Events] | AsyncIterable[Events]) -> None:
        """Read events, never further ahead than the window."""
        async for block in self._blocks(events):
            async with self._changed:
                await self._changed.wait_for(
                    lambda: self.protocol.waiting_count + len(self._taken) < self.protocol.window
                )
                self.protocol.add(block)
                self._changed.notify_all()
        async with self._changed:
            self.protocol.finish()
            self._changed.notify_all()

    async def _connect(self) -> None:
        """Keep a stream open until all is answered."""
        failures = 0
        while True:
            before = self.protocol.waiting_count
            # Every stream has a connection of its own: a silent peer may be cut off.
            async with self._target.aio_channel(self._target.gate_address) as channel:
                error = await self._run(channel)
            self.protocol.fail_if_hopeless(error, self._target.gate_address, time.monotonic())
            if self.protocol.done():
                return
            moved = error is None or self.protocol.waiting_count < before
            failures = 0 if moved else failures + 1
            self.protocol.reconnects += 1
            await asyncio.sleep(pause(failures))

    async def _run(self, channel: grpc.aio.Channel) -> errors.ServerError | None:
        """Run one stream to its end; returns why it failed."""
        opening = self.protocol.connect(time.monotonic())
        plain: Any = channel
        call: Any = selection_pb2_grpc.SelectionServiceStub(plain).Judge(wait_for_ready=True)
        tasks = [
            asyncio.create_task(self._write(call, opening)),
            asyncio.create_task(self._watch(call)),
        ]
        try:
            async for response in call:
                async with self._changed:
                    found = self.protocol.incoming(response, time.monotonic())
                    if found is not None:
                        self._taken.append(found)
                    self._changed.notify_all()
        except grpc.aio.AioRpcError as error:
            return self.protocol.failure(errors.from_rpc(error, self._target.gate_address))
        except asyncio.CancelledError:
            # Of the call by the watch, or of this task by its owner.
            task = asyncio.current_task()
            if task is not None and task.cancelling():
                raise
            return self.protocol.failure(errors.Cancelled("the call was cancelled"))
        finally:
            for task in tasks:
                task.cancel()
            call.cancel()
            await asyncio.gather(*tasks, return_exceptions=True)
        return None

    async def _write(self, call: Any, opening: Any) -> None:
        await call.write(opening)
        while True:
            async with self._changed:
                now = time.monotonic()
                if self.protocol.half_close():
                    break
                frame = self.protocol.outgoing(now)
                if frame is None:
                    waiting = max(0.01, self.protocol.until_heartbeat(now))
                    try:
                        async with asyncio.timeout(waiting):
                            await self._changed.wait()
                    except TimeoutError:
                        pass
                    continue
            await call.write(frame)
        await call.done_writing()

    async def _watch(self, call: Any) -> None:
        """Give a silent or stuck connection up: a transport does not notice a frozen peer."""
        while not self.protocol.dead(time.monotonic()):  # noqa: ASYNC110  # a clock
            await asyncio.sleep(_TICK)
        call.cancel()


def connect_async(  # noqa: PLR0913  # each is a setting of its own
    address: str | None = None,
    *,
    gate_address: str | None = None,
    timeout: float = 10.0,  # a setting of every call, not of this function
    tls: bool = False,
    ca_file: str | None = None,
    certificate_file: str | None = None,
    key_file: str | None = None,
    server_name: str | None = None,
    options: Mapping[str, Any] | None = None,
) -> AsyncClient:
    """Prepare a connection for the running event loop; arguments as for `kinegate.connect`.

    gRPC serves one running event loop a process: a second one is refused.

    >>> async def threshold():
    ...     async with kinegate.connect_async(server.address) as client:
    ...         return (await client.reaction("gamma p -> p eta")).threshold
    >>> import asyncio
    >>> asyncio.run(threshold())
    0.7078...
    """
    return AsyncClient(
        target(
            address,
            gate_address=gate_address,
            timeout=timeout,
            tls=tls,
            ca_file=ca_file,
            certificate_file=certificate_file,
            key_file=key_file,
            server_name=server_name,
            options=options or {},
        )
    )
