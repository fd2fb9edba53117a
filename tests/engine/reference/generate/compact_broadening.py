"""Writes compact-broadening.json: g0(t) of log-normal sidebands and of confined excitons from the defining integral."""
import mpmath
from mpmath import mpf

from broadening import DIGITS, broadening
from common import constants, write

mpmath.mp.dps = DIGITS
hbar, boltzmann = constants()
cases = []


def add(term, density, scales, upper, temperature, times, exponent):
    values = [broadening(density, scales, upper, temperature, t, exponent) for t in times]
    cases.append({"term": term, "temperatureK": temperature, "timesPs": times, "re": [v[0] for v in values], "im": [v[1] for v in values]})
    print(term["kind"], temperature, flush=True)


for s, energy, width, temperature in ((0.4, 4, 0.3, 0), (0.4, 4, 0.3, 77), (1, 26, 0.03, 300), (0.2, 2, 0.6, 10)):
    S, w0, d = mpf(s), mpf(energy) / hbar, mpf(width)
    density = lambda w: S * w * mpmath.sqrt(mpmath.pi / 2) / d * mpmath.exp(-mpmath.log(w / w0) ** 2 / (2 * d**2))
    scales = [w0 * mpmath.exp(k * d) for k in (-8, -6, -4, -3, -2, -1, 0, 1, 2, 3, 4, 6)]
    upper = w0 * mpmath.exp(10 * d)
    term = {"kind": "logNormal", "huangRhys": s, "energyMeV": energy, "relativeWidth": width}
    add(term, density, scales, upper, temperature, [0.003, 0.1, 2, 15] if width < 0.5 else [0.003, 0.1, 0.5], 4)

e, h, eps0 = mpf("1.602176634e-19"), mpf("6.62607015e-34"), mpf("8.8541878188e-12")
for rho, vl, vt, de, dh, ae, ah, e14, eps, temperature in (
    (5317, 5088, 2963, -7, 3.5, 4, 3.5, 0.16, 12.9, 4), (5317, 5088, 2963, -7, 3.5, 4, 3.5, 0.16, 12.9, 300),
    (5810, 3700, 1540, -4, -4, 2, 1.2, 0, 9.3, 0), (5810, 3700, 1540, 0, 0, 1, 3, 0.2, 9.3, 77),
):
    def density(w):
        x = w * 10**12  # rad/s
        le, lh = mpf(ae) * mpf("1e-9"), mpf(ah) * mpf("1e-9")
        base = 4 * mpmath.pi * rho * h / (2 * mpmath.pi)
        g = lambda length, v: mpmath.exp(-(x**2) * length**2 / (4 * mpf(v) ** 2))
        j = x**3 / (base * mpf(vl) ** 5) * (mpf(de) * e * g(le, vl) - mpf(dh) * e * g(lh, vl)) ** 2
        for share, v in ((mpf(12) / 35, vl), (mpf(16) / 35, vt)):
            j += share * x / (base * mpf(v) ** 3) * (e * mpf(e14) / (eps0 * eps)) ** 2 * (g(le, v) - g(lh, v)) ** 2
        return j / 10**12

    cuts = sorted(2 * mpf(v) / (mpf(a) * 1000) for v in (vl, vt) for a in (ae, ah))
    term = {"kind": "confinedExciton", "densityKgPerM3": rho, "longitudinalVelocityMPerS": vl, "transverseVelocityMPerS": vt,
            "electronShiftEV": de, "holeShiftEV": dh, "electronLengthNm": ae, "holeLengthNm": ah, "piezoCoefficientCPerM2": e14,
            "relativePermittivity": eps}
    add(term, density, cuts, 6 * cuts[-1], temperature, [0.003, 0.1, 2, 15], 3)

write("compact-broadening.json", "compact_broadening.py", "definition of g0: Mukamel (1995), ch. 8; J: log-normal density with Huang-Rhys factor S; Krummheuer, Axt & Kuhn, Phys. Rev. B 65, 195313 (2002)", DIGITS, "1e-15 relative", cases)
