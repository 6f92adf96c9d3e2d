"""Minutes of restarts and kills; `.ci/python long` runs them."""

from __future__ import annotations

import os
import random
import threading
import time
from typing import TYPE_CHECKING

import pytest

import kinegate
from tests.test_faults import CLIENTS, Case, addresses, replicas

if TYPE_CHECKING:
    from pathlib import Path

pytestmark = [
    pytest.mark.skipif(
        "RESTARTS_FOR_MINUTES" not in os.environ, reason="takes minutes: .ci/python long"
    ),
    pytest.mark.timeout(900),
]


def test_a_hundred_thousand_calls_survive_restarts() -> None:
    """L3: one of three servers after the other restarts all the while, and no call fails."""
    failures: list[BaseException] = []
    calls = [0, 0]
    with replicas(3) as three, kinegate.connect(addresses(three, "general"), timeout=20) as client:
        over = threading.Event()

        def ask(worker: int) -> None:
            while not over.is_set():
                try:
                    assert client.particle("p").name == "p"
                except BaseException as error:  # noqa: BLE001  # counted below
                    failures.append(error)
                calls[worker] += 1

        workers = [threading.Thread(target=ask, args=(i,)) for i in range(len(calls))]
        for worker in workers:
            worker.start()
        before = time.monotonic()
        restarts = 0
        try:
            while restarts < 30 or sum(calls) < 100_000:
                time.sleep(0.15)
                three[restarts % 3].server.stop()
                three[restarts % 3].start()
                restarts += 1
        finally:
            over.set()
            for worker in workers:
                worker.join()
        took = time.monotonic() - before
    print(f"{sum(calls)} calls, {len(failures)} failed; {restarts} restarts in {took:.0f} s")  # noqa: T201
    assert not failures


@pytest.mark.parametrize("kind", CLIENTS)
def test_kills_and_freezes_for_minutes(client: kinegate.Client, testdata: Path, kind: str) -> None:
    """S4, L4: kill -9 or a freeze every two seconds; every block is answered once, in order."""
    case = Case(client, testdata)
    rng = random.Random(3)  # noqa: S311  # which server, not a secret
    kills = freezes = 0
    with replicas(2) as both:
        over = threading.Event()

        def during() -> None:
            nonlocal kills, freezes
            while not over.wait(2):
                victim = both[rng.randrange(2)]
                if rng.random() < 0.7:
                    victim.kill()
                    victim.start()
                    kills += 1
                else:
                    victim.freeze()
                    over.wait(4)
                    victim.thaw()
                    freezes += 1

        timer = threading.Timer(120, over.set)
        timer.start()
        # 120 s at 10 ms a block, and what the trouble costs.
        history = case.run(kind, addresses(both), pause=0.01, during=during)
    print(  # noqa: T201
        f"{len(history.sequences)} blocks, {kills} kills, {freezes} freezes, "
        f"{history.reconnects} streams opened again, longest silence {history.longest_gap:.1f} s"
    )
    assert kills > 10
    assert history.reconnects > 3
