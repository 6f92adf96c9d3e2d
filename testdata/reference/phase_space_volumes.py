"""Volumes of massive n-body phase space, n = 5 to 12, for TestMassiveVolumes in
kinematics/generation: by a way of their own, which neither draws points nor splits the
particles into two. Needs mpmath and a minute or two.

The integral of exp(-b E) over d3p/(2E) of one particle is 2 pi (m/b) K1(b m), so that of
several together is the product L(b), and also the integral over their total mass of
2 pi (M/b) K1(b M) V(M) dM^2. Inverting this transform of Meijer's gives

    V(M) = 1/(4 pi^2 i M) integral of b^2 L(b) I1(b M) db

along b = c + i y. The value does not depend on c, which is the check of its digits: both
must agree, and the closed form of nearly massless particles, to 1e-10.

    python3 testdata/reference/phase_space_volumes.py
"""

from collections import Counter

from mpmath import besseli, besselk, factorial, mp, mpf, pi

mp.dps = 20

PION, PROTON, ETA = mpf("0.13957039"), mpf("0.938272089"), mpf("0.547862")
CASES = [
    (mpf(1), 3 * [mpf("0.1")] + 2 * [mpf("0.05")]),
    (mpf(2), [PROTON] + 5 * [PION]),
    (mpf("2.5"), [PROTON] + 6 * [PION]),
    (mpf(4), [PROTON, ETA, ETA] + 5 * [PION]),
    (mpf(4), [PROTON] + 8 * [PION]),
    (mpf("2.6"), [PROTON] + 9 * [PION]),
    (mpf(5), [PROTON, PROTON, PROTON] + 8 * [PION]),
    (mpf("4.4"), [PROTON] + 11 * [PION]),
]


def volume(mass, masses, shift):
    """The integrand is analytic for |Re b - c| < c, so that sums over a step of c/12 are good to
    exp(-24 pi); it falls as y^(3/2 - 3n/2), and the sum ends below 1e-13 of what it began with."""
    c = shift / (mass - sum(masses))
    step, total, k, first = c / 12, mpf(0), 0, None
    counts = Counter(masses)
    while True:
        b = c + 1j * k * step
        product = b**2 * besseli(1, b * mass)
        for m, count in counts.items():
            product *= (2 * pi * m / b * besselk(1, b * m)) ** count
        first = first or abs(product)
        total += product.real / 2 if k == 0 else product.real
        if abs(product) < first * mpf("1e-13"):
            return total * step / (2 * pi**2 * mass)  # both halves of the line, db = i dy
        k += 1


def massless(mass, n):
    return (pi / 2) ** (n - 1) * mass ** (2 * n - 4) / (factorial(n - 1) * factorial(n - 2))


if __name__ == "__main__":
    tiny = volume(mpf(2), 6 * [mpf("1e-9")], 8)
    assert abs(tiny / massless(2, 6) - 1) < mpf("1e-10"), tiny
    for mass, masses in CASES:
        value, other = volume(mass, masses, 2 * len(masses)), volume(mass, masses, 3 * len(masses))
        assert abs(value / other - 1) < mpf("1e-10"), (value, other)
        print(len(masses), mp.nstr(mass, 6), [mp.nstr(m, 10) for m in masses], mp.nstr(value, 11), flush=True)
