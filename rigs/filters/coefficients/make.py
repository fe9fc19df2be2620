#!/usr/bin/python3
"""Designs the coefficients of the CW-7 demonstration filters and writes them twice: as doubles, one number a line, for
plans (FILE.txt), and as the integers that the firmware stores, for C (FILE.h).

    make.py           writes the files beside this script
    make.py --check   writes nothing; fails when a file differs from what would be written

Sections are b0, b1, b2, a1, a2 of H(z) = (b0 + b1 z^-1 + b2 z^-2) / (1 + a1 z^-1 + a2 z^-2). The firmware adds its
feedback, so the headers hold -a1 and -a2. Integers are rounded half away from zero.
"""

import math
import pathlib
import sys

import numpy
from scipy import signal

SAMPLE_RATE_HZ = 1200.0
NOTCH_HZ = 50.0
NOTCH_Q = 5.0
SETTLE_CYCLES_PER_SAMPLE = 0.02
SMOOTHING_CUTOFF_HZ = 120.0
SMOOTHING_TAPS = 31

FOLDER = pathlib.Path(__file__).resolve().parent


def stored(value, fraction_bits):
    scaled = abs(value) * 2.0**fraction_bits
    return int(math.copysign(math.floor(scaled + 0.5), value))


def smoothing_taps():
    """Linear-phase low-pass, Hamming window, unity gain at 0 Hz."""
    return signal.firwin(SMOOTHING_TAPS, SMOOTHING_CUTOFF_HZ, fs=SAMPLE_RATE_HZ)


def quick_smoothing_taps():
    """A low-pass of about the same band whose taps are not symmetric: the first 24 samples of the impulse response of a
    damped second-order system (natural frequency 100 Hz, damping 0.6), scaled to unity gain at 0 Hz."""
    omega = 2.0 * math.pi * 100.0 / SAMPLE_RATE_HZ
    damping = 0.6
    damped = omega * math.sqrt(1.0 - damping**2)
    n = numpy.arange(1, 25)
    taps = numpy.exp(-damping * omega * n) * numpy.sin(damped * n)
    return taps / numpy.sum(taps)


def infeed_taps():
    """Tells an item that comes in: the newest three samples against the three before them. Taps that sum to more than 2 in
    magnitude are what an accumulator of 32 bits cannot bear at full scale."""
    return [0.9, 0.9, 0.8, -0.9, -0.9, -0.8]


def notch_sections():
    """50 Hz at 1200 Hz, quality 5: the -3 dB band is 10 Hz wide."""
    b, a = signal.iirnotch(NOTCH_HZ, NOTCH_Q, fs=SAMPLE_RATE_HZ)
    return [[*b, *a]]


def settle_sections():
    """Butterworth low-pass of order 4, two sections, corner 0.02 of the sample rate (24 Hz at 1200 Hz). The first
    section of the design carries the whole gain; it is shared out so that each has unity gain at 0 Hz, or the first
    section's output would have too few bits."""
    sections = signal.butter(4, 2.0 * SETTLE_CYCLES_PER_SAMPLE, output="sos")
    shared = []
    for b0, b1, b2, a0, a1, a2 in sections:
        gain = (a0 + a1 + a2) / (b0 + b1 + b2)
        shared.append([b0 * gain, b1 * gain, b2 * gain, a0, a1, a2])
    return shared


def quarter_taps():
    """Keeps 100 Hz of 1200 when each fourth sample is returned; 24 taps, more than the factor and a multiple of it."""
    return signal.firwin(24, 110.0, fs=SAMPLE_RATE_HZ)


def triple_taps():
    """Takes the images out when 1200 Hz becomes 3600: 24 taps, 8 for each phase, whose sum is the factor."""
    return 3.0 * signal.firwin(24, 500.0, fs=3.0 * SAMPLE_RATE_HZ)


def droop_taps():
    """Lifts what a CIC of order 3 and factor 8 lets down, before each second sample is returned."""
    return [-0.05, 0.0, 0.3, 0.5, 0.3, 0.0, -0.05]


def text_of(numbers):
    # 12 decimals: the last bits of the double differ between versions of the design program, and so does what should
    # be zero. The firmware's 30 fraction bits need 10.
    return "".join(f"{round(float(number), 12) + 0.0:.12g}\n" for number in numbers)


def header(name, what, body):
    guard = "BOARD_COEFFICIENTS_" + name.upper().replace("-", "_") + "_H"
    return (
        f"/* Written by make.py: {what} */\n#ifndef {guard}\n#define {guard}\n\n{body}\n#endif\n"
    )


def taps_files(name, what, taps, fraction_bits=15):
    text = text_of(taps)
    taps = [float(line) for line in text.split()]
    symbol = name.replace("-", "_")
    codes = [stored(tap, fraction_bits) for tap in taps]
    assert all(-32768 <= code <= 32767 for code in codes)
    rows = [codes[i : i + 10] for i in range(0, len(codes), 10)]
    lines = ",\n    ".join(", ".join(str(code) for code in row) for row in rows)
    body = (
        "#include <stdint.h>\n\n"
        f"#define {symbol.upper()}_TAPS {len(codes)}\n"
        f"static const int16_t {symbol}_taps[{symbol.upper()}_TAPS] = {{ /* Q{fraction_bits} */\n    {lines}}};\n"
    )
    return {name + ".txt": text, name + ".h": header(name, what, body)}


def section_rows(sections, number):
    rows = ["{" + ", ".join(number(sign * c) for sign, c in zip((1, 1, 1, -1, -1), row)) + "}" for row in sections]
    return ",\n    ".join(rows)


def sections_files(name, what, sections, kinds):
    flat = [c for b0, b1, b2, a0, a1, a2 in sections for c in (b0 / a0, b1 / a0, b2 / a0, a1 / a0, a2 / a0)]
    text = text_of(flat)
    flat = [float(line) for line in text.split()]
    rows = [flat[i : i + 5] for i in range(0, len(flat), 5)]
    symbol = name.replace("-", "_")
    body = "".join(f'#include "rigs/filters/biquad_{kind}.h"\n' for kind in kinds)
    body += f"\n#define {symbol.upper()}_SECTIONS {len(rows)}\n"
    for kind in kinds:
        if kind == "f32":
            comment, table = "", section_rows(rows, lambda c: repr(float(numpy.float32(c))) + "f")
        else:
            fraction_bits = {"q15": 14, "q31": 30}[kind]
            top = 2 ** (fraction_bits + 1)
            assert all(-top <= stored(s * c, fraction_bits) < top for row in rows for c in row for s in (1, -1))
            comment = f" /* Q{fraction_bits}; a1, a2 negated */"
            table = section_rows(rows, lambda c, bits=fraction_bits: str(stored(c, bits)))
        body += (
            f"static const struct biquad_{kind}_coefficients {symbol}_{kind}[{symbol.upper()}_SECTIONS] = {{{comment}\n"
            f"    {table}}};\n"
        )
    return {name + ".txt": text, name + ".h": header(name, what, body)}


def all_files():
    files = {}
    files |= taps_files("smoothing", "31-tap linear-phase low-pass, corner 120 Hz at 1200 Hz", smoothing_taps())
    files |= taps_files("quick-smoothing", "24-tap low-pass whose taps are not symmetric", quick_smoothing_taps())
    files |= taps_files("infeed", "6-tap difference of two means, gain 5.2 at most", infeed_taps())
    files |= taps_files("quarter", "24-tap low-pass for each fourth sample", quarter_taps())
    files |= taps_files("triple", "24-tap low-pass of three times the rate, gain 3", triple_taps(), 14)
    files |= taps_files("droop", "7-tap compensation of a CIC's droop", droop_taps())
    files |= sections_files("mains-notch", "50 Hz notch at 1200 Hz, quality 5", notch_sections(), ["q15"])
    files |= sections_files(
        "settle", "Butterworth low-pass, order 4, corner 0.02 of the sample rate", settle_sections(), ["q15", "q31", "f32"]
    )
    return files


def designs_header(files):
    """The doubles once more for C, so that the virtual board can store them wrongly on request."""
    body = ""
    for name, text in files.items():
        if name.endswith(".txt"):
            numbers = text.split()
            symbol = name[:-4].replace("-", "_")
            body += f"static const double {symbol}_design[{len(numbers)}] = {{\n    " + ",\n    ".join(numbers) + "};\n"
    return header("designs", "the designs in double, in the order of the text files", body)


def main():
    differing = 0
    files = all_files()
    files["designs.h"] = designs_header(files)
    for name, content in files.items():
        path = FOLDER / name
        if sys.argv[1:] == ["--check"]:
            if not path.exists() or path.read_text() != content:
                print(f"{path}: differs from what make.py writes")
                differing += 1
        else:
            path.write_text(content)
    return 1 if differing else 0


if __name__ == "__main__":
    sys.exit(main())
