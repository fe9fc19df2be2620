"""What changes the rate, medians and starts, against SciPy and NumPy.

upfirdn puts zeros in, filters and drops; a CIC runs as integrators and combs in Python's integers of any length; a
median sorts its windows; a start with the first sample is lfilter's own initial state.
"""
import os
import subprocess
import sys
import time

import numpy as np
from scipy import signal

DESIGNS_PER_KIND = 220
SAMPLES = 400
# Output against the largest it can be: sums of up to 600 terms in other orders, N 2^-53 of the norm.
TOLERANCE = 1e-12


def taps_of_cic(order, factor, delay, shift, up):
    taps = np.array([1.0])
    for _ in range(order):
        taps = np.convolve(taps, np.ones(factor * delay))
    gain = float(factor * delay) ** order / (factor if up else 1)
    return taps / (2.0**shift if shift >= 0 else gain)


def random_taps(rng, factor):
    return rng.uniform(-1, 1, factor * rng.integers(1, 600 // factor + 1))


def random_stage(rng, kind):
    factor = int(rng.integers(2, 13))
    phase = int(rng.integers(0, factor))
    if kind in (9, 10):
        order = int(rng.integers(1, 7))
        words = [order, factor, int(rng.integers(1, 3)), int(rng.choice([-1, rng.integers(0, 20)]))]
        return kind, words + ([phase] if kind == 9 else [])
    if kind == 11:
        return kind, [factor, phase, *rng.uniform(-1, 1, rng.integers(1, 600))]
    return kind, [factor, *random_taps(rng, factor)]


def start_design(rng):
    """A first-order section, a comb or an FIR that starts with its first sample, or an average that grows."""
    way = int(rng.integers(0, 4))
    if way == 0:
        radius, angle = rng.uniform(0.1, 0.95), rng.uniform(0, np.pi)
        return 102, [*rng.uniform(-1, 1, 3), -2 * radius * np.cos(angle), radius**2]
    if way == 1:
        return 103, [float(rng.integers(1, 11)), *rng.uniform(-1, 1, 2), rng.uniform(-0.8, 0.8)]
    if way == 2:
        return 101, list(rng.uniform(-1, 1, rng.integers(2, 2000)))
    return 200, [float(rng.integers(1, 100))]


def random_designs(rng):
    for name, kind in (("CIC decimator", 9), ("CIC interpolator", 10), ("FIR decimator", 11), ("FIR interpolator", 12)):
        for _ in range(DESIGNS_PER_KIND):
            yield name, [random_stage(rng, kind)]
    for _ in range(DESIGNS_PER_KIND):
        yield "chain of rates", [random_stage(rng, int(kind)) for kind in rng.permutation([9, 11, 12])]
    for _ in range(DESIGNS_PER_KIND):
        yield "median", [(8, [int(rng.integers(1, 200))])]
    for _ in range(DESIGNS_PER_KIND):
        yield "start", [start_design(rng)]


def as_integers(order, factor, delay, codes, up, phase):
    """Hogenauer's integrators and combs; the integers never overflow."""
    x = [int(c) for c in codes]
    if up:
        for _ in range(order):
            x = [v - (x[n - delay] if n >= delay else 0) for n, v in enumerate(x)]
        x = [w for v in x for w in (v, *([0] * (factor - 1)))]
    for _ in range(order):
        total, sums = 0, []
        for v in x:
            total += v
            sums.append(total)
        x = sums
    if not up:
        x = x[phase::factor]
        for _ in range(order):
            x = [v - (x[n - delay] if n >= delay else 0) for n, v in enumerate(x)]
    return x


def rate_of(kind, numbers):
    """up, down, the taps at the higher rate, and a decimator's phase."""
    if kind in (9, 10):
        order, factor, delay, shift = numbers[:4]
        taps = taps_of_cic(order, factor, delay, shift, kind == 10)
        phase = numbers[4] if kind == 9 else 0
    else:
        factor, phase = int(numbers[0]), int(numbers[1]) if kind == 11 else 0
        taps = np.array(numbers[2 if kind == 11 else 1 :])
    return (1, factor, taps, phase) if kind in (9, 11) else (factor, 1, taps, 0)


def by_upfirdn(stages, samples):
    for kind, numbers in stages:
        up, down, taps, phase = rate_of(kind, numbers)
        if down > 1:
            # As many zeros in front as let a group's last zero or first sample fall where the phase is.
            ahead = (down - phase) % down
            count = -(-(len(samples) + ahead) // down)
            samples = signal.upfirdn(taps, np.concatenate([np.zeros(ahead), samples]), 1, down)[:count]
            samples = samples[1:] if ahead else samples
        else:
            samples = signal.upfirdn(taps, samples, up)[: len(samples) * up]
    return samples


def response_of(stages, f):
    """From the input's frequency to the base image at the output, which stands at the time of its group's first input."""
    product = np.ones(len(f), complex)
    for kind, numbers in stages:
        up, down, taps, phase = rate_of(kind, numbers)
        f = f / up
        product = product * signal.freqz(taps, 1, 2 * np.pi * f)[1] / up * np.exp(2j * np.pi * f * phase)
        f = f * down
    return product


def norm_of(stages, cycle_in, cycle_out):
    """The largest sum of weights of any output phase, from unit samples."""
    length = cycle_in * 2000
    sums = np.zeros(cycle_out)
    for first in range(cycle_in):
        x = np.zeros(length)
        x[first] = 1
        y = np.abs(by_upfirdn(stages, x))
        y = y[: len(y) // cycle_out * cycle_out]
        sums += y.reshape(-1, cycle_out).sum(axis=0)
    return sums.max()


def cycle_of(stages):
    inputs, outputs = 1, 1
    for kind, numbers in stages:
        up, down, _, _ = rate_of(kind, numbers)
        rounds = down // np.gcd(outputs, down)
        inputs, outputs = inputs * rounds, outputs * rounds // down * up
    return int(inputs), int(outputs)


def by_sorting(points, samples):
    padded = np.concatenate([np.zeros(points - 1), samples])
    return np.median(np.lib.stride_tricks.sliding_window_view(padded, points), axis=1)


def by_initial_state(kind, numbers, samples):
    if kind == 200:
        points = int(numbers[0])
        return np.array([np.mean(samples[max(0, n + 1 - points) : n + 1]) for n in range(len(samples))])
    if kind == 101:
        b, a = np.array(numbers), np.array([1.0])
        past = np.concatenate([np.full(len(b) - 1, samples[0]), samples])
        return signal.lfilter(b, a, past)[len(b) - 1 :]
    if kind == 102:
        b, a = numbers[:3], [1.0, *numbers[3:]]
    else:
        delay, direct, forward, feedback = numbers
        b, a = np.zeros(int(delay) + 1), np.zeros(int(delay) + 1)
        b[0], b[-1], a[0], a[-1] = direct, forward, 1, feedback
    return signal.lfilter(b, a, samples, zi=signal.lfilter_zi(b, a) * samples[0])[0]


def same_bits_without_fma(program, rng):
    """Long FIRs run through transforms, whose factors come from the C library: parts are so short that it has the same
    bits for them with fused multiply-add and without."""
    count, message = 20000, []
    for taps in (1024, 3000, 65536):
        message += [[1], [1, taps], rng.uniform(-1, 1, taps), [0], [count], rng.uniform(-1, 1, count), [2.0**-16]]
    sent = np.concatenate([np.asarray(part, dtype=float) for part in message]).tobytes()
    masked = {**os.environ, "GLIBC_TUNABLES": "glibc.cpu.hwcaps=-FMA,-AVX2,-FMA_Usable,-AVX2_Usable,-FMA4"}
    outs = [subprocess.run([program], input=sent, capture_output=True, check=True, env=env).stdout for env in (None, masked)]
    assert len(outs[0]) == 3 * 8 * (count + 3), "an answer of another length"
    return outs[0] == outs[1]


def main():
    program = sys.argv[1]
    seed = int(sys.argv[2]) if len(sys.argv) > 2 else time.time_ns() % 2**32
    print(f"seed {seed} (repeat with: rates_test.py PROGRAM {seed})")
    rng = np.random.default_rng(seed)
    cases, message = [], []
    for name, stages in random_designs(rng):
        samples = rng.integers(-128, 128, SAMPLES).astype(float) if name.startswith("CIC") else rng.uniform(-1, 1, SAMPLES)
        f = np.concatenate([[0.0], rng.uniform(0, 0.5, 4)])
        cases.append((name, stages, f, samples))
        message.append([len(stages)])
        for kind, numbers in stages:
            message.append([kind, len(numbers), *numbers])
        message += [[len(f)], f, [SAMPLES], samples, [2.0**-16]]
    sent = np.concatenate([np.asarray(part, dtype=float) for part in message]).tobytes()
    answer = np.frombuffer(subprocess.run([program], input=sent, capture_output=True, check=True).stdout)

    checks, failures, worst, at = 0, 0, {}, 0

    def check(case, what, deviation, tolerance):
        nonlocal checks, failures
        checks += 1
        ratio = deviation / tolerance
        what = f"{cases[case][0]}, {what}"
        worst[what] = max(worst.get(what, 0.0), ratio)
        if not ratio <= 1:
            failures += 1
            print(f"FAILED case {case}: {what} off by {deviation:.3g}, allowed {tolerance:.3g}")

    for number, (name, stages, f, samples) in enumerate(cases):
        changes = name not in ("median", "start")
        if name == "median":
            expected = by_sorting(stages[0][1][0], samples)
        elif name == "start":
            expected = by_initial_state(*stages[0], samples)
        else:
            expected = by_upfirdn(stages, samples)
        output = answer[at : at + len(expected)]
        at += len(expected)
        pairs = answer[at : at + 2 * len(f)]
        response = pairs[0::2] + 1j * pairs[1::2]
        at += 2 * len(f)
        norm = answer[at]
        at += 3
        if name == "median":
            # Order alone: the mean of the middle two is the same operation.
            check(number, "output", np.max(np.abs(output - expected)), 1e-300)
            continue
        scale = norm * np.max(np.abs(samples))
        check(number, "output", np.max(np.abs(output - expected)), TOLERANCE * max(scale, 1e-300))
        if not changes:
            continue
        check(number, "response", np.max(np.abs(response - response_of(stages, f))), TOLERANCE * norm * 10)
        if name.startswith("CIC"):
            order, factor, delay, shift, phase = (*stages[0][1], 0)[:5]
            exact = as_integers(order, factor, delay, samples, stages[0][0] == 10, phase)
            # (R M)^N x 128 is at most 2^33.5: whole numbers, exact but for the one division.
            divisor = 2**shift if shift >= 0 else (factor * delay) ** order / (factor if stages[0][0] == 10 else 1)
            check(number, "against integers", np.max(np.abs(output - [v / divisor for v in exact])), 1e-300)
        cycle = cycle_of(stages)
        if number % 5 == 0 and cycle[0] * cycle[1] < 400:
            expected_norm = norm_of(stages, *cycle)
            check(number, "L1 norm", abs(norm - expected_norm), 1e-11 * expected_norm)
    if not same_bits_without_fma(program, rng):
        failures += 1
        print("FAILED: a long FIR has other bits without fused multiply-add")
    if at != len(answer):
        failures += 1
        print(f"FAILED: {len(answer) - at} numbers too many in the answer")
    for what, ratio in worst.items():
        print(f"{what}: worst deviation {ratio:.3g} of what is allowed")
    print(f"{checks} checks of {len(cases)} designs, {failures} failures")
    return 1 if failures else 0


sys.exit(main())
