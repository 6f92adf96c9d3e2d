"""A process that forks in the middle of two streams: the child is refused and harms nothing.

``python forking.py TESTDATA`` ends with 0 where that holds. It is a process of its own because
gRPC may hang for ever when one of its threads is at work while the process forks.
"""

from __future__ import annotations

import multiprocessing
import os
import sys
import time
import warnings
from pathlib import Path

import kinegate


def main(testdata: Path) -> None:
    """Fork in the middle of two streams, and go on with them."""
    sample = kinegate.Events.read_csv(testdata / "open" / "dimuon_2011A.csv")
    selection = testdata / "selections" / "dimuon.yaml"
    generation = {"channels": [{"reaction": "pi0 -> gamma gamma"}]}
    here, there = multiprocessing.Pipe(duplex=False)
    with kinegate.start_server() as server, server.connect() as client:
        stream = client.judge(sample, selection, events_per_block=100)
        next(stream)
        blocks = iter(client.generate(generation, 20_000, events_per_block=100))
        next(blocks)
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # that forking with threads is unwise is the point
            child = os.fork()
        if child == 0:
            for take in (lambda: next(stream), lambda: next(blocks)):
                try:
                    take()
                    there.send("answered")
                except kinegate.UsageError as error:
                    there.send(str(error))
            stream.close()
            client.close()
            server.stop()
            os._exit(0)
        for _ in range(2):
            # Without an answer both hang, until the test ends them and tries again.
            assert "this stream was made in process" in here.recv()
        deadline = time.monotonic() + 20
        while os.waitpid(child, os.WNOHANG) == (0, 0):
            assert time.monotonic() < deadline, "the forked child does not end"
            time.sleep(0.05)
        # The parent goes on as before.
        assert sum(len(v) for _, v in stream) == 2900
        assert sum(map(len, blocks)) == 19_900
        assert server.process.poll() is None


if __name__ == "__main__":
    main(Path(sys.argv[1]))
