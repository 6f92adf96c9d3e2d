"""What callers do in an hour: questions, a stream, changes of mind; TestSteadyClients runs it.

Usage: python -m tests.steady GENERAL GATE SECONDS
"""

from __future__ import annotations

import asyncio
import sys
import threading
import time
from contextlib import suppress
from pathlib import Path
from typing import TYPE_CHECKING

import kinegate
from kinegate.v1 import info_pb2

if TYPE_CHECKING:
    from collections.abc import Iterator

TESTDATA = Path(__file__).parents[3] / "testdata"
# gRPC lets channels with equal settings share a connection; an idle client has its own.
ALONE = {"grpc.use_local_subchannel_pool": 1}
TURN = 0.5
STREAM = 50.0


def blocks(sample: kinegate.Events, end: float) -> Iterator[kinegate.Events]:
    """Give a block each turn, until the end."""
    while time.monotonic() < end:
        yield sample
        time.sleep(TURN)


def judging(client: kinegate.Client, end: float) -> int:
    """Judge a block each turn; every second stream is left in its middle."""
    sample = kinegate.Events.read_csv(TESTDATA / "open" / "dimuon_2011A.csv").cut(0, 200)
    judged = 0
    for number in range(sys.maxsize):
        if time.monotonic() >= end:
            return judged
        leave = time.monotonic() + STREAM
        given = blocks(sample, min(end, leave + STREAM * (number % 2)))
        with client.judge(given, TESTDATA / "selections" / "dimuon.yaml") as stream:
            for _ in stream:
                judged += 1
                if time.monotonic() >= leave:
                    break
    return judged


def asking(client: kinegate.Client, end: float) -> int:
    """Ask, and change one's mind, each turn."""
    asked = 0
    while time.monotonic() < end:
        assert client.particle("p").name == "p"
        call = client.stubs.info.GetInfo.future(info_pb2.GetInfoRequest())
        call.cancel()
        asked += 1
        time.sleep(TURN)
    return asked


async def awaiting(general: str, gate: str, end: float) -> int:
    """Ask, and change one's mind, each turn, from an event loop."""
    asked = 0
    async with (
        kinegate.connect_async(general, gate_address=gate) as client,
        kinegate.connect_async(general, gate_address=gate, options=ALONE) as idle,
    ):
        await idle.particle("p")
        while time.monotonic() < end:
            assert (await client.particle("p")).name == "p"
            task = asyncio.ensure_future(client.particle("n"))
            await asyncio.sleep(0.001)
            task.cancel()
            with suppress(asyncio.CancelledError, kinegate.errors.Cancelled):
                await task
            asked += 1
            await asyncio.sleep(TURN)
    return asked


def main() -> None:
    """Run all at once and print how much was done."""
    general, gate, seconds = sys.argv[1], sys.argv[2], float(sys.argv[3])
    end = time.monotonic() + seconds
    done: dict[str, int] = {}
    with (
        kinegate.connect(general, gate_address=gate) as client,
        kinegate.connect(general, gate_address=gate, options=ALONE) as idle,
    ):
        idle.particle("p")
        threads = [
            threading.Thread(target=lambda: done.update(blocks=judging(client, end))),
            threading.Thread(target=lambda: done.update(calls=asking(client, end))),
        ]
        for thread in threads:
            thread.start()
        done["awaited"] = asyncio.run(awaiting(general, gate, end))
        for thread in threads:
            thread.join()
    print(*(f"{count} {what}" for what, count in sorted(done.items())), sep=", ")  # noqa: T201
    if len(done) < 3:
        sys.exit("not all came to their end")


if __name__ == "__main__":
    main()
