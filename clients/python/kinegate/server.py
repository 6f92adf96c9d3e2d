"""A server on this machine for as long as it is needed."""

from __future__ import annotations

import atexit
import collections
import json
import os
import re
import shutil
import subprocess
import threading
import time
import weakref
from typing import TYPE_CHECKING, Final, Self

from kinegate.client import Client, connect
from kinegate.errors import UsageError
from kinegate.transport import ProcessGuard

if TYPE_CHECKING:
    from collections.abc import Sequence
    from os import PathLike
    from types import TracebackType

__all__ = ["LocalServer", "find_program", "start_server"]

_LISTENING: Final = re.compile(r"listening for (\w+) at (\S+)")
_KEPT_LINES: Final = 200
_running: weakref.WeakSet[LocalServer] = weakref.WeakSet()


class LocalServer:
    """A running `kinegate serve` that belongs to this process and ends with it, however it ends.

    A pipe holds the two together: the server has one end as its standard input, this process
    alone the other, and the system closes that with the process, by whatever signal.

    >>> with kinegate.start_server() as local:
    ...     local
    <server at 127.0.0.1:..., judging at 127.0.0.1:...>
    >>> local
    <server that ended with 0>
    """

    def __init__(self, command: Sequence[str], wait: float) -> None:
        self._guard = ProcessGuard("server")
        self.process = subprocess.Popen(  # noqa: S603  # the program that the caller named
            command,
            env=_environment(),
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            stderr=subprocess.STDOUT,
            text=True,
        )
        """The process."""
        _running.add(self)
        self._log: collections.deque[str] = collections.deque(maxlen=_KEPT_LINES)
        self._addresses: dict[str, str] = {}
        self._changed = threading.Condition()
        self._reader = threading.Thread(target=self._read, daemon=True, name="kinegate-log")
        self._reader.start()
        atexit.register(self.stop)
        deadline = time.monotonic() + wait
        with self._changed:
            while not {"general", "gate"} <= self._addresses.keys():
                left = deadline - time.monotonic()
                if self.process.poll() is not None or left <= 0:
                    break
                self._changed.wait(min(left, 0.1))
        if not {"general", "gate"} <= self._addresses.keys():
            self.stop()
            self._reader.join(1)
            tail = "\n".join(list(self._log)[-5:])
            raise UsageError(f"the server did not start: {' '.join(command)}\n{tail}")

    @property
    def address(self) -> str:
        """Address for calls."""
        return self._addresses["general"]

    @property
    def gate_address(self) -> str:
        """Address for judge streams."""
        return self._addresses["gate"]

    @property
    def log(self) -> list[str]:
        """The last lines of the server's log."""
        return list(self._log)

    def connect(self, timeout: float = 10.0) -> Client:
        """Connect to this server."""
        return connect(self.address, gate_address=self.gate_address, timeout=timeout)

    def stop(self) -> None:
        """Stop the server: it drains for a moment, then it is killed.

        A forked child, which inherits this object, leaves the server of its parent alone.
        """
        if self._guard.foreign:
            return
        atexit.unregister(self.stop)
        if self.process.poll() is None:
            self.process.terminate()
            try:
                self.process.wait(5)
            except subprocess.TimeoutExpired:
                self.process.kill()
                self.process.wait()
        self._let_go()
        self._reader.join(1)
        if self.process.stdout is not None and not self._reader.is_alive():
            self.process.stdout.close()

    def __repr__(self) -> str:
        ended = self.process.poll()
        if ended is not None:
            return f"<server that ended with {ended}>"
        return f"<server at {self.address}, judging at {self.gate_address}>"

    def __enter__(self) -> Self:
        return self

    def __exit__(
        self,
        kind: type[BaseException] | None,
        error: BaseException | None,
        trace: TracebackType | None,
    ) -> None:
        self.stop()

    def _let_go(self) -> None:
        """Close this process's end of the pipe."""
        if self.process.stdin is not None:
            self.process.stdin.close()

    def _read(self) -> None:
        """Keep the log flowing, and note where the server listens."""
        if self.process.stdout is None:
            return
        for line in self.process.stdout:
            self._log.append(line.rstrip())
            with self._changed:
                if found := _LISTENING.search(_message(line)):
                    self._addresses[found[1]] = found[2]
                self._changed.notify_all()
        with self._changed:
            self._changed.notify_all()


def _environment() -> dict[str, str]:
    """Return the environment without the settings of other servers.

    A server takes every variable KINEGATE_... for a setting of its own, and refuses to start on one
    that it does not know; those of this process are meant for another server or another purpose.
    """
    return {k: v for k, v in os.environ.items() if not k.startswith("KINEGATE_")}


def _let_go_of_all() -> None:
    """Leave the servers of a parent to it: a forked child must not hold their pipes."""
    for server in list(_running):
        server._let_go()  # noqa: SLF001  # of the same module


if hasattr(os, "register_at_fork"):
    os.register_at_fork(after_in_child=_let_go_of_all)


def start_server(
    program: str | PathLike[str] | None = None,
    *,
    selection_files: Sequence[str | PathLike[str]] = (),
    particle_files: Sequence[str | PathLike[str]] = (),
    arguments: Sequence[str] = (),
    wait: float = 10.0,
) -> LocalServer:
    """Start a server on free loopback ports of this machine.

    Its settings are the arguments alone: environment variables KINEGATE_..., which may be meant
    for another server, are not passed on. `arguments=["--config", "file.yaml"]` names a file.

    Args:
        program: The `kinegate` program. By default that of the environment variable
            KINEGATE, or the one on the path.
        selection_files: Selections that callers may then name.
        particle_files: Particles to add to the table, or to override.
        arguments: Further arguments of `kinegate serve`.
        wait: Time in second to wait for it to listen.

    >>> with kinegate.start_server() as local, local.connect() as client:
    ...     client.particle("p").charge
    1.0
    """
    loopback = "127.0.0.1:0"
    command = [
        *(find_program(program), "serve"),
        *("--general-address", loopback, "--gate-address", loopback),
        *("--health-address", "", "--metrics-address", ""),
        "--until-input-ends",
        *("--drain-notice", "0s", "--drain-time", "2s", "--log-level", "info"),
    ]
    for flag, files in (
        ("--selection-files", selection_files),
        ("--particle-files", particle_files),
    ):
        if files:
            command += [flag, ",".join(os.fspath(f) for f in files)]
    return LocalServer([*command, *arguments], wait)


def find_program(program: str | PathLike[str] | None = None) -> str:
    """Return the path of the `kinegate` program, or say how to get it.

    >>> kinegate.find_program()
    '...kinegate...'
    """
    wanted = os.fspath(program or os.environ.get("KINEGATE") or "kinegate")
    found = shutil.which(wanted)
    if found is None:
        raise UsageError(
            f"no program {wanted!r}; build it with 'go install ./service/cmd/kinegate' in a clone "
            "of the repository, and put it on the path or name it in KINEGATE"
        )
    return found


def _message(line: str) -> str:
    try:
        parsed = json.loads(line)
    except ValueError:
        return line
    return str(parsed.get("message", "")) if isinstance(parsed, dict) else line
