"""Throughput of the oracle as ratios to SciPy and NumPy, both timed in this run on the same samples.

    /usr/bin/python3 tests/bench/oracle_bench.py .build/release/tests/bench/oracle_bench [samples]

One thread each, smallest of five runs. No test: a table for people, the machine decides the figures.
"""
import os

for name in ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS"):
    os.environ[name] = "1"

import subprocess
import sys
import tempfile
import time

import numpy as np
from scipy import signal

RUNS = 5


def seconds_of(job):
    best = float("inf")
    for _ in range(RUNS):
        start = time.perf_counter()
        job()
        best = min(best, time.perf_counter() - start)
    return best


def lag_by_correlation(x, y):
    """sum y^2 + sum r^2 - 2 sum y r by one FFT correlation: faster for wide windows, but no exact zero."""
    full = signal.correlate(y, x, mode="full", method="fft")
    middle = len(x) - 1
    return np.dot(y, y) + np.dot(x, x) - 2 * full[middle - 64 : middle + 65]


def lag_by_differences(x, y):
    """What LagMeasure does, with NumPy's vectors."""
    n = len(x) - 64
    padded = np.concatenate([np.zeros(64), x])
    return [np.sum((y[:n] - padded[64 - k : 64 - k + n]) ** 2) for k in range(-64, 65)]


def moving_average_by_cumsum(x, points):
    """The usual shortcut, which drifts."""
    sums = np.cumsum(x)
    sums[points:] -= sums[:-points].copy()
    return sums / points


def error_figures(x, y):
    e = y - x
    return np.max(np.abs(e)), np.argmax(np.abs(e)), np.sqrt(np.mean(e * e)), np.mean(e), np.dot(x, x), np.sum(np.abs(e) > 1)


def tones(x, y):
    n = np.arange(len(x))
    window = np.hanning(len(x))
    for f in (0.01, 0.05, 0.1, 0.15, 0.2, 0.3, 0.4, 0.45):
        turn = window * np.exp(-2j * np.pi * f * n)
        np.dot(turn, x), np.dot(turn, y)


def comb(x, delay):
    b, a = np.zeros(delay + 1), np.zeros(delay + 1)
    b[0], b[-1], a[0], a[-1] = 1, 0.5, 1, -0.7
    return signal.lfilter(b, a, x)


def flush(pole):
    """The least N with the sum of |h| beyond it under 2^-16, from 4e6 samples of h."""
    impulse = np.zeros(4_000_000)
    impulse[0] = 1 - pole
    tails = np.cumsum(np.abs(signal.lfilter([1], [1, -pole], impulse))[::-1])[::-1]
    return np.argmax(tails < 2**-16) - 1


def jobs(x):
    section = [0.0675, 0.1349, 0.0675, 1, -1.143, 0.4128]
    yield "moving-average-16", "lfilter", lambda: signal.lfilter(np.full(16, 1 / 16), 1, x)
    yield "moving-average-1000", "cumsum", lambda: moving_average_by_cumsum(x, 1000)
    for taps in (16, 64, 256):
        yield f"fir-{taps}", "lfilter", lambda taps=taps: signal.lfilter(np.full(taps, 1 / taps), 1, x)
    for taps in (512, 1024, 2048, 4096, 16384, 65536):
        # oaconvolve needs the whole record at once; ours gives each output with its input.
        job = lambda taps=taps: signal.oaconvolve(x, np.full(taps, 1 / taps))
        yield f"direct-fir-{taps}", "oaconvolve", job
        yield f"partitioned-fir-{taps}", "oaconvolve", job
    for count in (1, 4):
        yield f"biquads-{count}", "sosfilt", lambda count=count: signal.sosfilt([section] * count, x)
    for delay in (24, 4000):
        yield f"comb-{delay}", "lfilter", lambda delay=delay: comb(x, delay)
    yield "flush-1e6", "lfilter and cumsum", lambda: flush(1 - 1e-5)
    y = signal.sosfilt([section] * 4, x)
    yield "error", "NumPy", lambda: error_figures(x, y)
    yield "lag-64", "NumPy, differences", lambda: lag_by_differences(x, y)
    yield "lag-64", "FFT correlation", lambda: lag_by_correlation(x, y)
    options = dict(nperseg=4096, noverlap=2048, detrend=False)
    yield "welch-4096", "csd and welch", lambda: (signal.csd(x, y, **options), signal.welch(x, **options))
    yield "tones-8", "NumPy", lambda: tones(x, y)


def main():
    program, length = sys.argv[1], int(sys.argv[2]) if len(sys.argv) > 2 else 1_000_000
    x = np.random.default_rng(1).uniform(-1, 1, length)
    with tempfile.NamedTemporaryFile() as file:
        x.tofile(file.name)
        lines = subprocess.run([program, file.name, str(length)], capture_output=True, check=True, text=True).stdout
    ours = {name: float(seconds) for name, seconds in (line.split() for line in lines.splitlines())}
    print(f"{length} samples; NumPy {np.__version__}, one thread")
    print(f"{'job':<22}{'halflsb':>14}{'theirs':>14}{'ratio':>8}  against")
    for name, whom, job in jobs(x):
        theirs = seconds_of(job)
        per_sample = 1e9 / length
        print(f"{name:<22}{ours[name] * per_sample:>11.2f} ns{theirs * per_sample:>11.2f} ns{theirs / ours[name]:>8.1f}  {whom}")
    print(f"{'twin':<30}{'per sample':>14}{'of the reference':>20}")
    for name in ours:
        if not name.startswith("twin-"):
            continue
        reference = next(each for each in sorted(ours, key=len, reverse=True) if name.endswith(each) and each != name)
        print(f"{name:<30}{ours[name] * 1e9 / length:>11.2f} ns{ours[name] / ours[reference]:>19.1f}x")


main()
