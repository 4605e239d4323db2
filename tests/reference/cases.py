"""The reference cases: complete design documents of invented supplies, every value stated, so
that they depend on no default. BASE is what they have in common; a case says what differs."""
from copy import deepcopy

BASE = {
    "version": 1,
    "notes": "",
    "overrides": [],
    "supply": {
        "voltage": 310, "resistance": 0.1, "currentLimit": None, "absorbs": False,
        "busCapacitance": 470e-6, "busCapacitorResistance": 0.02,
        "earthing": "negative", "leakageResistance": 1e6,
    },
    "bridge": {
        "frequency": 22e3, "deadTime": 1e-6, "phaseShift": 180, "widthError": 0,
        "switchKind": "insulated-gate", "switchVoltage": 1, "switchResistance": 0.02,
        "switchOffResistance": 1e7, "diodeVoltage": 0.8, "diodeResistance": 0.02,
        "outputCapacitance": 300e-12,
    },
    "tank": {
        "seriesInductance": None, "seriesInductorResistance": 0.02,
        "seriesCapacitance": None, "seriesCapacitorResistance": 0.005,
        "parallelCapacitance": None, "parallelCapacitorResistance": 0.005,
    },
    "transformer": {
        "primaryResistance": 0.05, "primaryLeakage": 6e-6, "magnetisingInductance": 2.4e-3,
        "kneeFluxLinkage": None, "saturatedInductance": 40e-6, "remanence": 0,
        "coreLossResistance": 2e3,
    },
    "sections": {
        "count": 1, "ratio": 10, "sense": "forward", "leakageInductance": 9.6e-3,
        "resistance": 14, "ownCapacitance": 24e-12, "screenCapacitance": 38e-12,
    },
    "rectifier": {
        "kind": "doubler", "stages": 3, "capacitance": 10e-9, "couplingCapacitance": None,
        "capacitorResistance": 0, "diodeVoltage": 10, "diodeResistance": 20,
        "diodeOffResistance": 1e9, "diodeCapacitance": 2e-12,
    },
    "stack": {"earth": "joint", "joint": 0, "leakageResistance": 1e9, "strayCapacitance": 20e-12},
    "output": {
        "lead": "positive", "tankResistance": 10e3, "bleederResistance": 600e6,
        "probeResistance": 1e9, "probeCapacitance": 3e-12, "cableCapacitance": 1.5e-9,
        "loadEndResistance": 0,
    },
    "load": {"kind": "resistor", "resistance": 3e6, "current": 20e-3, "kneeVoltage": 1e3,
             "shortResistance": 1},
    "start": {"busCharged": True},
}


def _spread(count, base, span, names, rising=True):
    """Overrides that spread the named values linearly by +/- span over the sections."""
    found = []
    for k in range(1, count + 1):
        x = (2 * (k - 1) / (count - 1) - 1) * span
        found.append({"section": k,
                      **{n: float(f"{base[n] * (1 + (x if s else -x)):.6g}") for n, s in names}})
    return found


# key: (title, periods, section whose winding is sampled, what differs from BASE)
CASES = {
    "one-section-doubler": (
        "One section with a doubler, linear core without loss, no tank", 60, 1, {
            "transformer": {"coreLossResistance": None},
            "sections": {"ratio": 40, "leakageInductance": 14e-3, "resistance": 40,
                         "ownCapacitance": 18e-12, "screenCapacitance": 24e-12},
            "rectifier": {"capacitance": 6e-9, "diodeVoltage": 25, "diodeResistance": 40},
            "output": {"cableCapacitance": 0.5e-9},
            "load": {"resistance": 0.5e6},
        }),
    "six-bridges-unequal": (
        "Six bridges of unequal ratio, leakage and sense behind a blocking capacitor, "
        "positive terminal earthed", 50, 3, {
            "tank": {"seriesCapacitance": 4.7e-6, "seriesCapacitorResistance": 0.01},
            "sections": {"count": 6, "ratio": 14, "leakageInductance": 4e-3, "resistance": 12},
            "overrides": [
                {"section": 1, "ratio": 13.6, "leakageInductance": 3.2e-3},
                {"section": 3, "sense": "reversed", "leakageInductance": 5.1e-3},
                {"section": 4, "ratio": 14.5, "resistance": 20},
                {"section": 6, "leakageInductance": 7.5e-3, "ownCapacitance": 40e-12},
            ],
            "rectifier": {"kind": "bridge", "capacitance": 15e-9, "capacitorResistance": 2},
            "stack": {"joint": 6},
            "output": {"lead": "negative"},
            "load": {"resistance": 0.7e6},
        }),
    "twenty-four-doublers": (
        "Twenty-four doublers, leakage and capacitance spread by 4 %, series resonant tank", 40, 17, {
            "bridge": {"frequency": 25e3, "deadTime": 0.6e-6},
            "tank": {"seriesInductance": 40e-6, "seriesCapacitance": 2e-6},
            "transformer": {"primaryLeakage": 5e-6, "magnetisingInductance": 2e-3},
            "sections": {"count": 24, "ratio": 4, "leakageInductance": 1e-3, "resistance": 10,
                         "ownCapacitance": 40e-12, "screenCapacitance": 60e-12},
            "overrides": _spread(24, {"leakageInductance": 1e-3, "ownCapacitance": 40e-12}, 0.04,
                                 (("leakageInductance", True), ("ownCapacitance", False))),
            "rectifier": {"capacitance": 94e-9},
            "output": {"cableCapacitance": 1e-9, "bleederResistance": None},
            "load": {"resistance": 1e6},
        }),
    "saturating-core": (
        "Saturating core with remanence, walked by a width error", 60, 2, {
            "bridge": {"widthError": 0.25e-6},
            "transformer": {"kneeFluxLinkage": 4.6e-3, "remanence": 0.8e-3},
            "sections": {"count": 2, "ratio": 40, "leakageInductance": 25e-3, "resistance": 60},
            "rectifier": {"capacitance": 4e-9, "diodeVoltage": 20, "diodeResistance": 40},
            "output": {"cableCapacitance": 0.6e-9},
            "load": {"resistance": 1.2e6},
        }),
    "current-limited-supply": (
        "Bridges charged from an empty bus by a current-limited supply that cannot absorb", 80, 1, {
            "supply": {"resistance": 0.2, "currentLimit": 6, "busCapacitance": 15e-6,
                       "busCapacitorResistance": 0.05},
            "sections": {"count": 3, "ratio": 20, "leakageInductance": 8e-3, "resistance": 25},
            "rectifier": {"kind": "bridge", "capacitance": 8e-9},
            "output": {"cableCapacitance": 0.4e-9},
            "load": {"resistance": 0.35e6},
            "start": {"busCharged": False},
        }),
    "ladder": (
        "Two sections with multiplier ladders of three stages, larger coupling capacitors", 80, 2, {
            "sections": {"count": 2, "ratio": 12, "leakageInductance": 3e-3, "resistance": 12,
                         "ownCapacitance": 30e-12},
            "rectifier": {"kind": "ladder", "capacitance": 10e-9, "couplingCapacitance": 22e-9,
                          "capacitorResistance": 3},
            "output": {"cableCapacitance": 0.3e-9},
            "load": {"resistance": 6e6},
        }),
    "ringing-no-load": (
        "Windings that ring with a Q of about 40 into small capacitors, no load", 60, 1, {
            "transformer": {"coreLossResistance": 200e3},
            "sections": {"count": 2, "ratio": 30, "leakageInductance": 40e-3, "resistance": 1000,
                         "ownCapacitance": 14e-12, "screenCapacitance": 20e-12},
            "overrides": [{"section": 2, "leakageInductance": 43e-3}],
            "rectifier": {"capacitance": 300e-12, "diodeVoltage": 15, "diodeResistance": 60},
            "output": {"cableCapacitance": 60e-12, "bleederResistance": None},
            "load": {"kind": "open"},
        }),
    "resonant-lcc": (
        "Resonant tank with series and parallel capacitor, field-effect switches at 120 degrees, "
        "four bridges earthed at the centre", 60, 4, {
            "bridge": {"frequency": 45e3, "deadTime": 0.4e-6, "phaseShift": 120,
                       "switchKind": "field-effect", "switchResistance": 0.06},
            "tank": {"seriesInductance": 45e-6, "seriesInductorResistance": 0.04,
                     "seriesCapacitance": 0.47e-6, "seriesCapacitorResistance": 0.01,
                     "parallelCapacitance": 0.1e-6, "parallelCapacitorResistance": 0.02},
            "sections": {"count": 4, "ratio": 16, "leakageInductance": 2.5e-3, "resistance": 15},
            "rectifier": {"kind": "bridge", "capacitance": 5e-9},
            "stack": {"joint": 2},
            "output": {"cableCapacitance": 0.5e-9},
            "load": {"resistance": 0.5e6},
        }),
    "floating-constant-current": (
        "Constant current with a knee on a floating stack of doublers, one section reversed", 60, 2, {
            "sections": {"count": 3, "ratio": 25, "leakageInductance": 12e-3, "resistance": 40},
            "overrides": [{"section": 2, "sense": "reversed"}],
            "rectifier": {"capacitance": 6e-9, "capacitorResistance": 1},
            "stack": {"earth": "floating", "leakageResistance": 2e8, "strayCapacitance": 30e-12},
            "output": {"lead": "negative", "loadEndResistance": 50e3, "cableCapacitance": 0.4e-9},
            "load": {"kind": "constant-current", "current": 12e-3, "kneeVoltage": 15e3},
        }),
    "half-wave-short": (
        "Half-wave rectifiers into a short behind a resistor, absorbing supply, no bus capacitor "
        "resistance", 40, 1, {
            "supply": {"absorbs": True, "busCapacitorResistance": 0, "busCapacitance": 47e-6},
            "bridge": {"phaseShift": 150},
            "sections": {"count": 2, "ratio": 30, "leakageInductance": 15e-3, "resistance": 50},
            "rectifier": {"kind": "half-wave", "capacitance": 5e-9},
            "output": {"tankResistance": 0, "loadEndResistance": 0.8e6, "cableCapacitance": 0.2e-9},
            "load": {"kind": "short"},
        }),
    "alternating-output": (
        "No rectifier: two sections in series give their alternating voltage", 20, 1, {
            "bridge": {"switchKind": "field-effect", "frequency": 18e3},
            "sections": {"count": 2, "ratio": 6, "leakageInductance": 1.5e-3, "resistance": 8,
                         "ownCapacitance": 60e-12},
            "overrides": [{"section": 2, "ratio": 6.4}],
            "rectifier": {"kind": "none"},
            "output": {"tankResistance": 200, "cableCapacitance": 0.3e-9},
            "load": {"resistance": 40e3},
        }),
}


def design(key):
    """The complete design document of a case."""
    title, _, _, changes = CASES[key]
    document = {"name": title, **deepcopy(BASE)}
    for group, values in changes.items():
        if group == "overrides":
            document["overrides"] = deepcopy(values)
        else:
            unknown = set(values) - set(document[group])
            assert not unknown, unknown
            document[group].update(values)
    return document
