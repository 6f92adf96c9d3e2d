"""Writes elementary.csv: values of elementary functions to 50 digits.

Run:  python3 elementary.py > elementary.csv     (mpmath 1.4.1)

Arguments are exact doubles in hexadecimal. Each function gets hard arguments
(near zeros, poles, branch points and changes of formula)
and seeded random ones.
"""
import math
import random

import mpmath as mp

mp.mp.prec = 1400
random.seed(20240607)


def spread(low, high, n, signs=(1,)):
    """n doubles with logarithmically spread magnitudes."""
    return [random.choice(signs) * math.exp(random.uniform(math.log(low), math.log(high))) for _ in range(n)]


def near(points, n=3):
    """The points and their neighbours a few ulp and a few thousand ulp away."""
    out = []
    for p in points:
        up = down = float(p)
        out.append(up)
        for _ in range(n):
            up, down = math.nextafter(up, math.inf), math.nextafter(down, -math.inf)
            out += [up, down]
        out += [p * (1 + 1e-12), p * (1 - 1e-12), p * (1 + 1e-7), p * (1 - 1e-7)]
    return out


BOTH = (1, -1)
multiples = [float(k * mp.pi / 2) for k in (1, 2, 3, 4, 5, 10, 11, 100, 710, 355, 103993, 1000000, 2**28 + 1)]
ln2s = [float(k * mp.log(2) / 2) for k in (-3, -1, 1, 2, 3, 5, 100)]
# sin of this argument is 4.7e-19 off zero; from memory the double nearest a multiple of pi/2.
hardest = math.ldexp(6381956970095103, 797)
huge = [hardest, 1e22, 1e300, 1.7e308, 2.0**60, 2.0**30 + 0.5, 1e15]

circular = spread(1e-12, 40, 60, BOTH) + near(multiples, 2) + near([math.pi / 4, 3 * math.pi / 4])
arguments = {
    "exp": spread(1e-17, 700, 60, BOTH) + near(ln2s) + [709.7, -708.0, -745.0, -744.9, 1e-320],
    "expm1": spread(1e-17, 700, 60, BOTH) + near(ln2s) + [-37.5, -56.5, 56.5, 709.7],
    "log": spread(1e-300, 1e300, 50) + spread(0.1, 10, 30) + near([1.0, 0.5, 2.0, math.sqrt(2), math.sqrt(0.5), math.e]) + [5e-324, 1e-310],
    "log1p": spread(1e-17, 1e300, 50) + [-v for v in spread(1e-17, 1, 40)] + near([-0.2929, 0.4142, 1.0, -0.5, -0.999999]),
    "sin": circular + huge,
    "cos": circular + huge,
    "tan": circular + huge,
    "asin": spread(1e-12, 1, 60, BOTH) + near([0.5, -0.5, 0.7, math.sqrt(0.5)]) + [1.0, -1.0, 1 - 2**-53, 1 - 2**-40, -1 + 2**-53, 0.975],
    "acos": spread(1e-12, 1, 60, BOTH) + near([0.5, -0.5, 0.7, math.sqrt(0.5)]) + [-1.0, 1 - 2**-53, 1 - 2**-40, -1 + 2**-53, 0.975],
    "atan": spread(1e-12, 1e12, 60, BOTH) + near([0.4375, 0.66, 0.6875, 1.1875, 1.0, 2.4375, math.tan(3 * math.pi / 8)]),
    "sinh": spread(1e-17, 700, 50, BOTH) + near([0.5, 1.0, 21.0, 22.0]) + [710.4, -710.4],
    "cosh": spread(1e-17, 700, 50, BOTH) + near([0.3466, 1.0, 21.0, 22.0]) + [710.4, -710.4],
    "tanh": spread(1e-17, 40, 50, BOTH) + near([0.625, 1.0, 19.0, 22.0]),
    "asinh": spread(1e-17, 1e300, 50, BOTH) + near([2.0, 0.5, 1.0, 2.0**28, 2.0**-28]),
    "acosh": [1 + v for v in spread(1e-15, 1, 40)] + spread(2, 1e300, 30) + near([2.0, 2.0**28]),
    "atanh": spread(1e-17, 1, 60, BOTH) + near([0.5, -0.5, 2.0**-28]) + [1 - 2**-53, -1 + 2**-53],
    "erf": spread(1e-12, 6, 60, BOTH) + near([0.84375, 1.25, 2.857142857142857, 0.25]),
    "erfc": spread(1e-12, 26, 60, BOTH) + near([0.84375, 1.25, 2.857142857142857, 0.25]),
    "exp2": spread(1e-17, 1000, 60, BOTH) + near([0.5, 1.5, -0.5]) + [1023.9, -1073.5],
    "cbrt": spread(1e-300, 1e300, 60, BOTH) + near([1.0, 8.0, 27.0]) + [5e-324, 1e-310],
}
pairs = {
    "atan2": [(a, b) for a, b in zip(spread(1e-9, 1e9, 60, BOTH), spread(1e-9, 1e9, 60, BOTH))]
    + [(1e-300, 1.0), (1e-8, -1.0), (-1e-8, -1.0), (1.0, 1.0), (1.0, -1.0), (1e9, 1e-9), (-1e9, 1e-9), (0.5, math.nextafter(0.5, 1))],
    "hypot": [(a, b) for a, b in zip(spread(1e-9, 1e9, 60, BOTH), spread(1e-9, 1e9, 60, BOTH))]
    + [(1e300, 1e300), (3e-310, 4e-310), (3.0, 4.0), (1.0, 1e-8), (5e-324, 5e-324), (1e154, 1e-154)],
    "pow": [(a, random.uniform(-20, 20)) for a in spread(1e-9, 1e9, 80)]
    + [(math.nextafter(1, 2), 1e15), (math.nextafter(1, 0), 1e17), (1.0000001, 1e9), (2.0, 1023.5), (2.0, -1060.5), (10.0, 308.0),
       (10.0, -320.0), (-2.0, 3.0), (-1.5, 7.0), (0.5, 1074.0), (1e-300, 0.001), (3.0, 0.3333333333333333), (1 + 2**-30, 2.0**39), (0.9999999999, -7e12)],
    "gammaq": [(a / 2, a / 2 * f) for a in (1, 2, 3, 5, 8, 20, 61, 100, 101, 400, 2000) for f in (1e-6, 0.1, 0.7, 1.0, 1.1, 1.6, 4.0)]
    + [(1.5, 500.0), (0.1, 0.01), (0.1, 5.0), (3.7, 2.2), (100000.0, 100500.0)],
}


def value(name, *args):
    x = [mp.mpf(a) for a in args]
    return {
        "exp": mp.exp, "expm1": mp.expm1, "log": mp.log, "log1p": mp.log1p, "sin": mp.sin, "cos": mp.cos, "tan": mp.tan,
        "asin": mp.asin, "acos": mp.acos, "atan": mp.atan, "sinh": mp.sinh, "cosh": mp.cosh, "tanh": mp.tanh,
        "asinh": mp.asinh, "acosh": mp.acosh, "atanh": mp.atanh,
        "erf": mp.erf, "erfc": mp.erfc, "exp2": lambda v: mp.power(2, v),
        "gammaq": lambda a, v: mp.gammainc(a, v, mp.inf, regularized=True),
        "cbrt": lambda v: mp.sign(v) * mp.cbrt(abs(v)),
        "atan2": mp.atan2, "hypot": mp.hypot, "pow": mp.power,
    }[name](*x)


def emit(name, *args):
    result = value(name, *args)
    print(",".join([name, args[0].hex(), args[1].hex() if len(args) > 1 else "", mp.nstr(result, 50, min_fixed=1, max_fixed=0)]))


print("function,x,y,value")
for name, points in arguments.items():
    seen = set()
    for x in points:
        if x in seen or not math.isfinite(x):
            continue
        if name in ("asin", "acos") and abs(x) > 1 or name == "atanh" and abs(x) >= 1 or name == "acosh" and x <= 1 or name == "log1p" and x <= -1:
            continue
        seen.add(x)
        emit(name, x)
for name, points in pairs.items():
    for x, y in points:
        emit(name, x, y)
