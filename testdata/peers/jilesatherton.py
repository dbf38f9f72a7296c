"""Jiles-Atherton histories by a Runge-Kutta method of order 8 (scipy DOP853), written from the published equations.

Reads from standard input a list of cases, each with the parameters Ms, a, k, alpha, c, the form (1986 or 1992), what is
driven ("H" or "B") and the list of values that it goes to, one after another, from the demagnetised state. Writes for each
value H, B and the integral of H dB so far.

Form 1986, state M over H (D. C. Jiles, D. L. Atherton, J. Magn. Magn. Mater. 61 (1986) 48):
    dM/dH = [dm (Man - M)/(delta k - alpha (Man - M)) + c dMan/dHe]/(1 + c)
Form 1992, state Mirr over H: M = (1-c) Mirr + c Man is implicit through Man(H + alpha M), so that M is the state:
    dMirr/dHe = dm (Man - Mirr)/(delta k),  X = (1-c) dMirr/dHe + c dMan/dHe,  dM/dH = X/(1 - alpha X)
Inverse form (N. Sadowski et al., IEEE Trans. Magn. 38 (2002) 797):
    dM/dB = X/(mu0 (1 + (1 - alpha) X))
"""
import json
import sys

import numpy as np
from scipy.integrate import solve_ivp

MU0 = 4e-7 * np.pi


def langevin(x):
    if abs(x) < 0.02:
        x2 = x * x
        return (x * (1 / 3 - x2 * (1 / 45 - x2 * (2 / 945 - x2 / 4725))),
                1 / 3 - x2 * (1 / 15 - x2 * (2 / 189 - x2 / 675)))
    if abs(x) > 300:
        return np.sign(x) - 1 / x, 1 / x**2
    return 1 / np.tanh(x) - 1 / x, 1 / x**2 - 1 / np.sinh(x)**2


def slope(p, h, m, delta):
    """dM/dH, and X = dM/dHe, at H and M while H moves in the direction delta."""
    he = h + p["alpha"] * m
    l, dl = langevin(he / p["a"])
    man, dman = p["Ms"] * l, p["Ms"] / p["a"] * dl
    if p["form"] == 1986:
        irr = 0.0
        if (man - m) * delta > 0:
            irr = (man - m) / (delta * p["k"] - p["alpha"] * (man - m))
        s = (irr + p["c"] * dman) / (1 + p["c"])
        return s, s / (1 + p["alpha"] * s)
    mirr = (m - p["c"] * man) / (1 - p["c"])
    irr = (man - mirr) / (delta * p["k"]) if (man - mirr) * delta > 0 else 0.0
    x = (1 - p["c"]) * irr + p["c"] * dman
    return x / (1 - p["alpha"] * x), x


def move(p, h0, m0, end):
    """From (h0, m0) to the end of H or B in one monotone move; H, M and the integral of H dB there."""
    if p["drive"] == "H":
        delta = np.sign(end - h0)

        def f(h, y):
            s, _ = slope(p, h, y[0], delta)
            return [s, h * MU0 * (1 + s)]

        start, y0 = h0, [m0, 0.0]
    else:
        b0 = MU0 * (h0 + m0)
        delta = np.sign(end - b0)

        def f(b, y):
            h = b / MU0 - y[0]
            _, x = slope(p, h, y[0], delta)
            return [x / (MU0 * (1 + (1 - p["alpha"]) * x)), h]

        start, y0 = b0, [m0, 0.0]
    if end == start:
        return h0, m0, 0.0
    r = solve_ivp(f, (start, end), y0, method="DOP853", rtol=1e-10, atol=[1e-7 * p["Ms"] * 1e-3, 1e-9],
                  max_step=abs(end - start) / 40)
    if not r.success:
        raise RuntimeError(r.message)
    m, w = r.y[0, -1], r.y[1, -1]
    return (end if p["drive"] == "H" else end / MU0 - m), m, w


def run(p):
    h, m, work, out = 0.0, 0.0, 0.0, []
    for end in p["to"]:
        h, m, w = move(p, h, m, end)
        work += w
        out.append([h, MU0 * (h + m), work])
    return out


print(json.dumps([run(p) for p in json.load(sys.stdin)]))
