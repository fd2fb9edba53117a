"""Writes tabulated-broadening.json and expression-broadening.json: g0(t) of a table and of typed formulas.

The table is interpolated by scipy's PchipInterpolator; its cubic pieces are then integrated with mpmath. The formulas are
written down again in Python.
"""
import mpmath
import numpy
import scipy
from mpmath import mpf
from scipy.interpolate import PchipInterpolator

from broadening import DIGITS, broadening
from common import constants, write

mpmath.mp.dps = DIGITS
hbar, boltzmann = constants()
SOURCE = "definition of g0: Mukamel, Principles of Nonlinear Optical Spectroscopy (1995), ch. 8"


def case(term, density, scales, upper, temperature, times, exponent):
    values = [broadening(density, scales, upper, temperature, t, exponent) for t in times]
    print(term["kind"], temperature, flush=True)
    return {"term": term, "temperatureK": temperature, "timesPs": times, "re": [v[0] for v in values], "im": [v[1] for v in values]}


energies = [0.3, 0.55, 0.9, 1.4, 1.5, 2.2, 3.1, 3.3, 4.8, 6.0, 7.5, 9.0]
densities = [0.02, 0.11, 0.4, 0.9, 0.85, 0.7, 1.3, 1.3, 0.6, 0.25, 0.3, 0.0]
spline = PchipInterpolator(numpy.array(energies), numpy.array(densities))


def table(exponent):
    def density(w):
        e = w * hbar
        if e < energies[0]:
            value = mpf(densities[0]) * (e / mpf(energies[0])) ** mpf(exponent)
        else:
            k = min(max(0, sum(1 for x in energies if x <= e) - 1), len(energies) - 2)
            d = e - mpf(energies[k])
            a, b, c, f = (mpf(float(v)) for v in spline.c[:, k])
            value = ((a * d + b) * d + c) * d + f
        return value / hbar

    return density


cases = []
for exponent, temperature in ((3, 0), (3, 77), (1, 4), (0.6, 30)):
    term = {"kind": "tabulated", "energiesMeV": energies, "densityMeV": densities, "lowEnergyExponent": exponent}
    marks = [mpf(x) / hbar for x in energies]
    cases.append(case(term, table(exponent), marks[:-1], marks[-1], temperature, [0.003, 0.1, 2, 12], exponent))
write("tabulated-broadening.json", "given_broadening.py", f"{SOURCE}; interpolation by scipy {scipy.__version__} PchipInterpolator", DIGITS, "1e-14 relative", cases)

cases = []
exp, sin, sqrt = mpmath.exp, mpmath.sin, mpmath.sqrt
for formula, function, scales, upper, exponent in (
    ("0.2 * E^3 / 4 * exp(-E / 2) * (1 + 0.5 * sin(3 * E)^2)", lambda e: mpf("0.2") * e**3 / 4 * exp(-e / 2) * (1 + sin(3 * e) ** 2 / 2), [0.3, 0.7] + list(range(1, 140)), 140, 3),
    ("0.05 sqrt(E) exp(-(E / 3)^2)", lambda e: mpf("0.05") * sqrt(e) * exp(-((e / 3) ** 2)), [1, 3], 24, 0.5),
    ("E^2 * exp(-(E - 8)^2 / (2 * 0.4^2)) / 50 + 0.1 E / (1 + E^4)", lambda e: e**2 * exp(-((e - 8) ** 2) / (2 * mpf("0.4") ** 2)) / 50 + mpf("0.1") * e / (1 + e**4), [0.5, 1, 2, 6.5, 7.5, 8, 8.5, 9.5], 3000, 1),
):
    for temperature in (4, 300):
        density = lambda w: function(w * hbar) / hbar
        times = [0.003, 0.1, 2, 12] if upper < 1000 else [0.1, 0.5]
        cases.append(case({"kind": "expression", "formula": formula}, density, [mpf(x) / hbar for x in scales], mpf(upper) / hbar, temperature, times, exponent))
write("expression-broadening.json", "given_broadening.py", SOURCE, DIGITS, "1e-14 relative", cases)
