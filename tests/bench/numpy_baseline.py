#!/usr/bin/env python3
"""numpy_baseline.py - the yardstick: line-shape work as a careful spectroscopist writes it with numpy and scipy.

    python3 numpy_baseline.py [--jobs map-1024,fit] [--rounds 3] [--dump DIR]     measure, one JSON line per figure
    python3 numpy_baseline.py --check reference.py                                compare with an independent script

"plain" is the direct vectorised script, "best" uses every structure that helps and that scipy allows; one thread.
A round is the median of the calls that fit into 0.2 s (1 to 50), a figure the median of the rounds; up to 5 calls go
before as warm-up; plain and best alternate. "extrapolatedFrom": k means that k pieces were run and the time scaled to
all. The table of g0 exists before linear, map, slice and sweep jobs start (the broadening jobs time it); everything
that a fit needs is inside its time.

Physics: one transition, second-order cumulant; meV, ps, K, rad/ps. The frame rotates at the zero-phonon energy E0 and
g0 is the zero-phonon referenced broadening function, so no phase with the reorganisation energy appears. One-sided axes
have weight 1/2 at their first sample. Rephasing t1 is a forward FFT, every other axis an unnormalised inverse FFT.
Arrays ascend in energy, maps are [E1, E3]; array names end in their unit, if any.
"""
import os
for _name in ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):      # before numpy is imported
    os.environ[_name] = "1"

import argparse
import json
import runpy
import sys
import time
from collections import namedtuple
from pathlib import Path

import numpy as np
import scipy
import scipy.fft
from numpy import conj, exp
from numpy.fft import fftshift
from numpy.lib.stride_tricks import sliding_window_view
from scipy import constants
from scipy.optimize import leastsq

HBAR = constants.hbar / constants.e * 1e15            # meV ps
KB = constants.k / constants.e * 1e3                  # meV / K
VERSIONS = {"numpy": np.__version__, "scipy": scipy.__version__}

PHYSICS = {
    "zeroPhononEnergyMeV": 2000.0, "temperatureK": 4.0, "zeroPhononFwhmMeV": 0.5, "ensembleFwhmMeV": 3.0,
    "waitingTimePs": 1.28,
    "bath": [{"kind": "powerLaw", "couplingStrength": a, "exponent": p, "cutoffEnergyMeV": 2.0,
              "cutoffShape": "gaussian"} for a, p in ((0.05, 1), (0.5, 3))],
    "modes": [{"energyMeV": e, "huangRhys": s} for e, s in ((4.0, 0.4), (12.0, 0.25), (26.0, 0.15))],
}
FIT = {
    "temperaturesK": [4.0, 10.0, 20.0, 40.0, 60.0, 80.0, 100.0], "samples": 1024, "zeroPaddedSamples": 4096,
    "timeStepPs": 0.02, "waitingTimePs": 0.2, "noiseStandardDeviation": 1e-3, "relativeDifferenceStep": 1e-5,
    "tolerance": 1e-8,
    "parameterNames": ["couplingStrengthExponent1", "couplingStrengthExponent3", "cutoffEnergyMeV",
                       "zeroPhononFwhmMeV", "acousticBroadeningMeVPerK", "huangRhysFirstMode"],
    "trueParameters": [0.05, 0.5, 2.0, 0.5, 0.01, 0.4], "startParameters": [0.03, 0.35, 2.3, 0.6, 0.02, 0.3],
}
TEMPERATURE = PHYSICS["temperatureK"]
GAMMA = PHYSICS["zeroPhononFwhmMeV"] / (2 * HBAR)                                  # 1/ps
SIGMA = PHYSICS["ensembleFwhmMeV"] / (np.sqrt(8 * np.log(2)) * HBAR)               # rad/ps

# ------------------------------------------------------------------------------------------------ broadening function


def quadrature(t_max, w_max, order=32):
    """Composite Gauss-Legendre rule on (0, w_max): 1.25 nodes per radian of w t_max / 2."""
    panels = int(np.ceil(1.25 * w_max * t_max / 2 / order)) + 1
    x, weight = np.polynomial.legendre.leggauss(order)
    half = w_max / panels / 2
    return ((2 * np.arange(panels)[:, None] + 1 + x) * half).ravel(), np.tile(weight * half, panels)


def density(w, bath):
    """J(w) / (pi w^2), the sum of power-law terms with Gaussian cutoff."""
    scaled = [(term, w / (term["cutoffEnergyMeV"] / HBAR), term["cutoffEnergyMeV"] / HBAR) for term in bath]
    return sum(term["couplingStrength"] * x ** (term["exponent"] - 2.0) / wc * exp(-x * x) for term, x, wc in scaled)


def broadening_bath(t, bath, temperature, rows=128):
    """g0 of the continuous bath: matrix of w t / 2 times the weighted density, in chunks of times."""
    w, weight = quadrature(t[-1], 5.5 * max(term["cutoffEnergyMeV"] for term in bath) / HBAR)
    f = 2 * weight * density(w, bath)
    f_thermal = f / np.tanh(HBAR * w / (2 * KB * temperature))
    g = np.empty(len(t), complex)
    for i in range(0, len(t), rows):
        angle = np.outer(t[i:i + rows], w / 2)
        sine, cosine = np.sin(angle), np.cos(angle)
        g[i:i + rows] = (sine * sine) @ f_thermal + 1j * ((sine * cosine) @ f)     # 1 - cos wt = 2 sin^2(wt/2)
    return g


def broadening_mode(t, energy, temperature):
    """g0 of one displaced-oscillator mode with Huang-Rhys factor 1."""
    angle, n = energy / HBAR * t, 1 / np.expm1(energy / (KB * temperature))
    return (2 * n + 1) * 2 * np.sin(angle / 2) ** 2 + 1j * np.sin(angle)


def broadening_modes(t, modes, temperature):
    return sum(mode["huangRhys"] * broadening_mode(t, mode["energyMeV"], temperature) for mode in modes)


def broadening(t, bath=PHYSICS["bath"], modes=PHYSICS["modes"], temperature=TEMPERATURE):
    return broadening_bath(t, bath, temperature) + broadening_modes(t, modes, temperature)

# ------------------------------------------------------------------------------------------------ spectra


def energy_axis(n, step, centre=PHYSICS["zeroPhononEnergyMeV"]):
    return centre + 2 * np.pi * HBAR * fftshift(np.fft.fftfreq(n, step))


def linear(g, step):
    """Absorption and fluorescence of area 1, in 1/meV."""
    n = len(g)
    t = step * np.arange(n)
    decay = exp(-GAMMA * t - 0.5 * (SIGMA * t) ** 2) * (n * step / (np.pi * HBAR))
    decay[0] *= 0.5
    return [fftshift(np.fft.ifft(exp(-line) * decay).real) for line in (g, conj(g))]


def maps_plain(g, n, step, wait):
    """Rephasing and non-rephasing maps (complex, FFT order): four pathways on the grid, two complex 2D FFTs.
    g is g0 on multiples of step, the waiting time is wait * step."""
    k = np.arange(n)
    t1, t3 = step * k[:, None], step * k[None, :]
    g1, g12, g3, g23 = g[:n, None], g[wait:wait + n, None], g[None, :n], g[None, wait:wait + n]
    g2, g123 = g[wait], g[k[:, None] + k[None, :] + wait]
    r1 = exp((-g1 + g12 - conj(g2)) + (-conj(g3) + conj(g23)) - g123)
    r2 = exp((-conj(g1) - conj(g12) + g2) + (-conj(g3) - g23) + conj(g123))
    r3 = exp((-conj(g1) - conj(g12) + conj(g2)) + (-g3 - conj(g23)) + conj(g123))
    r4 = exp((-g1 + g12 - g2) + (-g3 + g23) - g123)
    common = exp(-GAMMA * (t1 + t3)) * step ** 2
    common[0] *= 0.5
    common[:, 0] *= 0.5
    rephasing = (r2 + r3) * (common * exp(-0.5 * SIGMA ** 2 * (t3 - t1) ** 2))
    non_rephasing = (r1 + r4) * (common * exp(-0.5 * SIGMA ** 2 * (t3 + t1) ** 2))
    rephasing = np.fft.fft(np.fft.ifft(rephasing, axis=1, norm="forward"), axis=0)
    return rephasing, np.fft.ifft2(non_rephasing, norm="forward")


def absorptive_plain(g, n, step, wait):
    rephasing, non_rephasing = maps_plain(g, n, step, wait)
    return fftshift(rephasing.real + non_rephasing.real)


def absorptive_best(g, n, step, wait, rows=16):
    """The same map from one-dimensional tables P(t1) Q(t3) H(t1+t3) and one complex FFT of NR(t1, t3) + R(-t1, t3).

    Stimulated emission and bleach share P and H. The ensemble is a Toeplitz table for R and part of H for NR; entries
    below 1e-18 are cleared to stay out of subnormal numbers. Signs (-1)^k in P and Q make the result ascend in energy.
    Blocks of rows keep the fill in the cache."""
    k = np.arange(n)
    weight = exp(-GAMMA * step * k) * (-1.0) ** k * step
    weight[0] *= 0.5
    g_t, g_wait, g_sum, g2 = g[:n], g[wait:wait + n], g[wait:wait + 2 * n - 1], g[wait]
    p_r = exp(-conj(g_t) - conj(g_wait)) * weight
    q_r = (exp(g2 - conj(g_t) - g_wait) + exp(conj(g2) - g_t - conj(g_wait))) * weight
    p_n = exp(g_wait - g_t) * weight
    q_n = (exp(conj(g_wait) - conj(g_t) - conj(g2)) + exp(g_wait - g_t - g2)) * weight
    h_n = exp(-g_sum - 0.5 * (SIGMA * step * np.arange(2 * n - 1)) ** 2)
    ensemble = exp(-0.5 * (SIGMA * step * np.arange(1 - n, n)) ** 2)
    h_n[np.abs(h_n) < 1e-18] = 0
    ensemble[ensemble < 1e-18] = 0
    h_r, h_n = sliding_window_view(exp(conj(g_sum)), n), sliding_window_view(h_n, n)             # of k1 + k3
    ensemble = sliding_window_view(ensemble, n)[::-1]                                            # of k3 - k1
    signal = np.empty((n, n), complex)
    for i in range(0, n, rows):
        ahead, back = slice(i, i + rows), -k[i:i + rows] % n                                     # t1 and -t1
        block = h_n[ahead] * q_n
        block *= p_n[ahead, None]
        other = h_r[back] * q_r
        other *= p_r[back, None]
        other *= ensemble[back]
        np.add(block, other, out=signal[ahead])
    return scipy.fft.ifft2(signal, norm="forward", overwrite_x=True).real


def echo(g, n, step, wait, gamma):
    """R(t, t2, t): rephasing at t1 = t3 without ensemble factor, first sample halved; g and gamma may be stacked."""
    g_t, g_wait, g_sum, g2 = g[..., :n], g[..., wait:wait + n], g[..., wait:wait + 2 * n - 1:2], g[..., wait, None]
    signal = exp(g2 - 2 * conj(g_t) - 2 * g_wait.real + conj(g_sum))
    signal += exp(conj(g2) - 2 * g_t.real - 2 * conj(g_wait) + conj(g_sum))
    signal *= exp(-2 * np.asarray(gamma)[..., None] * step * np.arange(n))
    signal[..., 0] *= 0.5
    return signal


def cross_diagonal(g, n, step, wait):
    """Rephasing slice through E0 along x = E3 - E1, strongly inhomogeneous limit (complex, ps^2), no corner term."""
    spectrum = np.fft.ifft(echo(g, n, step, wait, GAMMA), norm="forward")
    return fftshift(spectrum) * (step * np.sqrt(2 * np.pi) / SIGMA)

# ------------------------------------------------------------------------------------------------ fit


FIT_SHAPE = FIT["samples"], FIT["timeStepPs"], round(FIT["waitingTimePs"] / FIT["timeStepPs"])   # n, step, wait
FIT_TIMES = FIT["timeStepPs"] * np.arange(2 * FIT["samples"] - 1 + FIT_SHAPE[2])
FIT_X = np.linspace(-15.0, 15.0, 201)                                              # measured axis E3 - E1, meV
FIT_GRID = energy_axis(FIT["zeroPaddedSamples"], FIT["timeStepPs"], 0.0)


def fit_physics(p):
    """Bath, modes and homogeneous rates gamma(T) of one parameter vector."""
    bath = [dict(PHYSICS["bath"][i], couplingStrength=p[i], cutoffEnergyMeV=p[2]) for i in (0, 1)]
    modes = [dict(PHYSICS["modes"][0], huangRhys=p[5])] + PHYSICS["modes"][1:]
    return bath, modes, (p[3] + p[4] * np.array(FIT["temperaturesK"])) / (2 * HBAR)


def fit_model_plain(p):
    """Magnitude slices at all temperatures, linearly interpolated from the zero-padded grid, largest value 1."""
    bath, modes, gammas = fit_physics(p)
    rows = []
    for temperature, gamma in zip(FIT["temperaturesK"], gammas):
        signal = echo(broadening(FIT_TIMES, bath, modes, temperature), *FIT_SHAPE, gamma)
        row = np.interp(FIT_X, FIT_GRID, np.abs(fftshift(np.fft.ifft(signal, len(FIT_GRID)))))
        rows.append(row / row.max())
    return np.array(rows)


def fit_model_best():
    """The same model with all that stays fixed during a fit tabulated: one matrix product for all temperatures."""
    temperatures = np.array(FIT["temperaturesK"])[:, None]
    w, weight = quadrature(FIT_TIMES[-1], 5.5 * 3.0 / HBAR)                        # cutoff energies up to 3 meV
    angle = np.outer(FIT_TIMES, w / 2)
    sine, cosine = np.sin(angle), np.cos(angle)
    real, imaginary = 2 * sine * sine, 2 * sine * cosine
    coth = 1 / np.tanh(HBAR * w / (2 * KB * temperatures))
    unit_modes = [broadening_mode(FIT_TIMES, mode["energyMeV"], temperatures) for mode in PHYSICS["modes"]]
    left = np.searchsorted(FIT_GRID, FIT_X) - 1
    fraction = (FIT_X - FIT_GRID[left]) / (FIT_GRID[left + 1] - FIT_GRID[left])
    lower, upper = fftshift(np.arange(len(FIT_GRID)))[[left, left + 1]]

    def model(p):
        bath, modes, gammas = fit_physics(p)
        f = weight * density(w, bath)
        g = (real @ (f * coth).T).T + 1j * (imaginary @ f)
        for mode, unit in zip(modes, unit_modes):
            g += mode["huangRhys"] * unit
        spectrum = scipy.fft.ifft(echo(g, *FIT_SHAPE, gammas), len(FIT_GRID))
        rows = np.abs(spectrum[:, lower]) * (1 - fraction) + np.abs(spectrum[:, upper]) * fraction
        return rows / rows.max(axis=1, keepdims=True)
    return model


def fit(model, measurement):
    """Levenberg-Marquardt (MINPACK lmdif); nfev counts every evaluation of the model, difference quotients included."""
    calls = []

    def residual(p):
        calls.append(p)
        return (model(p) - measurement).ravel()
    start, tol = np.array(FIT["startParameters"]), FIT["tolerance"]
    p, _, info, _, _ = leastsq(residual, start, full_output=True, ftol=tol, xtol=tol, diag=1 / start,
                               epsfcn=FIT["relativeDifferenceStep"] ** 2)
    residuals = info["fvec"]
    return {"model": measurement + residuals.reshape(measurement.shape), "nfev": len(calls),
            "parameters": dict(zip(FIT["parameterNames"], p.tolist())), "cost": 0.5 * float(residuals @ residuals)}

# ------------------------------------------------------------------------------------------------ jobs


# settings: numbers that define the job; arrays: axes and inputs; kinds: {"plain": f, "best": f}, f() gives the results
# by name; pieces: {kind: (run, all)} where only some of the pieces are run
Job = namedtuple("Job", "settings arrays kinds pieces", defaults=({},))


def broadening_job(n, step=0.01):
    t = step * np.arange(n)
    return Job({"samples": n, "timeStepPs": step}, {"timePs": t}, {"plain": lambda: {"g0": broadening(t)}})


def linear_job(n, step=0.01):
    g = broadening(step * np.arange(n))
    return Job({"samples": n, "timeStepPs": step}, {"energyMeV": energy_axis(n, step)},
               {"plain": lambda: dict(zip(("absorptionPerMeV", "fluorescencePerMeV"), linear(g, step)))})


def two_time_grid(n, waits=None, window=20.48):
    """Time step, waiting time in samples, settings and g0 table of the map and slice jobs."""
    step = window / n
    wait = round(PHYSICS["waitingTimePs"] / step)
    settings = {"samples": n, "timeStepPs": step, "waitingTimeSamples": waits or wait}
    return step, wait, settings, broadening(step * np.arange(2 * n - 1 + max(waits or [wait])))


def map_job(n):
    step, wait, settings, g = two_time_grid(n)
    return Job(settings, {"energyMeV": energy_axis(n, step)},
               {"plain": lambda: {"absorptivePs2": absorptive_plain(g, n, step, wait)},
                "best": lambda: {"absorptivePs2": absorptive_best(g, n, step, wait)}})


def waiting_times_job(n=1024, count=30, keep=256):
    """Maps at 0, 0.1, ... 2.9 ps, each computed in full; the central keep x keep points are stored."""
    waits = list(range(0, 5 * count, 5))
    step, _, settings, g = two_time_grid(n, waits)
    middle = slice((n - keep) // 2, (n + keep) // 2)

    def run(function, chosen):
        return {"absorptivePs2": np.array([function(g, n, step, wait)[middle, middle] for wait in chosen])}
    return Job(settings, {"energyMeV": energy_axis(n, step)[middle], "waitingTimePs": step * np.array(waits)},
               {"plain": lambda: run(absorptive_plain, waits[::10]), "best": lambda: run(absorptive_best, waits)},
               {"plain": (len(waits[::10]), count)})


def slice_job(n):
    step, wait, settings, g = two_time_grid(n)
    corner = -2 * echo(g, n, step, wait, GAMMA)[0] / SIGMA ** 2                    # echo() halves its first sample
    settings.update(cornerTermPs2=[corner.real, corner.imag], cornerTermIncluded=False)
    return Job(settings, {"differenceEnergyMeV": energy_axis(n, step, 0.0)},
               {"plain": lambda: {"rephasingPs2": cross_diagonal(g, n, step, wait)}})


def fit_job():
    data = fit_model_plain(FIT["trueParameters"])
    data += FIT["noiseStandardDeviation"] * np.random.default_rng(3).standard_normal(data.shape)
    return Job(FIT, {"differenceEnergyMeV": FIT_X, "measurement": data},
               {"plain": lambda: fit(fit_model_plain, data), "best": lambda: fit(fit_model_best(), data)})


def sweep_job(side=40, stride=4, n=8192, step=0.01):
    """Linear spectra for all pairs of a factor on the bath couplings and one on the Huang-Rhys factors; g0 is linear in
    both, so the script reuses its two tables."""
    t, factors = step * np.arange(n), 0.5 + 0.025 * np.arange(side)
    chosen = factors[::stride]
    bath = broadening_bath(t, PHYSICS["bath"], TEMPERATURE)
    modes = broadening_modes(t, PHYSICS["modes"], TEMPERATURE)

    def run():
        spectra = np.array([linear(b * bath + m * modes, step) for b in chosen for m in chosen])
        return {"absorptionPerMeV": spectra[:, 0], "fluorescencePerMeV": spectra[:, 1]}
    return Job({"samples": n, "timeStepPs": step, "bathFactors": factors.tolist(), "modeFactors": factors.tolist(),
                "dumpedFactors": chosen.tolist(), "dumpedOrder": "bath factor outer, mode factor inner"},
               {"energyMeV": energy_axis(n, step)}, {"plain": run}, {"plain": (len(chosen) ** 2, side ** 2)})


JOBS = {**{f"broadening-{n}": (broadening_job, n) for n in (8192, 32768)}, "linear-8192": (linear_job, 8192),
        **{f"map-{n}": (map_job, n) for n in (256, 512, 1024, 2048)}, "waiting-times-30": (waiting_times_job,),
        "slice-1024": (slice_job, 1024), "fit": (fit_job,), "sweep-1600": (sweep_job,)}

# ------------------------------------------------------------------------------------------------ measuring


CLOCK = [time.perf_counter]                           # or time.process_time: what neighbours do then matters less


def relative(value, expected):
    """Largest difference in units of the largest expected magnitude."""
    return float(np.abs(value - expected).max() / np.abs(expected).max())


def milliseconds(function, clock=None):
    clock = clock or CLOCK[0]
    start = clock()
    function()
    return (clock() - start) * 1e3


def measure(name, job, rounds):
    """Print one JSON line per kind; return the arrays of the last kind (the complete ones)."""
    results, calls, times = {}, {}, {kind: [] for kind in job.kinds}
    for kind, function in job.kinds.items():
        first = milliseconds(lambda: results.update({kind: function()}))
        calls[kind] = int(np.clip(200 / first, 1, 50))
        for _ in range(min(calls[kind] - 1, 4)):
            function()
    for _ in range(rounds):
        for kind, function in job.kinds.items():
            times[kind].append(np.median([milliseconds(function) for _ in range(calls[kind])]))
    for kind, result in results.items():
        run, total = job.pieces.get(kind, (1, 1))
        arrays = {key: value for key, value in result.items() if isinstance(value, np.ndarray)}
        line = {"job": name, "kind": kind, **{key: round(float(figure(times[kind])) * total / run, 4) for key, figure in
                (("medianMs", np.median), ("minMs", np.min), ("maxMs", np.max))}, "rounds": rounds}
        if run != total:
            line["extrapolatedFrom"] = run
        if kind == "best":
            line["differenceFromPlain"] = max(relative(value[::len(value) // len(results["plain"][key])],
                                                       results["plain"][key]) for key, value in arrays.items())
        print(json.dumps({**line, **{key: result[key] for key in result if key not in arrays}}), flush=True)
    return arrays


def check(path, n=128, step=0.08):
    """Compare with an independent script whose g0 comes from adaptive quadrature; small grid, same parameters."""
    ref = runpy.run_path(str(path))
    wait = round(PHYSICS["waitingTimePs"] / step)
    t = step * np.arange(2 * n - 1 + wait)
    late = 0.01 * np.unique(np.geomspace(1, 32767, 24).astype(int))
    g, g_ref = broadening(t), ref["g0"](PHYSICS, t)
    g_t, g_wait = g_ref[:n], g_ref[wait:wait + n]
    _, r2, r3, _ = ref["combine"](g_t, g_ref[wait], g_t, g_wait, g_wait, g_ref[wait::2])
    signal = (r2 + r3) * exp(-2 * GAMMA * t[:n]) * np.where(t[:n] == 0, 0.5, 1)    # slice by a direct Fourier sum
    cut = exp(1j / HBAR * np.outer(energy_axis(n, step, 0.0), t[:n])) @ signal * step * np.sqrt(2 * np.pi) / SIGMA
    maps = ref["map_2d"](PHYSICS, n, step)
    expected = *maps, maps[3], *ref["linear_spectra"](PHYSICS, n, step)[1:], cut, ref["g0"](PHYSICS, late)
    mine = (energy_axis(n, step), *map(fftshift, maps_plain(g, n, step, wait)), absorptive_plain(g, n, step, wait),
            absorptive_best(g, n, step, wait), *linear(g[:n], step), cross_diagonal(g, n, step, wait), broadening(late))
    names = ("energy axis", "rephasing map", "non-rephasing map", "absorptive map plain", "absorptive map best",
             "absorption", "fluorescence", "slice", "g0 up to 327.67 ps")
    differences = dict(zip(names, map(relative, mine, expected)))
    differences["all"] = max(differences.values())
    for name, difference in differences.items():
        print(json.dumps({"check": name, "largestRelativeDifference": difference}))
    return int(differences["all"] >= 1e-9)


def main():
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("--jobs", default=",".join(JOBS), help="comma separated; default: all")
    parser.add_argument("--rounds", type=int, default=3)
    parser.add_argument("--dump", type=Path, metavar="DIR", help="write result arrays and parameters.json")
    parser.add_argument("--check", nargs="?", const=Path(__file__).with_name("reference.py"), metavar="FILE",
                        help="compare with the independent script FILE and stop")
    parser.add_argument("--clock", choices=("wall", "cpu"), default="wall")
    args = parser.parse_args()
    CLOCK[0] = time.process_time if args.clock == "cpu" else time.perf_counter
    if args.check:
        return check(args.check)
    names, described = args.jobs.split(","), {}
    if args.rounds < 1 or set(names) - set(JOBS):
        parser.error(f"--rounds is at least 1, --jobs are from {', '.join(JOBS)}")
    print(json.dumps(VERSIONS), file=sys.stderr)
    for name in names:
        function, *size = JOBS[name]
        job = function(*size)
        arrays = {**job.arrays, **measure(name, job, args.rounds)}
        if args.dump:
            args.dump.mkdir(parents=True, exist_ok=True)
            for key, value in arrays.items():
                np.save(args.dump / f"{name}.{key}.npy", value)
            described[name] = {**job.settings, "arrays": {key: value.shape for key, value in arrays.items()}}
            everything = {"versions": VERSIONS, "physics": PHYSICS, "hbarMeVPs": HBAR, "boltzmannMeVPerK": KB,
                          "jobs": described}
            (args.dump / "parameters.json").write_text(json.dumps(everything, indent=1) + "\n")
    return 0


if __name__ == "__main__":
    sys.exit(main())
