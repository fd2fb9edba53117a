"""Writes bath-integrals.json: reorganisation energy, plateau of Re g0, variance and third moment of power-law baths.

  lambda = (hbar/pi) Int J/w dw                          plateau  = (1/pi) Int J coth(hbar w / 2 k_B T)/w^2 dw
  variance = (hbar^2/pi) Int J coth(...) dw              third    = (hbar^3/pi) Int J w dw
"""
import mpmath
from mpmath import mpf

from common import constants, write

DIGITS = 30
mpmath.mp.dps = DIGITS
hbar, boltzmann = constants()


def integral(f, points, m):
    """From 0: w = first u^m on the first piece removes the algebraic end point."""
    first = points[0]
    total = mpmath.quad(lambda u: f(first * u**m) * first * m * u ** (m - 1), [0, mpf(1) / 8, mpf(1) / 2, 1])
    return total + mpmath.quad(f, points)


cases = []
for p in (0.3, 0.5, 1, 1.3, 1.7, 2, 2.02, 2.5, 3, 4.7, 6):
    for shape, q in (("gaussian", 2), ("exponential", 1)):
        for temperature in (0, 4, 300):
            a, cutoff = mpf("0.35"), mpf("1.7")
            wc, th = cutoff / hbar, boltzmann * temperature / hbar
            density = lambda w: mpmath.pi * a * w ** mpf(p) * wc ** (1 - mpf(p)) * mpmath.exp(-((w / wc) ** q))
            coth = (lambda w: mpmath.coth(w / (2 * th))) if temperature > 0 else (lambda w: mpf(1))
            scale = min(wc, th) if temperature > 0 else wc
            end = wc * (9 if q == 2 else 80)
            points = [scale / 8 * mpf(2) ** k for k in range(60) if scale / 8 * mpf(2) ** k < end] + [end]
            low = mpf(p) - (2 if temperature > 0 else 1)
            m = lambda power: max(2, int(mpmath.ceil(5 / power)))
            cases.append({
                "couplingStrength": 0.35, "exponent": p, "cutoffEnergyMeV": 1.7, "cutoffShape": shape, "temperatureK": temperature,
                "reorganizationEnergyMeV": float(hbar / mpmath.pi * integral(lambda w: density(w) / w, points, m(mpf(p)))),
                "plateau": float(integral(lambda w: density(w) * coth(w) / w**2, points, m(low)) / mpmath.pi) if low > 0 else None,
                "varianceMeV2": float(hbar**2 / mpmath.pi * integral(lambda w: density(w) * coth(w), points, m(mpf(p)))),
                "thirdMeV3": float(hbar**3 / mpmath.pi * integral(lambda w: density(w) * w, points, 2)),
            })

write("bath-integrals.json", "bath_integrals.py", "definitions: Mukamel, Principles of Nonlinear Optical Spectroscopy (1995), ch. 8", DIGITS, "1e-15 relative", cases)
