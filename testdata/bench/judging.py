"""Judging six photons as three pairs of a mass window with numpy, whole arrays at a time.

Reads events as float64 rows (E, theta, phi), six rows an event; an event is accepted if one
of the 15 ways to pair all six photons has every mass in the window. Prints how many are
accepted and nanoseconds of processor time an event, one thread.

Usage: python3 judging.py EVENTS_FILE
"""

import os
import sys
import time

for name in ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ[name] = "1"

import numpy as np

PHOTONS = 6
MINIMUM, MAXIMUM = 0.11, 0.16
FIRST, SECOND = np.triu_indices(PHOTONS, 1)
PAIR = {(i, j): k for k, (i, j) in enumerate(zip(FIRST.tolist(), SECOND.tolist()))}


def pairings(photons):
    """All ways to pair the photons of a list."""
    if not photons:
        return [[]]
    first, rest = photons[0], photons[1:]
    return [
        [PAIR[first, other], *more]
        for other in rest
        for more in pairings([p for p in rest if p != other])
    ]


PAIRINGS = np.array(pairings(list(range(PHOTONS))))


def accepted(energy, theta, phi):
    """The events of which some pairing has all its masses in the window."""
    sine = np.sin(theta)
    x, y, z = sine * np.cos(phi), sine * np.sin(phi), np.cos(theta)
    dx, dy, dz = x[FIRST] - x[SECOND], y[FIRST] - y[SECOND], z[FIRST] - z[SECOND]
    mass = np.sqrt(energy[FIRST] * energy[SECOND] * (dx * dx + dy * dy + dz * dz))
    inside = (mass >= MINIMUM) & (mass < MAXIMUM)
    return inside[PAIRINGS].all(axis=1).any(axis=0)


def main():
    rows = np.fromfile(sys.argv[1]).reshape(-1, PHOTONS, 3)
    arrays = [np.ascontiguousarray(rows[:, :, k].T) for k in range(3)]
    best, end = float("inf"), time.process_time() + 1
    while time.process_time() < end:
        begun = time.process_time()
        for _ in range(10):
            gate = accepted(*arrays)
        best = min(best, (time.process_time() - begun) / 10)
    print(f"accepted {gate.sum()}")
    print(f"numpy {best / len(gate) * 1e9:.2f}")


if __name__ == "__main__":
    main()
