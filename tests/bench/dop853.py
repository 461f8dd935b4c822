"""SciPy's DOP853 at the same work: `dop853.py < works.json > answers.json`.

Each work is an object with `gms`, `pos`, `vel` (three numbers a body), `until`, and `length`, `time`: the units in which the
integration runs, so that all numbers are near 1. Answers have `seconds` of processor time (the fastest of `times`), `steps`,
`evaluations`, `energy_error` (the largest at any step) and `pos`. The relative tolerance is 1e-12; the absolute one is the same
in those units.
"""

import json
import sys
import time

import numpy as np
from scipy.integrate import DOP853

TOLERANCE = 1e-12


def accelerations(gms, massive):
    """The right-hand side, all bodies at once: what has no mass is only pulled."""
    n = len(gms)
    pulls = gms[:massive, None]

    def rhs(_, state):
        pos = state[: 3 * n].reshape(3, n)
        d = pos[:, None, :] - pos[:, :massive, None]
        r2 = (d * d).sum(axis=0)
        r2[range(massive), range(massive)] = 1.0
        w = pulls / (r2 * np.sqrt(r2))
        acc = -(d * w).sum(axis=1)
        return np.concatenate((state[3 * n :], acc.ravel()))

    return rhs


def energy(gms, massive, states):
    """Of each state, a column."""
    n = len(gms)
    pos = states[: 3 * n].reshape(3, n, -1)[:, :massive]
    vel = states[3 * n :].reshape(3, n, -1)[:, :massive]
    m = gms[:massive, None]
    total = (0.5 * m * (vel * vel).sum(axis=0)).sum(axis=0)
    for i in range(massive):
        for j in range(i + 1, massive):
            d = pos[:, i] - pos[:, j]
            total -= gms[i] * gms[j] / np.sqrt((d * d).sum(axis=0))
    return total


def run(work):
    length, unit = work["length"], work["time"]
    gms = np.array(work["gms"]) * unit**2 / length**3
    n = len(gms)
    massive = int((gms != 0).sum())
    pos = np.array(work["pos"]).reshape(n, 3).T / length
    vel = np.array(work["vel"]).reshape(n, 3).T * unit / length
    start = np.concatenate((pos.ravel(), vel.ravel()))
    rhs = accelerations(gms, massive)
    fastest = float("inf")
    for _ in range(work["times"]):
        before = time.process_time()
        solver = DOP853(rhs, 0.0, start, work["until"] / unit, rtol=TOLERANCE, atol=TOLERANCE)
        states, steps = [start], 0
        while solver.status == "running":
            solver.step()
            steps += 1
            if massive == n and steps % 4 == 0:
                states.append(solver.y)
        fastest = min(fastest, time.process_time() - before)
    states = np.array(states + [solver.y]).T
    energies = energy(gms, massive, states)
    return {
        "seconds": fastest,
        "steps": steps,
        "evaluations": solver.nfev,
        "energy_error": float(np.abs(energies / energies[0] - 1.0).max()),
        "pos": (solver.y[: 3 * n].reshape(3, n).T * length).ravel().tolist(),
    }


json.dump([run(work) for work in json.load(sys.stdin)], sys.stdout)
