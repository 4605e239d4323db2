"""Settled multiplier ladders by charge transfer alone: no conductance, no differential equation.

Half-wave ladder of n stages of equal capacitances C, ideal diodes, constant load current I.
Diodes pass charges q >= 0 that leave no diode with a forward voltage, and pass none where the
voltage is negative. With v the capacitor voltages, A v + b e the diodes' forward voltages at
source voltage e, and charges counted in units of C, that is

    q >= 0,  A (v - A'q) + b e <= 0,  complementary,

the conditions of least squares min |A'q - (v + A^-1 b e)| with q >= 0 (Lawson & Hanson, Solving
Least Squares Problems, 1974). The source walks through its period in steps that are fine at the
crests; the load takes its charge in each. The settled state is a fixed point of the period map,
found by Newton's method.

Regenerate ladderCharge.json: python3 ladderCharge.py (Debian's python3-scipy; half a minute).
Figures are in u = I/(fC), at u = V/500: drop = 2nV - output. `self` is the largest change of any
figure when every step is halved.
"""

import json
import math
import pathlib

import numpy as np
from scipy.optimize import nnls

U = 1.0 / 500.0  # of the amplitude, which is 1


def ladder(n):
    """A and b for capacitors p_1..p_n, s_1..s_n and diodes s_(k-1) -> p_k, p_k -> s_k."""
    a = np.zeros((2 * n, 2 * n))
    b = np.zeros(2 * n)
    pump = lambda k: np.r_[np.arange(n) < k, np.zeros(n)].astype(float)
    smooth = lambda k: np.r_[np.zeros(n), np.arange(n) < k].astype(float)
    for k in range(1, n + 1):
        a[2 * k - 2] = smooth(k - 1) - pump(k)
        b[2 * k - 2] = -1.0
        a[2 * k - 1] = pump(k) - smooth(k)
        b[2 * k - 1] = 1.0
    return a, b


def sine(fine):
    """Phases (in periods) and source voltages of one period."""
    window, steps = 0.05, 120 * fine
    near = np.linspace(-window, window, 2 * steps + 1)
    phases = np.unique(
        np.r_[near + 0.25, near + 0.75, np.linspace(0, 1, 40 * fine + 1)].round(12)
    )
    return phases, np.sin(2 * math.pi * phases)


def square(fine):
    half = np.linspace(0, 0.5, 20 * fine + 1)
    # Two entries at each edge: the old level, then the new one at the same instant.
    phases = np.r_[0.0, half, half + 0.5]
    return phases, np.r_[-1.0, np.ones(half.size), -np.ones(half.size)]


class Ladder:
    def __init__(self, n, drive, fine):
        self.n = n
        self.a, b = ladder(n)
        self.push = np.linalg.solve(self.a, b)
        self.phases, self.e = drive(fine)

    def period(self, v):
        """Voltages after a period, and the output at every phase."""
        n = self.n
        output = [v[n:].sum()]
        for k in range(1, len(self.phases)):
            v = v.copy()
            v[n:] -= U * (self.phases[k] - self.phases[k - 1])
            q, _ = nnls(self.a.T, v + self.push * self.e[k])
            v = v - self.a.T @ q
            output.append(v[n:].sum())
        return v, np.array(output)

    def settle(self):
        v = np.full(2 * self.n, 2.0)
        v[0] = 1.0
        # The map is linear in pieces: a Newton step may overshoot one, so plain periods follow it.
        for _ in range(12):
            for _ in range(30 * self.n):
                v, _ = self.period(v)
            after, _ = self.period(v)
            rest = after - v
            jacobian = self.jacobian(v, after)
            if abs(rest).max() < 1e-10:
                break
            v = after + jacobian @ np.linalg.solve(np.eye(v.size) - jacobian, rest)
        assert abs(rest).max() < 1e-8, "not settled"
        slowest = max(abs(np.linalg.eigvals(jacobian)))
        return v, float(slowest)

    def jacobian(self, v, after):
        columns = np.empty((v.size, v.size))
        for i in range(v.size):
            moved = v.copy()
            moved[i] += 1e-7
            columns[:, i] = (self.period(moved)[0] - after) / 1e-7
        return columns

    def figures(self, v):
        _, output = self.period(v)
        at = self.phases
        mean = float(np.sum((output[1:] + output[:-1]) * np.diff(at)) / 2)
        crest = float(output[1:].max())
        none = 2.0 * self.n
        return {
            "toCrest": (none - crest) / U,
            "toMean": (none - mean) / U,
            "peakToPeak": float(crest - output[1:].min()) / U,
        }


def main():
    rows = []
    for name, drive in (("sine", sine), ("square", square)):
        for n in range(1, 7):
            coarse = Ladder(n, drive, 1)
            v, slowest = coarse.settle()
            rough = coarse.figures(v)
            fine = Ladder(n, drive, 2)
            v, slowest = fine.settle()
            figures = fine.figures(v)
            row = {
                "drive": name,
                "stages": n,
                **figures,
                "slowestDecayPerPeriod": slowest,
                "self": max(abs(figures[k] - rough[k]) for k in figures),
                "pump": v[:n].tolist(),
                "smoothing": v[n:].tolist(),
            }
            print({k: row[k] for k in row if k not in ("pump", "smoothing")}, flush=True)
            rows.append(row)
    path = pathlib.Path(__file__).with_name("ladderCharge.json")
    path.write_text(json.dumps({"dropPerAmplitude": U, "rows": rows}, indent=1) + "\n")


main()
