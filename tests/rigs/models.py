"""The board's filters and their faults in Python integers (and NumPy float32): written from the headers of rigs/filters
and from the faults' descriptions, sharing no code with either."""

import math
import pathlib

import numpy

from passage_models import Channels, FloatWord, Passage, Word
from whole_numbers import ROUNDINGS, into_word, wrap

COEFFICIENTS = pathlib.Path(__file__).resolve().parents[2] / "rigs/filters/coefficients"


def design(name):
    return [float(line) for line in (COEFFICIENTS / (name + ".txt")).read_text().split()]


def half_away(value):
    return int(math.copysign(math.floor(abs(value) + 0.5), value))


class Arithmetic:
    def __init__(self, faults, bits):
        self.bits = bits
        self.wraps = "A07" in faults
        self.unsaturated_feedback = "A08" in faults
        self.truncated_products = "A04" in faults
        self.more_shift = 1 if "C05" in faults else 0
        names = {"A01": "floor", "A02": "toward-zero", "A03": "half-away", "A05": "twice"}
        self.round = ROUNDINGS[next((names[f] for f in faults if f in names), "half-up")]

    def sum_of_products(self, pairs, fraction_bits):
        divisor = 1 << (fraction_bits + self.more_shift)
        if self.truncated_products:
            return sum((c * x) // divisor for c, x in pairs)
        return self.round(sum(c * x for c, x in pairs), divisor)


class Average:
    """Of signed samples; `offset` binary is made signed, averaged, and put back."""

    def __init__(self, points, bits, faults, offset=False):
        self.faults, self.middle = faults, 1 << (bits - 1) if offset else 0
        self.arithmetic = Arithmetic(faults, bits)
        self.points, self.length = points, points - (1 if "S02" in faults else 0)
        self.narrow = "A10" in faults
        self.reset()

    def reset(self):
        self.ring, self.position, self.sum = [0] * self.length, 0, 0

    def reset_half(self):
        self.ring[: self.length // 2] = [0] * (self.length // 2)
        self.position = self.sum = 0

    def step(self, x):
        if not self.middle:
            return self.mean(x)
        code = x % (2 * self.middle)  # bits above are not looked at
        y = self.mean(code if "N01" in self.faults else code - self.middle)
        return y if "N02" in self.faults else y + self.middle

    def mean(self, x):
        self.sum += x - self.ring[self.position]
        if self.narrow:
            self.sum = wrap(self.sum, self.arithmetic.bits)
        self.ring[self.position] = x
        self.position = (self.position + 1) % self.length
        y = self.arithmetic.round(self.sum, self.points << self.arithmetic.more_shift)
        if not self.faults:
            return y  # the mean of what came needs no saturation
        return into_word(y, self.arithmetic.bits, self.arithmetic.wraps)


class Fir:
    def __init__(self, taps, faults):
        quantise = math.trunc if "C03" in faults else half_away
        self.taps = [quantise(tap * 32768.0) for tap in taps]
        if "C10" in faults:
            self.taps.reverse()
        self.arithmetic = Arithmetic(faults, 16)
        self.reset()

    def reset(self):
        self.ring, self.position = [0] * len(self.taps), 0

    def reset_half(self):
        half = len(self.taps) // 2
        self.ring[:half] = [0] * half
        self.position = 0

    def step(self, x):
        self.ring[self.position] = x
        n = len(self.taps)
        pairs = [(self.taps[k], self.ring[(self.position - k) % n]) for k in range(n)]
        self.position = (self.position + 1) % n
        return into_word(self.arithmetic.sum_of_products(pairs, 15), 16, self.arithmetic.wraps)


class Biquad:
    def __init__(self, numbers, bits, faults):
        quantise = math.trunc if "C03" in faults else half_away
        one = float(1 << (bits - 2))
        self.sections = []
        for at in range(0, len(numbers), 5):
            b0, b1, b2, a1, a2 = (quantise(c * one) for c in numbers[at : at + 5])
            self.sections.append((b0, b1, b2, a1 if "C07" in faults else -a1, -a2))
        self.arithmetic = Arithmetic(faults, bits)
        self.reset()

    def reset(self):
        self.states = [[0, 0, 0, 0] for _ in self.sections]

    def reset_half(self):
        for state in self.states:
            state[:2] = [0, 0]

    def step(self, x):
        arithmetic = self.arithmetic
        for coefficients, state in zip(self.sections, self.states):
            x1, x2, y1, y2 = state
            exact = arithmetic.sum_of_products(zip(coefficients, (x, x1, x2, y1, y2)), arithmetic.bits - 2)
            y = into_word(exact, arithmetic.bits, arithmetic.wraps)
            state[:] = [x, x1, exact if arithmetic.unsaturated_feedback else y, y1]
            x = y
        return x


class OnePole:
    """y += (x - y) / 16, the state exact, cut to a sample at the output and in the feedback."""

    def __init__(self, rounds):
        self.cut = ROUNDINGS["half-up" if rounds else "floor"]
        self.reset()

    def reset(self):
        self.state = 0

    def reset_half(self):
        self.state -= self.state % 65536  # the lower 16 bits

    def step(self, x):
        self.state += x - self.cut(self.state, 16)
        return self.cut(self.state, 16)


class DcBlocker:
    """The state in 2^-15 of a code; the pole at 1 - 2^-8 is a leak of 128 / 2^15."""

    def __init__(self):
        self.reset()

    def reset(self):
        self.state = self.previous = 0

    def reset_half(self):
        self.state = 0

    def step(self, x):
        self.state += (x - self.previous) * 32768 - 128 * (self.state // 32768)
        self.previous = x
        return into_word(self.state // 32768, 16, False)


class Comb:
    """1/2 x[n] + 1/4 x[n-24] + 1/4 y[n-24]: in quarters, halves upward."""

    def __init__(self):
        self.reset()

    def reset(self):
        self.past_in, self.past_out, self.position = [0] * 24, [0] * 24, 0

    def reset_half(self):
        self.past_in, self.position = [0] * 24, 0

    def step(self, x):
        at = self.position
        quarters = 2 * x + self.past_in[at] + self.past_out[at]
        y = into_word(ROUNDINGS["half-up"](quarters, 4), 16, False)
        self.past_in[at], self.past_out[at] = x, y
        self.position = (at + 1) % 24
        return y


class FloatBiquad:
    def __init__(self, numbers, faults):
        self.sections = []
        for at in range(0, len(numbers), 5):
            b0, b1, b2, a1, a2 = (numpy.float32(c) for c in numbers[at : at + 5])
            self.sections.append((b0, b1, b2, a1 if "C07" in faults else -a1, -a2))
        self.reset()

    def reset(self):
        self.states = [[numpy.float32(0)] * 4 for _ in self.sections]

    def reset_half(self):
        for state in self.states:
            state[:2] = [numpy.float32(0)] * 2

    def step(self, x):
        x = numpy.float32(x)
        for coefficients, state in zip(self.sections, self.states):
            total = coefficients[0] * x
            for c, past in zip(coefficients[1:], state):
                total = total + c * past
            state[:] = [x, state[0], total, state[2]]
            x = total
        return float(x)


WORDS = {
    "settle-q31": Word(32, 4),
    "settle-f32": FloatWord(),
    "average-q7": Word(8, 1),
    "average-i8": Word(8, 1),
    "average-i16-big": Word(16, 2, big=True),
    "average-i24": Word(24, 4),
    "average-i24-packed": Word(24, 3),
    "average-i32": Word(32, 4),
    "average-u8": Word(8, 1, offset=True),
    "average-u12": Word(12, 2, offset=True),
    "average-u12-left": Word(12, 2, offset=True, left=True),
    "average-u16": Word(16, 2, offset=True),
}
PAIRS = {"pair": ("load-cell", "load-cell"), "pair-mixed": ("load-cell", "settle")}


def word_of(name):
    return WORDS.get(name, Word(16, 2))


def filter_of(name, faults):
    if name == "settle-q31":
        return Biquad(design("settle"), 32, faults)
    if name == "settle-f32":
        return FloatBiquad(design("settle"), faults)
    if name in ("settle", "mains-notch"):
        return Biquad(design(name), 16, faults)
    if name in ("smoothing", "quick-smoothing"):
        return Fir(design(name), faults)
    if name.startswith("level"):
        return OnePole(name == "level-rounded")
    if name == "drain":
        return DcBlocker()
    if name == "echo-comb":
        return Comb()
    word = word_of(name)
    return Average(16, word.bits, [f for f in faults if f[0] in "AC" or f in ("S02", "N01", "N02")], word.offset)


def model(name, faults=()):
    if name in PAIRS:
        return Channels([model(channel, faults) for channel in PAIRS[name]], faults)
    return Passage(filter_of(name, faults), word_of(name), faults)


def response(filter_model, segments, block_samples):
    """Each segment begins with a reset; samples of one instant are adjacent."""
    answers, channels = [], filter_model.channel_count
    for segment in segments:
        filter_model.reset()
        for n in range(0, len(segment), channels):
            if n // channels % block_samples == 0:
                filter_model.begin_block()
            if channels == 1:
                answers.append(filter_model.step(segment[n]))
            else:
                answers += filter_model.step_instant(segment[n : n + channels])
    return answers
