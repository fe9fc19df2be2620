"""The filters against SciPy: outputs, frequency responses, group delays, norms and poles of random designs.

SciPy runs FIR and biquads in transposed direct form II, and evaluates polynomials in z: other operations in
another order than ours. What it cannot check, the digits at very low cut-offs, tests/oracle does with finer
arithmetic.
"""
import subprocess
import sys
import time
import warnings

import numpy as np
from scipy import signal

DESIGNS_PER_KIND = 250
SAMPLES = 700
# Output against the largest it can be (L1 norm x peak of the input). Both sides stray by some N 2^-53 of it for FIR
# and averages (600 terms: 7e-14), and for biquads by 2^-53 times the gain of 1/A, 1 / (1 - 0.95)^2 = 400 a section at
# most: 4e-14, some times that through four sections.
TOLERANCE = 1e-12
# A slope from responses 2h = 2e-4 / N apart, N samples being the filter's memory. With r = L1 norm / |H|, the k-th
# derivative of H by frequency is at most about (2 pi N)^k r |H|; the third one of its phase,
# Im(H3/H - 3 H1 H2/H^2 + 2 (H1/H)^3), at most 6 (2 pi N)^3 r^3, and the slope strays by a sixth of it times h^2: near a zero
# that is much. Rounding adds 1e-14 r / 2e-4 of N: 5e-11 r.
GROUP_DELAY_STEP = 1e-4
LOUD = 1 / 20  # |H| over the norm from which on the bound says something: 3e-3 of N


def group_delay_tolerance(memory, ratio):
    return memory * ((2 * np.pi * GROUP_DELAY_STEP) ** 2 * ratio**3 + 1e-10 * ratio)


RATE_HZ = 1000.0
IMPULSE_SAMPLES = 20000
# What is left after the flush, against the limit. Ours takes the sum up to 2^-20 of it; SciPy's tail strays by 1e-14
# of the norm, and the smallest limit is 1e-10 of it.
FLUSH_TOLERANCE = 1e-3


def random_sections(rng):
    """b0 b1 b2 a1 a2 rows with poles up to radius 0.95, gains near 1 at their largest."""
    rows = []
    for _ in range(rng.integers(1, 5)):
        if rng.random() < 0.7:
            radius, angle = rng.uniform(0.1, 0.95), rng.uniform(0, np.pi)
            a1, a2 = -2 * radius * np.cos(angle), radius**2
        else:
            p, q = rng.uniform(-0.95, 0.95, 2)
            a1, a2 = -(p + q), p * q
        b = rng.uniform(-1, 1, 3)
        peak = np.max(np.abs(signal.freqz(b, [1, a1, a2], 64)[1]))
        rows.append([*(b / peak), a1, a2])
    return rows


def random_comb(rng):
    """delay direct forward feedback, decayed to 1e-18 within a tenth of IMPULSE_SAMPLES."""
    direct, forward = rng.uniform(-1, 1, 2)
    feedback = rng.choice([0.0, rng.uniform(-0.8, 0.8)])
    return [float(rng.integers(1, 11)), direct, forward or 0.5, feedback]


def random_one_pole(rng):
    """A way to give k, and its number."""
    way = int(rng.integers(0, 4))
    k = 10 ** rng.uniform(-2.5, -0.01)
    numbers = [k, float(rng.integers(0, 9)), -np.log1p(-k) / (2 * np.pi) * RATE_HZ, -1 / np.log1p(-k) / RATE_HZ]
    return [float(way), min(numbers[way], 0.499 * RATE_HZ) if way == 2 else numbers[way]]


def random_dc_blocker(rng):
    """A way to give r, its number, and whether the gain at half the rate is 1."""
    way = int(rng.integers(0, 2))
    return [float(way), [rng.uniform(0.0, 0.995), 10 ** rng.uniform(0, 2.5)][way], float(rng.integers(0, 2))]


def random_notch(rng):
    return [rng.uniform(20, 480), 10 ** rng.uniform(-1, 0.7)]


def random_designs(rng):
    """(name, stages): a stage is a kind and its numbers, as print_filters takes them."""
    for _ in range(DESIGNS_PER_KIND):
        yield "moving average", [(0, [float(rng.choice([1, 2, 3, 16, rng.integers(2, 600)]))])]
    for _ in range(DESIGNS_PER_KIND):
        taps = rng.uniform(-1, 1, rng.integers(1, 600))
        if rng.random() < 0.5:
            taps = taps + taps[::-1]
        yield "fir", [(1, list(taps))]
    for _ in range(DESIGNS_PER_KIND):
        yield "biquad cascade", [(2, list(np.ravel(random_sections(rng))))]
    for _ in range(DESIGNS_PER_KIND):
        yield "chain", [
            (2, list(np.ravel(random_sections(rng)))),
            (0, [float(rng.integers(1, 40))]),
            (1, list(rng.uniform(-1, 1, rng.integers(1, 40)))),
        ]
    for name, kind, numbers in (
        ("comb", 3, random_comb),
        ("one-pole", 4, random_one_pole),
        ("DC blocker", 5, random_dc_blocker),
        ("notch", 6, random_notch),
    ):
        for _ in range(DESIGNS_PER_KIND):
            yield name, [(kind, numbers(rng))]
    for _ in range(DESIGNS_PER_KIND):
        yield "chain of new kinds", [(3, random_comb(rng)), (5, random_dc_blocker(rng)), (0, [float(rng.integers(1, 40))]),
                                     (6, random_notch(rng)), (4, random_one_pole(rng))]


def as_sections(numbers):
    rows = np.reshape(numbers, (-1, 5))
    return np.column_stack([rows[:, :3], np.ones(len(rows)), rows[:, 3:]])


def polynomials(kind, numbers):
    """b and a of the kinds that a plan gives by other numbers than these."""
    if kind == 3:
        delay, direct, forward, feedback = numbers
        gap = np.zeros(int(delay) - 1)
        return [direct, *gap, forward], [1.0, *gap, feedback]
    if kind == 4:
        way, value = numbers
        if way < 2:
            k = value if way == 0 else 2.0**-value
        else:
            k = -np.expm1(-2 * np.pi * value / RATE_HZ if way == 2 else -1 / (value * RATE_HZ))
        return [k], [1.0, k - 1.0]
    if kind == 5:
        way, value, unity = numbers
        r = value if way == 0 else np.exp(-2 * np.pi * value / RATE_HZ)
        gain = (1 + r) / 2 if unity else 1.0
        return [gain, -gain], [1.0, -r]
    # The analogue notch (s^2 + 1) / (s^2 + s/q + 1), its frequency moved to where the bilinear transform puts it.
    frequency, q = numbers
    return signal.bilinear([1, 0, 1], [1, 1 / q, 1], fs=0.5 / np.tan(np.pi * frequency / RATE_HZ))


def group_delay(b, a, w):
    """SciPy's, quiet about frequencies where the filter returns nothing: those are left out later."""
    with warnings.catch_warnings(), np.errstate(divide="ignore", invalid="ignore"):
        warnings.simplefilter("ignore", UserWarning)
        return signal.group_delay((b, a), w)[1]


def by_scipy(stages, frequencies, samples):
    """Output, response, group delay, largest pole radius, and the memory in samples."""
    response, delay, radius, memory = np.ones(len(frequencies), complex), np.zeros(len(frequencies)), 0.0, 1
    w = 2 * np.pi * frequencies
    for kind, numbers in stages:
        if kind == 2:
            sections = as_sections(numbers)
            samples = signal.sosfilt(sections, samples)
            response = response * signal.sosfreqz(sections, w)[1]
            for row in sections:
                delay = delay + group_delay(row[:3], row[3:], w)
                radius = max(radius, np.max(np.abs(np.roots(row[3:]))))
            memory += 100
        elif kind >= 3:
            b, a = polynomials(kind, numbers)
            samples = signal.lfilter(b, a, samples)
            response = response * signal.freqz(b, a, w)[1]
            delay = delay + group_delay(b, a, w)
            if any(a[1:]):
                radius = max(radius, np.max(np.abs(np.roots(a))))
            memory += 1000
        else:
            taps = np.array(numbers) if kind == 1 else np.full(int(numbers[0]), 1 / numbers[0])
            samples = signal.lfilter(taps, 1, samples)
            response = response * signal.freqz(taps, 1, w)[1]
            delay = delay + group_delay(taps, [1.0], w)
            memory += len(taps)
    return samples, response, delay, radius, memory


def tails_by_scipy(stages):
    """Sum of |h[n]| from each n on: the first is the L1 norm."""
    impulse = np.zeros(IMPULSE_SAMPLES)
    impulse[0] = 1
    sizes = np.abs(by_scipy(stages, np.array([0.1]), impulse)[0])
    return np.append(np.cumsum(sizes[::-1])[::-1], 0.0)


def main():
    program = sys.argv[1]
    seed = int(sys.argv[2]) if len(sys.argv) > 2 else time.time_ns() % 2**32
    print(f"seed {seed} (repeat with: filters_test.py PROGRAM {seed})")
    rng = np.random.default_rng(seed)
    cases = []
    for name, stages in random_designs(rng):
        memory = by_scipy(stages, np.array([0.1]), np.zeros(1))[4]
        f = rng.uniform(0.01, 0.49, 6)
        step = GROUP_DELAY_STEP / memory
        # 0 and 1/2 are where cancellation is worst; the pairs give a slope of the phase.
        frequencies = np.concatenate([[0.0, 0.5], f, f - step, f + step])
        half_step = 2.0 ** -int(rng.choice([9, 16, 32]))
        cases.append((name, stages, f, step, frequencies, rng.uniform(-1, 1, SAMPLES), half_step))

    message = []
    for _, stages, _, _, frequencies, samples, half_step in cases:
        message.append([len(stages)])
        for kind, numbers in stages:
            message.append([kind, len(numbers), *numbers])
        message += [[len(frequencies)], frequencies, [len(samples)], samples, [half_step]]
    sent = np.concatenate([np.asarray(part, dtype=float) for part in message]).tobytes()
    answer = np.frombuffer(subprocess.run([program], input=sent, capture_output=True, check=True).stdout)

    checks, failures, worst, at = 0, 0, {}, 0

    def check(case, what, deviation, tolerance):
        nonlocal checks, failures
        checks += 1
        ratio = deviation / tolerance
        worst[what] = max(worst.get(what, 0.0), ratio)
        if not ratio <= 1:
            failures += 1
            print(f"FAILED case {case} ({cases[case][0]}): {what} off by {deviation:.3g}, allowed {tolerance:.3g}")

    for number, (name, stages, f, step, frequencies, samples, half_step) in enumerate(cases):
        output = answer[at : at + SAMPLES]
        at += SAMPLES
        pairs = answer[at : at + 2 * len(frequencies)]
        response = pairs[0::2] + 1j * pairs[1::2]
        at += 2 * len(frequencies)
        l1, radius, flush = answer[at : at + 3]
        at += 3
        expected, expected_response, delay, expected_radius, memory = by_scipy(stages, frequencies, samples)
        tails = tails_by_scipy(stages)
        norm = tails[0]
        check(number, "output", np.max(np.abs(output - expected)), TOLERANCE * norm)
        check(number, "response", np.max(np.abs(response - expected_response)), TOLERANCE * norm)
        # np.roots of a double pole is off by the root of 2^-52
        check(number, "pole radius", abs(radius - expected_radius), 1e-7)
        check(number, "L1 norm", abs(l1 - norm), 1e-11 * norm)
        # After N zeros the newest of the past is N + 1 samples old: that sum is below the limit, the one before is not.
        left, one_less = tails[int(flush) + 1], tails[int(flush)]
        check(number, "left after the flush", max(left / half_step - 1, 0), FLUSH_TOLERANCE)
        check(number, "flush longer than need be", max(1 - one_less / half_step, 0) if flush > 0 else 0, FLUSH_TOLERANCE)
        below, above = response[8:14], response[14:20]
        loud = np.abs(expected_response[2:8]) > LOUD * norm
        slope = -np.angle(above / np.where(below == 0, 1, below)) / (2 * np.pi * 2 * step)
        for i in np.flatnonzero(loud):
            check(number, "group delay", abs(slope[i] - delay[2 + i]),
                  group_delay_tolerance(memory, norm / np.abs(expected_response[2 + i])))
    if at != len(answer):
        failures += 1
        print(f"FAILED: {len(answer) - at} numbers too many in the answer")
    for what, ratio in worst.items():
        print(f"{what}: worst deviation {ratio:.3g} of what is allowed")
    print(f"{checks} checks of {len(cases)} designs, {failures} failures")
    return 1 if failures else 0


sys.exit(main())
