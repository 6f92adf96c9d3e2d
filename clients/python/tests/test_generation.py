"""Simulated events: conserved momentum, the same bits in any slice, resumed, judged."""

from __future__ import annotations

import asyncio
import threading
import time
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

import kinegate
from tests.test_faults import addresses, replicas

if TYPE_CHECKING:
    from pathlib import Path

# Invented: tagged photons on hydrogen, and a calorimeter that sees photons.
CALORIMETER = {
    "theta": {"min_rad": 0.1, "max_rad": 2.6},
    "stochastic": 0.028,
    "constant": 0.012,
    "theta_sigma_rad": 0.01,
    "phi_sigma_rad": 0.01,
    "threshold_gev": 0.03,
}
GENERATION: dict[str, Any] = {
    "name": "eta",
    "seed": 7,
    "initial_state": {"beam_on_target": {"beam": {"even": {"min_gev": 1.2, "max_gev": 2.4}}}},
    "channels": [{"reaction": "gamma p -> p eta, eta -> gamma gamma"}],
    "detector": {"calorimeter": CALORIMETER},
}
SELECTION = {
    "name": "photons",
    "hypotheses": [
        {
            "name": "eta",
            "reaction": "eta -> gamma gamma",
            "record": [{"name": "M", "invariant_mass": {"products": ["gamma[0]", "gamma[1]"]}}],
        }
    ],
}


def test_truth_conserves_momentum(client: kinegate.Client) -> None:
    count = 0
    for part in client.generate(GENERATION, 2000):
        truth = part.truth
        assert truth is not None
        assert truth.event_ids.tolist() == list(
            range(part.first_event, part.first_event + len(truth.event_ids))
        )
        count += len(truth.event_ids)
        first = truth.particle_offsets[:-1]
        # Rows: p, eta, gamma, gamma.
        assert truth.particle_numbers[first].tolist() == [2212] * len(first)
        for name, total in truth.initial_state.items():
            p, eta, one, two = (truth.momentum[name][first + k] for k in range(4))
            assert np.allclose(p + eta, total, rtol=1e-12, atol=1e-12)
            assert np.allclose(one + two, eta, rtol=1e-12, atol=1e-12)
    assert count == 2000


def test_any_slice_is_the_same_sample(client: kinegate.Client) -> None:
    def energies(**slices: Any) -> Any:
        parts = client.generate(GENERATION, **slices)
        return np.concatenate([p.truth.momentum["energy_gev"] for p in parts if p.truth])

    whole = energies(count=300)
    assert (energies(count=100, first=150) == whole[600:1000]).all()
    assert (energies(count=300, events_per_block=7) == whole).all()


def test_generated_events_are_judged(client: kinegate.Client) -> None:
    stream = client.generate(GENERATION, 5000, progress=True)
    measured = (p.events for p in stream if p.events is not None)
    masses, weights = [], 0.0
    for block, verdict in client.judge(measured, SELECTION):
        assert (block.extra["channel"] == 0).all()
        weights += block.extra["weight"].sum()
        masses.append(verdict.observable("eta", "M").values)
    mass = np.concatenate(masses)
    assert weights == 5000
    # Of the mass itself, found with the resolution of an invented calorimeter: the mean of
    # N entries of spread s lies within five s / sqrt(N) of the mass, and a per cent of bias.
    expected = client.particle("eta").mass
    assert abs(np.median(mass) - expected) < 5 * mass.std() / len(mass) ** 0.5 + 0.01 * expected
    assert len(mass) > 2000
    assert stream.summary is not None
    assert stream.summary.event_count == 5000
    assert stream.header is not None
    assert stream.header.seed == 7


def test_asyncio_generates_the_same(server: kinegate.LocalServer, client: kinegate.Client) -> None:
    async def fetch() -> list[Any]:
        async with kinegate.connect_async(server.address) as aio:
            return [p.truth.weights async for p in await aio.generate(GENERATION, 500) if p.truth]

    here = [p.truth.weights for p in client.generate(GENERATION, 500) if p.truth]
    assert (np.concatenate(asyncio.run(fetch())) == np.concatenate(here)).all()


def test_broken_stream_goes_on(client: kinegate.Client) -> None:
    whole = [p.truth for p in client.generate(GENERATION, 40_000) if p.truth]
    with replicas(1) as (only,), kinegate.connect(addresses([only], "general")) as frail:

        def trouble() -> None:
            time.sleep(0.4)
            only.kill()
            only.start()

        thread = threading.Thread(target=trouble)
        thread.start()
        stream = frail.generate(GENERATION, 40_000)
        parts = []
        for part in stream:
            time.sleep(0.01)
            parts.append(part.truth)
        thread.join()
    assert stream.reconnects >= 1
    event_ids = np.concatenate([t.event_ids for t in parts if t])
    assert (event_ids == np.arange(40_000)).all()
    energy = np.concatenate([t.momentum["energy_gev"] for t in parts if t])
    assert (energy == np.concatenate([t.momentum["energy_gev"] for t in whole])).all()


@pytest.mark.parametrize("kind", ["synchronous", "asyncio"])
def test_frozen_servers_are_left_for_another(client: kinegate.Client, kind: str) -> None:
    truth = client.generate(GENERATION, 40_000).read().truth
    gaps: list[float] = []
    blocks: list[kinegate.Generated] = []

    def took(block: kinegate.Generated, since: float) -> None:
        gaps.append(time.monotonic() - since)
        blocks.append(block)
        time.sleep(0.01)

    async def fetch(address: str) -> int:
        async with kinegate.connect_async(address) as aio:
            stream = await aio.generate(GENERATION, 40_000)
            since = time.monotonic()
            async for block in stream:
                took(block, since)
                since = time.monotonic()
            return stream.reconnects

    with replicas(2) as both:
        address = addresses(both, "general")

        def trouble() -> None:
            time.sleep(0.5)
            for replica in both:
                replica.freeze()
            time.sleep(4)
            both[1].thaw()

        thread = threading.Thread(target=trouble)
        thread.start()
        if kind == "asyncio":
            reconnects = asyncio.run(fetch(address))
        else:
            with kinegate.connect(address) as frail:
                stream = frail.generate(GENERATION, 40_000)
                since = time.monotonic()
                for block in stream:
                    took(block, since)
                    since = time.monotonic()
                reconnects = stream.reconnects
        thread.join()
    found = kinegate.Generated.concatenate(blocks).truth
    assert found is not None
    assert truth is not None
    assert (found.event_ids == np.arange(40_000)).all()
    assert (found.momentum["energy_gev"] == truth.momentum["energy_gev"]).all()
    assert 1 <= reconnects <= 4
    # A silence of 3 s, then maybe one of 6 s with the server that stays frozen.
    assert max(gaps) < 13


def test_without_a_server_patience_ends() -> None:
    with kinegate.connect("127.0.0.1:1") as nobody:
        stream = nobody.generate(GENERATION, 10, patience=0.1)
        with pytest.raises(kinegate.Unavailable, match="no word"):
            list(stream)
        with pytest.raises(kinegate.UsageError, match="generate anew"):
            list(stream)


def test_faults_of_a_generation(client: kinegate.Client, tmp_path: Path) -> None:
    path = tmp_path / "generation.yaml"
    path.write_text("channels:\n  - reaction: gamma p -> p ata\n")
    with pytest.raises(kinegate.InvalidArgument, match="ata"):
        client.generate(path, 1)
    with pytest.raises(ValueError, match="at least 0"):
        client.generate(GENERATION, -1)
    closed = {**GENERATION, "channels": [{"reaction": "gamma p -> p J/psi"}]}
    with pytest.raises(kinegate.FailedPrecondition) as caught:
        list(client.generate(closed, 1))
    assert caught.value.reason == "CHANNEL_CLOSED"
    checked = client.check_generation(GENERATION)
    assert not checked.faults
    assert checked.digest
    assert next(iter(checked.channels.values()))[0] == "p"
