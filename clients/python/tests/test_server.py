"""A local server ends with the process that started it."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

import kinegate


def lives(process: int) -> bool:
    """Return whether a process is there and no zombie."""
    try:
        stat = Path(f"/proc/{process}/stat").read_text()
    except FileNotFoundError:
        return False
    return stat.rpartition(")")[2].split()[0] != "Z"


@pytest.mark.parametrize("method", ["fork", "spawn", "forkserver"])
@pytest.mark.parametrize("how", [signal.SIGTERM, signal.SIGKILL])
def test_server_ends_with_a_killed_process(method: str, how: signal.Signals) -> None:
    """Also where a child of that process lives on, by whatever method it was started."""
    program = [sys.executable, str(Path(__file__).with_name("owning.py")), method]
    environment = {**os.environ, "PYTHONPATH": str(Path(kinegate.__file__).parents[1])}
    child = server = 0
    with subprocess.Popen(program, env=environment, stdout=subprocess.PIPE, text=True) as owner:
        assert owner.stdout is not None
        try:
            server, child = (int(owner.stdout.readline()) for _ in range(2))
            assert lives(server)
            owner.send_signal(how)
            owner.wait()
            deadline = time.monotonic() + 2
            while lives(server):
                assert time.monotonic() < deadline, "the server outlives its process"
                time.sleep(0.01)
            assert lives(child)
        finally:
            owner.kill()
            for process in filter(lives, (server, child)):
                os.kill(process, signal.SIGKILL)


def test_settings_of_another_server_are_not_passed_on(monkeypatch: pytest.MonkeyPatch) -> None:
    for name in ("KINEGATE_TOOLS", "KINEGATE_CONFIG", "KINEGATE_GATE_ADDRESS"):
        monkeypatch.setenv(name, "/no such thing")
    monkeypatch.setenv("LC_OF_THE_CALLER", "kept")
    with kinegate.start_server() as server, server.connect() as client:
        assert client.particle("p").name == "p"
        environment = Path(f"/proc/{server.process.pid}/environ").read_bytes().split(b"\0")
    assert b"LC_OF_THE_CALLER=kept" in environment


def test_a_stopped_server_ends_gracefully() -> None:
    with kinegate.start_server() as server:
        pass
    assert server.process.returncode == 0
    assert "stopped" in server.log[-1]
    server.stop()  # once more is once
