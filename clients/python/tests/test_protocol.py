"""The rules of the stream by themselves: credit, heartbeats, order, resume."""

from __future__ import annotations

import numpy as np
import pytest

from kinegate import Events, Selection, StreamBroken
from kinegate.judge import DEAD, HEARTBEAT, STUCK, Protocol, Settings
from kinegate.v1 import selection_pb2, verdict_pb2


def block(n: int = 10) -> Events:
    ones = np.ones((n, 2))
    return Events.of(px_gev=ones, py_gev=ones, pz_gev=ones, mass_gev=ones, classes=[2, 3])


def outline(digest: str, *hypotheses: str) -> selection_pb2.SelectionOutline:
    names = [selection_pb2.HypothesisOutline(name=name) for name in hypotheses]
    return selection_pb2.SelectionOutline(selection_digest=digest, hypotheses=names)


def opened(digest: str = "d", blocks: int = 3, size: int = 1 << 20) -> selection_pb2.JudgeResponse:
    credit = selection_pb2.Credit(block_count=blocks, byte_count=size)
    opening = selection_pb2.JudgeOpened(selection=outline(digest), credit=credit)
    return selection_pb2.JudgeResponse(opened=opening)


def verdict(sequence: int, digest: str = "d") -> selection_pb2.JudgeResponse:
    answer = verdict_pb2.VerdictBlock(sequence=sequence, selection_digest=digest)
    return selection_pb2.JudgeResponse(verdict=answer)


def started(blocks: int = 5, first: int = 0) -> Protocol:
    protocol = Protocol(Settings(Selection.named("s"), first_sequence=first))
    for _ in range(blocks):
        protocol.add(block())
    protocol.connect(0.0)
    return protocol


def sent(protocol: Protocol, now: float = 0.1) -> list[int]:
    frames = []
    while (frame := protocol.outgoing(now)) is not None:
        frames.append(frame.block.sequence)
    return frames


def test_nothing_is_sent_before_the_opening_is_answered() -> None:
    protocol = started()
    assert protocol.outgoing(5.0) is None
    protocol.incoming(opened(), 0.1)
    assert sent(protocol) == [0, 1, 2]


def test_a_verdict_returns_the_credit_of_its_block() -> None:
    protocol = started()
    protocol.incoming(opened(), 0.1)
    assert sent(protocol) == [0, 1, 2]
    protocol.incoming(verdict(0), 0.2)
    assert sent(protocol) == [3]
    assert not protocol.done()


def test_credit_of_bytes_holds_too() -> None:
    protocol = started()
    size = block().to_message(1).ByteSize()
    protocol.incoming(opened(blocks=5, size=2 * size + 1), 0.1)
    assert sent(protocol) == [0, 1]


def test_heartbeat_after_silence_only() -> None:
    protocol = started(blocks=1, first=4)
    protocol.incoming(opened(), 0.0)
    assert sent(protocol, 0.0) == [4]
    assert protocol.outgoing(HEARTBEAT * 0.9) is None
    frame = protocol.outgoing(HEARTBEAT)
    assert frame is not None
    assert frame.heartbeat.answered_sequence == 3
    assert frame.heartbeat.oldest_pending_s == HEARTBEAT
    assert protocol.outgoing(HEARTBEAT * 1.5) is None


def test_silence_is_told() -> None:
    protocol = started()
    assert not protocol.dead(DEAD)
    assert protocol.dead(DEAD + 0.1)
    assert "did not open the stream" in protocol.lost
    protocol.connect(10.0)
    protocol.incoming(opened(), 11.0)
    assert not protocol.dead(11.0 + DEAD)
    assert protocol.dead(11.1 + DEAD)
    assert "was silent" in protocol.lost


def test_a_stuck_server_is_told_by_its_verdicts_alone() -> None:
    beat = selection_pb2.JudgeResponse(heartbeat=selection_pb2.Heartbeat())
    protocol = started(blocks=2)
    protocol.incoming(opened(blocks=1), 0.0)
    # Nothing is asked of it yet.
    protocol.incoming(beat, 9.0)
    assert not protocol.dead(10.0)
    assert sent(protocol, 10.0) == [0]
    protocol.incoming(verdict(0), 12.5)
    assert sent(protocol, 12.5) == [1]
    protocol.incoming(beat, 14.0)
    assert not protocol.dead(12.5 + STUCK)
    protocol.incoming(beat, 15.0)
    assert protocol.dead(12.6 + STUCK)
    assert "stuck" in protocol.lost
    assert protocol.dead(12.7 + STUCK)  # once more is once: the time is not doubled again
    # A second server has twice the time: blocks may take that long.
    protocol.connect(20.0)
    protocol.incoming(opened(), 20.0)
    assert sent(protocol, 20.0) == [1]
    protocol.incoming(beat, 20.0 + 2 * STUCK)
    assert not protocol.dead(20.0 + 2 * STUCK)
    assert protocol.dead(20.1 + 2 * STUCK)


def test_resume_begins_with_the_first_unanswered() -> None:
    protocol = started()
    protocol.incoming(opened("the digest"), 0.1)
    sent(protocol)
    protocol.incoming(verdict(0, "the digest"), 0.2)
    opening = protocol.connect(1.0).open
    assert opening.first_sequence == 1
    assert opening.selection.named.selection_digest == "the digest"
    protocol.incoming(opened("the digest"), 1.1)
    assert sent(protocol, 1.1) == [1, 2, 3]


def test_another_digest_is_refused_on_resume() -> None:
    protocol = started()
    protocol.incoming(opened("one"), 0.1)
    protocol.connect(1.0)
    with pytest.raises(StreamBroken, match="digest"):
        protocol.incoming(opened("another"), 1.1)


def test_another_selection_takes_over_where_it_is_followed_only() -> None:
    protocol = started()
    protocol.incoming(opened(), 0.1)
    sent(protocol)
    taken = selection_pb2.JudgeResponse(taken=outline("another"))
    with pytest.raises(StreamBroken, match="digest"):
        protocol.incoming(taken, 0.2)
    with pytest.raises(StreamBroken, match="not announced"):
        protocol.incoming(verdict(0, "another"), 0.2)


@pytest.mark.parametrize("sequence", [1, -1, 7])
def test_gaps_and_repeats_of_the_server_break_the_stream(sequence: int) -> None:
    protocol = started()
    protocol.incoming(opened(), 0.1)
    sent(protocol)
    with pytest.raises(StreamBroken, match="where 0 was due"):
        protocol.incoming(verdict(sequence), 0.2)


def test_verdict_on_what_was_not_sent_breaks_the_stream() -> None:
    protocol = started()
    protocol.incoming(opened(), 0.1)
    with pytest.raises(StreamBroken):
        protocol.incoming(verdict(0), 0.2)


def test_nothing_is_sent_to_a_server_that_leaves() -> None:
    protocol = started()
    protocol.incoming(opened(), 0.1)
    assert protocol.outgoing(0.1) is not None
    protocol.incoming(selection_pb2.JudgeResponse(draining=selection_pb2.Draining()), 0.2)
    assert protocol.outgoing(0.3) is None


def test_patience_is_for_answers_that_do_not_come() -> None:
    beat = selection_pb2.JudgeResponse(heartbeat=selection_pb2.Heartbeat())
    protocol = started(blocks=1)
    protocol.incoming(opened(), 0.1)
    assert sent(protocol) == [0]
    protocol.incoming(verdict(0), 0.2)
    # An hour without events and with a server that is alive uses no patience up.
    protocol.incoming(beat, 3600.0)
    protocol.fail_if_hopeless(None, "here", 3601.0)
    # A server that opens and beats but never answers does.
    protocol.add(block())
    for now in (3610.0, 3640.0, 3660.0):
        protocol.connect(now)
        protocol.incoming(opened(), now)
        assert sent(protocol, now) == [1]
        protocol.incoming(beat, now + 1)
    with pytest.raises(StreamBroken, match="no verdict from here for 60 s"):
        protocol.fail_if_hopeless(None, "here", 3661.5)


def test_end() -> None:
    protocol = started(blocks=1)
    protocol.incoming(opened(), 0.1)
    protocol.finish()
    assert not protocol.half_close()
    assert sent(protocol) == [0]
    assert protocol.half_close()
    assert not protocol.done()
    protocol.incoming(verdict(0), 0.2)
    assert protocol.done()
