"""What every generator of reference values shares: constants, the head of a fixture, the writer.

Run with Debian's interpreter, which has mpmath: /usr/bin/python3 tests/engine/reference/generate/NAME.py
"""
import datetime
import json
import pathlib
import platform

import mpmath

# Exact SI constants (International System of Units, 9th edition, 2019) in meV, ps, K.
HBAR = mpmath.mpf("6.62607015e-34") / (2 * mpmath.pi) / mpmath.mpf("1.602176634e-19") * 10**15
BOLTZMANN = mpmath.mpf("1.380649e-23") / mpmath.mpf("1.602176634e-19") * 10**3

FOLDER = pathlib.Path(__file__).resolve().parent.parent


def constants():
    """The constants at the present working precision."""
    e = mpmath.mpf("1.602176634e-19")
    hbar = mpmath.mpf("6.62607015e-34") / (2 * mpmath.pi) / e * 10**15
    return hbar, mpmath.mpf("1.380649e-23") / e * 10**3


def write(name, generator, source, digits, accuracy, cases, date=None):
    head = {
        "source": source,
        "generator": f"tests/engine/reference/generate/{generator}",
        "tool": f"Python {platform.python_version()}, mpmath {mpmath.__version__}",
        "workingDigits": digits,
        "statedAccuracy": accuracy,
        "date": date or datetime.date.today().isoformat(),
    }
    lines = ",\n    ".join(json.dumps(case) for case in cases)
    text = json.dumps(head, indent=2)[:-2] + f',\n  "cases": [\n    {lines}\n  ]\n}}\n'
    (FOLDER / name).write_text(text)
    print(name, len(cases), "cases")
