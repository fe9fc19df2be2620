"""Designs from a specification and closed forms against SciPy: random designs, seeds printed.

Butterworth and Chebyshev: butter and cheby1 as zeros and poles, and their second-order sections where the pairing is the
same. Windowed sinc: firwin. Cookbook sections: the analogue prototypes of the note through scipy.signal.bilinear.
Weightings: poles through bilinear_zpk. Octave bands: butter between the exact edges. Closed forms: group_delay, unwrap,
sums over sosfilt.

Responses agree within 1e-12 of the peak where the poles keep away from the circle. Nearer to it, a double in a1 or a2
moves the response by up to LOSS, the bound of oracle/filters/section_loss.hpp, computed here again; SciPy's poles move
by as much.
"""
import subprocess
import sys
import time
import warnings

import numpy as np
from scipy import signal

DESIGNS_PER_KIND = 250
TOLERANCE = 1e-12
RESPONSES = ["lowpass", "highpass", "bandpass", "bandstop"]
WINDOWS = ["boxcar", "hann", "hamming", "blackman", "kaiser"]
EQ_TYPES = ["low-pass", "high-pass", "band-pass", "band-pass-skirt", "all-pass", "peaking", "low-shelf", "high-shelf"]
FREQUENCIES = 65
IMPULSE_SAMPLES = 30000
G = 10**0.3
PI = 4 * np.arctan(np.longdouble(1))


def random_rate(rng):
    return float(rng.choice([1200.0, 8000.0, 44100.0, 48000.0, 10 ** rng.uniform(0, 6)]))


def random_band(rng, rate, least, width):
    """Lower and upper corner in Hz, both between `least` and 1/2 - least cycles, `width` cycles apart or more."""
    low = rng.uniform(least, 0.5 - least - width)
    return low * rate, rng.uniform(low + width, 0.5 - least) * rate


def recursive(rng, kind, least, width, orders=12):
    rate = random_rate(rng)
    response = int(rng.integers(0, 4))
    order = int(rng.integers(1, orders + 1)) if response < 2 else int(rng.integers(1, orders // 2 + 1))
    lower, upper = random_band(rng, rate, least, width)
    ripple = [10 ** rng.uniform(-2, 0.5)] if kind == 1 else []
    return kind, [response, order, lower, upper, *ripple], rate


def windowed(rng):
    """Taps enough that something passes where the gain should be 1: a designer is refused what does not."""
    while True:
        design = any_windowed(rng)
        response, _, lower, upper = design[1][:4]
        at = [0.0, 1.0, (lower + upper) / design[2], 0.0][response]  # where firwin scales, in units of half the rate
        unscaled = scipy_taps(design[1], design[2], scale=False)
        if np.sum(unscaled * np.cos(np.pi * at * (np.arange(len(unscaled)) - (len(unscaled) - 1) / 2))) > 0.01:
            return design


def any_windowed(rng):
    rate = random_rate(rng)
    response = int(rng.integers(0, 4))
    taps = int(rng.integers(3, 300))
    if response in (1, 3):
        taps |= 1
    if response == 2:
        taps += 20
    lower, upper = random_band(rng, rate, 0.01, 0.1)
    return 2, [response, taps, lower, upper, int(rng.integers(0, 5)), rng.uniform(0, 14)], rate


def equaliser(rng):
    rate = random_rate(rng)
    kind = int(rng.integers(0, 8))
    ways = [0] + ([1] if kind in (2, 3, 4, 5) else []) + ([2] if kind >= 6 else [])
    way = int(rng.choice(ways))
    width = [10 ** rng.uniform(-1, 1), rng.uniform(0.1, 3), rng.uniform(0.1, 1)][way]
    return 3, [kind, rng.uniform(0.02, 0.45) * rate, way, width, rng.uniform(-20, 20)], rate


def octave(rng):
    fraction, order = int(rng.integers(1, 25)), int(rng.integers(1, 7))
    index = int(rng.integers(-4 * fraction, 4 * fraction + 1))
    middle = 1000 * G ** (index / fraction if fraction % 2 else (2 * index + 1) / (2 * fraction))
    return 5, [fraction, middle, order], middle * G ** (1 / (2 * fraction)) * 10 ** rng.uniform(0.35, 1.5)


def random_sections(rng):
    rows = []
    for _ in range(rng.integers(1, 7)):
        if rng.random() < 0.7:
            radius, angle = rng.uniform(0.1, 0.95), rng.uniform(0, np.pi)
            a = [-2 * radius * np.cos(angle), radius**2]
        else:
            p, q = rng.uniform(-0.95, 0.95, 2)
            a = [-(p + q), p * q]
        b = rng.uniform(-1, 1, 3)
        if rng.random() < 0.2:
            b[2] = 0.0
        rows.append([*b, *a])
    return 6, list(np.ravel(rows)), 1.0


def random_taps(rng):
    return 7, list(rng.uniform(-1, 1, rng.integers(2, 60))), 1.0


def symmetric_taps(rng):
    half, sign = rng.uniform(-1, 1, rng.integers(1, 30)), rng.choice([-1, 1])
    middle = [rng.uniform(-1, 1)] if sign == 1 and rng.random() < 0.5 else []
    return 7, [*half, *middle, *(sign * half[::-1])], 1.0


def random_comb(rng):
    return 8, [float(rng.integers(1, 20)), *rng.uniform(-1, 1, 2), rng.uniform(-0.9, 0.9)], 1.0


def random_average(rng):
    return 9, [float(rng.integers(1, 40))], 1.0


def random_designs(rng):
    for _ in range(DESIGNS_PER_KIND):
        yield "butterworth", recursive(rng, 0, 0.06, 0.1)
        yield "chebyshev", recursive(rng, 1, 0.08, 0.12, 10)
        yield "butterworth near the ends", recursive(rng, 0, 1e-4, 1e-3)
        yield "chebyshev near the ends", recursive(rng, 1, 1e-3, 1e-2)
        yield "windowed-sinc", windowed(rng)
        yield "audio-eq", equaliser(rng)
        yield "weighting", (4, [int(rng.integers(0, 3))], float(rng.choice([44100.0, 48000.0, 96000.0, rng.uniform(3400, 2e5)])))
        yield "octave-band", octave(rng)
        yield "sections", random_sections(rng)
        yield "fir", random_taps(rng)
        yield "symmetric fir", symmetric_taps(rng)
        yield "comb", random_comb(rng)
        yield "moving-average", random_average(rng)


def zpk_response(zpk, f):
    return signal.freqz_zpk(*zpk, 2 * np.pi * f)[1]


def fine_response(b, a, f):
    """In 64 bits and more: polynomials lose 1e-16 over |A| near z = 1 and z = -1, which is what is asked about."""
    turn = np.exp(-2j * np.pi * f.astype(np.longdouble))
    above, below = (sum(np.longdouble(c) * turn**k for k, c in enumerate(p)) for p in (b, a))
    return (above / below).astype(complex)


def corners(numbers, rate):
    response, order, lower, upper = numbers[:4]
    return RESPONSES[int(response)], int(order), lower if response < 2 else [lower, upper], rate


def eq_by_bilinear(numbers, rate):
    """The note's H(s), Q from whichever width, through scipy.signal.bilinear at the warped frequency; in 64 bits and more."""
    kind, way = int(numbers[0]), int(numbers[2])
    frequency, width, gain_db = np.array(numbers, dtype=np.longdouble)[[1, 3, 4]]
    name, A, w0 = EQ_TYPES[kind], 10 ** (gain_db / 40) if kind >= 5 else np.longdouble(1), 2 * PI * frequency / np.longdouble(rate)
    if way == 0:
        q = width
    elif way == 1:
        q = 1 / (2 * np.sinh(np.log(np.longdouble(2)) / 2 * width * w0 / np.sin(w0)))
    else:
        q = 1 / np.sqrt((A + 1 / A) * (1 / width - 1) + 2)
    r = np.sqrt(A) / q
    b, a = {
        "low-pass": ([0, 0, 1], [1, 1 / q, 1]),
        "high-pass": ([1, 0, 0], [1, 1 / q, 1]),
        "band-pass": ([0, 1 / q, 0], [1, 1 / q, 1]),
        "band-pass-skirt": ([0, 1, 0], [1, 1 / q, 1]),
        "all-pass": ([1, -1 / q, 1], [1, 1 / q, 1]),
        "peaking": ([1, A / q, 1], [1, 1 / (A * q), 1]),
        "low-shelf": ([A, A * r, A * A], [A, r, 1]),
        "high-shelf": ([A * A, A * r, A], [1, r, A]),
    }[name]
    # s -> (1 - z^-1) / (1 + z^-1) / tan(w0 / 2) on coefficients of s^2, s, 1
    t = np.tan(w0 / 2)

    def moved(p):
        p2, p1, p0 = p[0] / t**2, p[1] / t, p[2]
        return np.array([p2 + p1 + p0, 2 * (p0 - p2), p2 - p1 + p0], dtype=np.longdouble)

    b, a = moved(b), moved(a)
    check = signal.bilinear([1, 0.3], [1, 0.5, 2], fs=float(0.5 / t))  # the same transform, SciPy's own
    own_b, own_a = moved([0, 1, 0.3]), moved([1, 0.5, 2])
    assert np.allclose(check[0], own_b / own_a[0], atol=1e-13) and np.allclose(check[1], own_a / own_a[0], atol=1e-13)
    return b / a[0], a / a[0]


def weighting_zpk(curve, rate):
    fL, fH, fA, D = 10**1.5, 10**3.9, 10**2.45, np.sqrt(0.5)
    c = (fL * fH) ** 2
    b = (1e6 + c / 1e6 - D * (fL**2 + fH**2)) / (1 - D)
    f4 = np.sqrt((-b + np.sqrt(b * b - 4 * c)) / 2)
    f1 = fL * fH / f4  # the other root of the standard's equation, which loses five digits as a difference
    f2, f3 = (3 - np.sqrt(5)) / 2 * fA, (3 + np.sqrt(5)) / 2 * fA
    poles = [f1, f1, f4, f4] + ([f2, f3] if curve == 0 else [])
    z, p, k = signal.bilinear_zpk([0] * (4 if curve == 0 else 2), -2 * np.pi * np.array(poles), 1.0, rate)
    return z, p, k / abs(zpk_response((z, p, k), np.array([1000 / rate]))[0])


def k_weighting(rate):
    if rate == 48000:
        return np.array([[1.53512485958697, -2.69169618940638, 1.19839281085285, 1, -1.69065929318241, 0.73248077421585],
                         [1, -2, 1, 1, -1.99004745483398, 0.99007225036621]])
    k, q, high = np.tan(np.pi * 1681.974450955533 / rate), 0.7071752369554196, 10 ** (3.999843853973347 / 20)
    band, a0 = high**0.4996667741545416, 1 + k / q + k * k
    rows = [[(high + band * k / q + k * k) / a0, 2 * (k * k - high) / a0, (high - band * k / q + k * k) / a0, 1,
             2 * (k * k - 1) / a0, (1 - k / q + k * k) / a0]]
    q = 0.5003270373238773
    k, k48 = (np.tan(np.pi * 38.13547087602444 / r) for r in (rate, 48000))
    a0 = 1 + k / q + k * k
    gain = (1 + k48 / q + k48 * k48) / a0
    rows.append([gain, -2 * gain, gain, 1, 2 * (k * k - 1) / a0, (1 - k / q + k * k) / a0])
    return np.array(rows)


def expected_response(kind, numbers, rate, f):
    if kind == 0:
        shape, order, edges, _ = corners(numbers, rate)
        return zpk_response(signal.butter(order, edges, shape, fs=rate, output="zpk"), f)
    if kind == 1:
        shape, order, edges, _ = corners(numbers, rate)
        return zpk_response(signal.cheby1(order, numbers[4], edges, shape, fs=rate, output="zpk"), f)
    if kind == 3:
        return fine_response(*eq_by_bilinear(numbers, rate), f)
    if kind == 4 and numbers[0] < 2:
        return zpk_response(weighting_zpk(numbers[0], rate), f)
    if kind == 4:
        return np.prod([fine_response(row[:3], row[3:], f) for row in k_weighting(rate)], axis=0)
    fraction, middle, order = numbers
    edges = [middle * G ** (-1 / (2 * fraction)), middle * G ** (1 / (2 * fraction))]
    return zpk_response(signal.butter(order, edges, "bandpass", fs=rate, output="zpk"), f)


def scipy_taps(numbers, rate, scale=True):
    response, count, lower, upper, window, beta = numbers
    named = ("kaiser", beta) if window == 4 else WINDOWS[int(window)]
    return signal.firwin(int(count), lower if response < 2 else [lower, upper], window=named,
                         pass_zero=RESPONSES[int(response)], fs=rate, scale=scale)


def scipy_sections(kind, numbers, rate):
    """None where our pairing is another one: SciPy gives a section of odd low-passes and high-passes a zero at 0."""
    shape, order, edges, _ = corners(numbers, rate)
    if numbers[0] < 2 and order % 2 == 1 and order > 1:
        return None
    if kind == 0:
        return signal.butter(order, edges, shape, fs=rate, output="sos")
    return signal.cheby1(order, numbers[4], edges, shape, fs=rate, output="sos")


def loss_of(sections):
    """Half an ulp of a1 and of a2 over the least |A| on the circle, summed over the sections."""
    loss = 0.0
    turn = np.exp(-1j * np.linspace(0, np.pi, 20001))
    for _, _, _, a1, a2 in sections:
        at = np.concatenate([turn, [np.exp(1j * np.angle(r)) for r in np.roots([1, a1, a2])]])
        least = np.min(np.abs(1 + a1 * at + a2 * at**2))
        loss += (np.spacing(abs(a1)) + np.spacing(abs(a2))) / 2 / max(least, 1e-300)
    return loss


def cancellation_of(sections):
    """SciPy makes two poles of one by p/2 +- sqrt(p^2/4 - w0^2): of a pair on the real axis that lies far apart the lesser
    one is a difference, off by 2^-53 of the greater (once for each square root, square and difference: 4). A pole that
    is off by a part of itself moves the response by that part at most."""
    worst = 0.0
    for _, _, _, a1, a2 in sections:
        z = np.roots([1, a1, a2])
        if len(z) == 2 and np.all(np.isreal(z)):
            s = np.abs((z - 1) / (z + 1))
            worst += 4 * 2.0**-53 * np.max(s) / np.min(s)
    return worst


def rounding_of_impulse(sections):
    """Bounds of what rounding does to the impulse response of a cascade, as sum of squares' root and as sum of sizes.

    A section makes at most 9 roundings a sample, each by 2^-53 of no more than what all its products add up to. Such an
    error passes 1/A of its section and the sections behind it, which multiply either norm by their sum |h| at most.
    """
    bounds = np.zeros(2)
    x = np.eye(1, IMPULSE_SAMPLES)[0]
    for number, row in enumerate(sections):
        y = signal.sosfilt(row[np.newaxis], x)
        path = signal.lfilter([1.0], row[3:], np.eye(1, IMPULSE_SAMPLES)[0])
        for later in sections[number + 1 :]:
            path = signal.sosfilt(later[np.newaxis], path)
        for which, norm in enumerate((np.linalg.norm, lambda v: np.sum(np.abs(v)))):
            products = np.sum(np.abs(row[:3])) * norm(x) + np.sum(np.abs(row[4:])) * norm(y)
            bounds[which] += np.sum(np.abs(path)) * 9 * 2.0**-53 * products
        x = y
    return bounds


def group_delay(b, a, w):
    with warnings.catch_warnings(), np.errstate(divide="ignore", invalid="ignore"):
        warnings.simplefilter("ignore", UserWarning)
        return signal.group_delay((b, a), w)[1]


def as_sos(sections):
    return np.column_stack([sections[:, :3], np.ones(len(sections)), sections[:, 3:]])


def factor_phase(zero, w):
    """Continuous phase of 1 - zero z^-1; on the circle it jumps, and is not asked for."""
    if abs(zero) <= 1:
        return np.angle(1 - zero * np.exp(-1j * w))
    return np.angle(-zero) - w + np.angle(1 - np.exp(1j * w) / zero)


def polynomial_phase(p, w):
    """Of p[0] + p[1] z^-1 + ...; None where a zero is too near to the circle for np.roots to tell its side."""
    delay = next(i for i, value in enumerate(p) if value != 0)
    p = p[delay:]
    zeros = np.roots(p)
    if np.any(np.abs(np.abs(zeros) - 1) < 1e-4):
        return None
    return np.angle(p[0]) - delay * w + sum((factor_phase(zero, w) for zero in zeros), np.zeros(len(w)))


def phase_by_roots(kind, numbers, sections, w):
    factors = [b_and_a(kind, numbers)] if kind != 6 else [(row[:3], np.array([1, *row[3:]])) for row in sections]
    total = np.zeros(len(w))
    for b, a in factors:
        above, below = polynomial_phase(b, w), polynomial_phase(a, w)
        if above is None or below is None:
            return None
        total = total + above - below
    return total


def b_and_a(kind, numbers):
    """Of kinds 7 .. 9."""
    if kind == 8:
        delay, direct, forward, feedback = numbers
        gap = np.zeros(int(delay) - 1)
        return np.array([direct, *gap, forward]), np.array([1.0, *gap, feedback])
    return (np.array(numbers) if kind == 7 else np.full(int(numbers[0]), 1 / numbers[0])), np.ones(1)


def main():
    program = sys.argv[1]
    seed = int(sys.argv[2]) if len(sys.argv) > 2 else time.time_ns() % 2**32
    print(f"seed {seed} (repeat with: designs_test.py PROGRAM {seed})")
    rng = np.random.default_rng(seed)
    cases = [(name, *design) for name, design in random_designs(rng)]
    message = []
    grids = []
    for _, kind, numbers, rate in cases:
        f = np.sort(np.concatenate([[0.0, 0.5], rng.uniform(0, 0.5, FREQUENCIES - 2)]))
        if kind == 5:  # the band itself, and around
            f = np.sort(np.concatenate([[0.0], np.minimum(numbers[1] / rate * 2 ** rng.uniform(-2, 2, FREQUENCIES - 1), 0.5)]))
        if kind >= 6:
            f = np.linspace(0, 0.5, 1001)
        grids.append(f)
        message += [[kind, len(numbers)], numbers, [rate, len(f)], f]
    sent = np.concatenate([np.asarray(part, dtype=float) for part in message]).tobytes()
    answer = np.frombuffer(subprocess.run([program], input=sent, stdout=subprocess.PIPE, check=True).stdout)

    checks, failures, worst, at = 0, 0, {}, 0

    def check(case, what, deviation, tolerance):
        nonlocal checks, failures
        checks += 1
        ratio = np.max(np.asarray(deviation) / np.asarray(tolerance))
        key = f"{cases[case][0]}: {what}"
        worst[key] = max(worst.get(key, 0.0), ratio)
        if not ratio <= 1:
            failures += 1
            if failures <= 30:
                print(f"FAILED case {case} ({cases[case][0]}, {str(cases[case][2:])[:200]}): {what} off by {ratio:.3g} of what is allowed")

    for number, (name, kind, numbers, rate) in enumerate(cases):
        f = grids[number]
        count = int(answer[at])
        coefficients = answer[at + 1 : at + 1 + count]
        at += 1 + count
        table = answer[at : at + 4 * len(f)].reshape(-1, 4)
        at += 4 * len(f)
        noise, positive, negative = answer[at : at + 3]
        at += 3
        response, delay, phase = table[:, 0] + 1j * table[:, 1], table[:, 2], table[:, 3]
        is_recursive = kind in (0, 1, 3, 4, 5, 6)
        sections = coefficients.reshape(-1, 5) if is_recursive else None
        loss = loss_of(sections) if is_recursive else 0.0
        if kind == 2:
            taps = scipy_taps(numbers, rate)
            check(number, "taps", np.max(np.abs(coefficients - taps)), TOLERANCE * np.max(np.abs(taps)))
            check(number, "response", np.max(np.abs(response - signal.freqz(taps, 1, 2 * np.pi * f)[1])),
                  TOLERANCE * np.sum(np.abs(taps)))
        elif kind < 6:
            expected = expected_response(kind, numbers, rate, f)
            peak = max(1.0, np.max(np.abs(expected)))
            # At 1e-12 where coefficients cannot do more harm; elsewhere ours and SciPy's, with its own corners of
            # some ulps: four times the bound. A cookbook section is compared with a longer word, so only ours counts:
            # up to 6 roundings make a coefficient (a sum, root added, the same for a0, the quotient, the gain), each
            # by 2^-53 of it, which is up to an ulp, two of LOSS; in the numerator and in the denominator.
            strict = name in ("butterworth", "chebyshev")
            tolerance = TOLERANCE if strict else TOLERANCE + (24 if kind == 3 else 4) * loss
            if kind < 2 and not strict:
                tolerance += cancellation_of(sections)
            check(number, "response", np.max(np.abs(response - expected)), tolerance * peak)
            if kind < 2 and strict and (rows := scipy_sections(kind, numbers, rate)) is not None:
                assert np.all(rows[:, 3] == 1)
                check(number, "sections", np.max(np.abs(sections[:, 3:] - rows[:, 4:])), TOLERANCE)
                gain = np.max(np.abs(rows[0, :3]))
                check(number, "first numerator", np.max(np.abs(sections[0, :3] - rows[0, :3])), TOLERANCE * 10 * gain)
                check(number, "other numerators", np.max(np.abs(sections[1:, :3] - rows[1:, :3]), initial=0), TOLERANCE)
            if kind == 3:
                b, a = eq_by_bilinear(numbers, rate)
                check(number, "coefficients", np.max(np.abs(sections[0] - [*b, *a[1:]])), TOLERANCE * np.max(np.abs([*b, *a])))
            if kind == 4 and rate == 48000 and numbers[0] == 2:
                check(number, "table", np.max(np.abs(as_sos(sections) - k_weighting(rate))), 1e-300)
        # Closed forms, of what was designed too.
        w = 2 * np.pi * f
        peak = np.max(np.abs(response))
        # Phase: of the response itself, and continuous. The response strays by 2^-52 of the sum of sizes.
        loud = np.abs(response) > 1e-6 * peak
        turned = np.abs(np.exp(1j * phase) - response / np.where(loud, np.abs(response), 1))[loud]
        check(number, "phase", turned, (1e-12 + loss) * peak / np.abs(response[loud]) + 1e-14 * np.abs(phase[loud]))
        if kind >= 6:
            if kind == 6:
                scipy_delay = sum(group_delay(row[:3], row[3:], w) for row in as_sos(sections))
                by_hand = signal.sosfilt(as_sos(sections), np.eye(1, IMPULSE_SAMPLES)[0])
            else:
                b, a = b_and_a(kind, numbers)
                scipy_delay = group_delay(b, a, w)
                by_hand = signal.lfilter(b, a, np.eye(1, IMPULSE_SAMPLES)[0])
            # SciPy's delay is a quotient of sums that cancel near zeros: of each factor its condition, |b|_1 over |B|.
            if kind == 6:
                condition = sum(np.sum(np.abs(row[:3])) / np.abs(signal.freqz(row[:3], 1, w)[1]) +
                                np.sum(np.abs(row[3:])) / np.abs(signal.freqz(row[3:], 1, w)[1]) for row in as_sos(sections))
            else:
                condition = np.sum(np.abs(b)) / np.maximum(np.abs(signal.freqz(b, 1, w)[1]), 1e-30) + \
                    np.sum(np.abs(a)) / np.abs(signal.freqz(a, 1, w)[1])
            usable = condition < 1e4
            size = np.maximum(np.abs(scipy_delay), 1)
            memory = 2 if kind == 6 else max(len(b), len(a))
            check(number, "group delay", np.abs(delay - scipy_delay)[usable],
                  (TOLERANCE * condition * memory * np.maximum(1, size / memory))[usable])
            unwrapped = phase_by_roots(kind, numbers, sections, w)
            if unwrapped is not None:
                clear = np.abs(response) > 1e-3 * peak
                apart = (phase - unwrapped)[clear]
                check(number, "unwrapped phase", np.max(np.abs(apart - apart[0])), 1e-3)
                check(number, "turns at the start", abs(apart[0] / (2 * np.pi) - round(apart[0] / (2 * np.pi))), 1e-3)
            # Both responses may stray by that bound, and a square by twice as much.
            rounding, rounding_l1 = 2 * (rounding_of_impulse(as_sos(sections)) if kind == 6 else np.zeros(2))
            total = np.sum(by_hand**2)
            check(number, "noise gain", abs(noise - total), 1e-12 * total + 2 * np.sqrt(total) * rounding)
            l1 = np.sum(np.abs(by_hand))
            check(number, "signed sums", max(abs(positive - np.sum(by_hand[by_hand > 0])), abs(negative - np.sum(by_hand[by_hand < 0]))),
                  1e-11 * l1 + rounding_l1)
    if at != len(answer):
        failures += 1
        print(f"FAILED: {len(answer) - at} numbers too many in the answer")
    for what, ratio in worst.items():
        print(f"{what}: worst deviation {ratio:.3g} of what is allowed")
    print(f"{checks} checks of {len(cases)} designs, {failures} failures")
    return 1 if failures else 0


sys.exit(main())
