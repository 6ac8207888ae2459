"""The array-language side of the benchmark: a ladder evaluated with NumPy as a careful user would.

Same load data, same interpolation, same equations as the engine: voltage and current at the load
are carried to the source, a series impedance Z adds Z I to V, a shunt admittance Y adds Y V to I,
so that no element needs a division. Everything that does not depend on the values is computed once.
"""

import pathlib

import numpy as np
from scipy.interpolate import CubicSpline

LOADS = pathlib.Path(__file__).resolve().parent.parent / "data" / "loads"
SOURCE_OHM = 50.0
ANTENNAS = {
    "whip": ("whip-120-180mhz.s1p", 140e6, 160e6, 5.5),
    "dipole": ("dipole-700-1060mhz.s1p", 824e6, 960e6, 12.0),
}


def read_reflection(file):
    """Frequencies in Hz and reflection coefficients of a "# MHZ S RI R 50" file."""
    rows = [line.split() for line in (LOADS / file).read_text().splitlines()
            if line and line[0] not in "!#"]
    table = np.array(rows, dtype=float)
    return table[:, 0] * 1e6, table[:, 1] + 1j * table[:, 2]


def load_reflection(file, frequency_hz):
    """The load between its samples: a cubic spline through real and imaginary part."""
    known_hz, reflection = read_reflection(file)
    return CubicSpline(known_hz, reflection)(frequency_hz)


class Ladder:
    """One topology on one frequency grid. `slots` run from the source to the load: (place, kind)
    with places "series" and "shunt", kinds "L" and "C". `parts` maps a kind to its losses."""

    def __init__(self, slots, reflection, frequency_hz, parts=None):
        self.slots = slots
        self.voltage = SOURCE_OHM * (1 + reflection)
        self.current = 1 - reflection
        omega = 2 * np.pi * frequency_hz
        parts = parts or {}
        self.steps = []
        for index in reversed(range(len(slots))):
            place, kind = slots[index]
            part = parts.get(kind, {})
            if kind == "L":
                per_x, fixed = inductor(omega, part)
            else:
                per_x, fixed = capacitor(omega, part)
            # An element without a fixed part is linear in its admittance too.
            linear = not np.any(fixed)
            if place == "shunt" and linear:
                per_x = 1 / per_x
            reciprocal = (kind == "C") != (place == "shunt" and linear)
            self.steps.append((index, place, linear, reciprocal, per_x, fixed))

    def reflection(self, values):
        """The reflection at the source. `values`: one for each slot, numbers or columns (N, 1)."""
        voltage, current = self.voltage, self.current
        for index, place, linear, reciprocal, per_x, fixed in self.steps:
            x = 1 / values[index] if reciprocal else values[index]
            immittance = per_x * x if linear else per_x * x + fixed
            if place == "series":
                voltage = voltage + immittance * current
            elif linear:
                current = current + immittance * voltage
            else:
                current = current + voltage / immittance
        drop = SOURCE_OHM * current
        return (voltage - drop) / (voltage + drop)

    def worst_return_loss_db(self, values):
        """The worst return loss over the grid of one network."""
        return -20 * np.log10(np.abs(self.reflection(values)).max())

    def worst_of_boards_db(self, boards, chunk=500):
        """The worst return loss of each row of `boards`, boards times frequencies at once."""
        out = np.empty(len(boards))
        for start in range(0, len(boards), chunk):
            columns = [c[:, None] for c in boards[start:start + chunk].T]
            worst = np.abs(self.reflection(columns)).max(axis=1)
            out[start:start + chunk] = -20 * np.log10(worst)
        return out


def chain_matrix_return_loss_db(slots, values, load_ohm, frequency_hz):
    """The worst return loss by textbook chain matrices, nothing computed ahead: how such a script
    is usually written."""
    omega = 2 * np.pi * frequency_hz
    chain = np.broadcast_to(np.eye(2, dtype=complex), (len(omega), 2, 2))
    for (place, kind), value in zip(slots, values):
        impedance = 1j * omega * value if kind == "L" else 1 / (1j * omega * value)
        element = np.zeros((len(omega), 2, 2), dtype=complex)
        element[:, 0, 0] = element[:, 1, 1] = 1
        if place == "series":
            element[:, 0, 1] = impedance
        else:
            element[:, 1, 0] = 1 / impedance
        chain = chain @ element
    port = ((chain[:, 0, 0] * load_ohm + chain[:, 0, 1]) /
            (chain[:, 1, 0] * load_ohm + chain[:, 1, 1]))
    return -20 * np.log10(np.abs((port - SOURCE_OHM) / (port + SOURCE_OHM)).max())


def inductor(omega, part):
    """Impedance of an inductor as (per henry, fixed)."""
    frequency_hz = omega / (2 * np.pi)
    d = 0.0
    if "q" in part:
        value, at_hz, exponent = part["q"]
        d = 1 / (value * (frequency_hz / at_hz) ** exponent)
    per_henry = omega * (d + 1j)
    if "self_resonance_hz" in part:
        u = frequency_hz / part["self_resonance_hz"]
        per_henry = per_henry / (1 - u**2 + 1j * u**2 * d)
    return per_henry, 0.0


def capacitor(omega, part):
    """Impedance of a capacitor as (per reciprocal farad, fixed)."""
    fixed = part.get("esr_ohm", 0.0) + 1j * omega * part.get("self_inductance_h", 0.0)
    return -1j / omega, fixed if np.any(fixed) else 0.0


def drawn_boards(nominal, tolerances, samples, rng):
    """Boards with every value uniform within its tolerance, one row each."""
    spread = rng.uniform(-1, 1, (samples, len(nominal)))
    return np.asarray(nominal) * (1 + np.asarray(tolerances) * spread)
