"""Errors carry reason, field and values; what would hang is refused."""

from __future__ import annotations

import asyncio
import contextlib
import multiprocessing
import os
import pickle
import signal
import subprocess
import sys
import time
import warnings
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pytest

import kinegate

if TYPE_CHECKING:
    from collections.abc import Callable


def test_unknown_name(client: kinegate.Client) -> None:
    with pytest.raises(kinegate.InvalidArgument, match="Lamda") as caught:
        client.reaction("gamma p -> K+ Lamda", beam="1.2 GeV")
    error = caught.value
    assert error.code == "INVALID_ARGUMENT"
    assert error.reason
    assert error.field == "reaction"
    assert "Lambda" in error.metadata["nearest"]
    assert not error.retryable
    again = pickle.loads(pickle.dumps(error))  # noqa: S301  # made one line before
    assert (again.reason, again.field, str(again)) == (error.reason, error.field, str(error))


def test_broken_law(client: kinegate.Client) -> None:
    with pytest.raises(kinegate.InvalidArgument, match="charge") as caught:
        client.reaction("gamma p -> p pi+")
    assert caught.value.reason == "LAW_BROKEN"


def test_not_found(client: kinegate.Client) -> None:
    with pytest.raises(kinegate.NotFound) as caught:
        client.particle("graviton")
    assert caught.value.reason == "PARTICLE_NOT_FOUND"
    with pytest.raises(kinegate.NotFound):
        list(client.judge([], kinegate.Selection.named("nowhere")))


def test_arguments_are_checked_before_a_call(client: kinegate.Client) -> None:
    with pytest.raises(ValueError, match="give one of them"):
        client.reaction("gamma p -> p eta", beam=1.0, sqrt_s=2.0)
    with pytest.raises(ValueError, match="say the same thing"):
        client.reaction("gamma p -> p eta", beam=1.0, beam_kinetic=1.0)
    with pytest.raises(ValueError, match="need beam"):
        client.reaction("gamma p -> p eta", beam2=1.0)
    with pytest.raises(ValueError, match="at rest has no direction"):
        client.reaction("gamma p -> p eta", beam=1.0, angle="10 deg")
    with pytest.raises(kinegate.ArgumentError, match="unknown argument 'beams'"):
        client.reaction("gamma p -> p eta", beams=1.0)  # type: ignore[call-arg]
    with pytest.raises(ValueError, match="need tls=True"):
        kinegate.connect("127.0.0.1:1", ca_file="ca.pem")
    with pytest.raises(ValueError, match="both"):
        kinegate.connect("127.0.0.1:1", tls=True, key_file="key.pem")


def test_faulty_selection(client: kinegate.Client, testdata: Any) -> None:
    with pytest.raises(kinegate.SelectionFaulty) as caught:
        client.selection(testdata / "selections" / "faulty.yaml")
    assert len(caught.value.violations) == 3
    assert caught.value.field.startswith("2:7")
    assert client.check({"name": "empty"}).faults


def test_nobody_there_ends_in_time() -> None:
    with kinegate.connect("127.0.0.1:9", timeout=0.5) as lonely:
        before = time.monotonic()
        with pytest.raises(kinegate.DeadlineExceeded, match="does it run there"):
            lonely.particle("p")
        assert time.monotonic() - before < 3


def test_stream_gives_up_after_its_patience(client: kinegate.Client, testdata: Any) -> None:
    chosen = client.selection(testdata / "selections" / "dimuon.yaml")
    events = kinegate.Events.read_csv(testdata / "open" / "dimuon_2011A.csv")
    with kinegate.connect("127.0.0.1:9") as lonely:
        before = time.monotonic()
        with pytest.raises(kinegate.StreamBroken, match=r"127\.0\.0\.1:9"):
            list(lonely.judge(events, chosen, patience=2))
        assert time.monotonic() - before < 8


def _spawned(client: kinegate.Client) -> float | None:
    return client.reaction("gamma p -> p eta").threshold


def test_client_travels_to_spawned_processes(client: kinegate.Client) -> None:
    context = multiprocessing.get_context("spawn")
    with context.Pool(2) as pool:
        answers = pool.map(_spawned, [client, client])
    assert answers == [client.reaction("gamma p -> p eta").threshold] * 2


def _forked(client: kinegate.Client, out: Any) -> None:
    try:
        client.particle("p")
        out.send("answered")
    except kinegate.UsageError as error:
        out.send(str(error))
    finally:
        out.close()
        os._exit(0)


def test_forked_child_is_refused(client: kinegate.Client) -> None:
    client.particle("p")
    context = multiprocessing.get_context("fork")
    here, there = context.Pipe(duplex=False)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # that forking with threads is unwise is the point
        child = context.Process(target=_forked, args=(client, there))
        child.start()
    there.close()
    assert here.poll(20), "the forked child hangs"
    assert "spawn" in here.recv()
    child.join(20)
    # The parent goes on as before.
    assert client.particle("p").name == "p"


def test_forked_child_leaves_streams_and_server_alone(testdata: Path) -> None:
    program = [sys.executable, str(Path(__file__).with_name("forking.py")), str(testdata)]
    environment = {**os.environ, "PYTHONPATH": str(Path(kinegate.__file__).parents[1])}
    for _ in range(3):  # gRPC itself may hang when a thread of it is at work at the fork
        with subprocess.Popen(program, env=environment, start_new_session=True) as process:
            try:
                assert process.wait(30) == 0
            except subprocess.TimeoutExpired:
                continue
            else:
                return
            finally:
                with contextlib.suppress(ProcessLookupError):
                    os.killpg(process.pid, signal.SIGKILL)  # with the children it may have left
    pytest.fail("hangs three times out of three")


def test_asyncio_needs_a_loop(server: kinegate.LocalServer) -> None:
    with pytest.raises(kinegate.UsageError, match="running event loop"):
        kinegate.connect_async(server.address)


def test_second_running_loop_is_refused(server: kinegate.LocalServer) -> None:
    async def other() -> None:
        kinegate.connect_async(server.address)

    async def first() -> None:
        async with kinegate.connect_async(server.address) as client:
            assert (await client.particle("p")).name == "p"
            with pytest.raises(kinegate.UsageError, match="another event loop"):
                await asyncio.to_thread(asyncio.run, other())
            assert (await client.particle("K+")).name == "K+"

    asyncio.run(first())
    asyncio.run(first())  # one loop after the other is fine


def test_another_loop_may_follow_a_closed_client(server: kinegate.LocalServer) -> None:
    """Also while the loop of the closed client still runs, as that of a notebook does."""

    async def ask() -> str:
        async with kinegate.connect_async(server.address) as client:
            return (await client.particle("p")).name

    async def first() -> list[str]:
        kept = kinegate.connect_async(server.address)
        names = [(await kept.particle("p")).name]
        await kept.close()
        names += [await asyncio.to_thread(asyncio.run, ask()) for _ in range(20)]
        return [*names, await ask()]

    assert asyncio.run(first()) == ["p"] * 22


def test_closed_client_says_so(client: kinegate.Client, testdata: Path) -> None:
    generation = {"channels": [{"reaction": "pi0 -> gamma gamma"}]}
    events = kinegate.Events.read_csv(testdata / "open" / "dimuon_2011A.csv")
    chosen = client.selection(testdata / "selections" / "dimuon.yaml")
    closed = kinegate.Client(client._target)
    shared = closed.with_timeout(3)
    closed.close()
    closed.close()  # once more is once

    def refuses(one: kinegate.Client) -> None:
        asks: list[Callable[[], object]] = [
            lambda: one.particle("p"),
            lambda: one.judge(events, chosen),
            lambda: one.judge_block(events.cut(0, 1), chosen),
            lambda: one.generate(generation, 1).read(),
            lambda: one.stubs,
        ]
        for ask in asks:
            with pytest.raises(kinegate.UsageError, match="client is closed"):
                ask()

    refuses(closed)
    refuses(shared)


def test_closed_asyncio_client_says_so(client: kinegate.Client, testdata: Path) -> None:
    generation = {"channels": [{"reaction": "pi0 -> gamma gamma"}]}
    events = kinegate.Events.read_csv(testdata / "open" / "dimuon_2011A.csv")
    chosen = client.selection(testdata / "selections" / "dimuon.yaml")

    async def use() -> None:
        closed = kinegate.connect_async(client._target.address)
        begun = closed.judge(events, chosen)
        await closed.close()
        for ask in (
            closed.particle("p"),
            closed.judge_block(events.cut(0, 1), chosen),
            begun.__anext__(),
        ):
            with pytest.raises(kinegate.UsageError, match="client is closed"):
                await ask
        with pytest.raises(kinegate.UsageError, match="client is closed"):
            closed.judge(events, chosen)
        with pytest.raises(kinegate.UsageError, match="client is closed"):
            await (await closed.generate(generation, 1)).read()

    asyncio.run(use())


def test_client_stays_in_its_loop(server: kinegate.LocalServer) -> None:
    kept: list[kinegate.AsyncClient] = []

    async def make() -> None:
        kept.append(kinegate.connect_async(server.address))
        await kept[0].particle("p")

    async def use() -> None:
        with pytest.raises(kinegate.UsageError, match="belongs to another event loop"):
            await kept[0].particle("p")

    asyncio.run(make())
    asyncio.run(use())


def test_no_program(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("KINEGATE", "no-such-program")
    with pytest.raises(kinegate.UsageError, match="go install"):
        kinegate.start_server()


def test_server_that_does_not_start() -> None:
    with pytest.raises(kinegate.UsageError, match="no-such-file"):
        kinegate.start_server(selection_files=["/no-such-file.yaml"])
