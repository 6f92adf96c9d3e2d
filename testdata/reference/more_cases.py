"""Makes own-cases.json: a second set of 50-digit precision cases, beside
precision-cases.json and in the same shape.

    python3 -m venv venv && venv/bin/pip install mpmath==1.4.1
    venv/bin/python testdata/reference/more_cases.py [--seed N] [--per-function N]

Each function is written here from its definition with mpmath at 60 digits (numerical
integrals at 40), with the plainest formula there is: at this precision nothing needs
rearranging. Cross-sections
of pairs and of Compton scattering are integrated numerically from their differential
forms, backscatter spectra averaged numerically over azimuth. Inputs are doubles in
shortest form and taken as exactly those doubles. The condition number of an output
is the sum over the inputs of |x df/dx|/|f|, by central differences.

The output depends on the seed alone. An answer is printed to 25 digits.
"""

import argparse
import json
import math
import multiprocessing
import pathlib
import random
import sys

import mpmath
from mpmath import mp, mpf

DIGITS = 60
# Numerical integrals run at fewer digits, still well above the 25 that are printed.
INTEGRAL_DIGITS = 40
INTEGRALS = {"kn_total", "kn_moments", "bw_total", "pair_creation", "backscatter", "field_black_body",
             "field_power_law"}
MASSES = [0.00051099895069, 0.1056583755, 0.13957039, 0.1349768, 0.493677, 0.547862,
          0.93827208943, 0.93956542194, 1.115683, 1.86966, 3.0969, 5.27941, 80.3692, 125.2]
E_MASS, P_MASS = 0.00051099895069, 0.93827208943
PLANCK, LIGHT, CHARGE, BOLTZMANN = mpf("6.62607015e-34"), 299792458, mpf("1.602176634e-19"), mpf("1.380649e-23")


class Refused(Exception):
    """The physical answer does not exist; carries the name of the reason."""


# ---------------------------------------------------------------- definitions

def kallen(a, b, c):
    return a * a + b * b + c * c - 2 * a * b - 2 * a * c - 2 * b * c


def rest_momentum(s, m1, m2):
    if mp.sqrt(s) < m1 + m2:
        raise Refused("below_threshold")
    return mp.sqrt(kallen(s, m1**2, m2**2)) / (2 * mp.sqrt(s))


def two_body_momentum(M, m1, m2):
    p = rest_momentum(M * M, m1, m2)
    return {"p": p, "E1": mp.sqrt(p * p + m1 * m1), "E2": mp.sqrt(p * p + m2 * m2)}


def square_and_mass(rows):
    e = sum(r[3] for r in rows)
    m2 = e * e - sum(sum(r[i] for r in rows)**2 for i in range(3))
    return {"m2": m2, "m": mp.sqrt(m2)} if m2 >= 0 else {"m2": m2}


def invariant_mass_m(p3m):
    return square_and_mass([r[:3] + [mp.sqrt(sum(x * x for x in r))] for r in p3m])


def threshold(m_beam, m_target, m_final):
    w = sum(m_final)
    e = (w * w - m_beam**2 - m_target**2) / (2 * m_target)
    return {"sqrt_s": w, "E_beam": e, "T_beam": e - m_beam, "p_beam": mp.sqrt(e * e - m_beam**2),
            "open_at_rest": False}


def laboratory(m1, m2, m3, m4, p1):
    """Velocity and Lorentz factor of the centre of mass, momentum and energy of m3 in it."""
    e1 = mp.sqrt(p1 * p1 + m1 * m1)
    s = m1**2 + m2**2 + 2 * e1 * m2
    q = rest_momentum(s, m3, m4)
    return p1 / (e1 + m2), (e1 + m2) / mp.sqrt(s), q, mp.sqrt(q * q + m3 * m3)


def lab_angle_solutions(m1, m2, m3, m4, p1, theta3):
    beta, gamma, q, e = laboratory(m1, m2, m3, m4, p1)
    # gamma (E - beta p cos) = e with E^2 = p^2 + m3^2, solved for p.
    c = mp.cos(theta3)
    a2, a1, a0 = 1 - (beta * c)**2, e / gamma * beta * c, (e / gamma)**2 - m3**2
    root = a1 * a1 + a2 * a0
    if root < 0:
        return {"n": 0, "p3": [], "E3": []}
    found = [(a1 + sign * mp.sqrt(root)) / a2 for sign in (1, -1)]
    found = [p for p in found if p > 0 and e / gamma + beta * p * c > 0]
    return {"n": len(found), "p3": found, "E3": [mp.sqrt(p * p + m3 * m3) for p in found]}


def max_lab_angle(m1, m2, m3, m4, p1):
    beta, gamma, q, e = laboratory(m1, m2, m3, m4, p1)
    sine = q / (gamma * beta * m3) if m3 > 0 else mpf(2)
    return {"theta_max": mp.asin(sine) if sine < 1 else +mp.pi, "two_branch": bool(sine < 1)}


def t_range(m1, m2, m3, m4, s):
    p, q = rest_momentum(s, m1, m2), rest_momentum(s, m3, m4)
    gap = (m1**2 - m2**2 - m3**2 + m4**2) / (2 * mp.sqrt(s))
    # Exactly 0 for elastic scattering and between two massless bodies in one direction.
    zero = (m1 == m3 and m2 == m4) or m1 == m3 == 0 or m2 == m4 == 0
    forward = 0 if zero else gap**2 - (p - q)**2
    return {"t0": mpf(forward), "t1": gap**2 - (p + q)**2}


def lab_vector(m1, m2, m3, m4, p1, cos_cm):
    beta, gamma, q, e = laboratory(m1, m2, m3, m4, p1)
    return gamma * (q * cos_cm + beta * e), q * mp.sqrt(1 - cos_cm**2)


def jacobian(m1, m2, m3, m4, p1, cos_cm):
    along, across = lab_vector(m1, m2, m3, m4, p1, cos_cm)
    step = mpf(10)**-25

    def cos_lab(c):
        x, y = lab_vector(m1, m2, m3, m4, p1, c)
        return x / mp.hypot(x, y)
    slope = (cos_lab(cos_cm + step) - cos_lab(cos_cm - step)) / (2 * step)
    return {"p3_lab": mp.hypot(along, across), "theta3_lab": mp.atan2(across, along),
            "dOmegaCM_dOmegaLab": abs(1 / slope)}


def boost(p, q, sign):
    m, e = q[3], mp.sqrt(sum(x * x for x in q))
    beta = [sign * x / e for x in q[:3]]
    gamma = e / m
    dot = sum(b * x for b, x in zip(beta, p))
    size = sum(b * b for b in beta)
    shift = gamma * p[3] + ((gamma - 1) * dot / size if size else 0)
    return {"p": [x + b * shift for x, b in zip(p, beta)] + [gamma * (p[3] + dot)]}


def photon_opening(m, p, cos_cm):
    e = mp.sqrt(p * p + m * m)
    e1, e2 = (e + p * cos_cm) / 2, (e - p * cos_cm) / 2
    return {"E1": e1, "E2": e2, "theta": 2 * mp.asin(min(mpf(1), m / (2 * mp.sqrt(e1 * e2))))}


def photon_opening_limits(m, p):
    e = mp.sqrt(p * p + m * m)
    return {"theta_min": 2 * mp.asin(m / e), "theta_max": +mp.pi, "E_max": (e + p) / 2, "E_min": (e - p) / 2}


def dalitz_limits(M, m1, m2, m3, m12sq):
    m12 = mp.sqrt(m12sq)
    if m12 < m1 + m2 or m12 > M - m3:
        raise Refused("outside_region")
    e3, p3 = (M * M - m12sq - m3**2) / (2 * m12), None
    p3 = mp.sqrt(max(mpf(0), e3**2 - m3**2))
    out = {}
    for name, ma, mb in (("m13sq", m1, m2), ("m23sq", m2, m1)):
        ea = (m12sq + ma**2 - mb**2) / (2 * m12)
        pa = mp.sqrt(max(mpf(0), ea**2 - ma**2))
        out[name + "_min"] = (ea + e3)**2 - (pa + p3)**2
        out[name + "_max"] = (ea + e3)**2 - (pa - p3)**2
    return out


def kn_kernel(k, c):
    p = 1 / (1 + k * (1 - c))
    return p, p * p * (p + 1 / p - (1 - c * c)) / 2


def graded(f, scale):
    """Integral of f(u) over 0 <= u <= 2 whose scale of variation is u ~ scale."""
    cuts = [mpf(0)]
    at = min(mpf(1), scale) / 4
    while at < 2:
        cuts.append(at)
        at *= 4
    return mp.quad(f, cuts + [mpf(2)])


def kn_total(k):
    return {"sigma_over_sigmaT": mpf(3) / 4 * graded(lambda u: kn_kernel(k, 1 - u)[1], 1 / k)}


def kn_differential(k, cos_theta):
    p, value = kn_kernel(k, cos_theta)
    return {"kprime_over_k": p, "dsigma_dOmega_over_re2": value}


def kn_moments(k):
    def moment(power):
        return graded(lambda u: (1 - kn_kernel(k, 1 - u)[0])**power * kn_kernel(k, 1 - u)[1], 1 / k)
    total, transfer = moment(0), moment(1)
    return {"transfer_over_sigmaT": mpf(3) / 4 * transfer, "mean_scattered_share": 1 - transfer / total}


def pair_kernel(kind, v, c):
    """Cross-sections over r^2 of helicity 0 and 2 at y = 1 + v, from the helicity amplitudes."""
    y = 1 + v
    b2 = v / y
    d = 1 - b2 * c * c
    s2 = 1 - c * c
    if kind == "lepton":
        zero, two = 1 - b2**2, b2 * s2 * (2 - b2 * s2)
    else:
        zero, two = (1 - b2)**2 / 2, b2**2 * s2**2 / 2
    factor = mp.sqrt(b2) / (2 * y) / d**2
    return factor * zero, factor * two


def pair_integral(kind, v, limit, weight, which):
    """Integral over |c| <= limit; u = 1 - c is graded towards the forward peak. The
    integrand is divided by its value at right angles, since mp.quad stops at an
    absolute error."""
    scale = pair_kernel(kind, v, mpf(0))[which]

    def f(u):
        c = 1 - u
        return weight(c) * pair_kernel(kind, v, c)[which] / scale
    at, cuts = 1 - limit, [1 - limit]
    step = 1 / (8 * (1 + v))
    while at < 1:
        at = min(mpf(1), 1 - limit + step)
        cuts.append(at)
        step *= 4
    return 2 * scale * mp.quad(f, cuts)


def bw_total(y):
    total = sum(pair_integral("lepton", y - 1, mpf(1), lambda c: 1, i) for i in (0, 1)) / 2
    return {"sigma_over_pi_re2": 2 * total, "beta": mp.sqrt((y - 1) / y)}


def bw_differential(y, cos_theta):
    zero, two = pair_kernel("lepton", y - 1, cos_theta)
    return {"dsigma_dOmega_over_re2": (zero + two) / 2}


def pair_creation(kind, excess, cos_max):
    zero, two = (pair_integral(kind, excess, cos_max, lambda c: 1, i) for i in (0, 1))
    zero2, two2 = (pair_integral(kind, excess, mpf(1), lambda c: c * c, i) for i in (0, 1))
    zero1, two1 = (pair_integral(kind, excess, mpf(1), lambda c: 1, i) for i in (0, 1))
    return {"zero": 2 * zero, "two": 2 * two, "unpolarised": zero + two,
            "cos2_zero": zero2 / zero1, "cos2_two": two2 / two1, "cos2": (zero2 + two2) / (zero1 + two1)}


def annihilation_total(gamma):
    w = mp.sqrt(gamma**2 - 1)
    return {"sigma_over_pi_re2": ((gamma**2 + 4 * gamma + 1) / w**2 * mp.log(gamma + w) - (gamma + 3) / w)
            / (gamma + 1)}


def laser_edge(E_beam, m_beam, omega):
    p = mp.sqrt(E_beam**2 - m_beam**2)
    return {"omega_max": omega * (E_beam + p) / (E_beam - p + 2 * omega)}


def backscatter_frame(E_beam, m_beam, omega, angle):
    """Energy and momentum of the whole, p.k, and the ends of the spectrum."""
    angle = +mp.pi if angle == mpf(math.pi) else angle
    p = mp.sqrt(E_beam**2 - m_beam**2)
    e, total = E_beam + omega, mp.hypot(p + omega * mp.cos(angle), omega * mp.sin(angle))
    pk = omega * (E_beam - p * mp.cos(angle))
    s = m_beam**2 + 2 * pk
    return e, total, pk, pk * (e - total) / s, pk * (e + total) / s


def backscatter(E_beam, m_beam, omega, angle, energy):
    """Spectrum in units of r^2 per GeV and the share of the photons below the energy, from
    the invariant cross-section averaged numerically over azimuth."""
    e, total, pk, low, high = backscatter_frame(E_beam, m_beam, omega, angle)
    root = mp.sqrt(m_beam**2 + 2 * pk)
    # Energy of the light: w = gamma (pk/root)(1 + B cos(chi)).
    cos_chi = (omega * root * root / pk - e) / total
    sin_chi = mp.sqrt(max(mpf(0), 1 - cos_chi**2))
    x = 2 * pk / m_beam**2
    points = 1 if angle == mpf(math.pi) else 16
    azimuths = [mp.cos(mp.pi * (2 * j + 1) / points) for j in range(points)]

    def bracket(turn):
        y = x / (1 + x) * (1 - turn) / 2
        r = y / (x * (1 - y))
        return 1 / (1 - y) + 1 - y - 4 * r * (1 - r)

    def density(h):
        c = 2 * h - 1
        across = sin_chi * mp.sqrt(max(mpf(0), 1 - c * c)) if points > 1 else 0
        return mp.fsum(bracket(cos_chi * c + across * a) for a in azimuths) / points
    share = (energy - low) / (high - low)
    cuts = [mpf(i) / 4 for i in range(5)]
    return {"lowest": low, "highest": high, "spectrum": 2 * mp.pi / (1 + x) * density(share) / (high - low),
            "fraction": mp.quad(density, [c for c in cuts if c < share] + [share]) / mp.quad(density, cuts)}


def pair_energy_weight(v):
    """y sigma/(pi r^2) at v = y - 1, unpolarised."""
    y = 1 + v
    b = mp.sqrt(v / y)
    return ((3 - b**4) * mp.log((1 + b)**2 * y) - 2 * b * (2 - b * b)) / 2


def log_integral(f, low, high, extra=()):
    """Integral of f(v) dv over low..high in ln v, cut into short pieces, the integrand
    divided by its largest value at a cut, since mp.quad stops at an absolute error."""
    a, b = mp.log(low), mp.log(high)
    count = int((b - a) / 4) + 1
    cuts = sorted([a + (b - a) * i / count for i in range(count + 1)] + [mp.log(x) for x in extra])
    scale = max(abs(mp.exp(t) * f(mp.exp(t))) for t in cuts)
    return scale * mp.quad(lambda t: mp.exp(t) * f(mp.exp(t)) / scale, cuts)


def field_black_body(E, T, m):
    """Absorption per metre over pi r^2 in square metre."""
    kt = BOLTZMANN * T / (CHARGE * mpf(10)**9)
    hbar_c = PLANCK * LIGHT / (2 * mp.pi) / (CHARGE * mpf(10)**9)
    x = m * m / (E * kt)
    value = log_integral(lambda v: -pair_energy_weight(v) * mp.log1p(-mp.exp(-x * (1 + v))),
                         mpf(10)**-20 / max(x, 1), 90 / x)
    return {"per_metre": 2 / mp.pi**2 * (kt / hbar_c)**3 * x * x * value}


def field_power_law(E, index, low, high, m):
    """Absorption per metre over pi r^2 in square metre, for one photon per cubic metre."""
    norm = mp.log(high / low) if index == 1 else (high**(1 - index) - low**(1 - index)) / (1 - index)

    def f_of(e):
        e = max(e, low)
        q = index + 1
        return (mp.log(high / e) if q == 0 else (e**-q - high**-q) / q) / norm
    v1, v2 = E * low / m**2 - 1, E * high / m**2 - 1
    if v2 <= 0:
        return {"per_metre": mpf(0)}
    value = log_integral(lambda v: pair_energy_weight(v) * f_of(m * m * (1 + v) / E),
                         min(v2, 1) * mpf(10)**-18, v2, [v1] if v1 > 0 else [])
    return {"per_metre": 2 * m**4 / E**2 * value}


def collider_sqrt_s(m1, p1, m2, p2, angle):
    e1, e2 = mp.hypot(m1, p1), mp.hypot(m2, p2)
    return {"sqrt_s": mp.sqrt(m1**2 + m2**2 + 2 * (e1 * e2 - p1 * p2 * mp.cos(angle)))}


def rapidity(px, py, pz, m):
    pt2 = px * px + py * py
    e, p = mp.sqrt(pt2 + pz * pz + m * m), mp.sqrt(pt2 + pz * pz)
    return {"rapidity": mp.log((e + pz) / (e - pz)) / 2, "pseudorapidity": mp.log((p + pz) / (p - pz)) / 2}


# ------------------------------------------------------------------- inputs

class Draw:
    """Random inputs, all doubles."""

    def __init__(self, seed):
        self.rng = random.Random(seed)

    def log(self, low, high):
        return math.exp(self.rng.uniform(math.log(low), math.log(high)))

    def flat(self, low, high):
        return self.rng.uniform(low, high)

    def mass(self):
        return self.rng.choice(MASSES)

    def pick(self, *choices):
        return self.rng.choice(choices)

    def direction(self, size):
        c, phi = self.flat(-1, 1), self.flat(-math.pi, math.pi)
        s = math.sqrt(1 - c * c)
        return [size * s * math.cos(phi), size * s * math.sin(phi), size * c]

    def reaction(self, elastic=False):
        m1, m2 = self.pick(0.0, self.mass()), self.mass()
        if elastic:
            m3, m4 = m1, m2
        else:
            m3, m4 = self.pick(0.0, self.mass()), self.mass()
        least = max(m3 + m4, m1 + m2)
        root = least * (1 + self.log(1e-9, 1e3))
        p1 = math.sqrt(max(0.0, ((root * root - m1 * m1 - m2 * m2) / (2 * m2))**2 - m1 * m1))
        return {"m1": m1, "m2": m2, "m3": m3, "m4": m4, "p1": p1 * (1 + 1e-12)}


def draw_kallen(d, i):
    a, b = d.log(1e-6, 1e6), d.log(1e-6, 1e6)
    if i % 2:
        return {"a": a, "b": b, "c": d.log(1e-12, 1e6)}, ["random"]
    b = (math.sqrt(a) * d.flat(0.1, 0.9))**2
    return {"a": a, "b": b, "c": (math.sqrt(a) - math.sqrt(b))**2 * (1 + d.log(1e-14, 1e-6))}, ["near-threshold"]


def draw_two_body(d, i):
    m1, m2 = d.mass(), d.pick(0.0, d.mass())
    if i % 8 == 7:
        return {"M": (m1 + m2) * (1 - d.log(1e-12, 0.5)), "m1": m1, "m2": m2}, ["below-threshold"]
    rise = d.log(1e-12, 1e-3) if i % 2 else d.log(1e-3, 1e6)
    return {"M": (m1 + m2) * (1 + rise), "m1": m1, "m2": m2}, ["near-threshold" if i % 2 else "random"]


def draw_two_body_s(d, i):
    given, tags = draw_two_body(d, i % 7)
    return {"s": given.pop("M")**2, **given}, tags


def draw_rows(d, i):
    rows = [d.direction(d.log(1e-3, 1e6 if i % 2 else 1e2)) + [d.pick(0.0, d.mass())] for _ in range(d.rng.randint(2, 6))]
    return rows, ["random", "n=%d" % len(rows)]


def draw_invariant_mass_m(d, i):
    rows, tags = draw_rows(d, i)
    return {"p3m": rows}, tags


def draw_invariant_mass_E(d, i):
    rows, tags = draw_rows(d, i)
    return {"p4": [r[:3] + [math.sqrt(sum(x * x for x in r))] for r in rows]}, tags


def draw_photon_pair(d, i):
    return {"E1": d.log(1e-3, 1e4), "E2": d.log(1e-3, 1e4), "theta": d.log(1e-9, 3)}, ["random"]


def draw_threshold(d, i):
    beam, target = d.pick(0.0, d.mass()), d.mass()
    final = [d.mass() for _ in range(d.rng.randint(1, 4))]
    if sum(final) <= beam + target:
        final.append(beam + target - sum(final) + d.log(1e-9, 10))
    return {"m_beam": beam, "m_target": target, "m_final": final}, ["random"]


def draw_lab_angle(d, i):
    given = d.reaction(i % 3 == 0)
    return {**given, "theta3": d.log(1e-6, 3.1)}, ["elastic" if i % 3 == 0 else "random"]


def draw_max_lab_angle(d, i):
    given = d.reaction(i % 3 == 0)
    return given, ["elastic" if i % 3 == 0 else "random"]


def draw_t_range(d, i):
    m = [d.pick(0.0, d.mass()), d.mass(), d.pick(0.0, d.mass()), d.mass()]
    root = max(m[0] + m[1], m[2] + m[3]) * (1 + d.log(1e-9, 1e4))
    return {"m1": m[0], "m2": m[1], "m3": m[2], "m4": m[3], "s": root * root}, ["random"]


def draw_jacobian(d, i):
    return {**d.reaction(i % 3 == 0), "cos_cm": d.flat(-0.999, 0.999)}, ["elastic" if i % 3 == 0 else "random"]


def draw_boost(d, i):
    m = d.mass()
    vector = d.direction(d.log(1e-3, 1e3))
    return {"p": vector + [math.sqrt(sum(x * x for x in vector) + d.pick(0.0, m)**2)],
            "q": d.direction(d.log(1e-3, 1e4)) + [d.mass()]}, ["random"]


def draw_opening(d, i):
    m = d.pick(0.1349768, 0.547862)
    return {"m": m, "p": m * d.log(1e-6, 1e6), "cos_cm": d.flat(-0.999, 0.999)}, ["random"]


def draw_opening_limits(d, i):
    m = d.pick(0.1349768, 0.547862)
    return {"m": m, "p": m * d.log(1e-6, 1e6)}, ["random"]


def draw_dalitz(d, i):
    m = [d.pick(0.0, d.mass()), d.mass(), d.mass()]
    parent = sum(m) * (1 + d.log(1e-6, 1e2))
    low, high = m[0] + m[1], parent - m[2]
    if i % 8 == 7:
        return {"M": parent, "m1": m[0], "m2": m[1], "m3": m[2], "m12sq": (high * d.flat(1.01, 2))**2}, ["outside"]
    return {"M": parent, "m1": m[0], "m2": m[1], "m3": m[2],
            "m12sq": (low + (high - low) * d.flat(0.01, 0.99))**2}, ["interior"]


def draw_k(d, i):
    return {"k": d.log(1e-12, 1e-2) if i % 2 else d.log(1e-2, 1e9)}, ["soft" if i % 2 else "hard"]


def draw_k_cos(d, i):
    given, tags = draw_k(d, i)
    return {**given, "cos_theta": d.pick(d.flat(-1, 1), 1 - d.log(1e-12, 1e-2))}, tags


def draw_y(d, i):
    y = 1 + d.log(1e-12, 1e-2) if i % 2 else 1 + d.log(1e-2, 1e12)
    return {"y": y}, ["near-threshold" if i % 2 else "high-energy"]


def draw_y_cos(d, i):
    given, tags = draw_y(d, i)
    return {**given, "cos_theta": d.pick(d.flat(-1, 1), 1 - d.log(1e-12, 1e-2), 1.0)}, tags


def draw_pair(d, i):
    excess = d.log(1e-30, 1e-1) if i % 2 else d.log(1e-2, 1e12)
    return {"kind": "scalar" if i % 4 < 2 else "lepton", "excess": excess,
            "cos_max": d.pick(1.0, d.flat(0.05, 0.999))}, ["near-threshold" if i % 2 else "high-energy"]


def draw_gamma(d, i):
    gamma = 1 + d.log(1e-12, 1e-2) if i % 2 else 1 + d.log(1e-2, 1e9)
    return {"gamma": gamma}, ["near-threshold" if i % 2 else "high-energy"]


def draw_edge(d, i):
    m = d.pick(E_MASS, 0.1056583755, P_MASS)
    return {"E_beam": m * (1 + d.log(1e-6, 1e9)), "m_beam": m, "omega": d.log(1e-12, 1e-2)}, ["random"]


def draw_backscatter(d, i):
    given = {"E_beam": d.log(0.01, 100), "m_beam": E_MASS, "omega": d.log(1e-10, 1e-8),
             "angle": math.pi if i % 2 else d.flat(0.5, 3.1)}
    low, high = backscatter_frame(**{k: mpf(v) for k, v in given.items()})[3:]
    return {**given, "energy": float(low + mpf(d.flat(0.01, 0.999)) * (high - low))}, [
        "head-on" if i % 2 else "at-an-angle"]


def draw_black_body(d, i):
    t = d.pick(2.7255, d.log(0.1, 1e4))
    x = d.log(1e-6, 30)  # m^2/(E k T)
    return {"E": E_MASS**2 / (x * 8.617333262145e-14 * t), "T": t, "m": E_MASS}, ["thermal"]


def draw_power_law(d, i):
    low = d.log(1e-15, 1e-9)
    high = low * d.log(2, 1e6)
    v = d.log(1e-6, 1e4)
    edge = d.pick(low, high)
    return {"E": E_MASS**2 * (1 + v) / edge, "index": d.pick(1.0, -1.0, 2.0, d.flat(-3, 4)), "low": low, "high": high,
            "m": E_MASS}, ["from-" + ("low" if edge == low else "high")]


def draw_collider(d, i):
    return {"m1": d.pick(0.0, d.mass()), "p1": d.log(1e-2, 1e6), "m2": d.mass(), "p2": d.log(1e-2, 1e6),
            "angle": d.flat(0.01, 3.14)}, ["random"]


def draw_rapidity(d, i):
    px, py = d.log(1e-6, 10), -d.log(1e-6, 10)
    return {"px": px, "py": py, "pz": d.pick(-1, 1) * d.log(1e-6, 1e3), "m": d.pick(0.0, d.mass())}, ["random"]


FUNCTIONS = {
    "kallen": (lambda a, b, c: {"lambda": kallen(a, b, c)}, draw_kallen),
    "two_body_momentum": (two_body_momentum, draw_two_body),
    "two_body_momentum_s": (lambda s, m1, m2: {"p": rest_momentum(s, m1, m2)}, draw_two_body_s),
    "invariant_mass_m": (invariant_mass_m, draw_invariant_mass_m),
    "invariant_mass_E": (lambda p4: square_and_mass(p4), draw_invariant_mass_E),
    "photon_pair_mass": (lambda E1, E2, theta: {"m": 2 * mp.sqrt(E1 * E2) * abs(mp.sin(theta / 2))}, draw_photon_pair),
    "threshold": (threshold, draw_threshold),
    "lab_angle_solutions": (lab_angle_solutions, draw_lab_angle),
    "max_lab_angle": (max_lab_angle, draw_max_lab_angle),
    "t_range": (t_range, draw_t_range),
    "jacobian": (jacobian, draw_jacobian),
    "boost_from_rest": (lambda p, q: boost(p, q, 1), draw_boost),
    "boost_to_rest": (lambda p, q: boost(p, q, -1), draw_boost),
    "photon_opening_limits": (photon_opening_limits, draw_opening_limits),
    "photon_opening": (photon_opening, draw_opening),
    "dalitz_limits": (dalitz_limits, draw_dalitz),
    "kn_total": (kn_total, draw_k),
    "kn_differential": (kn_differential, draw_k_cos),
    "kn_moments": (kn_moments, draw_k),
    "bw_total": (bw_total, draw_y),
    "bw_differential": (bw_differential, draw_y_cos),
    "pair_creation": (pair_creation, draw_pair),
    "annihilation_total": (annihilation_total, draw_gamma),
    "laser_edge": (laser_edge, draw_edge),
    "backscatter": (backscatter, draw_backscatter),
    "field_black_body": (field_black_body, draw_black_body),
    "field_power_law": (field_power_law, draw_power_law),
    "collider_sqrt_s": (collider_sqrt_s, draw_collider),
    "rapidity": (rapidity, draw_rapidity),
}

# Relative bounds of answers that are no closed forms.
ACCURACY = {"backscatter": 1e-14, "field_black_body": 1e-14, "field_power_law": 1e-14}


# --------------------------------------------------------------- evaluation

def exact(value):
    """The input as exact multiple-precision numbers; text stays text."""
    if isinstance(value, list):
        return [exact(v) for v in value]
    return value if isinstance(value, str) else mpf(value)


def places(value, path=()):
    """The paths of all numbers in an input."""
    if isinstance(value, dict):
        return [p for k in value for p in places(value[k], path + (k,))]
    if isinstance(value, list):
        return [p for i, v in enumerate(value) for p in places(v, path + (i,))]
    return [] if isinstance(value, str) else [path]


def moved(value, path, factor):
    """A copy of an input with the number at path multiplied by factor."""
    if not path:
        return value * factor
    if isinstance(value, dict):
        return {k: moved(v, path[1:], factor) if k == path[0] else v for k, v in value.items()}
    return [moved(v, path[1:], factor) if i == path[0] else v for i, v in enumerate(value)]


def flatten(out):
    """Scalar outputs by the name that conditions carry."""
    flat = {}
    for name, value in out.items():
        if isinstance(value, (bool, int)):
            continue
        if isinstance(value, list):
            flat.update({"%s[%d]" % (name, i): v for i, v in enumerate(value)})
        else:
            flat[name] = value
    return flat


def conditions(f, given, out):
    sums = {name: mpf(0) for name in flatten(out)}
    step = mpf(10)**-18
    for path in places(given):
        try:
            above, below = (flatten(f(**moved(given, path, 1 + sign * step))) for sign in (1, -1))
        except Refused:
            return {}
        if above.keys() != sums.keys() or below.keys() != sums.keys():
            return {}
        for name, value in flatten(out).items():
            if value:
                sums[name] += abs((above[name] - below[name]) / (2 * step) / value)
    return {name: (float(mp.nstr(s, 3)) if flatten(out)[name] else None) for name, s in sums.items()}


def text(value):
    if isinstance(value, list):
        return [text(v) for v in value]
    if isinstance(value, (bool, int)):
        return value
    return mp.nstr(value, 25) if value else "0"


def make(fn, count, seed):
    mp.dps = DIGITS
    f, draw = FUNCTIONS[fn]
    d = Draw("%d %s" % (seed, fn))
    cases = []
    for i in range(count):
        given, tags = draw(d, i)
        case = {"id": "%s-own-%02d" % (fn, i), "fn": fn, "tags": tags, "in": given}
        numbers = {k: exact(v) for k, v in given.items()}
        try:
            with mp.workdps(INTEGRAL_DIGITS if fn in INTEGRALS else DIGITS):
                out = f(**numbers)
        except Refused as reason:
            case["error"] = str(reason)
        else:
            case["out"] = {k: text(v) for k, v in out.items()}
            with mp.workdps(INTEGRAL_DIGITS if fn in INTEGRALS else DIGITS):
                case["cond"] = conditions(f, numbers, out)
        cases.append(case)
    return cases


def main():
    parser = argparse.ArgumentParser(description=__doc__.split("\n")[0])
    parser.add_argument("--seed", type=int, default=20260)
    parser.add_argument("--per-function", type=int, default=10)
    parser.add_argument("--only", help="one function, printed to standard output")
    options = parser.parse_args()
    if options.only:
        json.dump(make(options.only, options.per_function, options.seed), sys.stdout, indent=1)
        return
    with multiprocessing.Pool() as pool:
        made = pool.starmap(make, [(fn, options.per_function, options.seed) for fn in FUNCTIONS], 1)
    cases = [c for part in made for c in part]
    meta = {
        "what": "Second set of precision cases, made by more_cases.py; shape and units as precision-cases.json",
        "seed": options.seed,
        "mpmath": mpmath.__version__,
        "digits": DIGITS,
        "accuracy": ACCURACY,
    }
    lines = ",\n".join(json.dumps(c) for c in cases)
    target = pathlib.Path(__file__).with_name("own-cases.json")
    target.write_text('{"meta": %s,\n"cases": [\n%s\n]}\n' % (json.dumps(meta), lines))


if __name__ == "__main__":
    main()
