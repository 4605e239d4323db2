"""
State equations of a whole plant, written by hand from the circuit model.

They share nothing with the engine in sim-core: no code, no numbering, no method. The unknowns
are physical: potentials of the joints that carry capacitance, voltages of capacitors that have a
series resistance, winding and inductor currents, the core's flux linkage. With y their vector,

    M y' = -K y + s - E i(u),   u = D' y,

M, K, s, E, D constant and i(u) the continuous, three-piece characteristics of the supply, the
switches, the diodes, the core and the load (README.md derives each line). SI units throughout;
potentials are to earth, and the negative bus rail is earth.
"""
import numpy as np

EARTH = None


class Plant:
    """The equations of one design (a complete design document, every value stated).

    After construction: `names` of the states, `a` = -M^-1 K, `b` = M^-1 E, `c` = M^-1 s,
    `d` = D, and for the piecewise-linear parts `parts` (names, in the order of the columns
    of `d` and `b`) whose characteristic for a given gating `characteristic(gates)` returns.
    """

    def __init__(self, design):
        self.design = design
        self.names, self.index = [], {}
        self.mass, self.stiff, self.source = {}, {}, {}
        self.parts, self.laws, self.across, self.inject = [], [], [], []
        self.capacitors, self.resistors = [], []
        self._bus_and_bridge()
        self._stack()
        self._primary()
        self._output()
        self._join()

    # -- building blocks ---------------------------------------------------------------

    def state(self, name):
        if name not in self.index:
            self.index[name] = len(self.names)
            self.names.append(name)
        return name

    def node(self, name):
        """A joint's state, or EARTH where the joint is bonded to earth."""
        return EARTH if name in self.bonded else self.state(name)

    def add(self, table, row, column, value):
        if row is not EARTH and column is not EARTH:
            table[row, column] = table.get((row, column), 0.0) + value

    def capacitor(self, p, q, c, r=0.0):
        """Charge balance: C(v_p - v_q)' leaves p; with r, C v_c' = (v_p - v_q - v_c)/r."""
        if c == 0 or p == q:
            return
        self.capacitors.append((p, q, c, r))
        if r == 0:
            self._pair(self.mass, p, q, c)
            return
        v = self.state(f"capacitor {p} {q} {len(self.capacitors)}")
        self.mass[v, v] = c
        self._pair(self.stiff, p, q, 1 / r)
        for end, sign in ((p, -1), (q, 1)):
            self.add(self.stiff, end, v, sign / r)
            self.add(self.stiff, v, end, sign / r)
        self.add(self.stiff, v, v, 1 / r)

    def resistor(self, p, q, r):
        if p != q:
            self.resistors.append((p, q, r))
            self._pair(self.stiff, p, q, 1 / r)

    def _pair(self, table, p, q, value):
        self.add(table, p, p, value)
        self.add(table, q, q, value)
        self.add(table, p, q, -value)
        self.add(table, q, p, -value)

    def part(self, name, p, q, law):
        """A one-port: current law(v_p - v_q) leaves p and enters q."""
        ends = {end: sign for end, sign in ((p, 1), (q, -1)) if end is not EARTH}
        self.parts.append(name)
        self.laws.append(law)
        self.across.append(ends)
        self.inject.append(ends)

    # -- the bays ----------------------------------------------------------------------

    def _bus_and_bridge(self):
        supply, bridge, stack = (self.design[k] for k in ("supply", "bridge", "stack"))
        assert supply["earthing"] == "negative"
        self.bonded = {"N"}
        if stack["earth"] == "joint":
            self.bonded.add(f"J{stack['joint']}")
        p, n, a, b = (self.node(x) for x in "PNAB")
        rs, v0, limit = supply["resistance"], supply["voltage"], supply["currentLimit"]
        # Current drawn FROM P by the supply: -(V - v)/Rs, held between -I_lim and 0.
        least = -np.inf if limit is None else v0 - limit * rs
        most = np.inf if supply["absorbs"] else v0
        self.part("supply", p, n, lambda gates: (1 / rs, -v0 / rs, least, -1 / rs, most, -1 / rs))
        self.capacitor(p, n, supply["busCapacitance"], supply["busCapacitorResistance"])

        off, vd, rd = (bridge[k] for k in ("switchOffResistance", "diodeVoltage", "diodeResistance"))
        ron, v_on = bridge["switchResistance"], bridge["switchVoltage"]
        field_effect = bridge["switchKind"] == "field-effect"

        def law(position):
            def of(gates):
                if position not in gates:
                    return (1 / off, 0.0, -vd, 1 / rd - 1 / off, np.inf, 0.0)
                if field_effect:
                    return (1 / ron, 0.0, -vd, 1 / rd, np.inf, 0.0)
                return (1 / off, 0.0, -vd, 1 / rd - 1 / off, v_on, 1 / ron - 1 / off)
            return of

        for position, (x, y) in (("A high", (p, a)), ("A low", (a, n)),
                                 ("B high", (p, b)), ("B low", (b, n))):
            self.part(position, x, y, law(position))
            self.capacitor(x, y, bridge["outputCapacitance"])

    def windings(self):
        """Values of each section, overrides applied, with sense as a number."""
        sections = self.design["sections"]
        found = []
        for k in range(1, sections["count"] + 1):
            own = {key: value for key, value in sections.items() if key != "count"}
            for override in self.design["overrides"]:
                if override["section"] == k:
                    own.update({key: v for key, v in override.items() if key != "section"})
            own["turns"] = own["ratio"] * (1 if own["sense"] == "forward" else -1)
            found.append(own)
        return found

    def _diode(self, anode, cathode):
        r = self.design["rectifier"]
        vf, rd, off = r["diodeVoltage"], r["diodeResistance"], r["diodeOffResistance"]
        law = (1 / off, 0.0, -np.inf, 0.0, vf, 1 / rd - 1 / off)
        self.part(f"diode {anode} {cathode}", anode, cathode, lambda gates: law)
        self.capacitor(anode, cathode, r["diodeCapacitance"])

    def _stack(self):
        rectifier, stack = self.design["rectifier"], self.design["stack"]
        kind, c, esr = (rectifier[k] for k in ("kind", "capacitance", "capacitorResistance"))
        count = self.design["sections"]["count"]
        self.ends = []
        for k, w in enumerate(self.windings(), 1):
            minus, plus = self.node(f"J{k - 1}"), self.node(f"J{k}")
            a = plus if kind == "none" else self.node(f"a{k}")
            b = self.node(f"b{k}") if kind in ("doubler", "bridge") else minus
            self.ends.append((a, b))
            self.capacitor(a, b, w["ownCapacitance"] - w["screenCapacitance"] / 6)
            self.capacitor(a, EARTH, w["screenCapacitance"] / 2)
            self.capacitor(b, EARTH, w["screenCapacitance"] / 2)
            if kind == "doubler":
                self._diode(a, plus)
                self._diode(minus, a)
                self.capacitor(plus, b, c, esr)
                self.capacitor(b, minus, c, esr)
            elif kind == "bridge":
                for anode, cathode in ((a, plus), (b, plus), (minus, a), (minus, b)):
                    self._diode(anode, cathode)
                self.capacitor(plus, minus, c, esr)
            elif kind == "half-wave":
                self._diode(a, plus)
                self.capacitor(plus, minus, c, esr)
            elif kind == "ladder":
                stages = rectifier["stages"]
                coupling = rectifier["couplingCapacitance"]
                coupling = c if coupling is None else coupling
                column = [a] + [self.node(f"c{k} {j}") for j in range(1, stages + 1)]
                smooth = ([minus] + [self.node(f"s{k} {j}") for j in range(1, stages)] + [plus])
                for j in range(1, stages + 1):
                    self.capacitor(column[j - 1], column[j], coupling, esr)
                    self.capacitor(smooth[j - 1], smooth[j], c, esr)
                    self._diode(smooth[j - 1], column[j])
                    self._diode(column[j], smooth[j])
            else:
                assert kind == "none"
        if stack["earth"] == "floating":
            for terminal in ("J0", f"J{count}"):
                self.resistor(self.node(terminal), EARTH, stack["leakageResistance"])
                self.capacitor(self.node(terminal), EARTH, stack["strayCapacitance"])

    def _primary(self):
        """Tank, primary, star point and section windings: the flux equations.

        v_XB is lambda' everywhere. All that leaves leg A returns at leg B.
        """
        tank, tr = self.design["tank"], self.design["transformer"]
        a, b, flux = self.node("A"), self.node("B"), self.state("flux")
        windings = self.windings()
        coils = [self.state(f"winding {k}") for k in range(1, len(windings) + 1)]
        lm, knee = tr["magnetisingInductance"], tr["kneeFluxLinkage"]
        core_loss = tr["coreLossResistance"]

        # i_p as a combination of states: its own state if there is core loss, else the
        # sum of magnetising and reflected currents (then the core must be linear).
        if core_loss is not None:
            primary = {self.state("primary"): 1.0}
            self.add(self.mass, flux, flux, 1.0)
            self.add(self.stiff, flux, "primary", -core_loss)
            for coil, w in zip(coils, windings):
                self.add(self.stiff, flux, coil, core_loss * w["turns"])
            self.parts.append("core")
            if knee is None:
                law = (1 / lm, 0.0, -np.inf, 0.0, np.inf, 0.0)
            else:
                bend = 1 / tr["saturatedInductance"] - 1 / lm
                law = (1 / lm, 0.0, -knee, bend, knee, bend)
            self.laws.append(lambda gates: law)
            self.across.append({flux: 1.0})
            self.inject.append({flux: core_loss})
            row = "primary"
        else:
            assert knee is None
            primary = {flux: 1 / lm, **{coil: w["turns"] for coil, w in zip(coils, windings)}}
            row = flux
        self.primary = primary

        # L i_p' + lambda' = v_T - v_B - R_p i_p
        for state, weight in primary.items():
            self.add(self.mass, row, state, tr["primaryLeakage"] * weight)
            self.add(self.stiff, row, state, tr["primaryResistance"] * weight)
        self.add(self.mass, row, flux, 1.0)

        cs, ls, cp = (tank[k] for k in ("seriesCapacitance", "seriesInductance", "parallelCapacitance"))
        series = tank["seriesCapacitorResistance"] if cs is not None else 0.0
        if ls is not None:
            series += tank["seriesInductorResistance"]
        if cp is None:
            feed, loop = primary, row
            for state, weight in primary.items():
                self.add(self.mass, row, state, (ls or 0.0) * weight)
        else:
            assert ls is not None
            # Own loop: L_s i_s' = v_A - R i_s - v_cs - (v_T - v_B), and
            # v_T - v_B = v_cp + r_cp (i_s - i_p), C_p v_cp' = i_s - i_p.
            loop = self.state("series inductor")
            feed, vp = {loop: 1.0}, self.state("parallel capacitor")
            self.add(self.mass, loop, loop, ls)
            self.add(self.mass, vp, vp, cp)
            rp = tank["parallelCapacitorResistance"]
            difference = {loop: 1.0, **{s: -w for s, w in primary.items()}}
            for state, weight in difference.items():
                self.add(self.stiff, vp, state, -weight)
                self.add(self.stiff, loop, state, rp * weight)
                self.add(self.stiff, row, state, -rp * weight)
            self.add(self.stiff, loop, vp, 1.0)
            self.add(self.stiff, row, vp, -1.0)
        self.feed = feed
        self.add(self.stiff, loop, a, -1.0)
        self.add(self.stiff, loop, b, 1.0)
        for state, weight in feed.items():
            self.add(self.stiff, loop, state, series * weight)
            self.add(self.stiff, a, state, weight)
            self.add(self.stiff, b, state, -weight)
        if cs is not None:
            vs = self.state("series capacitor")
            self.add(self.mass, vs, vs, cs)
            self.add(self.stiff, loop, vs, 1.0)
            for state, weight in feed.items():
                self.add(self.stiff, vs, state, -weight)

        # L_k i_k' - n_k lambda' = -R_k i_k - (v_a - v_b); i_k leaves the winding at a.
        for coil, w, (p, q) in zip(coils, windings, self.ends):
            self.add(self.mass, coil, coil, w["leakageInductance"])
            self.add(self.mass, coil, flux, -w["turns"])
            self.add(self.stiff, coil, coil, w["resistance"])
            self.add(self.stiff, coil, p, 1.0)
            self.add(self.stiff, coil, q, -1.0)
            self.add(self.stiff, p, coil, -1.0)
            self.add(self.stiff, q, coil, 1.0)

    def _output(self):
        out, load = self.design["output"], self.design["load"]
        positive, negative = self.node(f"J{self.design['sections']['count']}"), self.node("J0")
        inner = positive if out["lead"] == "positive" else negative
        tip = inner
        if out["tankResistance"] > 0:
            tip = self.state("output")
            self.resistor(inner, tip, out["tankResistance"])
        if out["lead"] == "positive":
            positive = tip
        else:
            negative = tip
        self.output = (positive, negative)
        for r in (out["bleederResistance"], out["probeResistance"]):
            if r is not None:
                self.resistor(positive, negative, r)
        self.capacitor(positive, negative, out["probeCapacitance"] + out["cableCapacitance"])
        end = out["loadEndResistance"]
        if load["kind"] == "resistor":
            self.resistor(positive, negative, end + load["resistance"])
        elif load["kind"] == "short":
            self.resistor(positive, negative, end + load["shortResistance"])
        elif load["kind"] == "constant-current":
            # Below the knee i = I v/V_k, so with the resistor i = V/(V_k/I + R_end).
            g = 1 / (load["kneeVoltage"] / load["current"] + end)
            knee = load["current"] / g
            law = (g, 0.0, -knee, -g, knee, -g)
            self.part("load", positive, negative, lambda gates: law)
        else:
            assert load["kind"] == "open"

    def _join(self):
        n, m = len(self.names), len(self.parts)
        mass, stiff = np.zeros((n, n)), np.zeros((n, n))
        for table, matrix in ((self.mass, mass), (self.stiff, stiff)):
            for (row, column), value in table.items():
                matrix[self.index[row], self.index[column]] += value
        d, e = np.zeros((n, m)), np.zeros((n, m))
        for j in range(m):
            for state, weight in self.across[j].items():
                d[self.index[state], j] += weight
            for state, weight in self.inject[j].items():
                e[self.index[state], j] += weight
        self.matrices = mass, stiff, d, e
        self.a, self.b, self.d = -np.linalg.solve(mass, stiff), np.linalg.solve(mass, e), d

    def characteristic(self, gates):
        """Arrays (slope, offset, low, slope added below low, high, slope added above high)."""
        return np.array([law(gates) for law in self.laws]).T

    # -- what is read ------------------------------------------------------------------

    def row(self, weights):
        r = np.zeros(len(self.names))
        for state, weight in weights.items():
            if state is not EARTH:
                r[self.index[state]] += weight
        return r

    def signals(self, section):
        """Signal name -> row vector, its product with the state being the signal."""
        a, b = self.ends[section - 1]
        positive, negative = self.output
        difference = lambda p, q: self.row({p: 1.0}) - self.row({q: 1.0})
        return {
            "outputVoltage": difference(positive, negative),
            "primaryCurrent": self.row(self.primary),
            "windingCurrent": self.row({f"winding {section}": 1.0}),
            "windingVoltage": difference(a, b),
            "fluxLinkage": self.row({"flux": 1.0}),
            "busVoltage": self.row({"P": 1.0}),
        }

    def initial(self):
        """All at rest; the bus capacitor charged if the design says so; the core's remanence."""
        y = np.zeros(len(self.names))
        y[self.index["flux"]] = self.design["transformer"]["remanence"]
        supply = self.design["supply"]
        if self.design["start"]["busCharged"]:
            v = supply["voltage"]
            if supply["busCapacitorResistance"] > 0:
                y[next(i for i, s in enumerate(self.names) if s.startswith("capacitor P"))] = v
            else:
                # Charge shared at once: each leg sits half way between two equal C_oss.
                y[self.index["P"]], y[self.index["A"]], y[self.index["B"]] = v, v / 2, v / 2
        return y

    def scales(self):
        """Typical size of each state, for the absolute tolerance."""
        supply, bridge = self.design["supply"], self.design["bridge"]
        v = supply["voltage"]
        turns = max(w["ratio"] for w in self.windings())
        reach = {"flux": v / bridge["frequency"] / 4}
        sizes = []
        for name in self.names:
            if name in ("primary", "series inductor"):
                sizes.append(1.0)
            elif name.startswith("winding"):
                sizes.append(1.0 / turns / len(self.ends))
            elif name in ("P", "A", "B", "series capacitor", "parallel capacitor") or \
                    name.startswith("capacitor P"):
                sizes.append(v)
            else:
                sizes.append(reach.get(name, v * turns))
        return np.array(sizes)


def gating(bridge):
    """Switching instants of one period: a sorted list of (time in [0, T), set of positions on)
    valid until the next instant. The last entry holds on into the next period."""
    period = 1 / bridge["frequency"]
    positive = period / 2 + bridge["widthError"]
    shift = (180 - bridge["phaseShift"]) / 360 * period
    commands = {"A high": (0.0, positive), "A low": (positive, period - positive),
                "B low": (shift, positive), "B high": (shift + positive, period - positive)}
    dead = bridge["deadTime"]
    on = {p: ((start + dead) % period, length - dead) for p, (start, length) in commands.items()}
    edges = sorted({round(t / period % 1, 12) * period
                    for start, length in on.values() for t in (start, start + length)})
    result = []
    for i, t in enumerate(edges):
        follow = edges[i + 1] if i + 1 < len(edges) else edges[0] + period
        middle = (t + follow) / 2
        result.append((t, frozenset(p for p, (start, length) in on.items()
                                    if (middle - start) % period < length)))
    return result
