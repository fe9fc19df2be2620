"""Recursions by b and a against SciPy's lfilter and against arithmetic of fifty digits (mpmath).

At order 12 and a low corner two right programs in double precision differ by 1e-4 of the output: there lfilter is held
to the bound of a plain recursion's loss, and ours, which carries twice the digits, to its own bound against the fifty
digits.
"""
import subprocess
import sys
import time
import warnings

import mpmath
import numpy as np
from scipy import signal

DESIGNS = 250
SAMPLES = 300
# Of the peak: the closed form's point on the circle has an error of 1e-16 of the frequency, and a resonance of
# some 1e-3 in width makes 1e-13 of it.
RESPONSE_TOLERANCE = 1e-12
# Poles that SciPy puts 1e-2 apart and more, eleven of them around each: 1e-32 / 1e-22 of the radius.
RADIUS_TOLERANCE = 1e-9
mpmath.mp.dps = 50


def random_design(rng):
    """b and a as design programs print them, orders 1 to 12, also with a[0] other than 1."""
    order = int(rng.integers(1, 13))
    way = int(rng.integers(0, 5))
    corner = 10 ** rng.uniform(-1.3, -0.05)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # SciPy warns of badly conditioned b and a: that is what is looked for
        if way == 0:
            b, a = signal.butter(order, corner)
        elif way == 1:
            b, a = signal.cheby1(order, rng.uniform(0.1, 3), corner, "high")
        elif way == 2:
            b, a = signal.ellip(order, rng.uniform(0.1, 3), rng.uniform(40, 90), corner)
        elif way == 3:
            low = rng.uniform(0.05, 0.6)
            b, a = signal.butter(max(order // 2, 1), [low, low + rng.uniform(0.1, 0.3)], "bandpass")
        else:
            pairs = rng.uniform(0.2, 0.97, order // 2) * np.exp(1j * rng.uniform(0, np.pi, order // 2))
            poles = np.concatenate([pairs, pairs.conj(), rng.uniform(-0.97, 0.97, order % 2)])
            b, a = rng.uniform(-1, 1, rng.integers(1, order + 2)), np.real(np.poly(poles))
    return b, a


def exactly(b, a, samples):
    """The recursion in fifty digits."""
    b, a = [mpmath.mpf(float(v)) for v in b], [mpmath.mpf(float(v)) for v in a]
    x, y = [mpmath.mpf(float(v)) for v in samples], []
    for n in range(len(x)):
        terms = [(b[k], x[n - k]) for k in range(min(len(b), n + 1))]
        terms += [(-a[k], y[n - k]) for k in range(1, min(len(a), n + 1))]
        y.append(mpmath.fdot(terms))
    return y


def response_exactly(b, a, f):
    z = mpmath.expjpi(-2 * mpmath.mpf(float(f)))
    return mpmath.polyval([float(v) for v in b[::-1]], z) / mpmath.polyval([float(v) for v in a[::-1]], z)


def radius_exactly(a):
    roots = mpmath.polyroots([mpmath.mpf(float(v)) for v in a], maxsteps=500, extraprec=400)
    return float(max(abs(root) for root in roots)) if roots else 0.0


def main():
    program = sys.argv[1]
    seed = int(sys.argv[2]) if len(sys.argv) > 2 else time.time_ns() % 2**32
    print(f"seed {seed} (repeat with: recursions_test.py PROGRAM {seed})")
    rng = np.random.default_rng(seed)
    cases, message = [], []
    while len(cases) < DESIGNS:
        b, a = random_design(rng)
        # The tables are normalised as the catalogue does it.
        scale = rng.choice([1.0, rng.uniform(0.3, 3)])
        b, a = b * scale / (a[0] * scale), a * scale / (a[0] * scale)
        f = np.concatenate([[0.0, 0.5], rng.uniform(0, 0.5, 4)])
        samples = rng.uniform(-1, 1, SAMPLES)
        cases.append((b, a, f, samples))
        message += [[1, 7, 1 + len(b) + len(a), len(b)], b, a, [len(f)], f, [SAMPLES], samples, [2.0**-16]]
    sent = np.concatenate([np.asarray(part, dtype=float) for part in message]).tobytes()
    answer = np.frombuffer(subprocess.run([program], input=sent, capture_output=True, check=True).stdout)

    checks, failures, worst, at, unstable, far_apart = 0, 0, {}, 0, 0, 0.0

    def check(case, what, deviation, tolerance):
        nonlocal checks, failures
        checks += 1
        ratio = float(deviation / tolerance)
        worst[what] = max(worst.get(what, 0.0), ratio)
        if not ratio <= 1:
            failures += 1
            print(f"FAILED case {case}: {what} off by {float(deviation):.3g}, allowed {float(tolerance):.3g}")

    for number, (b, a, f, samples) in enumerate(cases):
        radius = radius_exactly(a)
        stable = answer[at] == 1.0
        at += 1
        check(number, "stability", 0 if stable == (radius < 1) else 1, 0.5)
        if not stable:
            unstable += 1
            check(number, "pole radius", abs(answer[at] - radius), RADIUS_TOLERANCE)
            at += 1
            continue
        output = answer[at : at + SAMPLES]
        at += SAMPLES
        pairs = answer[at : at + 2 * len(f)]
        response = pairs[0::2] + 1j * pairs[1::2]
        at += 2 * len(f)
        norm, our_radius, _, plain_loss, carried_loss = answer[at : at + 5]
        at += 5
        check(number, "pole radius", abs(our_radius - radius), RADIUS_TOLERANCE)
        exact = exactly(b, a, samples)
        check(number, "output", max(abs(float(o - e)) for o, e in zip(output, exact)), carried_loss)
        # In the transposed form each partial sum is rounded once more.
        theirs = signal.lfilter(b, a, samples)
        apart = np.max(np.abs(theirs - output))
        far_apart = max(far_apart, apart / norm)
        check(number, "lfilter", apart, 2 * plain_loss)
        check(number, "own loss, of 1e-12 of the norm", carried_loss, 1e-12 * norm)
        for ours, at_f in zip(response, f):
            check(number, "response", abs(complex(ours) - complex(response_exactly(b, a, at_f))), RESPONSE_TOLERANCE * norm)
        if radius < 0.9:
            impulse = exactly(b, a, np.eye(1, 600)[0])
            expected = float(mpmath.fsum(abs(h) for h in impulse))
            check(number, "L1 norm", abs(norm - expected), 1e-11 * expected)
    if at != len(answer):
        failures += 1
        print(f"FAILED: {len(answer) - at} numbers too many in the answer")
    for what, ratio in worst.items():
        print(f"{what}: worst deviation {ratio:.3g} of what is allowed")
    print(f"lfilter and ours were up to {far_apart:.3g} of the norm apart; {unstable} designs are unstable as b and a")
    print(f"{checks} checks of {len(cases)} designs, {failures} failures")
    return 1 if failures else 0


sys.exit(main())
