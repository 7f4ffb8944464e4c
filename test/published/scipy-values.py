"""Values of check 11 by SciPy, written to scipy-values.json beside this file: python3 scipy-values.py

Matrices are drawn once from a fixed seed; the tests read both the matrices and SciPy's answers.
"""
import json
import pathlib
import numpy as np
import scipy
from scipy import linalg, signal

random = np.random.default_rng(20240501)


def system(n, inputs, outputs):
    a = random.normal(size=(n, n))
    a -= (np.max(np.linalg.eigvals(a).real) + 0.3) * np.eye(n)
    return a, random.normal(size=(n, inputs)), random.normal(size=(outputs, n))


def pairs(values):
    ordered = sorted(np.atleast_1d(values), key=lambda v: (round(v.real, 9), v.imag))
    return [[float(v.real), float(v.imag)] for v in ordered]


cases = []
for n in (2, 4, 7):
    a, b, c = system(n, 1, 1)
    d = 0.0 if n != 4 else 0.7
    wide = random.normal(size=(n, 2))
    q = random.normal(size=(n, n))
    q = q @ q.T + 0.1 * np.eye(n)
    r = np.array([[2.0, 0.3], [0.3, 1.0]])
    sample = 0.05
    held = signal.cont2discrete((a, b, c, [[d]]), sample, method="zoh")
    frequencies = [0.1, 0.7, 3.0, 20.0]
    # signal.freqresp goes through polynomials, which lose digits at order 7: solve for the response directly.
    response = [(c @ linalg.solve(1j * w * np.eye(n) - a, b))[0, 0] + d for w in frequencies]
    sampled = [(c @ linalg.solve(np.exp(1j * w * sample) * np.eye(n) - held[0], held[1]))[0, 0] + d for w in frequencies]
    zeros, poles, _ = signal.ss2zpk(a, b, c, [[d]])
    cases.append({
        "a": a.tolist(), "b": b.tolist(), "c": c.tolist(), "d": d, "wide": wide.tolist(), "q": q.tolist(),
        "r": r.tolist(), "sample": sample, "frequencies": frequencies,
        "poles": pairs(poles),
        # Rounding turns missing leading coefficients of the numerator into zeros far out; they are no zeros.
        "zeros": pairs([z for z in zeros if abs(z) < 1e5]) if len(zeros) else [],
        "exponential": linalg.expm(a).tolist(),
        "heldTransition": held[0].tolist(), "heldInput": held[1].tolist(),
        "response": [[float(v.real), float(v.imag)] for v in response],
        "sampledResponse": [[float(v.real), float(v.imag)] for v in sampled],
        "continuousLyapunov": linalg.solve_continuous_lyapunov(a, -q).tolist(),
        "discreteLyapunov": linalg.solve_discrete_lyapunov(held[0], q).tolist(),
        "continuousRiccati": linalg.solve_continuous_are(a, wide, q, r).tolist(),
        "discreteRiccati": linalg.solve_discrete_are(held[0], wide, q, r).tolist(),
    })

stiff = np.array([[-1e4, 3.0, 0.0], [0.2, -1e-2, 5.0], [0.0, -5.0, -1e-2]])
values = {"scipy": scipy.__version__, "cases": cases,
          "stiff": {"a": stiff.tolist(), "exponential": linalg.expm(stiff).tolist()}}
path = pathlib.Path(__file__).with_name("scipy-values.json")
path.write_text(json.dumps(values, indent=1) + "\n")
