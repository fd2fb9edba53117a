"""Reference frequencies of elastic spheres, mpmath 30 digits, written to sphere.json.

Run: /usr/bin/python3 tests/engine/reference/sphere.py   (python3-mpmath of Debian 12, mpmath 1.2.1)

Independent of the engine in method: fields are differentiated numerically (mpmath.diff) from the potentials
u = grad(phi) + curl curl (r psi), tractions follow from the strain tensor, and roots are polished by mpmath.findroot from
rough starts. Only the potentials' radial functions (spherical Bessel) are taken as known.
Source of the problem: Lamb, Proc. London Math. Soc. 13, 189 (1881).
"""
import datetime, json, os
import mpmath as mp

mp.mp.dps = 30
LIGHT = mp.mpf(299792458)

def j(l, z): return mp.sqrt(mp.pi / (2 * z)) * mp.besselj(l + mp.mpf(1) / 2, z)
def y(l, z): return mp.sqrt(mp.pi / (2 * z)) * mp.bessely(l + mp.mpf(1) / 2, z)
def h(l, z): return j(l, z) + 1j * y(l, z)

def fields(l, family, kind, radial, medium, w, r):
    """(u_r, u_t, s_rr, s_rt) amplitudes over Y_lm, from the potential by differentiation."""
    rho, vl, vt = medium
    mu = rho * vt ** 2
    lam = rho * vl ** 2 - 2 * mu
    L = l * (l + 1)
    if family == 'torsional':
        u = lambda x: radial(l, w / vt * x)
        return u(r), mu * (mp.diff(u, r) - u(r) / r)
    if kind == 'longitudinal':
        phi = lambda x: radial(l, w / vl * x)
        ur = lambda x: mp.diff(phi, x)
        ut = lambda x: phi(x) / x
    else:
        psi = lambda x: radial(l, w / vt * x)
        ur = lambda x: L * psi(x) / x
        ut = lambda x: psi(x) / x + mp.diff(psi, x)
    dur, dut = mp.diff(ur, r), mp.diff(ut, r)
    divergence = dur + 2 * ur(r) / r - L * ut(r) / r
    srr = lam * divergence + 2 * mu * dur
    srt = mu * (dut - ut(r) / r + ur(r) / r)
    return ur(r), ut(r), srr, srt

def determinant(sphere, family, l, w):
    R = sphere['radius']
    layers = [(sphere['core'], [j])]
    surfaces = [R]
    if 'shell' in sphere:
        layers.append((sphere['shell'], [j, y]))
        surfaces.append(R + sphere['thickness'])
    if 'matrix' in sphere:
        layers.append((sphere['matrix'], [h]))
    kinds = ['torsional'] if family == 'torsional' else ['longitudinal'] if l == 0 else ['longitudinal', 'transverse']
    pick = [0, 1] if family == 'torsional' else [0, 2] if l == 0 else [0, 1, 2, 3]
    half = len(pick) // 2
    columns = [(i, radial, kind) for i, (_, radials) in enumerate(layers) for radial in radials for kind in kinds]
    rows = []
    for i, r in enumerate(surfaces):
        outer = i + 1 < len(layers)
        values = {}
        for c, (layer, radial, kind) in enumerate(columns):
            if layer in (i, i + 1):
                f = fields(l, family, kind, radial, layers[layer][0], w, r)
                values[c] = [f[p] * (1 if layer == i else -1) for p in pick]
        for p in range(0 if outer else half, len(pick)):
            rows.append([values.get(c, [mp.mpf(0)] * len(pick))[p] for c in range(len(columns))])
    m = mp.matrix(rows)
    for c in range(m.cols if m.cols > 1 else 0):
        size = max(abs(m[r, c]) for r in range(m.rows))
        for r in range(m.rows):
            m[r, c] /= size
    return mp.det(m)

def wavenumber(w):  # w in units of 1 km/s / nm = 1e12 rad/s
    return w * mp.mpf(10) ** 12 / (2 * mp.pi) / (LIGHT * 100)

CDSE = (mp.mpf('5.81'), mp.mpf('3.70'), mp.mpf('1.54'))
CDS = (mp.mpf('4.82'), mp.mpf('4.25'), mp.mpf('1.86'))
SILICA = (mp.mpf('2.20'), mp.mpf('5.95'), mp.mpf('3.76'))
SPHERES = {
    'free CdSe 2 nm': dict(radius=mp.mpf(2), core=CDSE),
    'CdSe 2 nm, CdS shell 1 nm, free': dict(radius=mp.mpf(2), core=CDSE, shell=CDS, thickness=mp.mpf(1)),
    'CdSe 2 nm in silica': dict(radius=mp.mpf(2), core=CDSE, matrix=SILICA),
    'CdS 3.3 nm in silica': dict(radius=mp.mpf('3.3'), core=CDS, matrix=SILICA),
}
# Rough starts in cm^-1, from the literature's orders of magnitude and a coarse scan.
CASES = [
    ('free CdSe 2 nm', 'spheroidal', 0, 28.0), ('free CdSe 2 nm', 'spheroidal', 2, 10.8),
    ('free CdSe 2 nm', 'torsional', 1, 23.5), ('free CdSe 2 nm', 'torsional', 2, 10.2),
    ('CdSe 2 nm, CdS shell 1 nm, free', 'spheroidal', 0, 20.5), ('CdSe 2 nm, CdS shell 1 nm, free', 'spheroidal', 0, 42.2),
    ('CdSe 2 nm, CdS shell 1 nm, free', 'spheroidal', 2, 8.0), ('CdSe 2 nm, CdS shell 1 nm, free', 'spheroidal', 1, 11.2),
    ('CdSe 2 nm, CdS shell 1 nm, free', 'torsional', 1, 16.6), ('CdSe 2 nm, CdS shell 1 nm, free', 'torsional', 2, 8.0),
    ('CdSe 2 nm in silica', 'spheroidal', 0, 31.6 - 4.8j), ('CdSe 2 nm in silica', 'spheroidal', 2, 15.4 - 3.9j),
    ('CdSe 2 nm in silica', 'torsional', 1, 15.1 - 1.4j), ('CdSe 2 nm in silica', 'torsional', 2, 20.0 - 0.9j),
    ('CdS 3.3 nm in silica', 'torsional', 1, 10.6 - 1.5j), ('CdS 3.3 nm in silica', 'spheroidal', 2, 18.65 - 2.08j),
    ('CdS 3.3 nm in silica', 'spheroidal', 0, 21.7 - 3.98j),
]

def main():
    out = []
    for name, family, l, start in CASES:
        w0 = mp.mpmathify(start) / wavenumber(mp.mpf(1))
        f = lambda w: determinant(SPHERES[name], family, l, w)
        root = mp.findroot(f, (w0, w0 * mp.mpf('1.001')), solver='secant', tol=1e-30, maxsteps=60, verify=False)
        value = wavenumber(root)
        out.append(dict(sphere=name, family=family, l=l, wavenumberPerCm=float(mp.re(value)), decayPerCm=float(-mp.im(value))))
        print(out[-1])
    here = os.path.dirname(os.path.abspath(__file__))
    json.dump(dict(
        source='Lamb 1881; secular determinants solved here from the potentials',
        tool='mpmath ' + mp.__version__, digits=mp.mp.dps, date=datetime.date.today().isoformat(),
        units='g/cm3, km/s, nm; frequencies in cm^-1, decay of the amplitude exp(-decay t) in the same unit',
        cases=out), open(os.path.join(here, 'sphere.json'), 'w'), indent=1)

main()
