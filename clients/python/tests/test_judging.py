"""Judging: measured open data against what the experiment printed, and the columns back."""

from __future__ import annotations

import asyncio
import time
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

import kinegate
from kinegate import Events, Verdicts

if TYPE_CHECKING:
    from collections.abc import AsyncIterator, Iterator
    from pathlib import Path


@pytest.fixture(scope="module")
def dimuons(request: pytest.FixtureRequest) -> Events:
    root = request.config.rootpath.parent.parent
    return Events.read_csv(root / "testdata" / "open" / "dimuon_2011A.csv")


@pytest.fixture
def dimuon(client: kinegate.Client, testdata: Path) -> kinegate.Selection:
    return client.selection(testdata / "selections" / "dimuon.yaml")


def test_measured_dimuon_masses(
    client: kinegate.Client, dimuons: Events, dimuon: kinegate.Selection
) -> None:
    # CMS open data, CC0 (testdata/open/README.md): M as the experiment printed it.
    verdicts = Verdicts.concatenate([v for _, v in client.judge(dimuons, dimuon)])
    mass = verdicts.observable("dimuon", "M")
    assert len(mass.values) == len(dimuons) == 3000
    printed = dimuons.extra["M"][mass.events]
    assert np.abs(mass.values / printed - 1).max() < 1e-4
    assert verdicts.accepted["Z"].sum() == 2316
    assert (verdicts.event_ids == dimuons.event_ids).all()
    assert verdicts.digest == dimuon.digest


@pytest.mark.parametrize("name", ["4mu_2011", "4e_2011", "2e2mu_2011"])
def test_measured_four_lepton_masses(client: kinegate.Client, testdata: Path, name: str) -> None:
    events = Events.read_csv(testdata / "open" / f"{name}.csv")
    selection = client.selection(testdata / "selections" / "four-lepton.yaml")
    verdicts = client.judge_block(events, selection)
    best = verdicts.best_names("four-leptons")
    assert all(best)
    for label in ("M", "mZ1", "mZ2"):
        for hypothesis in set(best):
            found = verdicts.observable(hypothesis, label)
            winners = best[found.events] == hypothesis
            printed = events.extra[label][found.events[winners]]
            assert np.abs(found.values[winners] / printed - 1).max() < 1e-4


def test_both_streams_show_the_same() -> None:
    one, other = (
        {name for name in vars(kind) if not name.startswith("_")}
        for kind in (kinegate.JudgeStream, kinegate.AsyncJudgeStream)
    )
    assert one == other


def test_streams_show_themselves(
    server: kinegate.LocalServer, dimuons: Events, dimuon: kinegate.Selection
) -> None:
    shown = "judge stream: 3 blocks answered, 0 waiting>"
    with server.connect() as client:
        stream = client.judge(dimuons, dimuon)
        assert len(list(stream)) == 3
        assert repr(stream) == f"<{shown}"

    async def judge() -> None:
        address, gate = server.address, server.gate_address
        async with kinegate.connect_async(address, gate_address=gate) as client:
            stream = client.judge(dimuons, dimuon)
            assert (stream.digest, repr(stream)) == ("", "<asyncio judge stream: not begun>")
            assert len([v async for _, v in stream]) == 3
            assert (stream.digest, repr(stream)) == (dimuon.digest, f"<asyncio {shown}")
            assert repr(client) == f"<asyncio client of {address}, judging at {gate}>"
        assert repr(client).startswith("<asyncio closed client of")

    asyncio.run(judge())


def test_block_size_does_not_matter(
    client: kinegate.Client, dimuons: Events, dimuon: kinegate.Selection
) -> None:
    whole = [
        Verdicts.concatenate(
            [v for _, v in client.judge(dimuons, dimuon, events_per_block=n, entries="all")]
        )
        for n in (4096, 1000, 117)
    ]
    for other in whole[1:]:
        assert (other.gate == whole[0].gate).all()
        for name, column in vars(whole[0].entries).items():
            if column is None:
                assert getattr(other.entries, name) is None
                continue
            assert np.array_equal(
                getattr(other.entries, name), column, equal_nan=column.dtype == float
            )


def test_asyncio_judges_the_same(
    server: kinegate.LocalServer,
    client: kinegate.Client,
    dimuons: Events,
    dimuon: kinegate.Selection,
) -> None:
    async def blocks() -> AsyncIterator[Events]:
        for block in dimuons.blocks(500):
            await asyncio.sleep(0)
            yield block

    async def judge(source: Any) -> list[Verdicts]:
        async with kinegate.connect_async(server.address, gate_address=server.gate_address) as aio:
            return [v async for _, v in aio.judge(source(), dimuon)]

    here = Verdicts.concatenate([v for _, v in client.judge(dimuons, dimuon)])
    there = Verdicts.concatenate(asyncio.run(judge(blocks)))
    assert (here.gate == there.gate).all()
    assert (here.observable("dimuon", "M").values == there.observable("dimuon", "M").values).all()
    assert len(asyncio.run(judge(lambda: dimuons))) == 3


def test_frames_of_verdicts(
    client: kinegate.Client, dimuons: Events, dimuon: kinegate.Selection
) -> None:
    verdicts = client.judge_block(dimuons.cut(0, 200), dimuon)
    frame = verdicts.to_pandas()
    assert list(frame["status"].unique()) == ["JUDGED"]
    assert frame["accepted Z"].sum() == verdicts.accepted["Z"].sum()
    entries = verdicts.entries_to_pandas()
    z = entries[entries["hypothesis"] == "Z"]
    assert (z["M"] == verdicts.observable("Z", "M").values).all()
    assert verdicts.entries_to_arrow().num_rows == len(entries)
    assert verdicts.to_arrow().to_pandas().set_index("event_id").equals(frame)
    assert "dimuon" in repr(verdicts)
    assert "<table>" in verdicts._repr_html_()


def test_what_is_not_there_is_named(
    client: kinegate.Client, dimuons: Events, dimuon: kinegate.Selection
) -> None:
    few = dimuons.cut(0, 5)
    with pytest.raises(kinegate.ArgumentError, match="known: dimuon, Z"):
        client.judge_block(few, dimuon).observable("zeta", "M")
    with pytest.raises(kinegate.ArgumentError, match="recorded: M"):
        client.judge_block(few, dimuon).observable("Z", "m")
    with pytest.raises(ValueError, match="no entries"):
        client.judge_block(few, dimuon, entries="none").observable("Z", "M")
    with pytest.raises(ValueError, match="'accepted'"):
        client.judge_block(few, dimuon, entries="some")


def test_bad_event_gets_a_status(
    client: kinegate.Client, dimuons: Events, dimuon: kinegate.Selection
) -> None:
    px = dimuons["px_gev"][:20].copy()
    px[4] = np.nan
    columns = {n: dimuons[n][:20] for n in ("py_gev", "pz_gev", "mass_gev")}
    events = Events.of(
        px_gev=px, classes=dimuons.classes[:20], offsets=dimuons.offsets[:11], **columns
    )
    names = client.judge_block(events, dimuon).status_names
    assert names[2] == "NON_FINITE"
    assert (np.delete(names, 2) == "JUDGED").all()


def test_bad_block_is_rejected_and_the_stream_goes_on(
    client: kinegate.Client, dimuons: Events, dimuon: kinegate.Selection
) -> None:
    good = dimuons.cut(0, 10)
    bad = dimuons.cut(10, 20)
    object.__setattr__(bad, "classes", np.zeros_like(bad.classes))
    stream = client.judge(iter([good, bad, good]), dimuon)
    assert len(next(stream)[0]) == 10
    with pytest.raises(kinegate.BlockRejected) as caught:
        next(stream)
    assert caught.value.reason == "BLOCK_INVALID"
    assert caught.value.field
    assert next(stream)[1].sequence == 2
    with pytest.raises(StopIteration):
        next(stream)


def test_late_policy(client: kinegate.Client, dimuons: Events, dimuon: kinegate.Selection) -> None:
    for late, gate in (("accept", 3000), ("reject", 0)):
        stream = client.judge(dimuons, dimuon, latency_budget=1e-9, late=late)
        verdicts = Verdicts.concatenate([v for _, v in stream])
        # A nanosecond is over before any event is judged.
        assert verdicts.late.all()
        assert verdicts.gate.sum() == gate
        assert stream.late_count == 3000


def test_settings_are_checked(
    client: kinegate.Client, dimuons: Events, dimuon: kinegate.Selection
) -> None:
    for wrong in (
        {"late": "maybe"},
        {"events_per_block": 0},
        {"events_per_block": 5000},
        {"latency_budget": 0.0},
        {"first_sequence": -1},
        {"entries": "some"},
    ):
        with pytest.raises(ValueError, match=next(iter(wrong))):
            client.judge(dimuons, dimuon, **wrong)


def test_named_selection(testdata: Path, dimuons: Events) -> None:
    file = testdata / "selections" / "dimuon.yaml"
    with kinegate.start_server(selection_files=[file]) as server, server.connect() as client:
        digests = client.info().selections["dimuon"]
        for selection in (
            kinegate.Selection.named("dimuon"),
            kinegate.Selection.named("dimuon", digests[0]),
        ):
            verdicts = [v for _, v in client.judge(dimuons, selection)]
            assert verdicts[0].accepted["Z"].dtype == bool
            assert {v.digest for v in verdicts} == set(digests[:1])
            block = client.judge_block(dimuons.cut(0, 100), selection)
            assert list(block.accepted) == list(verdicts[0].accepted)
            assert (block.accepted["Z"] == verdicts[0].accepted["Z"][:100]).all()
            assert len(block.observable("dimuon", "M").values) == block.accepted["dimuon"].sum()
        with pytest.raises(kinegate.FailedPrecondition) as caught:
            list(client.judge(dimuons, kinegate.Selection.named("dimuon", "00" * 32)))
        assert caught.value.reason == "DIGEST_GONE"


def test_source_is_read_a_bounded_way_ahead(
    client: kinegate.Client, dimuons: Events, dimuon: kinegate.Selection
) -> None:
    read = 0

    def endless() -> Iterator[Events]:
        nonlocal read
        while True:
            read += 1
            yield dimuons.cut(0, 10)

    with client.judge(endless(), dimuon) as stream:
        for taken, _ in zip(range(30), stream, strict=False):
            assert read - taken <= 8 + 2 + 2
        time.sleep(0.3)
        assert read - 30 <= 8 + 2 + 2


def test_slow_reader_keeps_its_stream(
    client: kinegate.Client, dimuons: Events, dimuon: kinegate.Selection
) -> None:
    stream = client.judge(dimuons, dimuon, events_per_block=100)
    next(stream)
    time.sleep(3.5)  # longer than the silence after which a side counts as gone
    assert sum(len(v) for _, v in stream) == 2900
    assert stream.reconnects == 0


def test_fault_of_the_source_reaches_the_loop(
    client: kinegate.Client, dimuons: Events, dimuon: kinegate.Selection
) -> None:
    def breaks() -> Iterator[Events]:
        yield dimuons.cut(0, 10)
        raise RuntimeError("the detector is off")

    with pytest.raises(RuntimeError, match="detector is off"):
        for _ in client.judge(breaks(), dimuon):
            pass


def test_progress_is_shown(
    client: kinegate.Client,
    dimuons: Events,
    dimuon: kinegate.Selection,
    capsys: pytest.CaptureFixture[str],
) -> None:
    for _ in client.judge(dimuons, dimuon, progress=True):
        pass
    assert "3000 of 3000 events" in capsys.readouterr().err
