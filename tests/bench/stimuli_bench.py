"""Our codes beside NumPy's, in one run: million samples a second of processor time, and the ratio.

usage: stimuli_bench.py STIMULI_BENCH [MILLION_SAMPLES]

NumPy makes the same kind of signal in blocks of 4096, scales it, adds 1/2, takes the floor, clips and
converts to int16: what fill_codes does. It draws from another generator, starts only at index 0 for
noise, and its phase is good to a double; so the ratio is an orientation, not a race.
"""

import subprocess
import sys
import time

import numpy as np

MILLION = int(sys.argv[2]) if len(sys.argv) > 2 else 2
SAMPLES = MILLION * 1_000_000
BLOCK = 4096
RATE = 48000.0


def codes(ratios):
    return np.clip(np.floor(ratios * 32768.0 + 0.5), -32768, 32767).astype(np.int16)


def step(first):
    return np.full(BLOCK, 0.5)


def sine_of(phase_of):
    return lambda first: 0.5 * np.sin(2 * np.pi * np.modf(phase_of(np.arange(first, first + BLOCK, dtype=float)))[0])


def multitone(first):
    n = np.arange(first, first + BLOCK, dtype=float)
    return 0.05 * sum(np.sin(2 * np.pi * np.modf(997.0 * k / RATE * n)[0]) for k in range(1, 11))


def main():
    generator = np.random.Generator(np.random.Philox(1))
    log_ratio = np.log(1000.0)
    shapes = {
        "step": step,
        "uniform-noise": lambda first: generator.uniform(-0.25, 0.25, BLOCK),
        "normal-noise": lambda first: 0.25 * generator.standard_normal(BLOCK),
        "sine": sine_of(lambda n: 997.0 / RATE * n),
        "linear-chirp": sine_of(lambda n: 20.0 / RATE * n + 19980.0 / RATE * n * n / (2 * SAMPLES)),
        "logarithmic-chirp": sine_of(lambda n: 20.0 / RATE * SAMPLES / log_ratio * np.expm1(n / SAMPLES * log_ratio)),
        "multitone-10": multitone,
        "ramp": lambda first: -1.0 + 2.0 / SAMPLES * np.arange(first, first + BLOCK, dtype=float),
        "square": lambda first: np.where(np.modf(997.0 / RATE * np.arange(first, first + BLOCK))[0] < 0.5, 0.5, -0.5),
        "step-add-noise": lambda first: 0.5 + generator.uniform(-0.25, 0.25, BLOCK),
    }
    ours = subprocess.run([sys.argv[1], str(MILLION)], text=True, capture_output=True, check=True).stdout
    print(f"{'shape':20} {'ours':>10} {'NumPy':>10} {'ratio':>7}   million samples a second, NumPy {np.__version__}")
    for line in ours.splitlines():
        name, speed = line.split()
        if name not in shapes:  # NumPy has no counterpart that starts anywhere
            print(f"{name:20} {float(speed):10.1f}")
            continue
        best = 0.0
        for _ in range(3):
            samples = SAMPLES // 10 if name == "multitone-10" else SAMPLES
            begin = time.process_time()
            for first in range(0, samples, BLOCK):
                codes(shapes[name](first))
            best = max(best, samples / (time.process_time() - begin) / 1e6)
        print(f"{name:20} {float(speed):10.1f} {best:10.1f} {float(speed) / best:7.2f}")


if __name__ == "__main__":
    main()
