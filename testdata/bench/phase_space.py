"""Four-body phase space with numpy, by the method of kinematics/generation.

Prints nanoseconds of processor time an event for arrays of several sizes, one thread. It is the
reference of the benchmark "four-body phase space": the same sorted two-body
splits (F. James, CERN 68-15, 1968), every step as whole-array operations.

Usage: python3 phase_space.py [bodies]
"""

import os
import sys
import time

for name in ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ[name] = "1"

import numpy as np


def split_momentum(excess, m, a, b):
    """Momentum of the two parts a, b of a system of mass m."""
    return np.sqrt(excess * (excess + 2 * a) * (excess + 2 * b) * (m + a + b)) / (2 * m)


def draw(rng, total, masses, count):
    """Weights and four-momenta (each a tuple of arrays) at rest."""
    n = len(masses)
    sums = np.cumsum(masses)
    kinetic = total - sums[-1]
    r = np.zeros((n, count))
    if n > 2:
        r[1 : n - 1] = np.sort(rng.random((n - 2, count)), axis=0)
    r[n - 1] = 1
    rest = [np.full(count, masses[0])]
    weight = np.full(count, 1 / total)
    constant = np.pi
    for k in range(2, n):
        constant *= 2 * np.pi / (k - 1) * kinetic
    weight *= constant
    momenta = [None]
    for k in range(1, n):
        m = sums[k] + r[k] * kinetic
        p = split_momentum((r[k] - r[k - 1]) * kinetic, m, rest[k - 1], masses[k])
        rest.append(m)
        momenta.append(p)
        weight *= p
    px, py, pz = np.zeros(count), np.zeros(count), np.zeros(count)
    e, m = np.full(count, total), rest[n - 1]
    particles = [None] * n
    for k in range(n - 1, 0, -1):
        p = momenta[k]
        u = rng.random(count)
        phi = 2 * np.pi * rng.random(count)
        across = 2 * p * np.sqrt(u * (1 - u))
        qx, qy, qz = across * np.cos(phi), across * np.sin(phi), p * (2 * u - 1)
        es = np.sqrt(p * p + masses[k] ** 2)
        f = ((px * qx + py * qy + pz * qz) / (e + m) + es) / m
        x, y, z = qx + px * f, qy + py * f, qz + pz * f
        particles[k] = (x, y, z, np.sqrt(x * x + y * y + z * z + masses[k] ** 2))
        px, py, pz = px - x, py - y, pz - z
        m = rest[k - 1]
        e = np.sqrt(px * px + py * py + pz * pz + m * m)
    particles[0] = (px, py, pz, e)
    return weight, particles


def main():
    bodies = int(sys.argv[1]) if len(sys.argv) > 1 else 4
    masses = np.full(bodies, 0.13957039)
    total = 0.5 + 0.14 * bodies
    rng = np.random.Generator(np.random.Philox(1))
    for count in (1_000, 10_000, 100_000, 1_000_000):
        rounds = max(1, 200_000 // count)
        best = float("inf")
        for _ in range(30):
            start = time.process_time()
            for _ in range(rounds):
                weight, _particles = draw(rng, total, masses, count)
            best = min(best, (time.process_time() - start) / (rounds * count))
        print(f"{bodies} bodies, arrays of {count}: {best * 1e9:.1f} ns an event, mean weight {weight.mean():.6g}")
    print(f"numpy {np.__version__}, one thread")


if __name__ == "__main__":
    main()
