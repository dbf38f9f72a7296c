#!/usr/bin/env python3
"""Static nonlinear reluctance networks by scipy.optimize.root: a second opinion and a measure of speed.

usage: networks.py NETWORKS.json

NETWORKS.json is a list of networks

    {"nodes": n, "linkages": [lambda, ...], "branches": [
        {"from": i, "to": j, "law": "gap" | "langevin" | "arctan" | "froehlich", "length": m, "area": m2,
         "chi": initial susceptibility, "ms": saturation magnetisation in A/m, "mmf": A, "coil": c or -1, "turns": N}, ...]}

with nodes counted from 0 and "coil" an index into "linkages": the flux linkage in Wb turn that the winding of "turns"
turns on this branch must have, at a current that follows.

Laws, B in T at H in A/m:

    gap        B = mu0 H
    langevin   B = mu0 (H + ms (coth z - 1/z)),  z = 3 chi H/ms
    arctan     B = mu0 (H + (2 ms/pi) atan(pi chi H/(2 ms)))
    froehlich  B = mu0 (H + chi H/(1 + chi |H|/ms))

Unknowns are the node potentials but that of node 0, and the currents of the coils. The mmf over a branch is
U = mmf + turns * current + u[from] - u[to], its flux area * B(U/length). The equations say that the fluxes leaving a
node sum to zero, and that turns * flux is the linkage of each coil. Equations and unknowns are scaled by the square
root of the diagonal of the Jacobian at zero field, which helps both methods greatly. The Jacobian is given.

For each method one line of JSON is printed: the method, the number of networks that it solved (every residual below
1e-6 of the magnitudes in its row plus 1e-12 of the largest flux: judged here, not by what the method reports), how
many it reported as solved, the processor time per network in ms, making of the equations included, and the fluxes of every
network solved (null for the others).
"""
import json
import sys
import time

import numpy
import scipy
from scipy.optimize import root

MU0 = 4e-7 * numpy.pi


class Network:
    """The equations of one network."""

    def __init__(self, data):
        branches, nodes = data["branches"], data["nodes"]
        self.linkages = numpy.array(data["linkages"] or [], dtype=float)
        column = lambda key: numpy.array([b[key] for b in branches], dtype=float)
        self.length, self.area, self.mmf = column("length"), column("area"), column("mmf")
        self.chi, self.ms = column("chi"), column("ms")
        law = numpy.array([b["law"] for b in branches])
        self.langevin, self.arctan, self.froehlich = (numpy.flatnonzero(law == name) for name in ("langevin", "arctan", "froehlich"))
        self.size = nodes - 1 + len(self.linkages)
        # incidence[r, b]: what branch b adds to row r, and what unknown r adds to the mmf of branch b
        self.incidence = numpy.zeros((self.size, len(branches)))
        for b, branch in enumerate(branches):
            if branch["from"] > 0:
                self.incidence[branch["from"] - 1, b] += 1
            if branch["to"] > 0:
                self.incidence[branch["to"] - 1, b] -= 1
            if branch["coil"] >= 0:
                self.incidence[nodes - 1 + branch["coil"], b] += branch["turns"]
        self.given = numpy.concatenate([numpy.zeros(nodes - 1), self.linkages])
        slope = self.fluxes(numpy.zeros(len(branches)))[1]
        self.scale = 1 / numpy.sqrt((self.incidence ** 2) @ slope)

    def fluxes(self, mmf):
        """Flux and permeance of every branch at its mmf."""
        h = mmf / self.length
        m, dm = numpy.zeros_like(h), numpy.zeros_like(h)
        k = self.langevin
        z = 3 * self.chi[k] * h[k] / self.ms[k]
        small = numpy.abs(z) < 0.01
        safe = numpy.where(small, 1.0, z)
        value = numpy.where(small, z / 3 - z ** 3 / 45, 1 / numpy.tanh(safe) - 1 / safe)
        slope = numpy.where(small, 1 / 3 - z ** 2 / 15, 1 - value ** 2 - 2 * value / safe)
        m[k], dm[k] = self.ms[k] * value, 3 * self.chi[k] * slope
        k = self.arctan
        z = numpy.pi / 2 * self.chi[k] * h[k] / self.ms[k]
        m[k], dm[k] = 2 / numpy.pi * self.ms[k] * numpy.arctan(z), self.chi[k] / (1 + z ** 2)
        k = self.froehlich
        z = 1 + self.chi[k] * numpy.abs(h[k]) / self.ms[k]
        m[k], dm[k] = self.chi[k] * h[k] / z, self.chi[k] / z ** 2
        return MU0 * (h + m) * self.area, MU0 * (1 + dm) * self.area / self.length

    def branch_mmf(self, z):
        return self.mmf + self.incidence.T @ (z * self.scale)

    def residual(self, z):
        return (self.incidence @ self.fluxes(self.branch_mmf(z))[0] - self.given) * self.scale

    def jacobian(self, z):
        slope = self.fluxes(self.branch_mmf(z))[1]
        return (self.incidence * slope) @ self.incidence.T * self.scale[:, None] * self.scale[None, :]

    def judge(self, z):
        """The fluxes if the equations hold, else None."""
        flux = self.fluxes(self.branch_mmf(z))[0]
        size = numpy.abs(self.incidence) @ numpy.abs(flux) + numpy.abs(self.given) + 1e-12 * numpy.abs(flux).max()
        if numpy.all(numpy.abs(self.incidence @ flux - self.given) <= 1e-6 * size):
            return flux.tolist()
        return None


def run(networks, method):
    fluxes, reported, spent = [], 0, 0.0
    for data in networks:
        start = time.process_time()
        network = Network(data)
        try:
            with numpy.errstate(all="ignore"):
                answer = root(network.residual, numpy.zeros(network.size), jac=network.jacobian, method=method, tol=1e-12)
        except (ValueError, FloatingPointError, numpy.linalg.LinAlgError):
            answer = None
        spent += time.process_time() - start
        with numpy.errstate(all="ignore"):
            fluxes.append(network.judge(answer.x) if answer is not None else None)
        reported += bool(answer is not None and answer.success)
    print(json.dumps({"method": method, "program": "scipy " + scipy.__version__, "networks": len(networks),
                      "solved": sum(f is not None for f in fluxes), "reported": reported,
                      "ms": spent / len(networks) * 1e3, "flux": fluxes}))


if __name__ == "__main__":
    with open(sys.argv[1]) as file:
        given = json.load(file)
    for name in ("hybr", "lm"):
        run(given, name)
