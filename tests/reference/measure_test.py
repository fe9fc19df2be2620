"""Error, lag and response against NumPy and SciPy: sums by math.fsum, residuals by brute force, spectra by
scipy.signal.csd and welch, tones by direct correlation."""
import math
import subprocess
import sys
import time

import numpy as np
from scipy import signal

CASES = 60


class Program:
    """Sends all cases at once and hands out the numbers of the answer."""

    def __init__(self, path):
        self.path, self.sent, self.answer, self.at = path, [], None, 0

    def ask(self, what, parameters, a, b):
        for part in ([what], [len(parameters)], parameters, [len(a)], a, [len(b)], b):
            self.sent.append(np.asarray(part, dtype=float))

    def run(self):
        message = np.concatenate(self.sent).tobytes()
        self.answer = np.frombuffer(subprocess.run([self.path], input=message, capture_output=True, check=True).stdout)

    def take(self, count):
        self.at += count
        assert self.at <= len(self.answer), "the answer is too short"
        return self.answer[self.at - count : self.at]


class Checks:
    def __init__(self):
        self.count, self.failures, self.worst = 0, 0, {}

    def close(self, what, value, expected, tolerance):
        self.count += 1
        deviation = np.max(np.abs(np.asarray(value) - np.asarray(expected)))
        ratio = deviation / tolerance if tolerance > 0 else (0.0 if deviation == 0 else math.inf)
        self.worst[what] = max(self.worst.get(what, 0.0), ratio)
        if not ratio <= 1:
            self.failures += 1
            print(f"FAILED {what}: off by {deviation:.3g}, allowed {tolerance:.3g}")

    def equal(self, what, value, expected):
        self.close(what, value, expected, 0.0)


def error_case(rng, program):
    length = int(rng.integers(1, 5000))
    reference = rng.uniform(-1, 1, length)
    response = reference + rng.normal(0, 10.0 ** rng.uniform(-6, -1), length)
    limit = 2 * np.std(response - reference) + 1e-9
    program.ask(0, [limit], reference, response)

    def check(checks):
        largest, index, rms, bias, snr, first, beyond = program.take(7)
        e = response - reference
        energy = math.fsum(e * e)
        checks.equal("largest", largest, np.max(np.abs(e)))
        checks.equal("index of the largest", index, np.argmax(np.abs(e)))
        # Compensated against exact sums: some 2^-53 of the value, of the mean magnitude for the bias.
        checks.close("rms", rms, math.sqrt(energy / length), 1e-15 * rms)
        checks.close("bias", bias, math.fsum(e) / length, 1e-15 * np.mean(np.abs(e)))
        checks.close("SNR", snr, 10 * math.log10(math.fsum(reference * reference) / energy), 1e-13)
        out = np.flatnonzero(np.abs(e) > limit)
        checks.equal("first beyond", first, out[0] if len(out) else -1)
        checks.equal("beyond", beyond, len(out))

    return check


def residuals(reference, response, window):
    """sum (y[n] - r[n - k])^2, n = 0 .. length - 1 - window, zeros before the start."""
    length = len(reference) - window
    padded = np.concatenate([np.zeros(window), reference])
    return np.array(
        [math.fsum((response[:length] - padded[window - k : window - k + length]) ** 2) for k in range(-window, window + 1)]
    )


def lag_case(rng, program):
    window = int(rng.choice([0, 1, 13, 64]))
    length = int(rng.integers(2 * window + 1, 4000))
    reference, lag = rng.integers(-1000, 1001, length).astype(float), int(rng.integers(-window, window + 1))
    response = np.roll(reference, lag) + rng.integers(-3, 4, length)
    program.ask(1, [window], reference, response)
    program.ask(2, [window], reference, [])

    def check(checks):
        samples, best = program.take(2)
        got = program.take(2 * window + 1)
        # Whole numbers below 2^53: every sum is exact, so equality holds.
        expected = residuals(reference, response, window)
        checks.equal("residuals", got, expected)
        checks.equal("lag", best, int(np.argmin(expected)) - window if np.sum(expected == expected.min()) == 1 else best)
        checks.equal("samples of the lag", samples, length - window)
        smallest, hardest = program.take(2)
        own = residuals(reference, reference, window)
        own[window] = np.inf
        checks.equal("discrimination", smallest, own.min() if window else 0.0)
        checks.equal("hardest lag", own[int(hardest) + window] if window else 0.0, own.min() if window else 0.0)

    return check


def welch_case(rng, program):
    segment = int(rng.choice([64, 256, 1024, 4096]))
    length = int(rng.integers(segment // 2, 12 * segment))
    stimulus = rng.uniform(-1, 1, length)
    error = signal.lfilter(rng.uniform(-1, 1, 5), 1, stimulus) * 10.0 ** rng.uniform(-6, 0) + rng.normal(0, 1e-4, length)
    program.ask(3, [segment], stimulus, error)

    def check(checks):
        points = program.take(5 * (segment // 2 + 1)).reshape(-1, 5)
        # SciPy drops a cut segment: pad it with zeros as the header says.
        segments = 1 + max(0, math.ceil((length - segment) / (segment // 2)))
        padded = segment + (segments - 1) * (segment // 2)
        x, e = (np.concatenate([s, np.zeros(padded - length)]) for s in (stimulus, error))
        options = dict(window="hann", nperseg=segment, noverlap=segment // 2, detrend=False, scaling="spectrum", return_onesided=False)
        cross, power = signal.csd(x, e, **options)[1], signal.welch(x, **options)[1]
        half = segment // 2 + 1
        expected = cross[:half] / power[:half]
        # Transforms round at u = log2(4096) 2^-53 of the rms over all bins: dX of X, dE of E. Of E / X in a bin of power P
        # the error is (3 |E| dX / |X| + dE) / |X|, and with it times |X| over the rms of X, u (3 |E| / |X| + rms E / rms X).
        weight = np.sqrt(np.mean(power) / power[:half])
        noise = signal.welch(e, **options)[1][:half]
        allowed = 3 * np.sqrt(noise / power[:half]) + np.sqrt(np.mean(e * e) / np.mean(x * x))
        # 4e-15 is 3 u: the largest of some thousand bins, not their rms.
        checks.close("welch difference", (points[:, 1] + 1j * points[:, 2] - expected) / weight / allowed, np.zeros(half), 4e-15)
        # scaling="spectrum" divides by the squared sum of the window, (segment / 2)^2
        checks.close("stimulus power", points[:, 3] / (segment / 2) ** 2, power[:half], 1e-13 * np.max(power))
        checks.equal("bins", points[:, 0], np.arange(half) / segment)
        checks.equal("averages", points[:, 4], np.full(half, segments))

    return check


def tone_case(rng, program):
    length = int(rng.integers(200, 20000))
    tones = np.sort(rng.uniform(5 / length, 0.5 - 5 / length, 5))
    n = np.arange(length)
    stimulus = sum(np.sin(2 * np.pi * ((f * n) % 1.0) + i) for i, f in enumerate(tones)) / 5
    error = signal.lfilter(rng.uniform(-1, 1, 5), 1, stimulus) * 1e-3 + rng.normal(0, 1e-5, length)
    program.ask(4, tones, stimulus, error)

    def check(checks):
        points = program.take(5 * len(tones)).reshape(-1, 5)
        window = 0.5 - 0.5 * np.cos(2 * np.pi * n / length)
        for point, f in zip(points, tones):
            # f n is rounded to n f 2^-53, at most 1e-12 turns here, differently at each n: 6e-12 of the correlation.
            turn = np.exp(-2j * np.pi * ((f * n) % 1.0))
            x, e = np.sum(window * stimulus * turn), np.sum(window * error * turn)
            mean = np.sqrt(np.mean(stimulus**2)) * length / abs(x)
            checks.close("tone difference", point[1] + 1j * point[2], e / x, 1e-11 * mean * np.sqrt(np.mean(error**2) / np.mean(stimulus**2)))
            checks.close("tone power", math.sqrt(point[3]), abs(x), 1e-11 * mean * abs(x))
            checks.equal("tone frequency", point[0], f)

    return check


def main():
    program = Program(sys.argv[1])
    seed = int(sys.argv[2]) if len(sys.argv) > 2 else time.time_ns() % 2**32
    print(f"seed {seed} (repeat with: measure_test.py PROGRAM {seed})")
    rng = np.random.default_rng(seed)
    pending = [make(rng, program) for make in (error_case, lag_case, welch_case, tone_case) for _ in range(CASES)]
    program.run()
    checks = Checks()
    for check in pending:
        check(checks)
    checks.equal("numbers left over", len(program.answer) - program.at, 0)
    for what, ratio in checks.worst.items():
        if ratio > 0:
            print(f"{what}: worst deviation {ratio:.3g} of what is allowed")
    print(f"{checks.count} checks, {checks.failures} failures")
    return 1 if checks.failures else 0


sys.exit(main())
