"""The stimuli against independent implementations: mpmath at 50 digits, SciPy, NumPy.

usage: stimuli_test.py PRINT_STIMULI
"""

import io
import random
import struct
import subprocess
import sys
from fractions import Fraction

import numpy as np
import scipy.signal
import scipy.special
from mpmath import mp, mpf

mp.dps = 50
PROGRAM = sys.argv[1]
SEED = 20240117  # of the questions asked here
checks = 0
failures = 0
samples_31 = 0  # compared in words of more than 24 bits
different_31 = 0
hashes_met = set()


def ask(lines):
    result = subprocess.run([PROGRAM], input="".join(line + "\n" for line in lines), text=True,
                            capture_output=True, check=True)
    answers = result.stdout.splitlines()
    assert len(answers) == len(lines), (len(answers), len(lines))
    return answers


def check(holds, what):
    global checks, failures
    checks += 1
    if not holds:
        failures += 1
        print("FAILED:", what)


def words_of(form, shape, head, parameters):
    return " ".join([form, shape, *map(str, head), *(f"{k}={v}" for k, v in parameters.items())])


# --- Philox4x32-10, written here from the paper's equations ---------------------------------------

MASK = 0xFFFFFFFF


def philox(counter, key):
    c, k = list(counter), list(key)
    for _ in range(10):
        a, b = 0xD2511F53 * c[0], 0xCD9E8D57 * c[2]
        c = [(b >> 32) ^ c[1] ^ k[0], b & MASK, (a >> 32) ^ c[3] ^ k[1], a & MASK]
        k = [(k[0] + 0x9E3779B9) & MASK, (k[1] + 0xBB67AE85) & MASK]
    return c


def bits(seed, purpose, index, stream=0):
    words = philox([index // 2 & MASK, index // 2 >> 32, purpose, stream], [seed & MASK, seed >> 32])
    pair = [words[0] | words[1] << 32, words[2] | words[3] << 32]
    return pair[index % 2]


def test_philox(rng):
    cases = [[rng.getrandbits(32) for _ in range(6)] for _ in range(200)]
    answers = ask(["philox " + " ".join(f"{w:x}" for w in case) for case in cases])
    for case, answer in zip(cases, answers):
        check([int(w, 16) for w in answer.split()] == philox(case[:4], case[4:]), f"philox {case}")


# --- exact_math ------------------------------------------------------------------------------------


def test_exact_math(rng):
    phases = [rng.getrandbits(128) for _ in range(4000)]
    phases += [(k << 128) // 12 for k in range(12)] + [k << 125 for k in range(8)]
    answers = ask([f"sine {p >> 64:x} {p & (1 << 64) - 1:x}" for p in phases])
    worst = max(abs(mpf(float.fromhex(a)) - mp.sin(2 * mp.pi * p / mpf(2) ** 128)) for p, a in zip(phases, answers))
    check(worst < 7.6e-17, f"sine: error {worst} against the stated 7.6e-17")

    answers = ask([f"exp2 {p >> 64:x} {p & (1 << 64) - 1:x}" for p in phases])
    worst = max(abs(int(a, 16) / mpf(2) ** 127 / mpf(2) ** (p / mpf(2) ** 128) - 1) for p, a in zip(phases, answers))
    check(worst < mpf(2) ** -123, f"exp2: relative error {worst} against the stated 2^-123")

    numbers = [rng.uniform(0.5, 2.0) * 2.0 ** rng.randrange(-60, 60) for _ in range(4000)]
    answers = ask(["log " + x.hex() for x in numbers])
    worst = max(abs(mpf(float.fromhex(a)) - mp.log(x)) / np.spacing(abs(float(mp.log(x))))
                for x, a in zip(numbers, answers))
    check(worst < 1.0, f"log: error {worst} ulp against the stated 1")


def test_quantile(rng):
    # Widths of every scale, so that the middle and both tails are met.
    odd = [(rng.getrandbits(52) >> rng.randrange(52)) * 2 + 1 for _ in range(3000)]
    tails = [m * 2.0**-54 for m in odd]
    answers = [float.fromhex(a) for a in ask(["quantile " + p.hex() for p in tails])]
    for p, z in zip(tails, answers):
        # One Newton step from z gives the true quantile to twice the digits.
        miss = (mp.erfc(z / mp.sqrt(2)) / 2 - p) / (mp.exp(-mpf(z) ** 2 / 2) / mp.sqrt(2 * mp.pi))
        check(abs(miss) <= 1e-15 * abs(z) + 1e-32, f"quantile of {p!r}: {z!r} is off by {float(miss)}")
    # SciPy's ndtri (Cephes) claims 4.5e-16 relative on average and no more than 2e-15 here.
    check(np.allclose(answers, -scipy.special.ndtri(tails), rtol=3e-15, atol=1e-15), "quantile against ndtri")


# --- shapes against mpmath ---------------------------------------------------------------------------


WORD_BITS = {"q7": 8, "q15": 16, "q31": 32, "i8": 8, "i16": 16, "i24": 24, "i32": 32, "u8": 8, "u12": 12, "u16": 16}


def half_up(ratio, format_name):
    """Of an mpf or a Fraction."""
    end = 2 ** (WORD_BITS[format_name] - 1)
    if isinstance(ratio, Fraction):
        whole = (ratio * end + Fraction(1, 2)).__floor__()
    else:
        whole = int(mp.floor(ratio * end + mpf(1) / 2))
    return min(max(whole, -end), end - 1) + (end if format_name[0] == "u" else 0)


def fnv1a(codes):
    """FNV-1a, 64 bits, over the codes as little-endian 32-bit words."""
    value = 0xCBF29CE484222325
    for byte in b"".join((c & MASK).to_bytes(4, "little") for c in codes):
        value = (value ^ byte) * 0x100000001B3 & (1 << 64) - 1
    return value


# Of the codes that mpmath gives; tests/stimuli/same_codes_test.cpp holds the same numbers, so that they
# are checked on machines without mpmath too.
SAME_CODES = {
    ("sine", "q31", 9_999_990_000): 0xf654c48e8e6489c3,
    ("sine", "q15", 0): 0x90b15188bc0750de,
    ("multitone", "q31", 5_000_000_000): 0x14ded7e4cf11ec64,
    ("sine realised", "q31", 9_989_998_624): 0xf3eea8faa2840d9c,
    ("multitone realised", "q31", 9_989_998_624): 0x68e44310cdee0bc2,
    ("linear chirp 0.1 to 600.0 Hz", "q31", 33_333_333): 0x96aa14d5ace61eba,
    ("linear chirp 20000.0 to 20.0 Hz", "q15", 0): 0xeb54a9f1c16abe49,
    ("logarithmic chirp 0.1 to 600.0 Hz", "q31", 99_999_300): 0x829fd7631e881931,
    ("logarithmic chirp 20000.0 to 20.0 Hz", "q31", 0): 0x319d146aecd5a13a,
    ("logarithmic chirp 1.0 to 499999.9 Hz", "q31", 9_999_999_300): 0x7e65cdcb74b074a2,
    ("uniform noise", "q31", 8_589_934_591): 0x3e6ef740c229f88b,
    ("normal noise", "q31", 8_589_934_591): 0xdfa3c505273f32a0,
    ("normal noise", "q15", 0): 0xc170db1ab80e0b62,
    ("ramp 0.3333333333333333 to 0.7", "q31", 3_333_333_333): 0xc8f934449d54f8a5,
    ("square {'frequency_hz': 997.1, 'duty': 0.3}", "q31", 9_999_999_000): 0x7b6d60ee9a951465,
    ("burst", "q31", 8_000_000_123): 0xe46353c937e45d71,
    ("prbs 31", "q15", 9_999_999_800): 0x000abcae0c886707,
    ("sequence and sum", "q31", 0): 0xeed99954c3b39e27,
}


def check_hash(key, expected):
    check(fnv1a(expected) == SAME_CODES[key], f"{key}: the hash of the expected codes is {fnv1a(expected):#018x}")
    hashes_met.add(key)


def compare(name, form, rate, first, count, parameters, ratio_of, format_name):
    """Codes equal up to 24 bits. For 32 bits at most one code off, and main() holds all of them together to
    one sample of 100,000: a double's error of 1e-16 is 2e-7 LSB, which crosses a tie once in millions."""
    answer = ask([words_of("codes", form, [format_name, "half-up", rate, first, count], parameters)])[0]
    ours = [int(w) for w in answer.split()]
    expected = [half_up(ratio_of(n), format_name) for n in range(first, first + count)]
    different = [(n, a, b) for n, (a, b) in enumerate(zip(ours, expected)) if a != b]
    check(len(ours) == count, f"{name} {format_name}: {answer[:200]}")
    global samples_31, different_31
    if WORD_BITS[format_name] > 24:
        samples_31 += count
        different_31 += len(different)
        check(all(abs(a - b) <= 1 for _, a, b in different), f"{name} {format_name}: {different[:3]}")
    else:
        check(not different, f"{name} {format_name} from {first}: {len(different)} codes differ, {different[:3]}")
    if (name, format_name, first) in SAME_CODES:
        check_hash((name, format_name, first), expected)


def test_tones():
    rate, frequency, level, phase = 48000.0, 997.1, 0.9, 0.123
    def sine(n):
        return level * mp.sin(2 * mp.pi * (mpf(frequency) / mpf(rate) * n + mpf(phase)))
    for first in (0, 123_456_789, 9_999_990_000):
        for format_name in ("q7", "q15", "q31", "i24", "i32", "u8", "u12", "u16"):
            compare("sine", "sine", rate, first, 1500,
                    dict(length_samples=10**10, frequency_hz=frequency, phase_turns=phase, level_ratio=level),
                    sine, format_name)
    # As many as the claim about words of 32 bits needs.
    compare("sine", "sine", rate, 7_777_777_777, 120_000,
            dict(length_samples=10**10, frequency_hz=frequency, phase_turns=phase, level_ratio=level), sine, "q31")

    tones, seed = [100.0, 250.5, 1234.5, 19999.9, 24000.0], 77
    starts = [mpf(bits(seed, 1, k)) / 2**64 for k in range(len(tones))]
    def multitone(n):
        total = sum(mp.sin(2 * mp.pi * (mpf(f) / mpf(rate) * n + s)) for f, s in zip(tones, starts))
        return mpf(0.8) * total / len(tones)
    for format_name in ("q15", "q31"):
        compare("multitone", "multitone", rate, 5_000_000_000, 1500,
                dict(length_samples=10**10, frequencies_hz=",".join(map(repr, tones)), level_ratio=0.8, seed=seed),
                multitone, format_name)


def test_realisations():
    """Stretches of floor(own / realisations), the rest in the phases of the last. Each counts its own index from 0;
    the first begins as the tone would, a later one at 64 bits drawn for its number and the frequency's bits."""
    rate, length, at, count, seed = 48000.0, 10**10, 123, 1000, 2**52 + 77
    each = (length - at) // count
    assert each == 9_999_999 and (length - at) % count == 877
    def start(frequency, realisation, first):
        if realisation == 0:
            return first
        (frequency_bits,) = struct.unpack("<Q", struct.pack("<d", frequency))
        return mpf(bits(seed, 1, frequency_bits, realisation)) / 2**64
    def sum_of(tones, firsts):
        def ratio(n):
            if n < at:
                return mpf(0)
            realisation = min((n - at) // each, count - 1)
            index = n - at - realisation * each
            total = sum(mp.sin(2 * mp.pi * (mpf(f) / mpf(rate) * index + start(f, realisation, first)))
                        for f, first in zip(tones, firsts))
            return mpf(0.8) * total / len(tones)
        return ratio
    tones = [100.0, 250.5, 1234.5, 19999.9, 24000.0]
    shapes = {"sine": (dict(frequency_hz=997.1, phase_turns=0.0), sum_of([997.1], [mpf(0)])),
              "multitone": (dict(frequencies_hz=",".join(map(repr, tones))),
                            sum_of(tones, [mpf(bits(seed, 1, k)) / 2**64 for k in range(len(tones))]))}
    # The start, the first border, one in the middle, the last, and the samples that are left over.
    borders = [0, at + each - 600, at + 500 * each - 1, at + 999 * each - 500, length - 900]
    for shape, (parameters, ratio) in shapes.items():
        for first in borders:
            for format_name in ("q15", "q31"):
                compare(f"{shape} realised", shape, rate, first, 1500 if first == borders[3] else 800,
                        dict(parameters, length_samples=length, at_samples=at, realisations=count, level_ratio=0.8,
                             seed=seed),
                        ratio, format_name)


def linear_phase(f0, f1, rate, length, n):
    f0, f1, rate, n = mpf(f0), mpf(f1), mpf(rate), mpf(n)
    return f0 / rate * n + (f1 - f0) / rate * n * n / (2 * length)


def logarithmic_phase(f0, f1, rate, length, n):
    ratio = mpf(f1) / mpf(f0)
    return mpf(f0) / mpf(rate) * length / mp.log(ratio) * (ratio ** (mpf(n) / length) - 1)


def test_chirps():
    sweeps = {"linear": linear_phase, "logarithmic": logarithmic_phase}
    cases = [(20.0, 20000.0, 48000.0, 20_000), (20000.0, 20.0, 48000.0, 20_000), (0.1, 600.0, 1200.0, 10**8),
             (600.0, 0.1, 1200.0, 10**8), (100.0, 100.0001, 1200.0, 10**8), (1.0, 499999.9, 1e6, 10**10)]
    for sweep, phase in sweeps.items():
        for f0, f1, rate, length in cases:
            def ratio(n):
                return mpf(0.7) * mp.sin(2 * mp.pi * phase(f0, f1, rate, length, n))
            for first in (0, length // 3, length - 700):
                for format_name in ("q15", "q31"):
                    compare(f"{sweep} chirp {f0} to {f1} Hz", "chirp", rate, first, 700,
                            dict(sweep=sweep, from_hz=f0, to_hz=f1, length_samples=length, level_ratio=0.7),
                            ratio, format_name)


def test_chirps_against_scipy():
    """SciPy rounds its phase, up to 5000 turns here, in doubles: 5000 * 2 pi * 2^-53 * 8 is 3e-11."""
    rate, length, f0, f1 = 48000.0, 20_000, 50.0, 20000.0
    t = np.arange(length) / rate
    for sweep in ("linear", "logarithmic"):
        answer = ask([words_of("ratios", "chirp", [rate, 0, length],
                               dict(sweep=sweep, from_hz=f0, to_hz=f1, length_samples=length, level_ratio=1.0))])[0]
        ours = np.array([float.fromhex(w) for w in answer.split()])
        theirs = scipy.signal.chirp(t, f0, length / rate, f1, method=sweep, phi=-90.0)
        check(np.max(np.abs(ours - theirs)) < 3e-11, f"{sweep}: off SciPy by {np.max(np.abs(ours - theirs))}")


def upper_quantile(p):
    z = mpf(-scipy.special.ndtri(float(p)))
    for _ in range(2):  # Newton from 15 digits to more than 50
        z += (mp.erfc(z / mp.sqrt(2)) / 2 - p) / (mp.exp(-z * z / 2) / mp.sqrt(2 * mp.pi))
    return z


def test_noise():
    seed, level = 2**52 + 12345, 0.2
    def uniform(n):
        return mpf(level) * (mpf(bits(seed, 0, n) >> 11) / 2**52 - 1)
    def normal(n):
        b = bits(seed, 0, n)
        z = upper_quantile(mpf((b >> 12) * 2 + 1) / 2**54)
        return mpf(level) * (-z if b & 1 else z)
    for first in (0, 8_589_934_591):  # the second crosses 2^33, where the pair's upper word starts
        for format_name in ("q15", "q31"):
            parameters = dict(length_samples=10**10, level_ratio=level, seed=seed)
            compare("uniform noise", "noise", 1.0, first, 2000, parameters, uniform, format_name)
            compare("normal noise", "noise", 1.0, first, 1000, dict(parameters, distribution="normal"),
                    normal, format_name)


# --- ramp, square, bursts: the same formulas in fractions ------------------------------------------------


def test_ramps():
    """Exact on both sides, so that words of 32 bits are equal too."""
    cases = [(-1.0, 1.0, 1000), (0.1, -0.7, 997), (1 / 3, 0.7, 10**10), (-2.0**-20, 2.0**-20, 10**7),
             (0.25, 0.25 + 2.0**-30, 64)]
    for low, high, length in cases:
        def ramp(n):
            return Fraction(low) + (Fraction(high) - Fraction(low)) * n / (length - 1)
        for first in (0, length // 3, max(0, length - 500)):
            count = min(500, length - first)
            for format_name in ("q15", "q31", "i24", "u12"):
                before = different_31
                compare(f"ramp {low} to {high}", "ramp", 48000.0, first, count,
                        dict(length_samples=length, from_ratio=low, to_ratio=high), ramp, format_name)
                check(different_31 == before, f"ramp {low} to {high}: 32-bit codes differ")
    # Values at and a hair beside ties of 16 bits, in every rounding.
    rng = random.Random(SEED)
    for _ in range(40):
        length = rng.randrange(3, 60)
        low = (rng.randrange(-2**16, 2**16) | 1) * 2.0**-16 * rng.choice([1.0, 1.0 - 2.0**-53, 1.0 + 2.0**-52])
        high = (rng.randrange(-2**16, 2**16) | 1) * 2.0**-16
        if low == high or max(abs(low), abs(high)) > 1:
            continue
        exact = [Fraction(low) + (Fraction(high) - Fraction(low)) * n / (length - 1) for n in range(length)]
        for rounding in ("floor", "half-up", "half-even", "toward-zero"):
            answer = ask([words_of("codes", "ramp", ["q15", rounding, 1.0, 0, length],
                                   dict(length_samples=length, from_ratio=low.hex(), to_ratio=high.hex()))])[0]
            expected = [min(max(rounded(x * 2**15, rounding), -2**15), 2**15 - 1) for x in exact]
            check([int(w) for w in answer.split()] == expected, f"ramp {low!r} to {high!r} over {length}, {rounding}")


def rounded(x, rounding):
    floor = x.__floor__()
    if rounding == "floor":
        return floor
    if rounding == "half-up":
        return (x + Fraction(1, 2)).__floor__()
    if rounding == "half-even":
        return round(x)
    return x.__trunc__()


def test_squares():
    cases = [dict(frequency_hz=1000.0), dict(frequency_hz=997.1, duty=0.3), dict(frequency_hz=15000.0),
             dict(period_samples=7, duty=0.4), dict(period_samples=10, duty=0.1), dict(frequency_hz=24000.0),
             dict(frequency_hz=1e-5, duty=0.25)]
    for case in cases:
        rate = 48000.0
        advance = (Fraction(1, case["period_samples"]) if "period_samples" in case
                   else Fraction(case["frequency_hz"]) / Fraction(rate))
        # The duty as the plan means it, less a millionth of a sample.
        duty = Fraction(case.get("duty", 0.5)) - advance / 10**6
        def square(n):
            return Fraction(3, 4) if n * advance % 1 < duty else Fraction(-3, 4)
        for first in (0, 1_234_567_891, 9_999_999_000):
            for format_name in ("q15", "i24", "q31"):
                compare(f"square {case}", "square", rate, first, 1000,
                        dict(case, length_samples=10**10, level_ratio=0.75), square, format_name)


def test_bursts():
    rate, frequency, phase, on, off, repeats = 48000.0, 997.1, 0.2, 333, 77, 20_000_000
    def burst(n):
        cycle, within = divmod(n, on + off)
        if within >= on or cycle >= repeats:
            return mpf(0)
        return mpf(0.6) * mp.sin(2 * mp.pi * (mpf(frequency) / mpf(rate) * within + mpf(phase)))
    for first in (0, 8_000_000_123, (on + off) * repeats - 700):
        for format_name in ("q15", "q31", "i24"):
            compare("burst", "burst", rate, first, 1500,
                    dict(length_samples=10**10, frequency_hz=frequency, phase_turns=phase, on_samples=on, off_samples=off,
                         repeats=repeats, level_ratio=0.6), burst, format_name)


# --- PRBS: a register, bit by bit -----------------------------------------------------------------------

# ITU-T O.150 (05/96), section 5: stages, the second stage that is fed back, whether the signal is inverted.
# SEEN in two secondary sources that quote its table 1.
PATTERNS = {9: (5, False), 11: (9, False), 15: (14, True), 20: (3, False), 23: (18, True), 31: (28, True)}


def register_bits(order, start, count):
    """Stages 1 .. order as a list, the sum of two fed to the first, the last one sent."""
    tap, inverted = PATTERNS[order]
    stages = [start >> k & 1 for k in range(order)]
    for _ in range(count):
        yield stages[-1] ^ inverted
        stages = [stages[tap - 1] ^ stages[order - 1]] + stages[:-1]


def power_of_x(order, exponent):
    """x^exponent modulo the characteristic polynomial x^order + x^(order - tap) + 1, as bits: another way to jump
    than a matrix. a[n + order] = a[n + order - tap] + a[n]."""
    modulus = 1 << order | 1 << (order - PATTERNS[order][0]) | 1
    def product(a, b):
        result = 0
        while b:
            if b & 1:
                result ^= a
            a, b = a << 1, b >> 1
            if a >> order:
                a ^= modulus
        return result
    result, base = 1, 2
    while exponent:
        if exponent & 1:
            result = product(result, base)
        base, exponent = product(base, base), exponent >> 1
    return result


def prbs_bit(order, start, n):
    """a[n] is the sum of those a[k], k < order, whose x^k stands in x^n; a[k] is stage order - k at the start."""
    power = power_of_x(order, n)
    return sum(start >> (order - 1 - k) & 1 for k in range(order) if power >> k & 1) % 2 ^ PATTERNS[order][1]


def test_prbs():
    for order, (tap, inverted) in PATTERNS.items():
        ones = 2**order - 1
        for start in (None, 1, 0b101010101, ones - 2):
            given = {} if start is None else dict(register_seed=start)
            register = ones if start is None else start
            bits_here = list(register_bits(order, register, 3000))
            check(bits_here[:40] == [prbs_bit(order, register, n) for n in range(40)], f"prbs {order}: our two ways")
            compare_bits(order, given, 0, bits_here)
            for first in (1_000_000_007, 9_999_999_800, 2**order - 101):
                compare_bits(order, given, first, [prbs_bit(order, register, n) for n in range(first, first + 200)])
    for order in (9, 11, 15):
        period = 2**order - 1
        answer = ask([words_of("codes", "prbs", ["q15", "half-up", 1.0, 0, 2 * period],
                               dict(order=order, length_samples=2 * period, level_ratio=0.5))])[0].split()
        signs = np.array([int(w) for w in answer]) > 0
        check(np.array_equal(signs[:period], signs[period:]), f"prbs {order}: the period")
        check(not any(np.array_equal(signs[:period], signs[d:d + period]) for d in (1, 7, 31, 73, period // 3)),
              f"prbs {order}: no shorter one")
        check(abs(int(signs[:period].sum()) * 2 - period) == 1, f"prbs {order}: balance")
        # Its autocorrelation is -1 everywhere but at 0.
        spectrum = np.abs(np.fft.fft(2.0 * signs[:period] - 1.0)) ** 2
        check(np.allclose(spectrum[1:], period + 1) and np.isclose(spectrum[0], 1), f"prbs {order}: white")


def compare_bits(order, given, first, bits_expected):
    answer = ask([words_of("codes", "prbs", ["q15", "half-up", 1.0, first, len(bits_expected)],
                           dict(given, order=order, length_samples=10**10, level_ratio=0.5))])[0].split()
    expected = [16384 if b else -16384 for b in bits_expected]
    check([int(w) for w in answer] == expected, f"prbs {order} {given} from {first}")
    if not given and (f"prbs {order}", "q15", first) in SAME_CODES:
        check_hash((f"prbs {order}", "q15", first), expected)


# --- stimuli inside stimuli, and files ---------------------------------------------------------------------


def test_compounds():
    """A ramp, a gap and a sine one after the other, twice, with a slow sine and a step added."""
    rate = 48000.0
    parts = [(400, lambda n: Fraction(-1, 2) + Fraction(n, 399)), (100, lambda n: 0),
             (700, lambda n: mpf(0.4) * mp.sin(2 * mp.pi * mpf(1234.5) / mpf(rate) * n))]
    def sequence(n):
        n %= 1200
        for length, value in parts:
            if n < length:
                v = value(n)
                return mpf(v.numerator) / v.denominator if isinstance(v, Fraction) else mpf(v)
            n -= length
    def whole(n):
        slow = mpf(0.3) * mp.sin(2 * mp.pi * mpf(3.3) / mpf(rate) * n)
        return sequence(n) + slow + (mpf(0.125) if 1000 <= n < 1500 else 0)
    words = ("parts=( ramp length_samples=400 from_ratio=-0.5 to_ratio=0.5 ; silence length_samples=100 ; "
             "sine length_samples=700 frequency_hz=1234.5 level_ratio=0.4 ) repeat=2 "
             "add=( sine frequency_hz=3.3 level_ratio=0.3 ; step length_samples=1500 at_samples=1000 level_ratio=0.125 )")
    for format_name in ("q15", "q31", "i24", "u12"):
        answer = ask([f"codes sequence {format_name} half-up {rate} 0 2400 {words}"])[0]
        ours, expected = [int(w) for w in answer.split()], [half_up(whole(n), format_name) for n in range(2400)]
        different = sum(a != b for a, b in zip(ours, expected))
        check(len(ours) == 2400 and (different == 0 if WORD_BITS[format_name] <= 24 else
                                     max(abs(a - b) for a, b in zip(ours, expected)) <= 1),
              f"sequence and sum {format_name}: {different} differ, {answer[:100]}")
        if format_name == "q31":
            global samples_31, different_31
            samples_31, different_31 = samples_31 + 2400, different_31 + different
            check_hash(("sequence and sum", "q31", 0), expected)


def test_files(rng):
    for format_name, bits_count in WORD_BITS.items():
        low = 0 if format_name[0] == "u" else -2 ** (bits_count - 1)
        codes = [rng.randrange(low, low + 2**bits_count) for _ in range(300)] + [low, low + 2**bits_count - 1]
        answer = ask([f"codes file {format_name} half-even 1200 0 {len(codes)} file={','.join(map(str, codes))}"])[0]
        check(answer.split() == [str(c) for c in codes], f"file of {format_name} codes")
        ratios = [rng.uniform(-1, 1) for _ in range(300)]
        for holds, factor in (("ratio", 1.0), ("unit", 6000.0)):
            held = [r * factor for r in ratios]
            text = ",".join(map(repr, held))
            answer = ask([f"codes file {format_name} half-up 1200 0 300 file={text} holds={holds} full_scale_unit=6000"])[0]
            expected = [half_up(mpf(h) / mpf(factor), format_name) for h in held]
            check([int(w) for w in answer.split()] == expected, f"file of {holds} as {format_name}")


# --- words as NumPy and struct pack them --------------------------------------------------------------------


def packed(format_name, justification, order, code):
    """Through bytes of Python's own integers and NumPy's types."""
    bits_count = WORD_BITS.get(format_name, 32)
    size = {8: 1, 12: 2, 16: 2, 24: 3 if justification == "packed" else 4, 32: 4}[bits_count]
    if justification == "left":
        code *= 2 ** (8 * size - bits_count)
    return code.to_bytes(size, order, signed=format_name[0] != "u")


def test_formats(rng):
    layouts = [(name, "right") for name in [*WORD_BITS, "f32"]] + [("u12", "left"), ("i24", "left"), ("i24", "packed")]
    for name, justification in layouts:
        bits_count = WORD_BITS.get(name, 32)
        low = 0 if name[0] == "u" else -2 ** (bits_count - 1)
        codes = [rng.randrange(low, low + 2**bits_count) for _ in range(200)] + [low, low + 2**bits_count - 1, low + 1]
        for order in ("little", "big"):
            expected = b"".join(packed(name, justification, order, c) for c in codes)
            sent, read = ask([f"bytes {name} {justification} {order} {' '.join(map(str, codes))}",
                              f"read {name} {justification} {order} {expected.hex()}"])
            check(bytes.fromhex(sent) == expected, f"{name} {justification} {order} is sent")
            check(read.split() == [str(c) for c in codes], f"{name} {justification} {order} is read")
            kind = {"q15": "i2", "i16": "i2", "u12": "u2", "u16": "u2", "q31": "i4", "i32": "i4", "i24": "i4"}.get(name)
            if kind and justification != "packed":
                array = np.frombuffer(expected, ("<" if order == "little" else ">") + kind).astype(np.int64)
                if justification == "left":
                    array = array // 2 ** (8 * np.dtype(kind).itemsize - bits_count)
                check(array.tolist() == codes, f"{name} {justification} {order} as NumPy reads it")
        if name == "f32":
            floats = [rng.uniform(-2, 2) for _ in range(100)] + [0.1, 1e-40, -0.0]
            answer = ask([f"code f32 floor {' '.join(map(repr, floats))}"])[0]
            check([int(w) for w in answer.split()] == np.array(floats, np.float32).view(np.int32).tolist(), "f32 codes")
            continue
        values = [float.fromhex(w) for w in ask([f"value {name} {' '.join(map(str, codes))}"])[0].split()]
        zero = 2 ** (bits_count - 1) if name[0] == "u" else 0
        step = 2.0 ** (1 - bits_count) if name[0] == "q" else 1.0
        check(values == [(c - zero) * step for c in codes], f"values of {name}")
        back = ask([f"code {name} floor {' '.join(map(repr, values))}"])[0]
        check(back.split() == [str(c) for c in codes], f"codes of the values of {name}")


# --- NPY headers against NumPy -----------------------------------------------------------------------


def test_npy():
    types = {"|i1": np.int8, "|u1": np.uint8, "<u2": np.uint16, "<i2": np.int16, "<i4": np.int32, "<i8": np.int64,
             "<f4": np.float32, "<f8": np.float64}
    for name, kind in types.items():
        for count in (0, 1, 7, 123_456):
            header = bytes.fromhex(ask([f"npy {name} {count} 1"])[0])
            data = np.arange(count).astype(kind)
            loaded = np.load(io.BytesIO(header + data.tobytes()))
            rows = bytes.fromhex(ask([f"npy {name} {count} 3"])[0])
            table = np.load(io.BytesIO(rows + np.arange(3 * count).astype(kind).tobytes()))
            check(table.shape == (count, 3), f"NumPy reads our header of {count} rows of 3 {name}")
            check(len(header) == 128 and loaded.dtype == data.dtype and np.array_equal(loaded, data),
                  f"NumPy reads our header of {count} {name}")
            for version in ((1, 0), (2, 0)):
                buffer = io.BytesIO()
                np.lib.format.write_array(buffer, data, version=version)
                offset = len(buffer.getvalue()) - data.nbytes
                answer = ask(["parse " + buffer.getvalue()[:offset].hex()])[0]
                check(answer == f"{name} {count} 1 {offset}", f"we read NumPy's header {version} {name}: {answer}")
    refused = {
        ">i2": (np.zeros(3, ">i2"), "byte 20: elements of type '>i2' are not taken"),
        "2-D": (np.zeros((3, 2), order="F"), "byte 10: several channels in Fortran order"),
        "3-D": (np.zeros((3, 2, 1)), "byte 60: the array has 3 dimensions"),
        "0-D": (np.float64(1.0), "byte 60: the array has 0 dimensions"),
        "complex": (np.zeros(3, complex), "byte 20: elements of type '<c16' are not taken"),
        "records": (np.zeros(3, [("a", "<i2")]), "byte 20: elements are records"),
    }
    for name, (array, expected) in refused.items():
        buffer = io.BytesIO()
        np.save(buffer, array)
        answer = ask(["parse " + buffer.getvalue().hex()])[0]
        check(answer == expected, f"{name}: {answer}")


def main():
    rng = random.Random(SEED)
    test_philox(rng)
    test_exact_math(rng)
    test_quantile(rng)
    test_tones()
    test_realisations()
    test_chirps()
    test_chirps_against_scipy()
    test_noise()
    test_ramps()
    test_squares()
    test_bursts()
    test_prbs()
    test_compounds()
    test_files(rng)
    test_formats(rng)
    test_npy()
    check(different_31 * 100_000 < samples_31, f"{different_31} of {samples_31} 32-bit codes differ")
    check(hashes_met == set(SAME_CODES), f"hashes never met: {set(SAME_CODES) - hashes_met}")
    print(f"{different_31} of {samples_31} codes of 32 bits differ")
    print(f"{checks} checks, {failures} failed; questions drawn with seed {SEED}, "
          f"NumPy {np.__version__}, mpmath at {mp.dps} digits")
    return 1 if failures else 0


if __name__ == "__main__":
    sys.exit(main())
