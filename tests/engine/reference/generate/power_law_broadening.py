"""Writes power-law-broadening-{short,medium,long}.json: g0(t) of power-law baths from the defining integral."""
import mpmath
from mpmath import mpf

from broadening import DIGITS, broadening
from common import constants, write

mpmath.mp.dps = DIGITS
hbar, boltzmann = constants()


def power_law(strength, exponent, cutoff_mev, shape):
    wc = mpf(cutoff_mev) / hbar
    a, p, q = mpf(strength), mpf(exponent), (2 if shape == "gaussian" else 1)
    upper = wc * (mpf(8) if q == 2 else mpf(62))
    return lambda w: mpmath.pi * a * w**p * wc ** (1 - p) * mpmath.exp(-((w / wc) ** q)), [wc], upper


def case(strength, exponent, cutoff, shape, temperature, times):
    density, scales, upper = power_law(strength, exponent, cutoff, shape)
    values = [broadening(density, scales, upper, temperature, t, exponent) for t in times]
    return {
        "couplingStrength": strength, "exponent": exponent, "cutoffEnergyMeV": cutoff, "cutoffShape": shape,
        "temperatureK": temperature, "timesPs": times,
        "re": [v[0] for v in values], "im": [v[1] for v in values],
    }


SOURCE = "definition of g0: Mukamel, Principles of Nonlinear Optical Spectroscopy (1995), ch. 8; J of Leggett et al., Rev. Mod. Phys. 59, 1 (1987)"
EXPONENTS = [0.3, 0.5, 1, 1.5, 2, 2.5, 3, 4.7, 6]
short, medium, long = [], [], []
for i, p in enumerate(EXPONENTS):
    for j, shape in enumerate(("gaussian", "exponential")):
        temperatures = [0, 4, 300] if (i + j) % 2 == 0 else [0.5, 77, 600]
        for temperature in temperatures:
            short.append(case(0.4, p, 3.0, shape, temperature, [0.001, 0.02]))
            medium.append(case(0.05, p, 1.3, shape, temperature, [0.4, 5, 30]))
        long.append(case(0.002, p, 0.05, shape, temperatures[1], [100, 1000]))
    print(p, flush=True)
for name, cases in (("short", short), ("medium", medium), ("long", long)):
    write(f"power-law-broadening-{name}.json", "power_law_broadening.py", SOURCE, DIGITS, "1e-15 relative", cases)
