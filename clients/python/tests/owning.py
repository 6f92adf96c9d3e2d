"""A process with a server and a child that outlives it; killed by the test.

``python owning.py METHOD`` starts the child by this method of multiprocessing, prints the process
ids of the server and of the child, and waits.
"""

from __future__ import annotations

import multiprocessing
import os
import sys
import time
import warnings

import kinegate


def live() -> None:
    """Be there."""
    print(os.getpid(), flush=True)  # noqa: T201
    time.sleep(60)


def main(method: str) -> None:
    """Start the server and then the child."""
    server = kinegate.start_server()
    print(server.process.pid, flush=True)  # noqa: T201
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # a fork with threads: this child makes no calls
        multiprocessing.set_start_method(method)
        multiprocessing.Process(target=live).start()
    time.sleep(60)


if __name__ == "__main__":
    main(sys.argv[1])
