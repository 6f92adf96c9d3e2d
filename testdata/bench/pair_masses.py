"""Six-photon pair masses with numpy: m = sqrt(E1 E2 |u1 - u2|^2) for the 15 pairs of each event.

Reads events as float64 rows (E, ux, uy, uz), six rows an event, and prints nanoseconds of
processor time an event, one thread: plain whole-array expressions, then the same with every
array allocated before ("in place").

Usage: python3 pair_masses.py EVENTS_FILE
"""

import os
import sys
import time

for name in ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ[name] = "1"

import numpy as np

PHOTONS = 6
FIRST, SECOND = np.triu_indices(PHOTONS, 1)


def plain(e, x, y, z):
    """Whole-array expressions over rows of photons, a new array each."""
    dx, dy, dz = x[FIRST] - x[SECOND], y[FIRST] - y[SECOND], z[FIRST] - z[SECOND]
    return np.sqrt(e[FIRST] * e[SECOND] * (dx * dx + dy * dy + dz * dz))


class InPlace:
    """The same steps pair by pair into arrays that are kept."""

    def __init__(self, count):
        self.m = np.empty((len(FIRST), count))
        self.t, self.u = np.empty(count), np.empty(count)

    def __call__(self, e, x, y, z):
        t, u = self.t, self.u
        for m, i, j in zip(self.m, FIRST, SECOND):
            np.subtract(x[i], x[j], out=t)
            np.multiply(t, t, out=t)
            np.subtract(y[i], y[j], out=u)
            np.multiply(u, u, out=u)
            np.add(t, u, out=t)
            np.subtract(z[i], z[j], out=u)
            np.multiply(u, u, out=u)
            np.add(t, u, out=t)
            np.multiply(t, e[i], out=t)
            np.multiply(t, e[j], out=t)
            np.sqrt(t, out=m)
        return self.m


def measure(compute, arrays, seconds=1.0):
    """Least processor time of one pass in several, an event."""
    best, end = float("inf"), time.process_time() + seconds
    while time.process_time() < end:
        begun = time.process_time()
        for _ in range(10):
            compute(*arrays)
        best = min(best, (time.process_time() - begun) / 10)
    return best / arrays[0].shape[1] * 1e9


def main():
    rows = np.fromfile(sys.argv[1]).reshape(-1, PHOTONS, 4)
    arrays = [np.ascontiguousarray(rows[:, :, k].T) for k in range(4)]
    in_place = InPlace(arrays[0].shape[1])
    assert np.allclose(plain(*arrays), in_place(*arrays), rtol=1e-14)
    print(f"sum {plain(*arrays).sum():.9f}")
    print(f"plain {measure(plain, arrays):.2f}")
    print(f"in-place {measure(in_place, arrays):.2f}")


if __name__ == "__main__":
    main()
