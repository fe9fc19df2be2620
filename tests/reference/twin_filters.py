"""Random filters, in the words of a plan, that stay stable with their stored coefficients."""
import math
from fractions import Fraction

import numpy as np
from twin_words import rounded


class Draw:
    def __init__(self, seed):
        self.rng = np.random.default_rng(seed)

    def chance(self, probability):
        return self.rng.random() < probability

    def whole(self, lowest, highest):
        return int(self.rng.integers(lowest, highest + 1))

    def real(self, lowest, highest):
        return float(self.rng.uniform(lowest, highest))

    def one_of(self, choices):
        return choices[self.whole(0, len(choices) - 1)]


def coefficient(draw, lowest, highest):
    """Of every kind that a rounding treats unlike: any double, few digits, a tie at some width."""
    value = draw.real(lowest, highest)
    way = draw.whole(0, 3)
    if way == 0:
        return value
    if way == 1:
        return round(value, 4)
    grid = 2.0 ** draw.whole(3, 14)
    return min(max((math.floor(value * grid) + 0.5) / grid, lowest), highest)


def section(draw):
    radius, angle = draw.real(0.1, 0.93), draw.real(0.0, math.pi)
    if draw.chance(0.7):
        a1, a2 = -2.0 * radius * math.cos(angle), radius * radius
    else:
        p, q = draw.real(-0.93, 0.93), draw.real(-0.93, 0.93)
        a1, a2 = -(p + q), p * q
    scale = draw.one_of([1.0, 1.0, (1.0 + a1 + a2) / 2.0, 0.1])  # some overflow, some do not
    return [coefficient(draw, 0.1, 1.0) * scale, *(coefficient(draw, -1.0, 1.0) * scale for _ in range(2)), a1, a2]


def polynomial(draw, order):
    """a of a product of first-order poles, so that it is stable with room for rounding."""
    a = np.array([1.0])
    for _ in range(order):
        a = np.convolve(a, [1.0, draw.real(-0.75, 0.75)])
    return [1.0] + [float(c) for c in a[1:]]


def words_of(draw, kind):
    if kind in ("fir", "fir-decimator", "fir-interpolator"):
        count, words = draw.one_of([1, 2, 3, 7, 12, 24]), {}
        if kind != "fir":
            words["factor"] = draw.whole(2, 5)
            if kind == "fir-decimator" and draw.chance(0.7):
                words["phase_samples"] = draw.whole(0, words["factor"] - 1)
            if kind == "fir-interpolator":
                count = words["factor"] * draw.whole(1, 5)
        size = draw.one_of([1.0, 2.0 / count, 1.0 / count])
        return {"taps": [0.7 * size] + [coefficient(draw, -1.0, 1.0) * size for _ in range(count - 1)]} | words
    if kind == "moving-average":
        return {"points": draw.one_of([1, 2, 3, 5, 8, 12, 16, 25, 32])}
    if kind == "one-pole":
        if draw.chance(0.5):
            return {"shift_bits": draw.whole(0, 8)}
        return {"coefficient": coefficient(draw, 0.03, 0.97)}
    if kind == "comb":
        return {"delay_samples": draw.whole(1, 24), "direct": coefficient(draw, -1.0, 1.0) or 0.5,
                "forward": coefficient(draw, 0.05, 1.0), "feedback": coefficient(draw, -0.9, 0.9)}  # fmt: skip
    if kind == "biquad-cascade":
        return {"sections": [section(draw) for _ in range(draw.whole(1, 3))]}
    if kind == "dc-blocker":
        return {"pole": draw.real(0.3, 0.98), "gain": draw.one_of(["plain", "unity-at-nyquist"])}
    if kind == "iir":
        order = draw.whole(1, 4)
        b = [coefficient(draw, 0.1, 1.0)] + [coefficient(draw, -1.0, 1.0) for _ in range(draw.whole(0, 4))]
        return {"b": b, "a": polynomial(draw, order)}
    if kind == "median":
        return {"points": draw.whole(1, 9)}
    words = {"order": draw.whole(1, 4), "factor": draw.whole(2, 8), "delay_samples": draw.whole(1, 2)}
    if draw.chance(0.5):
        words["shift_bits"] = draw.whole(0, 8)
    if kind == "cic-decimator" and draw.chance(0.7):
        words["phase_samples"] = draw.whole(0, words["factor"] - 1)
    return words


def coefficients_of(kind, words):
    """(forward, feedback a) of each sum, as designed."""
    if "taps" in words:
        return [(words["taps"], [])]
    if kind == "comb":
        return [([words["direct"], words["forward"]], [words["feedback"]])]
    if kind == "biquad-cascade":
        return [(row[:3], row[3:]) for row in words["sections"]]
    if kind == "dc-blocker":
        gain = 0.5 * (1.0 + words["pole"]) if words["gain"] == "unity-at-nyquist" else 1.0
        return [([gain, -gain], [-words["pole"]])]
    if kind == "iir":
        return [(words["b"], words["a"][1:])]
    if kind == "one-pole" and "coefficient" in words:
        return [([words["coefficient"]], [words["coefficient"] - 1.0])]
    return []


def is_stable(a):
    return len(a) == 0 or bool(np.all(np.abs(np.roots([1.0, *a])) < 0.98))


def stays_sound(kind, words, f, rounding, added):
    """With stored coefficients it is stable and passes something."""
    sign = -1 if added else 1
    for b, a in coefficients_of(kind, words):
        stored = [rounded(Fraction(c) * 2**f, rounding) * 2.0**-f for c in b]
        back = [sign * rounded(sign * Fraction(c) * 2**f, rounding) * 2.0**-f for c in a]
        poles = [0.0] * (words["delay_samples"] - 1) + back if kind == "comb" else back
        if not any(stored) or not is_stable(poles) or (kind == "comb" and (not stored[1] or abs(back[0]) >= 0.99)):
            return False
        if kind == "one-pole" and not 0.0 < stored[0] <= 1.0:
            return False
    return True
