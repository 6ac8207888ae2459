"""Reflection and transducer gain of lossy ladders by chain (ABCD) matrices.

Written apart from the C++ evaluator, which goes from the load towards the source with a ratio; here
every element is a 2x2 matrix and the matrices are multiplied from the source on.

Input, one case a line:
  hz source_ohm load_form load_ohm load_henry load_farad
  then for every element: place kind value q q_hz q_exponent esr_ohm self_resonance_hz self_inductance_h
where a q or a self-resonance of 0 means there is none. Output, one line a case: real and imaginary
part of the reflection, transducer gain.
"""

import sys

import numpy


def impedance(kind, value, q, q_hz, q_exponent, esr, resonance, lead, hz):
    omega = 2 * numpy.pi * hz
    quality = q * (hz / q_hz) ** q_exponent if q else numpy.inf
    if kind == "inductor":
        coil = 1j * omega * value + omega * value / quality + esr
        if not resonance:
            return coil
        winding = 1 / ((2 * numpy.pi * resonance) ** 2 * value)
        return 1 / (1 / coil + 1j * omega * winding)
    if kind == "capacitor":
        return 1 / (1j * omega * value) + 1 / (omega * value * quality) + esr + 1j * omega * lead
    return value + 0j


def load(form, ohm, henry, farad, hz):
    coil = 2j * numpy.pi * hz * henry
    plates = 1 / (2j * numpy.pi * hz * farad)
    if form == "series":
        return ohm + coil + plates
    if form == "lossy_tank":
        return 1 / (1 / (ohm + coil) + 1 / plates)
    return coil + 1 / (1 / ohm + 1 / plates)


def solve(words):
    hz, source = float(words[0]), float(words[1])
    z_load = load(words[2], *(float(w) for w in words[3:6]), hz)
    chain = numpy.eye(2, dtype=complex)
    for start in range(6, len(words), 9):
        place, kind = words[start:start + 2]
        z = impedance(kind, *(float(w) for w in words[start + 2:start + 9]), hz)
        element = [[1, z], [0, 1]] if place == "series" else [[1, 0], [1 / z, 1]]
        chain = chain @ numpy.array(element)
    (a, b), (c, d) = chain
    numerator, denominator = a * z_load + b, c * z_load + d
    total = numerator + source * denominator
    reflection = (numerator - source * denominator) / total
    gain = 4 * source * z_load.real / abs(total) ** 2
    return reflection, gain


def main():
    with open(sys.argv[1]) as cases, open(sys.argv[2], "w") as out:
        for line in cases:
            reflection, gain = solve(line.split())
            out.write(f"{reflection.real:.17g} {reflection.imag:.17g} {gain:.17g}\n")


main()
