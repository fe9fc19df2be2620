"""Stages in IEEE 754 binary32, one class a structure of docs/arithmetic.md. Separate operations are NumPy's float32; a
fused one is exact in whole numbers and rounded once, here.

step(x) takes a float32 and gives the list of float32 that come of it.
"""
import math
from collections import deque
from fractions import Fraction

import numpy as np
from twin_words import half_even, held, rounded

F32 = np.float32


def float_of(numerator, exponent):
    """numerator 2^exponent, not 0, to the nearest float32, ties to even."""
    lowest = max(numerator.bit_length() + exponent - 24, -149)  # the last place of the result
    if lowest <= exponent:
        units = numerator << (exponent - lowest)
    else:
        units = half_even(abs(numerator), 1 << (lowest - exponent))
        units = -units if numerator < 0 else units
    if abs(units).bit_length() + lowest > 128:
        return F32(math.copysign(math.inf, numerator))
    if units == 0:
        return F32(math.copysign(0.0, numerator))
    return F32(math.ldexp(units, lowest))


def float32_of(value):
    """A double (or a whole number) to the nearest float32."""
    return F32(value)


def parts(value):
    """A finite float32 as whole number and exponent of 2."""
    mantissa, exponent = math.frexp(float(value))
    return int(math.ldexp(mantissa, 24)), exponent - 24


def fused(a, b, c):
    """a b + c, rounded once."""
    if not (np.isfinite(a) and np.isfinite(b) and np.isfinite(c)):
        return F32(float(a) * float(b) + float(c))
    (m, e), (n, f), (o, g) = parts(a), parts(b), parts(c)
    lowest = min(e + f, g)
    total = (m * n << (e + f - lowest)) + (o << (g - lowest))
    if total == 0:  # exactly: the sign is that of a sum in any precision
        return F32(float(a) * float(b) + float(c)) if m * n == 0 and o == 0 else F32(0.0)
    return float_of(total, lowest)


class Operations:
    def __init__(self, fuses):
        self.fuses = fuses

    def add_product(self, total, a, b):
        return fused(a, b, total) if self.fuses else total + a * b

    def sum(self, products):
        """The first product is rounded as such: nothing is added to it."""
        (a, b), *rest = products
        total = a * b
        for a, b in rest:
            total = self.add_product(total, a, b)
        return total


class Coefficients:
    def __init__(self, stage):
        self.f, self.rounding = stage.coefficient_fraction_bits, stage.coefficient_rounding

    def __call__(self, coefficient):
        if self.f is not None:
            coefficient = rounded(Fraction(coefficient) * 2**self.f, self.rounding) * 2.0**-self.f
        return float32_of(coefficient)

    def negated(self, coefficient):
        return self(-coefficient)


class Fir:
    def __init__(self, stage):
        self.stage, self.op = stage, Operations(stage.fused)
        self.taps = [Coefficients(stage)(tap) for tap in stage.words["taps"]]
        self.past = deque([F32(0)] * len(self.taps), len(self.taps))
        self.order = range(len(self.taps))
        if stage.summation == "oldest-first":
            self.order = self.order[::-1]

    def start_with(self, x):
        self.past.extend([x] * len(self.taps))

    def step(self, x):
        self.past.appendleft(x)
        return [self.op.sum([(self.taps[k], self.past[k]) for k in self.order])]


class FirDecimator(Fir):
    def __init__(self, stage):
        super().__init__(stage)
        self.index = -1

    def step(self, x):
        self.index += 1
        if self.index % self.stage.words["factor"] == self.stage.words.get("phase_samples", 0):
            return super().step(x)
        self.past.appendleft(x)
        return []


class FirInterpolator(Fir):
    def step(self, x):
        zeros = [F32(0)] * (self.stage.words["factor"] - 1)
        return [y for u in [x] + zeros for y in super(FirInterpolator, self).step(u)]


class MovingAverage:
    def __init__(self, stage):
        self.stage, self.points = stage, stage.words["points"]
        self.past, self.total = deque([F32(0)] * self.points, self.points), F32(0)
        self.taken = 0

    def start_with(self, x):
        self.past.extend([x] * self.points)
        for _ in range(self.points):
            self.total = self.total + x

    def step(self, x):
        self.taken += 1
        oldest = self.past[-1]
        self.past.appendleft(x)
        if self.stage.structure == "running-sum":
            self.total = (self.total - oldest) + x
        else:
            values = list(self.past if self.stage.summation == "newest-first" else reversed(self.past))
            self.total = values[0]
            for value in values[1:]:
                self.total = self.total + value
        if self.stage.division == "reciprocal":
            return [self.total * (F32(1) / F32(self.points))]
        if self.stage.words.get("initial") == "growing":
            return [self.total / F32(min(self.taken, self.points))]
        return [self.total / F32(self.points)]


class Direct1:
    def __init__(self, stage, forward, feedback):
        self.op, convert = Operations(stage.fused), Coefficients(stage)
        self.forward = [(k, convert(b)) for k, b in forward]
        self.feedback = [(k, convert.negated(a)) for k, a in feedback]
        self.x = deque([F32(0)] * (1 + max(k for k, _ in forward)), 1 + max(k for k, _ in forward))
        longest = max([1] + [k for k, _ in feedback])
        self.y = deque([F32(0)] * longest, longest)

    def step(self, x):
        self.x.appendleft(x)
        products = [(c, self.x[k]) for k, c in self.forward] + [(c, self.y[k - 1]) for k, c in self.feedback]
        self.y.appendleft(self.op.sum(products))
        return [self.y[0]]


class Direct2:
    def __init__(self, stage, b, a):
        self.op, convert = Operations(stage.fused), Coefficients(stage)
        self.b, self.a = [convert(c) for c in b], [convert.negated(c) for c in a]
        length = max(len(b), len(a) + 1)
        self.w = deque([F32(0)] * length, length)

    def step(self, x):
        total = x
        for c, w in zip(self.a, self.w):
            total = self.op.add_product(total, c, w)
        self.w.appendleft(total)
        return [self.op.sum(list(zip(self.b, self.w)))]


class Transposed2:
    def __init__(self, stage, b, a):
        self.op, convert = Operations(stage.fused), Coefficients(stage)
        order = max(len(b) - 1, len(a))
        self.b = [convert(c) for c in b] + [F32(0)] * (order + 1 - len(b))
        self.a = [convert.negated(c) for c in a] + [F32(0)] * (order - len(a))
        self.s = [F32(0)] * order

    def step(self, x):
        if not self.s:
            return [self.b[0] * x]
        y = self.op.add_product(self.s[0], self.b[0], x)
        last = len(self.s) - 1
        for k in range(last):
            total = self.op.add_product(self.s[k + 1], self.b[k + 1], x)
            self.s[k] = self.op.add_product(total, self.a[k], y)
        self.s[last] = self.op.sum([(self.b[last + 1], x), (self.a[last], y)])
        return [y]


class Cascade:
    def __init__(self, stage):
        self.sections = []
        for b, a in stage.sections:
            if stage.structure == "direct-1":
                self.sections.append(Direct1(stage, list(enumerate(b)), list(enumerate(a, 1))))
            else:
                self.sections.append((Direct2 if stage.structure == "direct-2" else Transposed2)(stage, b, a))

    def step(self, x):
        for section in self.sections:
            (x,) = section.step(x)
        return [x]


class OnePole:
    def __init__(self, stage):
        self.stage, self.op, self.s = stage, Operations(stage.fused), F32(0)
        self.c = Coefficients(stage)(stage.one_pole_coefficient)

    def start_with(self, x):
        self.s = x

    def step(self, x):
        if self.stage.structure == "difference":
            self.s = self.op.add_product(self.s, self.c, x - self.s)
        else:
            self.s = self.op.add_product(self.op.add_product(self.s, self.c, x), -self.c, self.s)
        return [self.s]


class Median:
    """A NaN among the points gives one."""

    def __init__(self, stage):
        self.past = deque([F32(0)] * stage.words["points"], stage.words["points"])

    def start_with(self, x):
        self.past.extend([x] * len(self.past))

    def step(self, x):
        self.past.appendleft(x)
        if any(np.isnan(value) for value in self.past):
            return [F32(np.nan)]
        ordered = sorted(self.past)
        middle = len(ordered) // 2
        if len(ordered) % 2 == 1:
            return [ordered[middle]]
        return [(ordered[middle - 1] + ordered[middle]) * F32(0.5)]


def to_words(y, port, rounding, overflow):
    """A float32 as the number in whole output words; what has no number, a NaN or an infinity that wraps, gives 0."""
    if np.isnan(y) or (np.isinf(y) and overflow == "wrap"):
        return 0
    if np.isinf(y):
        return held(1 << port.bits if y > 0 else -1 << port.bits, port.bits, overflow)
    return held(rounded(Fraction(float(y)) * Fraction(2) ** port.fraction, rounding), port.bits, overflow)
