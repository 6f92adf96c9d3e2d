#!/usr/bin/env python3
"""Makes events.json: random events with the minima of their constrained fits, found with
scipy and polished until the conditions of the minimum hold within 1e-9 standard deviations.

    python3 -m venv venv && venv/bin/pip install numpy==2.* scipy==1.17.1
    venv/bin/python testdata/fit/reference.py > testdata/fit/events.json

Nothing here shares code with the project. Momenta and their gradients are written
out again; second derivatives are differences of the gradients. A minimum is sought
with SLSQP (D. Kraft, 1988) in variables scaled to standard deviations, from the measured
values and from the true ones, and then polished by Newton's method on the conditions

    x + A' lambda = 0 (measured),  A' lambda = 0 (unmeasured),  f = 0

in extended precision. Where SLSQP finds no point that meets the constraints, a
least-squares minimum of their violation from four starts decides whether there is one.
"""

import json
import sys
import warnings

import numpy as np
from scipy.optimize import least_squares, minimize

L = np.longdouble
PROTON, PI0, ETA, ELECTRON = 0.93827208943, 0.1349768, 0.547862, 0.00051099895069
BOUND = 1e-9


# --- momenta and their gradients -------------------------------------------------------


def momentum(kind, t, mass):
    """Four-momentum (x, y, z, E) and its 4x3 gradient in the parameters t."""
    one, zero = t[0] * 0 + 1, t[0] * 0
    if kind in ("energy_momentum", "momentum_mass", "missing"):
        q, dq = np.array(t), np.eye(3, dtype=t.dtype)
    elif kind == "transverse_momentum":
        pt, eta, phi = t
        sp, cp, sh, ch = np.sin(phi), np.cos(phi), np.sinh(eta), np.cosh(eta)
        q = pt * np.array([cp, sp, sh])
        dq = np.array([[cp, zero, -pt * sp], [sp, zero, pt * cp], [sh, pt * ch, zero]])
    elif kind == "momentum_angles":
        p, th, phi = t
        st, ct, sp, cp = np.sin(th), np.cos(th), np.sin(phi), np.cos(phi)
        n = np.array([st * cp, st * sp, ct])
        q = p * n
        dq = np.array([n, p * np.array([ct * cp, ct * sp, -st]), p * st * np.array([-sp, cp, zero])]).T
    elif kind == "momentum_slopes":
        p, a, b = t
        d = np.array([a, b, one])
        r = np.sqrt(d @ d)
        n = d / r
        across = (np.eye(3, dtype=t.dtype) - np.outer(n, n)) / r
        q = p * n
        dq = np.array([n, p * across[:, 0], p * across[:, 1]]).T
    else:
        raise ValueError(kind)
    if mass == 0 and kind in ("momentum_angles", "momentum_slopes"):
        e, de = t[0], np.array([one, zero, zero])
    elif mass == 0 and kind == "transverse_momentum":
        e, de = t[0] * np.cosh(t[1]), np.array([np.cosh(t[1]), t[0] * np.sinh(t[1]), zero])
    else:
        e = np.sqrt(q @ q + mass * mass)
        de = (q @ dq) / e
    return np.append(q, e), np.vstack([dq, de])


def repoint(p, dp, origin, cluster, vertex):
    """The momentum of an object that flew straight from the vertex to where it was found."""
    s = np.sqrt(p[:3] @ p[:3])
    n = p[:3] / s
    reach = np.sqrt((cluster - origin) @ (cluster - origin))
    d = origin - vertex + reach * n
    r = np.sqrt(d @ d)
    u = d / r
    one = np.eye(3, dtype=p.dtype)
    ds = n @ dp[:3]
    dn = (one - np.outer(n, n)) @ dp[:3] / s
    du = (one - np.outer(u, u)) @ (reach * dn) / r
    dz = -s * ((one - np.outer(u, u))[:, 2]) / r
    return (np.append(s * u, p[3]), np.vstack([np.outer(u, ds) + s * du, dp[3]]), np.append(dz, 0))


# --- one event -------------------------------------------------------------------------


class Event:
    """A fit: the objects' measurements, the constraints, and the variables x."""

    def __init__(self, topology, event):
        self.topology, self.event = topology, event
        self.weight, self.objects = [], []
        for spec, got in zip(topology["objects"], event["objects"]):
            count = 1 if spec["form"] == "along" else 3
            mask = spec["measured"]
            cov = np.zeros((3, 3))
            if mask:
                cov[np.triu_indices(3)] = got["covariance"]
                cov = cov + np.triu(cov, 1).T
            spread = np.eye(3)
            measured = [a for a in range(count) if mask >> a & 1]
            if measured:
                block = cov[np.ix_(measured, measured)]
                if np.all(block == 0):
                    spread[np.ix_(measured, measured)] = 0
                else:
                    spread[np.ix_(measured, measured)] = np.linalg.cholesky(block)
            values = np.array([got["values"][a] if mask >> a & 1 else 0 for a in range(count)])
            first = len(self.weight)
            self.weight += [mask >> a & 1 for a in range(count)]
            self.objects.append((spec, got, values, spread[:count, :count], first, count))
        self.z = None
        if topology["vertex"]:
            self.z = len(self.weight)
            self.weight.append(1 if topology["vertex"] == "measured" else 0)
        self.weight = np.array(self.weight)
        self.scale = np.ones(len(event["masses"]) + 4 * topology["conserved"])

    def parameters(self, x):
        out = []
        for _, _, values, spread, first, count in self.objects:
            out.append(values.astype(x.dtype) + spread.astype(x.dtype) @ x[first : first + count])
        return out

    def vertex(self, x):
        v = np.array(self.event["vertex"], dtype=x.dtype)
        unit = self.event["sigma_z"] if self.topology["vertex"] == "measured" else 1
        if self.z is not None:
            v[2] += unit * x[self.z]
        return v, unit

    def momenta(self, x):
        """All four-momenta and their gradients in x."""
        out = []
        v, unit = self.vertex(x)
        for (spec, got, _, spread, first, count), t in zip(self.objects, self.parameters(x)):
            grad = np.zeros((4, len(x)), dtype=x.dtype)
            mass = x.dtype.type(spec["mass_gev"])
            if spec["form"] == "along":
                n = np.array(spec["along"], dtype=x.dtype)
                e = np.sqrt(t[0] ** 2 + mass**2) if mass else t[0]
                p = np.append(t[0] * n, e)
                dp = np.append(n, t[0] / e)[:, None]
            else:
                p, dp = momentum(got["kind"], t, mass)
            if spec["repointed"]:
                o, c = np.array(got["origin"], dtype=x.dtype), np.array(got["cluster"], dtype=x.dtype)
                p, dp, dz = repoint(p, dp, o, c, v)
                if self.z is not None:
                    grad[:, self.z] = unit * dz
            grad[:, first : first + count] = dp @ spread.astype(x.dtype)
            out.append((p, grad))
        return out

    def constraints(self, x):
        """The constraints over their scales, and their gradients."""
        f, rows = [], []
        ps = self.momenta(x)
        if self.topology["conserved"]:
            total = -np.array(self.topology["known"], dtype=x.dtype)
            grad = 0
            for (spec, *_), (p, g) in zip(self.objects, ps):
                sign = -1 if spec["beam"] else 1
                total, grad = total + sign * p, grad + sign * g
            # Energy less z and energy plus z keep the digits of what flies forward.
            turn = np.array([[1, 0, 0, 0], [0, 1, 0, 0], [0, 0, -1, 1], [0, 0, 1, 1]], dtype=x.dtype)
            f += list(turn @ total)
            rows += list(turn @ grad)
        metric = np.array([-1, -1, -1, 1], dtype=x.dtype)
        for m in self.event["masses"]:
            value, grad = -x.dtype.type(m["gev"]) ** 2, 0
            for side, sign in ((m["objects"], 1), (m.get("as", []), -1)):
                if not side:
                    continue
                q = sum(ps[i][0] for i in side)
                dq = sum(ps[i][1] for i in side)
                value, grad = value + sign * (q * metric) @ q, grad + sign * 2 * (q * metric) @ dq
            f.append(value)
            rows.append(grad)
        return np.array(f, dtype=x.dtype) / self.scale, np.array(rows, dtype=x.dtype) / self.scale[:, None]

    def rescale(self, x):
        self.scale = np.ones(len(self.scale))
        _, a = self.constraints(x)
        sigma = np.sqrt((a.astype(float) ** 2 * self.weight).sum(axis=1))
        self.scale = np.where(sigma > 1e-12, sigma, 1.0)

    def feasible_start(self, x):
        """Unmeasured variables that meet the constraints best at the measured ones."""
        free = np.flatnonzero(self.weight == 0)
        if len(free) == 0:
            return x

        def f(u):
            y = x.copy()
            y[free] = u
            return self.constraints(y)[0].astype(float)

        best = least_squares(f, x[free], xtol=1e-12, ftol=1e-12, gtol=1e-12)
        y = x.copy()
        y[free] = best.x
        return y


def polish(ev, x):
    """Newton on the conditions of the minimum; None if they are not met."""
    x = x.astype(L)
    ev.rescale(x.astype(float))
    n, m = len(x), len(ev.scale)
    _, a = ev.constraints(x)
    lam = np.linalg.lstsq(a.T.astype(float), -(ev.weight * x).astype(float), rcond=None)[0].astype(L)
    residual = np.inf
    for _ in range(40):
        f, a = ev.constraints(x)
        g = ev.weight * x + a.T @ lam
        # Unmeasured variables count in units of what moves the constraints by one sigma.
        unit = np.where(ev.weight > 0, 1, 1 / np.sqrt((a.astype(float) ** 2).sum(axis=0) + 1e-300))
        residual = float(max(np.abs(g * unit).max(), np.abs(f).max()))
        h = np.diag(ev.weight.astype(float))
        for v in range(n):
            step = 1e-4 * (1 if ev.weight[v] else unit[v])
            y = x.copy()
            y[v] += step
            up = ev.constraints(y)[1].T @ lam
            y[v] -= 2 * step
            h[:, v] += ((up - ev.constraints(y)[1].T @ lam) / (2 * step)).astype(float)
        if residual < BOUND / 100:
            break
        af = a.astype(float)
        k = np.block([[(h + h.T) / 2, af.T], [af, np.zeros((m, m))]])
        k_scale = np.concatenate([unit, np.ones(m)])
        rhs = -np.concatenate([g, f]).astype(float) * k_scale
        try:
            d = np.linalg.solve(k * np.outer(k_scale, k_scale), rhs) * k_scale
        except np.linalg.LinAlgError:
            return None
        if not np.all(np.isfinite(d)):
            return None
        x, lam = x + d[:n], lam + d[n:]
    if not residual <= BOUND:
        return None
    # A minimum bends upwards along the constraints.
    _, _, vt = np.linalg.svd(a.astype(float) * unit)
    tangent = vt[m:].T * unit[:, None]
    if tangent.size and np.linalg.eigvalsh(tangent.T @ h @ tangent).min() < 1e-10:
        return None
    for (spec, got, *_), t in zip(ev.objects, ev.parameters(x)):
        sized = spec["form"] == "along" or got["kind"] in ("momentum_angles", "momentum_slopes", "transverse_momentum")
        if sized and t[0] <= 0:
            return None
    return x, residual, unit


def minima(ev, starts):
    """Polished minima, lowest first, without repeats."""
    found = []
    for x0 in starts:
        ev.rescale(x0)
        x0 = ev.feasible_start(x0)
        ev.rescale(x0)
        w = ev.weight

        def chi2(x):
            return 0.5 * float((w * x) @ x), w * x

        constraint = {
            "type": "eq",
            "fun": lambda x: ev.constraints(x)[0].astype(float),
            "jac": lambda x: ev.constraints(x)[1].astype(float),
        }
        # A fit that strays far is started again from where it got to.
        x = x0
        for _ in range(3):
            got = minimize(chi2, x, jac=True, method="SLSQP", constraints=[constraint],
                           options={"ftol": 1e-12, "maxiter": 500})
            x = got.x
            if not np.all(np.isfinite(x)):
                break
            polished = polish(ev, x)
            if polished is not None:
                y, residual, unit = polished
                value = float((w * y) @ y)
                if all(abs(value - v) > 1e-6 * max(1, v) for v, *_ in found):
                    found.append((value, y, residual))
                break
            ev.rescale(x)
    return sorted(found, key=lambda f: f[0])


def least_violation(ev, starts):
    best = np.inf
    for x0 in starts:
        ev.rescale(starts[0])
        got = least_squares(lambda x: ev.constraints(x)[0].astype(float), x0,
                            jac=lambda x: ev.constraints(x)[1].astype(float),
                            xtol=1e-12, ftol=1e-12, gtol=1e-12, max_nfev=300)
        best = min(best, float(np.sqrt(2 * got.cost)))
    return best


# --- events ----------------------------------------------------------------------------


def rest_boost(p, frame):
    """Takes p from the rest frame of frame to the frame in which it has that momentum."""
    m = np.sqrt(frame[3] ** 2 - frame[:3] @ frame[:3])
    gb = frame[:3] / m
    g = frame[3] / m
    e = g * p[3] + gb @ p[:3]
    return np.append(p[:3] + gb * (p[3] + (gb @ p[:3]) / (g + 1)), e)


def direction(rng):
    c, f = rng.uniform(-1, 1), rng.uniform(-np.pi, np.pi)
    s = np.sqrt(1 - c * c)
    return np.array([s * np.cos(f), s * np.sin(f), c])


def decay(parent, m1, m2, rng, u=None):
    m = np.sqrt(parent[3] ** 2 - parent[:3] @ parent[:3])
    p = np.sqrt(max((m - m1 - m2) * (m + m1 + m2) * (m - m1 + m2) * (m + m1 - m2), 0)) / (2 * m)
    u = direction(rng) if u is None else u
    a = np.append(p * u, np.sqrt(p * p + m1 * m1))
    b = np.append(-p * u, np.sqrt(p * p + m2 * m2))
    return rest_boost(a, parent), rest_boost(b, parent)


def photons(pi0, rng, hard):
    if hard == "soft_photon":  # About 30 MeV: backwards along the flight.
        flight = pi0[:3] / np.linalg.norm(pi0[:3])
        u = -flight + 0.2 * direction(rng)
        return decay(pi0, 0, 0, rng, u / np.linalg.norm(u))
    return decay(pi0, 0, 0, rng)


def to_parameters(kind, p):
    q = np.linalg.norm(p[:3])
    if kind in ("energy_momentum", "momentum_mass"):
        return p[:3].copy()
    phi = np.arctan2(p[1], p[0])
    if kind == "transverse_momentum":
        pt = np.hypot(p[0], p[1])
        return np.array([pt, np.arcsinh(p[2] / pt), phi])
    if kind == "momentum_angles":
        return np.array([q, np.arctan2(np.hypot(p[0], p[1]), p[2]), phi])
    return np.array([q, p[0] / p[2], p[1] / p[2]])


def resolution(kind, p, mass, rng, hard):
    """A covariance of the coordinate set: 5 %/sqrt(E) and 3 mrad for photons, 1 % and 2 mrad
    for tracks, correlated at random; with a hard case of 0.999."""
    q = np.linalg.norm(p[:3])
    angle = 0.003 if mass == 0 else 0.002
    sq = np.sqrt(0.05**2 * q + 0.01**2 * q * q) if mass == 0 else 0.01 * q
    # In q, theta, phi, without the pole: along the direction and across it.
    n = p[:3] / q
    a = np.cross(n, [1, 0, 0] if abs(n[0]) < 0.9 else [0, 1, 0])
    a /= np.linalg.norm(a)
    b = np.cross(n, a)
    frame = np.array([n, a, b]).T
    sig = np.array([sq, q * angle, q * angle])
    rho = 0.3 * rng.uniform(-1, 1, 3)
    if hard == "correlated":
        rho = np.array([0.999, 0.0, 0.0])
    corr = np.array([[1, rho[0], rho[1]], [rho[0], 1, rho[2]], [rho[1], rho[2], 1]])
    cart = frame @ (corr * np.outer(sig, sig)) @ frame.T
    if kind in ("energy_momentum", "momentum_mass"):
        return cart
    t = to_parameters(kind, p).astype(L)
    _, dp = momentum(kind, t, L(mass))
    inverse = np.linalg.inv(dp[:3].astype(float))
    return inverse @ cart @ inverse.T


def rounded(x, digits=10):
    return float(f"{x:.{digits}g}")


def measure(spec, p, kind, rng, hard, exact=False):
    """Smears a true four-momentum; returns the measurement."""
    cov = resolution(kind, p, spec["mass_gev"], rng, hard)
    t = to_parameters(kind, p)
    if not exact:
        t = t + np.linalg.cholesky(cov) @ rng.standard_normal(3)
    mask = spec["measured"]
    keep = [mask >> a & 1 for a in range(3)]
    t = [rounded(v) if k else 0.0 for v, k in zip(t, keep)]
    cov = [rounded(cov[i, j]) if keep[i] and keep[j] else 0.0 for i in range(3) for j in range(i, 3)]
    return {"kind": kind, "values": t, "covariance": cov}


def thing(form="coordinates", measured=7, mass=0.0, beam=False, along=(0, 0, 1), repointed=False):
    return {"form": form, "measured": measured, "mass_gev": mass, "beam": beam,
            "along": list(map(float, along)), "repointed": repointed}


def beam_of(e, sigma, rng):
    return {"kind": "", "values": [rounded(e + sigma * rng.standard_normal()), 0, 0],
            "covariance": [rounded(sigma**2), 0, 0, 0, 0, 0]}


NOTHING = {"kind": "missing", "values": [0, 0, 0], "covariance": [0] * 6}
TARGET = [0.0, 0.0, 0.0, PROTON]


def topology(objects, known, conserved=True, vertex=""):
    return {"objects": objects, "known": known, "conserved": conserved, "vertex": vertex}


BEAM = thing("along", 1, beam=True)
TOPOLOGIES = {
    "p_pi0_missing_proton": topology([thing(), thing(), BEAM, thing("missing", 0, PROTON)], TARGET),
    "p_pi0_pi0": topology([thing() for _ in range(4)] + [thing(mass=PROTON), BEAM], TARGET),
    "p_pi0_pi0_missing_proton": topology([thing() for _ in range(4)] + [thing("missing", 0, PROTON), BEAM], TARGET),
    "two_photons_to_electrons": topology(
        [thing(mass=ELECTRON), thing(mass=ELECTRON), thing("along", 0, beam=True),
         thing("along", 0, beam=True, along=(0, 0, -1))], [0.0, 0.0, 0.0, 0.0]),
    "eta_to_three_pi0": topology([thing() for _ in range(6)], [0.0, 0.0, 0.0, 0.0], conserved=False),
    "proton_direction_only": topology([thing(), thing(), thing(measured=6, mass=PROTON), BEAM], TARGET),
    "free_vertex": topology([thing(repointed=True) for _ in range(4)] + [thing(mass=PROTON), BEAM], TARGET,
                            vertex="free"),
}
KINDS = ("momentum_angles", "momentum_mass", "transverse_momentum", "momentum_slopes", "energy_momentum")
HARD = ("ordinary", "ordinary", "five_sigma", "soft_photon", "collinear", "forward", "backward", "across_pi",
        "correlated", "barely", "infeasible")


def kind_for(p, rng, hard):
    if hard in ("forward", "backward", "across_pi"):
        return "momentum_angles"
    allowed = [k for k in KINDS if k != "momentum_slopes" or p[2] > 0.3 * np.linalg.norm(p[:3])]
    return allowed[rng.integers(len(allowed))]


def turn_to(axis, ps):
    """Rotates momenta about y and z so that the first points along the axis."""
    n = ps[0][:3] / np.linalg.norm(ps[0][:3])
    v, c = np.cross(n, axis), n @ axis
    if np.linalg.norm(v) < 1e-12:
        return ps
    k = np.array([[0, -v[2], v[1]], [v[2], 0, -v[0]], [-v[1], v[0], 0]])
    r = np.eye(3) + k + k @ k / (1 + c)
    return [np.append(r @ p[:3], p[3]) for p in ps]


def azimuth_turn(angle, ps):
    c, s = np.cos(angle), np.sin(angle)
    r = np.array([[c, -s, 0], [s, c, 0], [0, 0, 1]])
    return [np.append(r @ p[:3], p[3]) for p in ps]


def make(name, hard, rng):
    """One event: measurements, masses, and the true four-momenta of the objects; None if
    the case does not fit the topology."""
    spec = TOPOLOGIES[name]
    event = {"topology": name, "case": hard, "vertex": [0.0, 0.0, 0.0], "sigma_z": 0.0}
    masses, sigma_beam = [], 0.003
    if name == "eta_to_three_pi0":
        mass = ETA
        if hard == "barely":
            mass = 3 * PI0 + rng.uniform(0.0005, 0.003)
        eta = np.append(rng.uniform(0.2, 2) * direction(rng), 0)
        eta[3] = np.sqrt(mass**2 + eta[:3] @ eta[:3])
        m12 = 2 * PI0 + (mass - 3 * PI0) * rng.uniform(0.1, 0.9)
        pair, third = decay(eta, m12, PI0, rng)
        pions = [*decay(pair, PI0, PI0, rng), third]
        final = [g for pi in pions for g in photons(pi, rng, hard)]
        if hard in ("forward", "backward"):
            axis = np.array([0.012, 0.008, 1.0 if hard == "forward" else -1.0])
            final = turn_to(axis / np.linalg.norm(axis), final)
        masses = [{"objects": [2 * k, 2 * k + 1], "gev": PI0} for k in range(3)]
        stated = 3 * PI0 - rng.uniform(0.003, 0.02) if hard == "infeasible" else mass
        masses.append({"objects": list(range(6)), "gev": rounded(stated)})
    elif name == "two_photons_to_electrons":
        if hard in ("soft_photon", "barely", "infeasible"):
            return None
        e1, e2 = rng.uniform(0.3, 3, 2)
        total = np.array([0, 0, e1 - e2, e1 + e2])
        final = list(decay(total, ELECTRON, ELECTRON, rng,
                           np.array([0.003, 0.002, 1.0]) / np.linalg.norm([0.003, 0.002, 1.0])
                           if hard in ("forward", "collinear") else None))
        sigma_beam = None
    else:
        e = rng.uniform(1.2, 4)
        meson = ETA if name == "proton_direction_only" else PI0
        two = "pi0_pi0" in name or name == "free_vertex"
        lightest = PROTON + (2 * PI0 if two else meson)
        if hard == "barely":
            e = (lightest**2 - PROTON**2) / (2 * PROTON) + rng.uniform(0.001, 0.01)
        if hard == "collinear":
            e = rng.uniform(8, 12)
        total = np.array([0, 0, e, e + PROTON])
        s = np.sqrt(total[3] ** 2 - e * e)
        if two:
            m = 2 * PI0 + (s - lightest) * rng.uniform(0.1, 0.9)
            proton, pair = decay(total, PROTON, m, rng)
            final = [g for pi in decay(pair, PI0, PI0, rng) for g in photons(pi, rng, hard)]
            masses = [{"objects": [2 * k, 2 * k + 1], "gev": PI0} for k in range(2)]
        else:
            u = np.array([0.1, 0.05, -1.0]) / np.sqrt(1.0125) if hard == "collinear" else None
            proton, pi = decay(total, PROTON, meson, rng, u)
            final = list(photons(pi, rng, hard))
            masses = [{"objects": [0, 1], "gev": meson}]
        if hard == "infeasible":
            # A beam known exactly, below threshold for the masses stated.
            sigma_beam = 0.0
            low = (s - PROTON) / len(masses)
            for m in masses:
                m["gev"] = rounded(low * rng.uniform(1.02, 1.3))
        order = {"p_pi0_missing_proton": (0, 1, None, 2), "p_pi0_pi0": (0, 1, 2, 3, 4, None),
                 "free_vertex": (0, 1, 2, 3, 4, None),
                 "p_pi0_pi0_missing_proton": (0, 1, 2, 3, 4, None), "proton_direction_only": (0, 1, 2, None)}[name]
        all_ = final + [proton]
        final = [np.array([0, 0, e, e]) if i is None else all_[i] for i in order]
    if hard == "across_pi":
        phi = np.arctan2(final[0][1], final[0][0])
        final = azimuth_turn(np.pi - phi + rng.uniform(-0.003, 0.003), final)
    if hard in ("forward", "backward") and name != "eta_to_three_pi0":
        # A photon is nearly along the beam, within 20 mrad forwards or 90 mrad backwards, by
        # rejection.
        c = [p[2] / np.linalg.norm(p[:3]) for o, p in zip(spec["objects"], final) if o["form"] == "coordinates"
             and o["mass_gev"] == 0]
        if name == "two_photons_to_electrons":
            if hard == "backward":
                return None
        elif max(c) < 1 - 2e-4 if hard == "forward" else min(c) > -1 + 4e-3:
            return None
    event["masses"] = masses
    vertex = np.zeros(3)
    if name == "free_vertex":
        vertex[2] = rng.uniform(-0.1, 0.1)
    event["objects"] = []
    for k, (o, p) in enumerate(zip(spec["objects"], final if name != "two_photons_to_electrons" else final + [None] * 2)):
        if o["form"] == "missing":
            event["objects"].append(NOTHING)
        elif o["form"] == "along":
            event["objects"].append(beam_of(p[3], sigma_beam, rng) if o["measured"] else
                                    {"kind": "", "values": [0, 0, 0], "covariance": [0] * 6})
        else:
            kind = "momentum_angles" if o["measured"] != 7 else kind_for(p, rng, hard)
            if o["repointed"]:
                # Found on a sphere of 1 m around the centre, seen from the centre.
                n = p[:3] / np.linalg.norm(p[:3])
                along = vertex @ n
                hit = vertex + (-along + np.sqrt(along**2 + 1 - vertex @ vertex)) * n
                seen = np.append(np.linalg.norm(p[:3]) * hit, p[3])
                if kind == "momentum_slopes" and seen[2] < 0.3 * p[3]:
                    kind = "momentum_angles"
                got = measure(o, seen, kind, rng, hard)
                got["origin"], got["cluster"] = [0.0, 0.0, 0.0], [rounded(v) for v in hit]
            else:
                got = measure(o, p, kind, rng, hard)
            if kind == "momentum_angles" and not 0 <= got["values"][1] <= np.pi:
                return None
            if kind not in ("momentum_mass", "energy_momentum") and o["measured"] & 1 and got["values"][0] <= 0:
                return None
            event["objects"].append(got)
    if hard == "five_sigma":
        first = event["objects"][0]
        a = rng.integers(3)
        sigma = np.sqrt(first["covariance"][[0, 3, 5][a]])
        sign = rng.choice([-1, 1])
        if a == 0 and first["values"][0] - 5 * sigma <= 0:
            sign = 1
        first["values"][a] = rounded(first["values"][a] + sign * 5 * sigma)
    return event


def solve(event, rng):
    ev = Event(TOPOLOGIES[event["topology"]], event)
    n = len(ev.weight)
    typical = np.where(ev.weight > 0, 0.0, 0.5)
    if ev.z is not None and ev.weight[ev.z] == 0:
        typical[ev.z] = 0.0
    starts = [typical]
    for k in range(7):
        noise = rng.standard_normal(n) * (0.3 + 0.3 * k)
        starts.append(np.where(ev.weight > 0, noise, (k + 1) * 0.6 * typical))
    found = minima(ev, starts[: 1 if event["case"] == "infeasible" else 3])
    if found:
        return {"status": "converged", "minima": [
            {"chi_square": float(v), "residual": r,
             "parameters": [[float(c) for c in t] for t in ev.parameters(x)],
             "vertex_z": float(ev.vertex(x)[0][2])} for v, x, r in found]}
    if event["case"] in ("infeasible", "barely", "collinear"):
        least = least_violation(ev, starts[:4])
        if least > 1e-3:
            return {"status": "infeasible", "minima": [], "violation": least}
    return None


def main():
    warnings.simplefilter("ignore")  # Starts far off overflow; what is kept is checked.
    rng = np.random.default_rng(20260101)
    events, dropped = [], {}
    per = int(sys.argv[1]) if len(sys.argv) > 1 else 88
    for name in TOPOLOGIES:
        made = tries = 0
        while made < per:
            hard = HARD[made % len(HARD)]
            event = None
            for tries in range(3000):
                event = make(name, hard, rng)
                if event is not None:
                    break
            made += 1
            if event is None:
                continue
            answer = solve(event, rng)
            if answer is None:
                dropped[name + "/" + hard] = dropped.get(name + "/" + hard, 0) + 1
                continue
            event["answer"] = answer
            events.append(event)
        print(name, len(events), dropped, file=sys.stderr, flush=True)
    print('{"comment": "Made by reference.py; invented events.", "dropped": %s,' % json.dumps(dropped))
    print('"topologies": %s,' % json.dumps(TOPOLOGIES))
    print('"events": [')
    print(",\n".join(json.dumps(e) for e in events))
    print("]}")


if __name__ == "__main__":
    main()
