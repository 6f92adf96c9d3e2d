"""Constrained fits of gamma p -> p pi0 pi0 with scipy's SLSQP.

Prints nanoseconds of processor time an event, one thread. It is the reference of the benchmark
"constrained fit": variables scaled to standard deviations, analytic gradients written as
operations on whole arrays, ftol 1e-10. The events are those of testdata/fit/events.json in which
every object is given by momentum and angles; each answer is compared with the one there.

Usage: python3 constrained_fit.py missing|measured
"""

import json
import os
import sys
import time
from pathlib import Path

for name in ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ[name] = "1"

import numpy as np
import scipy
from scipy.optimize import minimize

METRIC = np.array([-1.0, -1.0, -1.0, 1.0])
TOPOLOGY = {"missing": "p_pi0_pi0_missing_proton", "measured": "p_pi0_pi0"}


class Fit:
    """One event: measured objects first, then the beam, then the missing momentum."""

    def __init__(self, topology, event):
        rows = [(o, m) for o, m in zip(topology["objects"], event["objects"]) if o["form"] == "coordinates"]
        n = self.n = len(rows)
        self.start = np.array([m["values"] for _, m in rows])
        cov = np.zeros((n, 3, 3))
        for c, (_, m) in zip(cov, rows):
            c[np.triu_indices(3)] = m["covariance"]
            c.T[np.triu_indices(3)] = m["covariance"]
        self.spread = np.linalg.cholesky(cov)
        self.mass2 = np.array([o["mass_gev"] ** 2 for o, _ in rows])
        beam = next(m for o, m in zip(topology["objects"], event["objects"]) if o["form"] == "along")
        self.beam, self.sigma = beam["values"][0], np.sqrt(beam["covariance"][0])
        self.proton = next((o["mass_gev"] for o in topology["objects"] if o["form"] == "missing"), None)
        self.known = np.array(topology["known"])
        self.pairs = [(m["objects"], m["gev"]) for m in event["masses"]]
        self.size = 3 * n + 1 + (3 if self.proton else 0)
        self.scale = np.ones(4 + len(self.pairs))
        self.unit = 1.0
        x = np.zeros(self.size)
        f, a = self.constraints(x)
        if self.proton:
            self.missing = -f[:3]
        f, a = self.constraints(x)
        self.scale = np.sqrt((a[:, : 3 * n + 1] ** 2).sum(axis=1))
        self.unit = 0.03

    missing = np.zeros(3)

    def constraints(self, x):
        """The constraints over their standard deviations, and their gradients."""
        n = self.n
        t = self.start + np.einsum("nij,nj->ni", self.spread, x[: 3 * n].reshape(n, 3))
        p, (st, sp), (ct, cp) = t[:, 0], np.sin(t[:, 1:]).T, np.cos(t[:, 1:]).T
        momenta, slope = np.empty((n, 4)), np.zeros((n, 4, 3))
        momenta[:, 0], momenta[:, 1], momenta[:, 2] = p * st * cp, p * st * sp, p * ct
        momenta[:, 3] = np.sqrt(p * p + self.mass2)
        slope[:, 0, 0], slope[:, 1, 0], slope[:, 2, 0], slope[:, 3, 0] = st * cp, st * sp, ct, p / momenta[:, 3]
        slope[:, 0, 1], slope[:, 1, 1], slope[:, 2, 1] = p * ct * cp, p * ct * sp, -p * st
        slope[:, 0, 2], slope[:, 1, 2] = -p * st * sp, p * st * cp
        slope = slope @ self.spread
        f = np.empty(4 + len(self.pairs))
        a = np.zeros((len(f), self.size))
        f[:4] = momenta.sum(axis=0) - self.known
        a[:4, : 3 * n] = slope.transpose(1, 0, 2).reshape(4, 3 * n)
        energy = self.beam + self.sigma * x[3 * n]
        f[2] -= energy
        f[3] -= energy
        a[2:4, 3 * n] = -self.sigma
        if self.proton:
            q = self.missing + self.unit * x[3 * n + 1 :]
            e = np.sqrt(q @ q + self.proton**2)
            f[:3] += q
            f[3] += e
            a[[0, 1, 2], [3 * n + 1, 3 * n + 2, 3 * n + 3]] = self.unit
            a[3, 3 * n + 1 :] = self.unit * q / e
        for k, (objects, mass) in enumerate(self.pairs):
            low = (momenta[objects[0]] + momenta[objects[1]]) * METRIC
            f[4 + k] = low @ (momenta[objects[0]] + momenta[objects[1]]) - mass * mass
            for i in objects:
                a[4 + k, 3 * i : 3 * i + 3] = 2 * low @ slope[i]
        return f / self.scale, a / self.scale[:, None]

    def run(self):
        measured = 3 * self.n + 1

        def square(x):
            g = x.copy()
            g[measured:] = 0
            return 0.5 * (g @ g), g

        got = minimize(square, np.zeros(self.size), jac=True, method="SLSQP", options={"ftol": 1e-10},
                       constraints=[{"type": "eq", "fun": lambda x: self.constraints(x)[0],
                                     "jac": lambda x: self.constraints(x)[1]}])
        return 2 * got.fun


def main():
    which = sys.argv[1] if len(sys.argv) > 1 else "missing"
    data = json.loads((Path(__file__).parent.parent / "fit" / "events.json").read_text())
    name = TOPOLOGY[which]
    events = [e for e in data["events"] if e["topology"] == name and e["case"] == "across_pi"]
    total, worst = 0.0, 0.0
    for event in events:
        best = float("inf")
        for _ in range(15):
            fit = Fit(data["topologies"][name], event)
            start = time.process_time()
            got = fit.run()
            best = min(best, time.process_time() - start)
        total += best
        want = event["answer"]["minima"][0]["chi_square"]
        worst = max(worst, abs(got - want) / max(1, want))
    print(f"proton {which}, {len(events)} events: {total / len(events) * 1e9:.0f} ns an event, "
          f"chi-square within {worst:.1g} of the polished one")
    print(f"scipy {scipy.__version__}, numpy {np.__version__}, one thread")


if __name__ == "__main__":
    main()
