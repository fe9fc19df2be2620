"""Stages in whole numbers, one class a structure of docs/arithmetic.md. step(x) takes an input word and gives the list of
output words that come of it: none or several where the rate changes.

`stage` is a Stage of numpy_twins.py: the words of the plan with what is left out filled in.
"""
from collections import deque
from fractions import Fraction

from twin_words import AS_MANY_AS_IT_TAKES, divided, held, rounded, shortened


class Adder:
    """One sum of products: term after term into the accumulator, then shortened to `target` fraction bits."""

    def __init__(self, stage, term_bits, target, rounding=None, saves=None):
        self.bits, self.overflow = stage.accumulator_bits, stage.accumulator_overflow
        self.term_rounding, self.rounding = stage.rounding, rounding or stage.rounding
        self.target = target
        if stage.accumulator_fraction_bits is not None:
            self.fraction = stage.accumulator_fraction_bits
        else:
            self.fraction = target if stage.rounding_at == "product" else max(term_bits)
        self.saves = stage.fraction_saving if saves is None else saves
        self.remainder = 0

    def total(self, terms):
        """Terms are (sign, number, fraction bits)."""
        total = self.remainder
        for sign, number, bits in terms:
            total = held(total + sign * shortened(number, bits, self.fraction, self.term_rounding), self.bits, self.overflow)
        result = shortened(total, self.fraction, self.target, self.rounding)
        if self.saves:
            self.remainder = total - (result << (self.fraction - self.target))
        return result


class Stored:
    """Coefficients as whole numbers. A term is made by `feed` (of inputs) and `back` (of outputs)."""

    def __init__(self, stage):
        self.f, self.rounding = stage.coefficient_fraction_bits, stage.coefficient_rounding
        self.adds = stage.feedback_coefficients == "added"

    def feed(self, coefficient):
        return self.word(coefficient), 1

    def back(self, coefficient):
        """Of a in y = ... - a y[n-k]: the word and the sign of its products."""
        return (self.word(-Fraction(coefficient)), 1) if self.adds else (self.word(coefficient), -1)

    def word(self, coefficient):
        return rounded(Fraction(coefficient) * 2**self.f, self.rounding)


class Fir:
    def __init__(self, stage):
        self.stage, stored = stage, Stored(stage)
        self.taps = [stored.feed(tap)[0] for tap in stage.words["taps"]]
        self.past = deque([0] * len(self.taps), len(self.taps))
        self.order = range(len(self.taps))
        if stage.summation == "oldest-first":
            self.order = self.order[::-1]
        self.term_bits = stored.f + stage.input.fraction
        self.sum = Adder(stage, [self.term_bits], stage.output.fraction)

    def start_with(self, x):
        self.past.extend([x] * len(self.taps))

    def step(self, x):
        self.past.appendleft(x)
        return [self.stage.out(self.sum.total([(1, self.taps[k] * self.past[k], self.term_bits) for k in self.order]))]


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
        return [y for u in [x] + [0] * (self.stage.words["factor"] - 1) for y in super(FirInterpolator, self).step(u)]


class MovingAverage:
    """Running and fresh sum: the accumulator has the fraction bits of x."""

    def __init__(self, stage):
        self.stage, self.points = stage, stage.words["points"]
        self.past, self.sum, self.remainder = deque([0] * self.points, self.points), 0, 0
        self.factor, self.divisor, self.taken = 1, self.points, 0
        if stage.division == "reciprocal":
            self.factor = rounded(Fraction(2**stage.coefficient_fraction_bits, self.points), stage.coefficient_rounding)
            self.divisor = 2**stage.coefficient_fraction_bits
        more = stage.output.fraction - stage.input.fraction
        self.factor, self.divisor = self.factor << max(more, 0), self.divisor << max(-more, 0)

    def hold(self, number):
        return held(number, self.stage.accumulator_bits, self.stage.accumulator_overflow)

    def start_with(self, x):
        self.past.extend([x] * self.points)
        for _ in range(self.points):
            self.sum = self.hold(self.sum + x)

    def step(self, x):
        self.taken += 1
        divisor = self.divisor
        if self.stage.words.get("initial") == "growing":
            divisor = divisor // self.points * min(self.taken, self.points)
        if self.stage.structure == "running-sum":
            self.sum = self.hold(self.hold(self.sum - self.past[-1]) + x)
            self.past.appendleft(x)
        else:
            self.past.appendleft(x)
            self.sum = 0
            for value in self.past if self.stage.summation == "newest-first" else reversed(self.past):
                self.sum = self.hold(self.sum + value)
        number = self.sum * self.factor + self.remainder
        y = divided(number, divisor, self.stage.rounding)
        if self.stage.fraction_saving:
            self.remainder = number - y * self.divisor
        return [self.stage.out(y)]


class Direct1:
    """`forward` is [(delay, coefficient)], `feedback` [(delay, a)]; the result of step_state is a state word."""

    def __init__(self, stage, forward, feedback, input_fraction=None, stored=None):
        self.stage, stored = stage, stored or Stored(stage)
        fraction = stage.input.fraction if input_fraction is None else input_fraction
        self.forward = [(k, *stored.feed(b), stored.f + fraction) for k, b in forward]
        self.feedback = [(k, *stored.back(a), stored.f + stage.state_fraction_bits) for k, a in feedback]
        self.x = deque([0] * (1 + max(k for k, _ in forward)), 1 + max(k for k, _ in forward))
        longest = max([1] + [k for k, _ in feedback])
        self.s = deque([0] * longest, longest)
        bits = [term[3] for term in self.forward + self.feedback]
        self.sum = Adder(stage, bits, stage.state_fraction_bits)

    def step_state(self, x):
        self.x.appendleft(x)
        terms = [(sign, word * self.x[k], bits) for k, word, sign, bits in self.forward]
        terms += [(sign, word * self.s[k - 1], bits) for k, word, sign, bits in self.feedback]
        self.s.appendleft(self.stage.state(self.sum.total(terms)))
        return self.s[0]

    def step(self, x):
        return [self.stage.out_of_state(self.step_state(x))]


class Direct2:
    def __init__(self, stage, b, a, input_fraction=None):
        self.stage, stored = stage, Stored(stage)
        fraction = stage.input.fraction if input_fraction is None else input_fraction
        self.x_bits, self.w_bits = fraction, stored.f + stage.state_fraction_bits
        self.b, self.a = [stored.feed(c) for c in b], [stored.back(c) for c in a]
        length = max(len(b), len(a) + 1)
        self.w = deque([0] * length, length)
        self.back = Adder(stage, [self.x_bits, self.w_bits], stage.state_fraction_bits)
        self.ahead = Adder(stage, [self.w_bits], stage.output.fraction, stage.output_rounding)

    def step(self, x):
        terms = [(1, x, self.x_bits)]
        terms += [(sign, word * w, self.w_bits) for (word, sign), w in zip(self.a, self.w)]
        self.w.appendleft(self.stage.state(self.back.total(terms)))
        terms = [(sign, word * w, self.w_bits) for (word, sign), w in zip(self.b, self.w)]
        return [self.stage.out(self.ahead.total(terms))]


class Transposed2:
    def __init__(self, stage, b, a, input_fraction=None):
        self.stage, stored = stage, Stored(stage)
        fraction = stage.input.fraction if input_fraction is None else input_fraction
        self.x_bits, self.y_bits = stored.f + fraction, stored.f + stage.output.fraction
        order = max(len(b) - 1, len(a))
        self.b = [stored.feed(c) for c in b] + [(0, 1)] * (order + 1 - len(b))
        self.a = [stored.back(c) for c in a] + [(0, 1)] * (order - len(a))
        products = [self.x_bits, self.y_bits]
        self.to_y = Adder(stage, products, stage.output.fraction, saves=False)
        self.s_bits = stage.said_state_fraction_bits
        if self.s_bits is None:
            self.s_bits = self.to_y.fraction
        self.to_state = Adder(stage, products, self.s_bits, saves=False)
        self.state_bits = stage.said_state_bits or stage.accumulator_bits
        self.s = [0] * order

    def step(self, x):
        first = [(1, self.s[0], self.s_bits)] if self.s else []
        (b0, sign), *_ = self.b
        y = self.stage.out(self.to_y.total(first + [(sign, b0 * x, self.x_bits)]))
        for k in range(len(self.s)):
            terms = [(1, self.s[k + 1], self.s_bits)] if k + 1 < len(self.s) else []
            b, b_sign = self.b[k + 1]
            a, a_sign = self.a[k]
            terms += [(b_sign, b * x, self.x_bits), (a_sign, a * y, self.y_bits)]
            self.s[k] = held(self.to_state.total(terms), self.state_bits, self.stage.state_overflow)
        return [y]


class Cascade:
    """Sections one after the other, the words between them those of the output; or, with rounding_at = "output", those of
    the state."""

    def __init__(self, stage):
        self.stage, self.sections, fraction = stage, [], stage.input.fraction
        self.by_states = stage.rounding_at == "output"
        for b, a in stage.sections:
            if stage.structure == "direct-1":
                made = Direct1(stage, list(enumerate(b)), list(enumerate(a, 1)), fraction)
            else:
                made = (Direct2 if stage.structure == "direct-2" else Transposed2)(stage, b, a, fraction)
            self.sections.append(made)
            fraction = stage.state_fraction_bits if self.by_states else stage.output.fraction

    def step(self, x):
        for section in self.sections[:-1]:
            x = section.step_state(x) if self.by_states else section.step(x)[0]
        return self.sections[-1].step(x)


class OnePole:
    """difference and leak; direct-1 is a section."""

    def __init__(self, stage):
        self.stage, self.s = stage, 0
        self.f, self.c = stage.one_pole_word
        self.x_fraction, self.s_fraction = stage.input.fraction, stage.state_fraction_bits
        common = max(self.x_fraction, self.s_fraction)
        self.common = common
        self.change = Adder(stage, [self.f + common], self.s_fraction)

    def start_with(self, x):
        self.s = self.stage.state(x << (self.s_fraction - self.x_fraction))

    def step(self, x):
        if self.stage.structure == "difference":
            difference = (x << (self.common - self.x_fraction)) - (self.s << (self.common - self.s_fraction))
            change = self.change.total([(1, self.c * difference, self.f + self.common)])
        else:
            change = shortened(self.c * x, self.f + self.x_fraction, self.s_fraction, self.stage.rounding)
            change -= shortened(self.c * self.s, self.f + self.s_fraction, self.s_fraction, self.stage.rounding)
        self.s = self.stage.state(self.s + change)
        return [self.stage.out_of_state(self.s)]


class Median:
    def __init__(self, stage):
        self.stage, points = stage, stage.words["points"]
        self.past = deque([0] * points, points)

    def start_with(self, x):
        self.past.extend([x] * len(self.past))

    def step(self, x):
        self.past.appendleft(x)
        ordered = sorted(self.past)
        twice = ordered[(len(ordered) - 1) // 2] + ordered[len(ordered) // 2]
        has, wanted = self.stage.input.fraction + 1, self.stage.output.fraction
        return [self.stage.out(shortened(twice, has, wanted, self.stage.rounding))]


class Cic:
    """Both ways; register j keeps the fraction bits of x but the `lost[j]` lowest, which are cut off as a number enters."""

    def __init__(self, stage):
        self.stage, words = stage, stage.words
        self.order, self.factor, self.delay = words["order"], words["factor"], words.get("delay_samples", 1)
        self.down, self.phase = stage.kind == "cic-decimator", words.get("phase_samples", 0)
        gain = (self.factor * self.delay) ** self.order
        if not self.down:
            gain //= self.factor
        self.divisor = 2 ** words["shift_bits"] if "shift_bits" in words else gain
        self.integrators = [0] * self.order
        self.combs = [deque([0] * self.delay, self.delay) for _ in range(self.order)]
        self.index = -1
        self.lost = (self.down and stage.discarded_bits) or [0] * (2 * self.order)

    def hold(self, number, register):
        bits = self.stage.said_state_bits
        bits = bits - self.lost[register] if bits else AS_MANY_AS_IT_TAKES
        return held(number, bits, self.stage.said_state_overflow or "wrap")

    def entering(self, value, register):
        """Counted in steps of the register before it; afterwards in its own."""
        steps = 2 ** (self.lost[register] - (self.lost[register - 1] if register else 0))
        return value // steps

    def integrated(self, value):
        for k in range(self.order):
            value = self.integrators[k] = self.hold(self.integrators[k] + self.entering(value, k), k)
        return value

    def combed(self, value):
        for register, comb in enumerate(self.combs, self.order):
            newest, oldest = (self.entering(value, register) if self.down else value), comb[-1]
            comb.appendleft(newest)
            value = self.hold(newest - oldest, register)
        return value

    def short(self, value):
        more = self.stage.output.fraction - (self.stage.input.fraction - self.lost[-1])
        return self.stage.out(divided(value << max(more, 0), self.divisor << max(-more, 0), self.stage.rounding))

    def step(self, x):
        if not self.down:
            value = self.combed(x)
            return [self.short(self.integrated(u)) for u in [value] + [0] * (self.factor - 1)]
        self.index += 1
        value = self.integrated(x)
        return [self.short(self.combed(value))] if self.index % self.factor == self.phase else []
