"""Reference values of g0(t): the defining integral along the real axis, nothing else.

  g0(t) = (1/pi) Int_0^inf dw J(w)/w^2 [coth(hbar w / 2 k_B T) (1 - cos wt) + i sin wt]

The axis is cut at the scales of J, of the temperature and of the oscillation and integrated by Gauss-Legendre rules to the
working precision. On the piece at w = 0, where f ~ w^(p-1), w = first u^m with m > 4/p removes the algebraic end point.
No closed form is used.
"""
import mpmath
from mpmath import mpf

from common import constants

DIGITS = 25


def edges(points, period, first, last):
    """Ascending edges: doubling from `first`, never wider than one and a half periods, through all given points."""
    marks = sorted(p for p in points if first < p < last) + [last]
    out, x = [first], first
    for mark in marks:
        while x < mark:
            step = min(x, period * mpf(3) / 2)
            x = mark if mark - x <= step * mpf("1.2") else x + step
            out.append(x)
    return out


def broadening(density, scales, upper, temperature, time, exponent=1):
    """density: J(w) in rad/ps; scales: where J bends; upper: where it ends at working precision; J ~ w^exponent at 0."""
    hbar, boltzmann = constants()
    th = boltzmann * mpf(temperature) / hbar
    t = mpf(time)

    def real(w):
        f = density(w) / (mpmath.pi * w * w) * 2 * mpmath.sin(w * t / 2) ** 2
        return f * mpmath.coth(w / (2 * th)) if th > 0 else f

    def imaginary(w):
        return density(w) / (mpmath.pi * w * w) * mpmath.sin(w * t)

    first = min([s / 4 for s in scales] + [1 / t] + ([th] if th > 0 else []))
    cuts = edges(list(scales) + ([th * k for k in (1, 4, 16)] if th > 0 else []), 2 * mpmath.pi / t, first, upper)
    values = []
    for f in (real, imaginary):
        m = max(2, int(mpmath.ceil(5 / mpf(exponent))))
        piece = lambda u: f(first * u**m) * first * m * u ** (m - 1) if u > 0 else mpf(0)
        total = mpmath.quad(piece, [0, mpf(1) / 8, mpf(1) / 2, 1], method="tanh-sinh")
        for a, b in zip(cuts, cuts[1:]):
            total += mpmath.quad(f, [a, b], method="gauss-legendre", maxdegree=5)
        values.append(float(total))
    return values


def broadening_with_tail(density, scales, temperature, time):
    """The same for J without an end (J ~ 1/w or steeper): beyond ten times the scales Int f - Int f cos wt, the second an
    alternating series of half periods, summed by extrapolation (mpmath.quadosc)."""
    hbar, boltzmann = constants()
    th = boltzmann * mpf(temperature) / hbar
    t = mpf(time)
    start = 10 * max(scales + ([th] if th > 0 else []) + [1 / t])
    # On a multiple of half a period; quadosc counts its half periods from its own lower limit 0.
    start = mpmath.ceil(start * t / mpmath.pi) * mpmath.pi / t
    near = broadening(density, scales, start, temperature, time)

    def f(w):
        return density(w) / (mpmath.pi * w * w)

    def thermal(w):
        return f(w) * mpmath.coth(w / (2 * th)) if th > 0 else f(w)

    whole = mpmath.quad(thermal, [start, 10 * start, 1000 * start, mpmath.inf])
    cosine = mpmath.quadosc(lambda u: thermal(start + u) * mpmath.cos((start + u) * t), [0, mpmath.inf], omega=t)
    sine = mpmath.quadosc(lambda u: f(start + u) * mpmath.sin((start + u) * t), [0, mpmath.inf], omega=t)
    return [float(near[0] + whole - cosine), float(near[1] + sine)]
