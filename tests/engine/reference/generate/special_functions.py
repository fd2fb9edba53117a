"""Writes special-functions.json: values of the special functions from mpmath, which evaluates them by its own methods."""
import random

import mpmath
from mpmath import mpc, mpf

from common import write

DIGITS = 40
mpmath.mp.dps = DIGITS
random.seed(20261201)


def pair(z):
    return [float(mpmath.re(z)), float(mpmath.im(z))]


def spread(low, high):
    return 10 ** random.uniform(low, high)


def faddeeva(z):
    """exp(-z^2) erfc(-iz), with enough digits for the cancellation between the factors."""
    with mpmath.workdps(DIGITS + int(abs(z) ** 2) + 10):
        return mpmath.exp(-z * z) * mpmath.erfc(-1j * z)


cases = []
for name, function in (
    ("logGamma", mpmath.loggamma),
    ("digamma", mpmath.digamma),
    ("trigamma", lambda z: mpmath.psi(1, z)),
):
    for _ in range(40):
        z = mpc(spread(-2, 2), spread(-3, 3) * random.choice([0, 1, -1]))
        cases.append({"function": name, "argument": pair(z), "value": pair(function(z))})
for _ in range(60):
    s = round(random.uniform(-0.95, 5), 3)
    z = mpc(1 + spread(-2, 1.5), spread(-3, 2) * random.choice([0, 1, -1]))
    cases.append({"function": "hurwitzZeta", "order": s, "argument": pair(z), "value": pair(mpmath.zeta(mpf(s), z))})
for _ in range(200):
    z = mpc(spread(-5, 1.2) * random.choice([1, -1]), spread(-7, 1.2) * random.choice([0, 1, 1, 1]))
    z = mpc(*pair(z))
    cases.append({"function": "faddeeva", "argument": pair(z), "value": pair(faddeeva(z))})
for x in (1e-6, 0.03, 0.5, 0.92, 1, 2.4, 7, 30):
    value = mpmath.quad(lambda u: mpmath.exp((u - x) * (u + x)), mpmath.linspace(0, x, 30))
    cases.append({"function": "dawson", "argument": [x, 0], "value": [float(value), 0]})
for _ in range(40):
    x = spread(-2, 2.1)
    cases.append({"function": "gamma", "argument": [x, 0], "value": [float(mpmath.gamma(x)), 0]})
for _ in range(60):
    y = spread(-5, 3)
    cases.append({"function": "scaledE1", "argument": [y, 0], "value": [float(mpmath.exp(y) * mpmath.e1(y)), 0]})
    cases.append({"function": "scaledEi", "argument": [y, 0], "value": [float(mpmath.exp(-y) * mpmath.ei(y)), 0]})
for _ in range(60):
    m, z = random.randint(0, 60), spread(-6, 5)
    value = mpmath.exp(-mpf(z)) * mpmath.besseli(m, mpf(z))
    cases.append({"function": "besselI", "order": m, "argument": [z, 0], "value": [float(value), 0]})
for _ in range(120):
    n, x = random.randint(0, 19), spread(-5, 4)
    value = mpmath.sqrt(mpmath.pi / (2 * mpf(x))) * mpmath.besselj(n + mpf(1) / 2, mpf(x))
    cases.append({"function": "sphericalBessel", "order": n, "argument": [x, 0], "value": [float(value), 0]})

write("special-functions.json", "special_functions.py", "definitions: NIST Handbook of Mathematical Functions (2010)", DIGITS, "1e-16 relative", cases)
