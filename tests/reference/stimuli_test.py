"""The stimuli against independent implementations: mpmath at 50 digits, SciPy, NumPy.

usage: stimuli_test.py PRINT_STIMULI
"""

import io
import random
import subprocess
import sys

import numpy as np
import scipy.signal
import scipy.special
from mpmath import mp, mpf

mp.dps = 50
PROGRAM = sys.argv[1]
SEED = 20240117  # of the questions asked here
checks = 0
failures = 0
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


def bits(seed, purpose, index):
    words = philox([index // 2 & MASK, index // 2 >> 32, purpose, 0], [seed & MASK, seed >> 32])
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


def scaled(format_name):
    return {"q15": 2**15, "i16": 2**15, "q31": 2**31, "i32": 2**31}[format_name]


def half_up(ratio, format_name):
    end = scaled(format_name)
    return int(min(max(mp.floor(ratio * end + mpf(1) / 2), -end), end - 1))


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
    ("linear chirp 0.1 to 600.0 Hz", "q31", 33_333_333): 0x96aa14d5ace61eba,
    ("linear chirp 20000.0 to 20.0 Hz", "q15", 0): 0xeb54a9f1c16abe49,
    ("logarithmic chirp 0.1 to 600.0 Hz", "q31", 99_999_300): 0x829fd7631e881931,
    ("logarithmic chirp 20000.0 to 20.0 Hz", "q31", 0): 0x319d146aecd5a13a,
    ("logarithmic chirp 1.0 to 499999.9 Hz", "q31", 9_999_999_300): 0x7e65cdcb74b074a2,
    ("uniform noise", "q31", 8_589_934_591): 0x3e6ef740c229f88b,
    ("normal noise", "q31", 8_589_934_591): 0xdfa3c505273f32a0,
    ("normal noise", "q15", 0): 0xc170db1ab80e0b62,
}


def compare(name, form, rate, first, count, parameters, ratio_of, format_name):
    """Codes equal for 16 bits. For 32 bits at most one code off in at most one sample of 100,000: a
    double's error of 1e-16 is 2e-7 LSB, which crosses a tie once in millions; here none is expected."""
    answer = ask([words_of("codes", form, [format_name, "half-up", rate, first, count], parameters)])[0]
    ours = [int(w) for w in answer.split()]
    expected = [half_up(ratio_of(n), format_name) for n in range(first, first + count)]
    different = [(n, a, b) for n, (a, b) in enumerate(zip(ours, expected)) if a != b]
    check(len(ours) == count, f"{name} {format_name}: {answer[:200]}")
    check(all(abs(a - b) <= 1 for _, a, b in different), f"{name} {format_name}: {different[:3]}")
    check(not different, f"{name} {format_name} from {first}: {len(different)} codes differ, {different[:3]}")
    if (name, format_name, first) in SAME_CODES:
        check(fnv1a(expected) == SAME_CODES[name, format_name, first], f"{name} {format_name} from {first}: the hash "
              f"of the expected codes is {fnv1a(expected):#018x}")
        hashes_met.add((name, format_name, first))


def test_tones():
    rate, frequency, level, phase = 48000.0, 997.1, 0.9, 0.123
    def sine(n):
        return level * mp.sin(2 * mp.pi * (mpf(frequency) / mpf(rate) * n + mpf(phase)))
    for first in (0, 123_456_789, 9_999_990_000):
        for format_name in ("q15", "q31", "i32"):
            compare("sine", "sine", rate, first, 1500,
                    dict(length_samples=10**10, frequency_hz=frequency, phase_turns=phase, level_ratio=level),
                    sine, format_name)

    tones, seed = [100.0, 250.5, 1234.5, 19999.9, 24000.0], 77
    starts = [mpf(bits(seed, 1, k)) / 2**64 for k in range(len(tones))]
    def multitone(n):
        total = sum(mp.sin(2 * mp.pi * (mpf(f) / mpf(rate) * n + s)) for f, s in zip(tones, starts))
        return mpf(0.8) * total / len(tones)
    for format_name in ("q15", "q31"):
        compare("multitone", "multitone", rate, 5_000_000_000, 1500,
                dict(length_samples=10**10, frequencies_hz=",".join(map(repr, tones)), level_ratio=0.8, seed=seed),
                multitone, format_name)


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


# --- NPY headers against NumPy -----------------------------------------------------------------------


def test_npy():
    types = {"<i2": np.int16, "<i4": np.int32, "<f4": np.float32, "<f8": np.float64}
    for name, kind in types.items():
        for count in (0, 1, 7, 123_456):
            header = bytes.fromhex(ask([f"npy {name} {count}"])[0])
            data = np.arange(count).astype(kind)
            loaded = np.load(io.BytesIO(header + data.tobytes()))
            check(len(header) == 128 and loaded.dtype == data.dtype and np.array_equal(loaded, data),
                  f"NumPy reads our header of {count} {name}")
            for version in ((1, 0), (2, 0)):
                buffer = io.BytesIO()
                np.lib.format.write_array(buffer, data, version=version)
                offset = len(buffer.getvalue()) - data.nbytes
                answer = ask(["parse " + buffer.getvalue()[:offset].hex()])[0]
                check(answer == f"{name} {count} {offset}", f"we read NumPy's header {version} {name}: {answer}")
    refused = {
        ">i2": (np.zeros(3, ">i2"), "byte 20: elements of type '>i2' are not taken"),
        "2-D": (np.zeros((3, 2), order="F"), "byte 59: the array has 2 dimensions"),
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
    test_chirps()
    test_chirps_against_scipy()
    test_noise()
    test_npy()
    check(hashes_met == set(SAME_CODES), f"hashes never met: {set(SAME_CODES) - hashes_met}")
    print(f"{checks} checks, {failures} failed; questions drawn with seed {SEED}, "
          f"NumPy {np.__version__}, mpmath at {mp.dps} digits")
    return 1 if failures else 0


if __name__ == "__main__":
    sys.exit(main())
