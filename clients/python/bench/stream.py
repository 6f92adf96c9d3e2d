"""A million events from numpy through the judge stream and back to numpy.

Prints how the processor time of both sides and the wall time compare with the server's own
processor time, for a selection of pair windows and one with constrained fits, and how much faster
blocks are than one event a message. Fails where processor time is over the limit: wall time is as
good as the machine is idle, so it is printed beside the load.

Usage: python bench/stream.py [events]
"""

from __future__ import annotations

import copy
import os
import sys
import time
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np

import kinegate

MASS = 0.1349768


def six_photons(count: int) -> kinegate.Events:
    """Make six photons of three neutral pions an event, out of order, measured and with errors."""
    rng = np.random.default_rng(5)
    boost = rng.normal(0, 0.3, (count, 3, 3))
    direction = rng.normal(size=(count, 3, 3))
    direction *= MASS / 2 / np.linalg.norm(direction, axis=2, keepdims=True)
    # Boost both photons of each pion by its momentum.
    energy = np.sqrt((boost**2).sum(2, keepdims=True) + MASS**2)
    along = (boost * direction).sum(2, keepdims=True)
    photons = []
    for sign in (1.0, -1.0):
        p = sign * direction
        photons.append(p + boost * (sign * along / (MASS * (energy + MASS)) + 1 / 2))
    p = np.concatenate(photons, axis=1)
    p = np.ascontiguousarray(p[:, rng.permutation(6)])
    energy = np.linalg.norm(p, axis=2)
    theta = np.arctan2(np.hypot(p[..., 0], p[..., 1]), p[..., 2])
    spread = [0.02 * np.sqrt(energy), np.full_like(energy, 0.005), 0.005 / np.sin(theta)]
    phi = np.arctan2(p[..., 1], p[..., 0])
    measured = [
        true + sigma * np.clip(rng.normal(size=true.shape), -3, 3)
        for true, sigma in zip((energy, theta, phi), spread, strict=True)
    ]
    covariance = np.zeros((energy.size, 6))
    for place, sigma in zip((0, 3, 5), spread, strict=True):
        covariance[:, place] = sigma.ravel() ** 2
    return kinegate.Events.of(
        momentum_gev=measured[0],
        theta_rad=np.clip(measured[1], 0, np.pi),
        phi_rad=measured[2],
        classes=np.full(6, kinegate.PHOTON),
        covariance=covariance,
    )


SELECTION: dict[str, Any] = {
    "name": "pions",
    "hypotheses": [
        {
            "name": "pions",
            "reaction": "eta -> pi0 pi0 pi0, pi0 -> gamma gamma",
            "condition": {
                "all_of": [
                    {
                        "window": {
                            "invariant_mass": {
                                "products": [f"pi0[{i}]"],
                                "min_gev": 0.10,
                                "max_gev": 0.17,
                            }
                        }
                    }
                    for i in range(3)
                ]
            },
        }
    ],
}

FITTED = copy.deepcopy(SELECTION)
FITTED["hypotheses"][0]["fit"] = {
    "conservation": "CONSERVATION_NONE",
    "masses": [{"products": [f"pi0[{i}]"]} for i in range(3)],
}


def server_cpu(process: int) -> float:
    """Return the processor time of a process in second; USER_HZ is 100 on every Linux."""
    fields = Path(f"/proc/{process}/stat").read_text(encoding="ascii").rpartition(")")[2].split()
    return (int(fields[11]) + int(fields[12])) / 100


def measure(
    server: kinegate.LocalServer,
    sample: kinegate.Events,
    source: dict[str, Any],
    events_per_block: int = 1000,
) -> tuple[float, float, float, int]:
    """Return wall time, client's and server's processor time, and accepted events."""
    with server.connect() as client:
        selection = client.selection(source)
        wall, own, other = time.perf_counter(), time.process_time(), server_cpu(server.process.pid)
        stream = client.judge(sample, selection, events_per_block=events_per_block, entries="none")
        accepted = sum(int(v.gate.sum()) for _, v in stream)
        return (
            time.perf_counter() - wall,
            time.process_time() - own,
            server_cpu(server.process.pid) - other,
            accepted,
        )


def compared(what: str, ratio: float, limit: float) -> bool:
    """Print a ratio with its limit, and return whether it is held."""
    held = ratio <= limit
    print(f"  {what} over the server's: {ratio:.2f}, limit {limit}{'' if held else ': NOT HELD'}")
    return held


def main() -> int:
    """Measure and print; returns how many selections took too much processor time."""
    over = 0
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 1_000_000
    measured = six_photons(count)
    bare = replace(measured, covariance=None)  # windows need none
    with kinegate.start_server() as server:
        for name, sample, source, limit in (
            ("pair windows", bare, SELECTION, 2.0),
            ("fits", measured, FITTED, 1.3),
        ):
            measure(server, sample.cut(0, 20_000), source)
            wall, own, other, accepted = measure(server, sample, source)
            print(f"{name}: {count} events in blocks of 1,000, {accepted} accepted")
            print(f"  {wall:.2f} s; processor: server {other:.2f} s, client {own:.2f} s")
            over += not compared("processor time of both", (own + other) / other, limit)
            compared(f"wall time, load {os.getloadavg()[0]:.1f},", wall / other, limit)
            few = sample.cut(0, min(count, 10_000))
            single, _, _, _ = measure(server, few, source, 1)
            ratio = single / len(few) / (wall / count)
            each = single / len(few) * 1e6
            print(f"  one event a message: {each:.0f} us an event, {ratio:.0f} times slower")
    return over


if __name__ == "__main__":
    sys.exit(main())
