"""Writes overdamped-broadening.json and underdamped-broadening.json: g0(t) from the defining integral."""
import mpmath
from mpmath import mpf

from broadening import DIGITS, broadening_with_tail
from common import constants, write

mpmath.mp.dps = DIGITS
hbar, boltzmann = constants()
SOURCE = "definition of g0 and both spectral densities: Mukamel, Principles of Nonlinear Optical Spectroscopy (1995), ch. 8"


def case(term, density, scales, temperature, times):
    values = [broadening_with_tail(density, scales, temperature, t) for t in times]
    print(term, temperature, flush=True)
    return {**term, "temperatureK": temperature, "timesPs": times, "re": [v[0] for v in values], "im": [v[1] for v in values]}


cases = []
for lam, relaxation, temperature in (
    (5, 0.4, 0), (5, 0.4, 4), (2, 6, 4), (10, 6.582, 77), (0.7, 20, 300), (30, 0.05, 300),
    # relaxation rates at and beside the Matsubara frequency 2 pi k_B T (0.541442... meV at 1 K)
    (3, 2.1657753, 4), (3, 54.144383, 100), (3, 108.28, 100),
):
    L, G = mpf(lam) / hbar, mpf(relaxation) / hbar
    term = {"reorganizationEnergyMeV": lam, "relaxationEnergyMeV": relaxation}
    cases.append(case(term, lambda w: 2 * L * w * G / (w * w + G * G), [G], temperature, [0.002, 0.05, 0.4, 3, 20]))
write("overdamped-broadening.json", "damped_broadening.py", SOURCE, DIGITS, "1e-14 relative", cases)

cases = []
for s, energy, damping, temperature in (
    (0.3, 4, 0.3, 0), (0.3, 4, 0.3, 4), (1, 26, 1, 77), (0.1, 12, 2, 300), (0.5, 3, 5.9, 20), (0.5, 3, 5.9999, 20), (2, 0.5, 0.02, 4),
):
    S, w0, G = mpf(s), mpf(energy) / hbar, mpf(damping) / hbar
    density = lambda w: 2 * S * w0**3 * w * G / ((w0**2 - w**2) ** 2 + w**2 * G**2)
    scales = [w0 - G * k / 2 for k in (8, 4, 2, 1) if w0 > G * k / 2] + [w0] + [w0 + G * k / 2 for k in (1, 2, 4, 8)]
    term = {"huangRhys": s, "energyMeV": energy, "dampingEnergyMeV": damping}
    cases.append(case(term, density, scales, temperature, [0.002, 0.05, 0.4, 3, 20]))
write("underdamped-broadening.json", "damped_broadening.py", SOURCE, DIGITS, "1e-14 relative", cases)
