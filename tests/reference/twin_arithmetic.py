"""Random words of [filter.arithmetic] that go together with a filter and its ports: coefficients fit their word, the
accumulator holds one product and every word that it fills.
"""
import math
from fractions import Fraction

from twin_filters import coefficients_of, stays_sound
from twin_words import rounded

ROUNDINGS = ["floor", "toward-zero", "half-up", "half-away", "half-even"]
OVERFLOWS = ["saturate", "wrap"]
ORDERS = ["newest-first", "oldest-first"]
FORMS = ["direct-1", "direct-2", "transposed-2"]
SECTIONED = ("biquad-cascade", "dc-blocker", "iir")
MOST_BITS = 64


class Words(dict):
    """Words as they are drawn."""

    def __init__(self, draw, **words):
        super().__init__(words)
        self.draw = draw

    def maybe(self, probability, name, choices):
        if self.draw.chance(probability):
            self[name] = self.draw.one_of(choices)


def bits_to_hold(number):
    """Of the word that holds it and its negative."""
    return number.bit_length() + 1


def average_words(said, words, source, target):
    draw, most = said.draw, max(source.bits, target.bits)
    said.maybe(0.75, "structure", ["running-sum", "fresh-sum"])
    powers = ["shift"] if words["points"] & (words["points"] - 1) == 0 else []
    said.maybe(0.7, "division", ["divide", "reciprocal"] + powers)
    if said.get("division") == "reciprocal":
        said["coefficient_fraction_bits"] = draw.whole(8, 24)
        said.maybe(0.4, "coefficient_rounding", ROUNDINGS)
    if said.get("structure") == "fresh-sum":
        said.maybe(0.5, "summation", ORDERS)
    # The tight ones overflow: a running sum that wraps comes back, one that saturates does not.
    said["accumulator_bits"] = draw.one_of([most + draw.whole(0, 6), max(most, 32), MOST_BITS])
    said.maybe(0.4, "accumulator_overflow", OVERFLOWS)
    said.maybe(0.3, "fraction_saving", ["on", "off"])
    return said


def cic_words(said, kind, words, source, target):
    growth = math.ceil(words["order"] * math.log2(words["factor"] * words["delay_samples"])) + 1
    needed = max(source.bits + growth, target.bits)
    if said.draw.chance(0.5) and needed <= MOST_BITS:
        said["state_bits"] = said.draw.whole(needed, MOST_BITS)
        said.maybe(0.3, "state_overflow", ["wrap"])
    if kind == "cic-decimator" and said.draw.chance(0.6):
        steps = [said.draw.one_of([0, 0, 1, 2, 3]) for _ in range(2 * words["order"])]
        if sum(steps) <= source.bits + growth - 4:
            said["discarded_bits"] = [sum(steps[: j + 1]) for j in range(len(steps))]
    return said


class Recursion:
    """The words of stages with coefficients, in the order in which one follows from the other."""

    def __init__(self, said, kind, words, source, target):
        self.said, self.draw, self.kind, self.words = said, said.draw, kind, words
        self.source, self.target = source, target
        self.keeps = kind in SECTIONED or kind in ("comb", "one-pole")  # outputs, not only inputs
        self.structure = "direct-1"
        self.state_bits, self.state_fraction = target.bits, target.fraction

    def choose_structure(self):
        choices = FORMS if self.kind in SECTIONED else ["direct-1"]
        if self.kind == "one-pole":
            choices = ["difference", "leak", "direct-1"]
        self.structure = choices[0]
        if self.draw.chance(0.75):
            self.structure = self.said["structure"] = self.draw.one_of(choices)

    def choose_coefficients(self):
        """Whether the filter is sound with what is stored."""
        said, draw, self.f = self.said, self.draw, self.words.get("shift_bits")
        if self.f is None:
            self.f = said["coefficient_fraction_bits"] = draw.whole(7, 24)
            said["coefficient_rounding"] = draw.one_of(ROUNDINGS)
            if self.keeps and self.kind != "one-pole":
                said["feedback_coefficients"] = draw.one_of(["added", "subtracted"])
            added = said.get("feedback_coefficients", "added") == "added"
            if not stays_sound(self.kind, self.words, self.f, said["coefficient_rounding"], added):
                return False
        scale, designed = 1 << self.f, coefficients_of(self.kind, self.words)
        self.largest = max([scale] + [abs(rounded(Fraction(c) * scale, "half-away")) + 1 for b, a in designed for c in b + a])
        if "coefficient_fraction_bits" in said and draw.chance(0.3):
            said["coefficient_bits"] = max(8, bits_to_hold(self.largest) + draw.whole(0, 3))
        return True

    def choose_state(self):
        said, draw = self.said, self.draw
        if self.keeps and self.structure != "transposed-2" and draw.chance(0.5):
            more = draw.whole(0, 12)
            self.state_fraction = said["state_fraction_bits"] = max(0, self.target.fraction + more)
            self.state_bits = self.target.bits + self.state_fraction - self.target.fraction + draw.whole(0, 6)
            self.state_bits = said["state_bits"] = min(MOST_BITS, self.state_bits)
            said.maybe(0.5, "output_rounding", ROUNDINGS)
        if self.keeps:
            said.maybe(0.5, "state_overflow", OVERFLOWS)

    def one_pole(self):
        """difference and leak: the product of C and a difference must fit, and the difference has the finer fraction."""
        from_x = self.source.bits + max(self.state_fraction - self.source.fraction, 0)
        from_s = self.state_bits + max(self.source.fraction - self.state_fraction, 0)
        needed = max(from_x, from_s) + 1 + bits_to_hold(self.largest)
        if self.structure == "difference" and self.draw.chance(0.4):
            most = self.f + max(self.source.fraction, self.state_fraction)
            fraction = self.said["accumulator_fraction_bits"] = max(0, self.draw.whole(*sorted((self.state_fraction - 3, most))))
            needed += fraction - most
        needed = max(8, needed, self.state_bits, self.target.bits)
        if needed > MOST_BITS:
            return None
        self.said["accumulator_bits"] = self.draw.one_of([MOST_BITS, needed])
        self.said.maybe(0.3, "accumulator_overflow", OVERFLOWS)
        return self.said

    def choose_places(self):
        """rounding_at, and the accumulator's fraction bits."""
        said, draw = self.said, self.draw
        if self.kind == "biquad-cascade" and self.structure == "direct-1":
            said.maybe(0.5, "rounding_at", ["sum", "product", "output"])
        elif self.structure != "transposed-2" and self.kind != "one-pole":
            said.maybe(0.3, "rounding_at", ["sum", "product"])
        inner = {"direct-2": self.state_fraction, "transposed-2": self.target.fraction}
        state = inner.get(self.structure, self.state_fraction if self.keeps else self.source.fraction)
        self.terms = self.f + max(self.source.fraction, state)
        if self.structure == "direct-2":  # x is a term without a coefficient
            self.terms = max(self.source.fraction, self.f + state)
        self.goals = [self.target.fraction]
        if self.keeps and self.structure == "direct-1":
            self.goals = [self.state_fraction]
        if self.structure == "direct-2":
            self.goals.append(self.state_fraction)
        self.fraction = max(self.goals) if said.get("rounding_at") == "product" else self.terms
        if draw.chance(0.35):
            self.fraction = max(0, draw.whole(*sorted((min(self.goals) - 3, self.terms + 2))))
            said["accumulator_fraction_bits"] = self.fraction
        if self.structure == "transposed-2" and draw.chance(0.4):
            lowest = min(self.target.fraction, self.fraction)
            self.state_fraction = said["state_fraction_bits"] = max(0, draw.whole(lowest, self.fraction))

    def choose_accumulator(self):
        """Whether there is one. Tight ones overflow within a sum."""
        said, draw = self.said, self.draw
        words = [(self.target.bits, self.target.fraction), (self.state_bits, self.state_fraction)]
        whole_bits = max(bits - fraction for bits, fraction in words + [(self.source.bits, self.source.fraction)])
        one_product = whole_bits + bits_to_hold(self.largest) - self.f + self.fraction
        one_word = max(bits - fraction for bits, fraction in words) + self.fraction
        needed = max(8, one_product + 1, one_word + 1, self.target.bits, self.state_bits)
        if needed > MOST_BITS:
            return False
        bits = draw.one_of([needed, min(MOST_BITS, needed + draw.whole(0, 4)), MOST_BITS, None])
        if bits is not None:
            said["accumulator_bits"] = bits
        said.maybe(0.4, "accumulator_overflow", OVERFLOWS)
        if self.structure == "transposed-2" and ("state_fraction_bits" in said or draw.chance(0.3)):
            said["state_bits"] = max(needed, (bits or MOST_BITS) - draw.one_of([0, 0, 2]))
        return True

    def drawn(self):
        self.choose_structure()
        if not self.choose_coefficients():
            return None
        self.choose_state()
        if self.kind == "one-pole" and self.structure != "direct-1":
            return self.one_pole()
        self.choose_places()
        if not self.choose_accumulator():
            return None
        if self.structure == "transposed-2":
            return self.said
        if self.fraction > max(self.goals) and self.said.get("rounding_at") != "product":
            self.said.maybe(0.4, "fraction_saving", ["on", "off"])
        if self.kind.startswith("fir"):
            self.said.maybe(0.4, "summation", ORDERS)
        return self.said


def integer_arithmetic(draw, kind, words, source, target):
    """Words of an integer stage between two ports, or None where the draw does not go together."""
    said = Words(draw, rounding=draw.one_of(ROUNDINGS))
    said.maybe(0.5, "output_overflow", OVERFLOWS)
    if kind == "median":
        return said
    if kind.startswith("cic"):
        return cic_words(said, kind, words, source, target)
    if kind == "moving-average":
        return average_words(said, words, source, target)
    return Recursion(said, kind, words, source, target).drawn()


def float_arithmetic(draw, kind, words, target):
    """Words of a float32 stage, or None where the draw does not go together."""
    said = Words(draw, number="float32")
    if not target.is_float:
        said.maybe(0.7, "rounding", ROUNDINGS)
        said.maybe(0.5, "output_overflow", OVERFLOWS)
    if kind == "moving-average":
        said.maybe(0.8, "structure", ["running-sum", "fresh-sum"])
        said.maybe(0.5, "division", ["divide", "reciprocal"])
        if said.get("structure") == "fresh-sum":
            said.maybe(0.5, "summation", ORDERS)
        return said
    if kind == "median":
        return said
    said.maybe(0.7, "multiply_add", ["fused", "separate"])
    if kind.startswith("fir"):
        said.maybe(0.5, "summation", ORDERS)
    elif kind == "one-pole":
        said.maybe(0.9, "structure", ["difference", "leak", "direct-1"])
    elif kind in SECTIONED:
        said.maybe(0.9, "structure", FORMS)
    if "shift_bits" not in words and draw.chance(0.3):
        f, rounding = draw.whole(8, 30), draw.one_of(ROUNDINGS)
        said.update(coefficient_fraction_bits=f, coefficient_rounding=rounding)
        if not stays_sound(kind, words, f, rounding, True):
            return None
    return said
