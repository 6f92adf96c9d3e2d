"""The rules of the judge stream, without any input or output.

:class:`Protocol` is told what happens and says what to send; the synchronous and the
asyncio stream both drive it. It holds every block until its verdict is there, so that a
broken stream goes on where it ended: a new stream opens with the first sequence not yet
answered and the same digest, and the verdict is the acknowledgement.
"""

from __future__ import annotations

from collections import deque
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final, TypedDict

import grpc

from kinegate.errors import ArgumentError, ServerError, StreamBroken, Unavailable, shortened
from kinegate.selection import Hypothesis, Selection, entry_detail, outline
from kinegate.v1 import info_pb2, selection_pb2
from kinegate.verdicts import Verdicts

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

    from kinegate.events import Events
    from kinegate.v1 import event_pb2, verdict_pb2

__all__ = ["JudgeSettings", "Protocol", "Settings"]

HEARTBEAT: Final = 1.0
"""Silence in second after which a side says that it is alive."""
DEAD: Final = 3.0
"""Silence in second after which the other side counts as gone."""
STUCK: Final = 3.0
"""Time in second without a verdict on blocks that a server has, after which it counts as stuck.

It is told from this side's clock: a handler that hangs may still beat, whatever it says then.
"""
AHEAD: Final = 2
"""Blocks that are prepared beyond the credit, so that the stream never waits for them."""
LATE: Final = ("accept", "reject")
_EVENT_CANDIDATES: Final = 64  # most that an event may have
_CANDIDATES_AN_EVENT: Final = 4


class JudgeSettings(TypedDict, total=False):
    """The keyword arguments of a judge stream.

    >>> settings: kinegate.JudgeSettings = {"entries": "none", "events_per_block": 4096}
    >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv")
    >>> len(list(client.judge(sample, "testdata/selections/dimuon.yaml", **settings)))
    1
    """

    entries: str
    """Which entries to return: "none", "accepted" or "all"."""
    events_per_block: int
    """Most events a block, up to 4,096; and it holds at most four times as many beam candidates."""
    latency_budget: float | None
    """Time in second after which a block's events count as late."""
    late: str
    """What late events are: "accept" or "reject". They are marked EXPIRED."""
    follow: bool
    """Let a reloaded selection of the same name take over."""
    first_sequence: int
    """Number of the first block."""
    patience: float
    """Seconds without an answer after which a broken stream is given up."""
    progress: bool
    """Show a bar on standard error."""


@dataclass(frozen=True)
class Settings:
    """What the caller chose; `Client.judge` describes each."""

    selection: Selection
    entries: str = "accepted"
    events_per_block: int = 1000
    latency_budget: float | None = None
    late: str = "accept"
    follow: bool = False
    first_sequence: int = 0
    patience: float = 60.0
    progress: bool = False

    def __post_init__(self) -> None:
        entry_detail(self.entries)
        if self.late not in LATE:
            raise ArgumentError(
                f"{self.late!r} is none of {', '.join(map(repr, LATE))}", "late", self.late
            )
        if not 1 <= self.events_per_block <= 4096:  # noqa: PLR2004  # the contract's limit
            raise ArgumentError(
                f"{self.events_per_block} is not within [1, 4096]",
                "events_per_block",
                self.events_per_block,
            )
        if self.latency_budget is not None and not self.latency_budget > 0:
            raise ArgumentError(
                f"{self.latency_budget} is not above 0", "latency_budget", self.latency_budget
            )
        if self.first_sequence < 0:
            raise ArgumentError(
                f"{self.first_sequence} is below 0", "first_sequence", self.first_sequence
            )

    def blocks(self, events: Events | Iterable[Events]) -> Iterator[Events]:
        """Cut a sample into blocks; blocks of an iterable stay as they are unless too large."""
        from kinegate.events import Events  # noqa: PLC0415  # verdicts and events stay apart

        for part in [events] if isinstance(events, Events) else events:
            if not isinstance(part, Events):
                raise ArgumentError(f"{shortened(part)} is not kinegate.Events", "events", part)
            yield from part.blocks(self.events_per_block, self.candidates_per_block)

    @property
    def candidates_per_block(self) -> int:
        """Most beam candidates a block.

        A server refuses a stream whose largest reply could pass the limit of the transport,
        and every candidate can make an entry: so less than the largest block is promised.
        """
        return max(_EVENT_CANDIDATES, _CANDIDATES_AN_EVENT * self.events_per_block)


@dataclass
class _Waiting:
    """A block without a verdict."""

    events: Events
    message: event_pb2.EventBlock
    size: int
    sent_at: float | None = None
    """When it was sent for the first time."""


class Protocol:
    """The state of one judge stream over all its connections."""

    def __init__(self, settings: Settings) -> None:
        self.settings = settings
        self.digest = settings.selection.digest
        self.reconnects = 0
        """Streams opened after the first."""
        self.late_count = 0
        """Events that were marked EXPIRED."""
        self.draining = False
        """The server said that it will leave."""
        self.lost = ""
        """Why the connection at hand was given up; empty where it was not."""
        # How the selections that judge, or have judged, were understood, by digest: as many as
        # versions were reloaded.
        self._outlines: dict[str, tuple[list[Hypothesis], list[str]]] = {}
        self._waiting: deque[_Waiting] = deque()
        self._next = settings.first_sequence
        self._sent = 0  # of those waiting, on this connection
        self._sent_bytes = 0
        self._credit: selection_pb2.Credit | None = None
        self._finished = False
        self._last_sent = self._last_received = self._progress = 0.0
        # The last verdict, or the first block after a time without any.
        self._moved = 0.0
        # Doubled whenever it passes, in case blocks take longer.
        self._stuck = STUCK

    @property
    def waiting_count(self) -> int:
        """Blocks added and not answered."""
        return len(self._waiting)

    def __str__(self) -> str:
        answered = self._next - self.settings.first_sequence - len(self._waiting)
        again = f", {self.reconnects} streams opened again" if self.reconnects else ""
        late = f", {self.late_count} late events" if self.late_count else ""
        return f"{answered} blocks answered, {len(self._waiting)} waiting{again}{late}"

    @property
    def window(self) -> int:
        """Blocks that may be on their way or taken by nobody yet."""
        return AHEAD + (self._credit.block_count if self._credit else 1)

    def done(self) -> bool:
        """Every block was answered and no more will come."""
        return self._finished and not self._waiting

    def add(self, events: Events) -> None:
        """Take the next block."""
        message = events.to_message(self._next)
        self._next += 1
        self._waiting.append(_Waiting(events, message, message.ByteSize()))

    def finish(self) -> None:
        """Say that no more blocks will come."""
        self._finished = True

    def connect(self, now: float) -> selection_pb2.JudgeRequest:
        """Begin on a new connection; returns its first frame."""
        self._sent = self._sent_bytes = 0
        self._credit = None
        self.draining = False
        self.lost = ""
        self._last_sent = self._last_received = now
        if self._progress == 0:
            self._progress = now
        settings = self.settings
        source = settings.selection.source
        if source.HasField("named") and self.digest and not settings.follow:
            # A stream that goes on must be judged by the very selection that it began with.
            source = selection_pb2.SelectionSource()
            source.named.name = settings.selection.source.named.name
            source.named.selection_digest = self.digest
        opening = selection_pb2.JudgeOpen(
            selection=source,
            first_sequence=self._next - len(self._waiting),
            entries=entry_detail(settings.entries),
            latency_budget_s=settings.latency_budget,
            follow=settings.follow,
            limits=info_pb2.Limits(
                block_event_count=settings.events_per_block,
                block_candidate_count=settings.candidates_per_block,
            ),
        )
        return selection_pb2.JudgeRequest(open=opening)

    def outgoing(self, now: float) -> selection_pb2.JudgeRequest | None:
        """Return the next frame to send, if any: a block with credit, or a heartbeat."""
        if self._credit is None:
            return None
        if self._sent < len(self._waiting) and not self.draining:
            block = self._waiting[self._sent]
            used = self._sent_bytes + block.size
            fits = self._sent < self._credit.block_count and used <= self._credit.byte_count
            # A single block beyond the byte credit is the server's to refuse.
            if fits or self._sent == 0:
                if self._sent == 0:
                    self._moved = now
                if block.sent_at is None:
                    block.sent_at = now
                self._sent += 1
                self._sent_bytes = used
                self._last_sent = now
                return selection_pb2.JudgeRequest(block=block.message)
        if now - self._last_sent >= HEARTBEAT:
            self._last_sent = now
            known = self._next - len(self._waiting) - 1
            oldest = self._waiting[0].sent_at if self._waiting else None
            beat = selection_pb2.Heartbeat(
                received_sequence=known,
                answered_sequence=known,
                oldest_pending_s=0.0 if oldest is None else now - oldest,
            )
            return selection_pb2.JudgeRequest(heartbeat=beat)
        return None

    def half_close(self) -> bool:
        """Nothing more will be sent on this connection."""
        return self._finished and self._credit is not None and self._sent == len(self._waiting)

    def until_heartbeat(self, now: float) -> float:
        """Return the time in second until a heartbeat is due."""
        return max(0.0, self._last_sent + HEARTBEAT - now)

    def incoming(
        self, response: selection_pb2.JudgeResponse, now: float
    ) -> tuple[Events, verdict_pb2.VerdictBlock] | None:
        """Take a frame of the server; returns a block with its verdict, if it is one."""
        self._last_received = now
        kind = response.WhichOneof("frame")
        if kind == "opened":
            self._opened(response.opened)
        elif kind == "taken":
            self._announced(response.taken)
        elif kind == "draining":
            self.draining = True
        elif kind == "verdict":
            self._progress = self._moved = now
            return self._answered(response.verdict)
        if kind != "opened" and self._sent == 0:
            # Nothing is wanted of the server: patience is for answers that do not come.
            self._progress = now
        return None

    def _opened(self, opened: selection_pb2.JudgeOpened) -> None:
        if self._credit is not None:
            raise StreamBroken("the server opened the stream twice")
        self._announced(opened.selection)
        self._credit = opened.credit

    def _announced(self, selection: selection_pb2.SelectionOutline) -> None:
        """Take the selection that judges from now on."""
        digest = selection.selection_digest
        if self.digest and digest != self.digest and not self.settings.follow:
            raise StreamBroken(
                f"the server judges with digest {digest}, not {self.digest}: "
                "its particle table or numerics differ from those that the stream began with"
            )
        self.digest = digest
        hypotheses = list(outline(selection.hypotheses).values())
        self._outlines[digest] = hypotheses, list(selection.groups)

    def _answered(
        self, verdict: verdict_pb2.VerdictBlock
    ) -> tuple[Events, verdict_pb2.VerdictBlock]:
        expected = self._next - len(self._waiting)
        if self._sent == 0 or verdict.sequence != expected:
            raise StreamBroken(f"verdict {verdict.sequence} came where {expected} was due")
        if verdict.selection_digest not in self._outlines:
            raise StreamBroken(
                f"verdict {verdict.sequence} is of a selection that was not announced"
            )
        block = self._waiting.popleft()
        self._sent -= 1
        self._sent_bytes -= block.size
        return block.events, verdict

    def read(self, events: Events, verdict: verdict_pb2.VerdictBlock) -> Verdicts:
        """Read a verdict by the caller's policy for late events, and count these."""
        hypotheses, groups = self._outlines[verdict.selection_digest]
        verdicts = Verdicts.from_message(
            verdict,
            hypotheses,
            groups,
            events.event_ids,
            accept_late=self.settings.late == "accept",
        )
        self.late_count += int(verdicts.late.sum())
        return verdicts

    def dead(self, now: float) -> bool:
        """Tell whether the connection must be given up, and keep why: silent, or stuck."""
        if not self.lost:
            if now - self._last_received > DEAD:
                done = "was silent" if self._credit else "did not open the stream"
                self.lost = f"the server {done} for {DEAD:g} s"
            elif self._sent and now - self._moved > self._stuck:
                self.lost = f"the server is stuck: alive, but no verdict for {self._stuck:g} s"
                self._stuck *= 2
        return self.lost != ""

    def failure(self, error: ServerError) -> ServerError:
        """Return why a connection ended: what this side saw comes before how the call ended."""
        if not self.lost:
            return error
        return Unavailable(self.lost, code="UNAVAILABLE", retryable=True)

    def fail_if_hopeless(self, error: ServerError | None, address: str, now: float) -> None:
        """Raise where another try would not help, or none has helped for too long."""
        if error is not None and is_final(error):
            raise error
        if not self.done() and now - self._progress > self.settings.patience:
            why = error or "the stream ended"
            raise StreamBroken(
                f"no verdict from {address} for {self.settings.patience:g} s: {why}"
            ) from error


# What ends a stream for good: asking again would get the same answer. UNKNOWN, INTERNAL and
# CANCELLED without a reason come from the transport and are worth another try.
_FINAL: Final = (
    grpc.StatusCode.INVALID_ARGUMENT,
    grpc.StatusCode.NOT_FOUND,
    grpc.StatusCode.FAILED_PRECONDITION,
    grpc.StatusCode.RESOURCE_EXHAUSTED,
    grpc.StatusCode.PERMISSION_DENIED,
    grpc.StatusCode.UNAUTHENTICATED,
    grpc.StatusCode.UNIMPLEMENTED,
)


def is_final(error: ServerError) -> bool:
    """Tell whether the failure of a stream would come again on the next."""
    if error.code in {code.name for code in _FINAL}:
        return True
    return error.code == "INTERNAL" and error.reason != ""


def pause(failures: int) -> float:
    """Return the pause in second before the next try after some failures in a row."""
    return float(min(0.1 * 2 ** min(failures, 5), 2.0)) if failures else 0.0
