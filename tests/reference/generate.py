"""
Solve the reference cases with scipy's general-purpose stiff integrator and write them as data.

    python3 generate.py [case ...]        writes <case>.json beside this file (all cases if none named)
    python3 generate.py --balance         checks the power balance of every case's equations
    python3 generate.py --radau case ...  solves again by another method and prints the difference
"""
import json
import sys
import time
from pathlib import Path

import numpy as np
import scipy
from scipy.integrate import odeint, solve_ivp

sys.dont_write_bytecode = True
from cases import CASES, design
from equations import EARTH, Plant, gating

HERE = Path(__file__).parent
FINE, COARSE = 1e-9, 1e-7
GRID = 2000  # samples of a period from which its extremes are taken
RADAU_PERIODS = 4
LAST, EARLY = 300, 200  # stored points of a period, at the end and at the start


class System:
    """A plant with one gating: right-hand side and Jacobian, with two integrals appended."""

    def __init__(self, plant, gates, means):
        slope, offset, low, below, high, above = plant.characteristic(gates)
        n = len(plant.names)
        self.n, self.means = n, means
        self.a = plant.a - plant.b * slope @ plant.d.T
        self.a = np.vstack([self.a, means])
        self.b = np.vstack([plant.b, np.zeros((len(means), plant.b.shape[1]))])
        self.c = -self.b @ offset
        self.dt = np.ascontiguousarray(plant.d.T)
        self.low, self.below, self.high, self.above = low, below, high, above

    def rhs(self, t, z):
        y = z[: self.n]
        u = self.dt @ y
        bent = np.minimum(u - self.low, 0) * self.below + np.maximum(u - self.high, 0) * self.above
        return self.a @ y + self.c - self.b @ bent

    def jacobian(self, t, z):
        u = self.dt @ z[: self.n]
        slope = np.where(u < self.low, self.below, 0) + np.where(u > self.high, self.above, 0)
        full = np.zeros((len(z), len(z)))
        full[:, : self.n] = self.a - (self.b * slope) @ self.dt
        return full


def lsoda(system, z, times, rtol, atol):
    result, info = odeint(system.rhs, z, times, Dfun=system.jacobian, tfirst=True, rtol=rtol,
                          atol=atol, mxstep=2_000_000, full_output=True)
    if info["message"] != "Integration successful." or not np.isfinite(result).all():
        raise RuntimeError(info["message"])
    return result, int(info["nst"][-1])


def radau(system, z, times, rtol, atol):
    found = solve_ivp(system.rhs, (times[0], times[-1]), z, method="Radau", t_eval=times,
                      jac=system.jacobian, rtol=rtol, atol=atol)
    if not found.success:
        raise RuntimeError(found.message)
    return found.y.T, len(found.t)


def solve(key, rtol, method=lsoda, periods=None):
    """Per-period means and extremes, and the stored windows, of one case."""
    title, total, section, _ = CASES[key]
    periods = periods or total
    document = design(key)
    plant = Plant(document)
    period = 1 / document["bridge"]["frequency"]
    rows = plant.signals(section)
    signals = np.array(list(rows.values()))
    pattern = gating(document["bridge"])
    dead = document["bridge"]["deadTime"]
    systems = {gates: System(plant, gates, signals[:2]) for gates in
               {frozenset(), *(g for _, g in pattern)}}
    atol = rtol * np.concatenate([plant.scales(), [document["supply"]["voltage"] * period, period]])
    z = np.concatenate([plant.initial(), [0, 0]])

    windows = [(0, 2, EARLY), (periods - 2, 2, LAST)]
    means, lows, highs, steps = [], [], [], 0
    kept = [[] for _ in windows]
    for p in range(periods):
        inside = [(i, (np.arange(count) + 0.5) / count * period)
                  for i, (first, length, count) in enumerate(windows) if first <= p < first + length]
        grid = np.arange(GRID) / GRID * period
        edges = [t for t, _ in pattern]
        gates = [g for _, g in pattern]
        if edges[0] > 0:
            edges, gates = [0.0] + edges, [gates[-1]] + gates
        if p == 0:
            gates = [g if t >= dead * (1 - 1e-9) else frozenset() for t, g in zip(edges, gates)]
        z[-2:] = 0
        low, high = np.full(2, np.inf), np.full(2, -np.inf)
        taken = {i: [] for i, _ in inside}
        for t0, t1, g in zip(edges, edges[1:] + [period], gates):
            marks = np.concatenate([[t0, t1], grid, *(t for _, t in inside)])
            marks = np.unique(marks[(marks >= t0) & (marks <= t1)])
            marks = marks[np.concatenate([[True], np.diff(marks) > 1e-12 * period])]
            marks[-1] = t1
            path, used = method(systems[g], z, marks - t0, rtol, atol)
            steps += used
            z = path[-1].copy()
            seen = signals @ path[:, : len(plant.names)].T
            low, high = np.minimum(low, seen[:2].min(1)), np.maximum(high, seen[:2].max(1))
            for i, t in inside:
                here = t[(t > t0) & (t <= t1)]
                at = np.abs(marks[:, None] - here[None, :]).argmin(0)
                taken[i].append(seen[:, at])
        for i, parts in taken.items():
            kept[i].append(np.concatenate(parts, axis=1))
        means.append(z[-2:] / period)
        lows.append(low)
        highs.append(high)
    return {
        "period": period,
        "names": list(rows),
        "mean": np.array(means), "min": np.array(lows), "max": np.array(highs),
        "windows": [(first, count, np.concatenate(parts, axis=1))
                    for (first, length, count), parts in zip(windows, kept)],
        "steps": steps,
        "states": len(plant.names),
    }


def difference(one, other):
    """Largest difference of two solutions in % : of output and of primary current, per-period
    values against the largest magnitude of the run; of every stored waveform, rms against its
    own rms (the worse window)."""
    found = {}
    for j, name in enumerate(one["names"][:2]):
        scale = max(np.abs(one["max"][:, j]).max(), np.abs(one["min"][:, j]).max())
        found[name] = {
            which: 100 * float(np.abs(one[which][:, j] - other[which][:, j]).max() / scale)
            for which in ("mean", "min", "max")}
    found["waveforms"] = {
        name: 100 * max(float(np.sqrt(np.mean((a[2][j] - b[2][j]) ** 2) / np.mean(a[2][j] ** 2)))
                        for a, b in zip(one["windows"], other["windows"]))
        for j, name in enumerate(one["names"])}
    return found


def rounded(values, digits=6):
    return [float(f"{v:.{digits}g}") for v in values]


def write(key):
    title, periods, section, _ = CASES[key]
    began = time.time()
    fine = solve(key, FINE)
    spent = time.time() - began
    error = difference(fine, solve(key, COARSE))
    data = {
        "title": title,
        "method": f"scipy {scipy.__version__} odeint (LSODA), relative tolerance {FINE:g}",
        "selfErrorAgainst": f"relative tolerance {COARSE:g}",
        "selfError": json.loads(json.dumps(error), parse_float=lambda s: float(f"{float(s):.2g}")),
        "section": section,
        "period": fine["period"],
        "timeSpan": periods * fine["period"],
        "design": design(key),
        "perPeriod": {
            name: {which: rounded(fine[which][:, j]) for which in ("mean", "min", "max")}
            for j, name in enumerate(fine["names"][:2])},
        "windows": [{
            "start": (first + 0.5 / count) * fine["period"],
            "step": fine["period"] / count,
            "count": values.shape[1],
            **{name: rounded(values[j]) for j, name in enumerate(fine["names"])},
        } for first, count, values in fine["windows"]],
    }
    path = HERE / f"{key}.json"
    text = json.dumps(data, separators=(",", ":"))
    path.write_text(text + "\n")
    last = {n: f"{fine['mean'][-1, j]:.5g} [{fine['min'][-1, j]:.5g}, {fine['max'][-1, j]:.5g}]"
            for j, n in enumerate(fine["names"][:2])}
    print(f"{key}: {fine['states']} states, {fine['steps']} steps, {spent:.1f} s, {len(text) // 1000} kB\n"
          f"   last period {last}\n   self error % {data['selfError']}", flush=True)


def balance(key):
    """Largest imbalance of power, relative to the largest term, over random states.

    Summed branch by branch from the circuit, not from the matrices."""
    document = design(key)
    plant = Plant(document)
    tank, tr = document["tank"], document["transformer"]
    random = np.random.default_rng(1)
    scale, worst = plant.scales(), 0.0
    for gates in {g for _, g in gating(document["bridge"])}:
        system = System(plant, gates, np.zeros((0, len(plant.names))))
        law = plant.characteristic(gates)
        for _ in range(20):
            y = scale * random.uniform(-1, 1, len(scale))
            dy = system.rhs(0, y)
            value = lambda name: 0.0 if name is EARTH else y[plant.index[name]]
            rate = lambda name: 0.0 if name is EARTH else dy[plant.index[name]]
            sum_of = lambda weights, v: sum(w * v(s) for s, w in weights.items())
            terms = []
            for number, (p, q, c, r) in enumerate(plant.capacitors, 1):
                v = value(p) - value(q)
                if r == 0:
                    terms.append(c * v * (rate(p) - rate(q)))
                else:
                    name = f"capacitor {p} {q} {number}"
                    terms += [value(name) * c * rate(name), (v - value(name)) ** 2 / r]
            terms += [(value(p) - value(q)) ** 2 / r for p, q, r in plant.resistors]
            for k, w in enumerate(plant.windings(), 1):
                i = value(f"winding {k}")
                terms += [w["leakageInductance"] * i * rate(f"winding {k}"), w["resistance"] * i * i]
            ip, fed = sum_of(plant.primary, value), sum_of(plant.feed, value)
            terms += [tr["primaryLeakage"] * ip * sum_of(plant.primary, rate),
                      tr["primaryResistance"] * ip * ip]
            reflected = sum(w["turns"] * value(f"winding {k}")
                            for k, w in enumerate(plant.windings(), 1))
            if tr["coreLossResistance"] is not None:
                terms.append(rate("flux") ** 2 / tr["coreLossResistance"])
            if tank["seriesInductance"] is not None:
                terms += [tank["seriesInductance"] * fed * sum_of(plant.feed, rate),
                          tank["seriesInductorResistance"] * fed ** 2]
            if tank["seriesCapacitance"] is not None:
                terms += [tank["seriesCapacitance"] * value("series capacitor") *
                          rate("series capacitor"), tank["seriesCapacitorResistance"] * fed ** 2]
            if tank["parallelCapacitance"] is not None:
                terms += [tank["parallelCapacitance"] * value("parallel capacitor") *
                          rate("parallel capacitor"),
                          tank["parallelCapacitorResistance"] * (fed - ip) ** 2]
            for j, part in enumerate(plant.parts):
                u = sum_of(plant.across[j], value)
                slope, offset, low, below, high, above = law[:, j]
                i = slope * u + offset
                i += (below * (u - low) if u < low else 0) + (above * (u - high) if u > high else 0)
                terms.append(i * rate("flux") if part == "core" else i * u)
            if "core" not in plant.parts:
                terms.append(value("flux") / tr["magnetisingInductance"] * rate("flux"))
                assert abs(ip - reflected - value("flux") / tr["magnetisingInductance"]) < 1e-9
            worst = max(worst, abs(sum(terms)) / max(map(abs, terms)))
    return worst


if __name__ == "__main__":
    asked = [a for a in sys.argv[1:] if not a.startswith("--")] or list(CASES)
    for key in asked:
        if "--balance" in sys.argv:
            print(f"{key}: {balance(key):.1e}")
        elif "--radau" in sys.argv:
            print(key, difference(solve(key, FINE, periods=RADAU_PERIODS),
                                  solve(key, COARSE, radau, RADAU_PERIODS)), flush=True)
        else:
            write(key)
