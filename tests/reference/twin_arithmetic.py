"""Random words of [filter.arithmetic] that go together with a filter and its ports: coefficients fit their word, the
accumulator holds one product and every word that it fills.
"""
import math
from fractions import Fraction

from twin_filters import coefficients_of, stays_sound
from twin_words import rounded

ROUNDINGS = ["floor", "toward-zero", "half-up", "half-away", "half-even"]
SECTIONED = ("biquad-cascade", "dc-blocker", "iir")


def bits_to_hold(number):
    """Of the word that holds it and its negative."""
    return number.bit_length() + 1


def integer_arithmetic(draw, kind, words, source, target):
    """Words of an integer stage between two ports, or None where the draw does not go together."""
    said = {"rounding": draw.one_of(ROUNDINGS)}
    maybe = lambda name, probability, choices: said.update({name: draw.one_of(choices)}) if draw.chance(probability) else None
    maybe("output_overflow", 0.5, ["saturate", "wrap"])
    if kind == "median":
        return said
    if kind.startswith("cic"):
        growth = math.ceil(words["order"] * math.log2(words["factor"] * words["delay_samples"])) + 1
        needed = max(source.bits + growth, target.bits)
        if draw.chance(0.5):
            said["state_bits"] = draw.whole(min(needed, 64), 64)
            maybe("state_overflow", 0.3, ["wrap"])
        return said
    averages = kind == "moving-average"
    structures = {"moving-average": ["running-sum", "fresh-sum"], "one-pole": ["difference", "leak", "direct-1"]}
    choices = structures.get(kind, ["direct-1", "direct-2", "transposed-2"] if kind in SECTIONED else ["direct-1"])
    structure = choices[0]
    if draw.chance(0.75):
        structure = said["structure"] = draw.one_of(choices)
    if averages:
        powers = words["points"] & (words["points"] - 1) == 0
        maybe("division", 0.7, ["divide", "reciprocal"] + (["shift"] if powers else []))
        if said.get("division") == "reciprocal":
            said["coefficient_fraction_bits"] = draw.whole(8, 24)
            maybe("coefficient_rounding", 0.4, ROUNDINGS)
        if structure == "fresh-sum":
            maybe("summation", 0.5, ["newest-first", "oldest-first"])
        said["accumulator_bits"] = draw.one_of([min(max(source.bits, target.bits, 8) + draw.whole(0, 6), 64), 32, 64])
        if said["accumulator_bits"] < max(source.bits, target.bits):
            said["accumulator_bits"] = 64
        maybe("accumulator_overflow", 0.4, ["wrap", "saturate"])
        maybe("fraction_saving", 0.3, ["on", "off"])
        return said

    f = words.get("shift_bits")
    if f is None:
        f = said["coefficient_fraction_bits"] = draw.whole(7, 24)
        rounding = said["coefficient_rounding"] = draw.one_of(ROUNDINGS)
        added = True
        if kind in SECTIONED or kind == "comb":
            added = said.setdefault("feedback_coefficients", draw.one_of(["added", "subtracted"])) == "added"
        if not stays_sound(kind, words, f, rounding, added):
            return None
    largest = max([1 << f] + [abs(rounded(Fraction(c) * 2**f, "half-away")) + 1 for b, a in coefficients_of(kind, words) for c in b + a])
    if "coefficient_fraction_bits" in said and draw.chance(0.3):
        said["coefficient_bits"] = max(8, bits_to_hold(largest) + draw.whole(0, 3))
        if said["coefficient_bits"] > 64:
            return None

    state_bits, state_fraction = target.bits, target.fraction
    recursive = kind in SECTIONED or kind in ("comb", "one-pole")
    if recursive and structure != "transposed-2" and draw.chance(0.5):
        state_fraction = said["state_fraction_bits"] = max(0, target.fraction + draw.whole(0, 12))
        state_bits = said["state_bits"] = min(64, target.bits + state_fraction - target.fraction + draw.whole(0, 6))
        maybe("output_rounding", 0.5, ROUNDINGS)
    if recursive:
        maybe("state_overflow", 0.5, ["saturate", "wrap"])
    if kind == "one-pole" and structure != "direct-1":
        # The product of C and a difference must fit, and the difference has the finer fraction.
        width = max(source.bits + max(state_fraction - source.fraction, 0), state_bits + max(source.fraction - state_fraction, 0)) + 1
        needed = width + bits_to_hold(largest)
        if needed > 64:
            return None
        said["accumulator_bits"] = draw.one_of([64, needed])
        return said

    if kind == "biquad-cascade" and structure == "direct-1":
        maybe("rounding_at", 0.5, ["sum", "product", "output"])
    elif structure != "transposed-2" and kind != "one-pole":
        maybe("rounding_at", 0.3, ["sum", "product"])
    by_product = said.get("rounding_at") == "product"
    if structure == "direct-2":
        terms = f + max(source.fraction, state_fraction)
        targets = [state_fraction, target.fraction]
    elif structure == "transposed-2":
        terms, targets = f + max(source.fraction, target.fraction), [target.fraction]
    elif recursive:
        terms, targets = f + max(source.fraction, state_fraction), [state_fraction]
    else:
        terms, targets = f + source.fraction, [target.fraction]
    fraction = max(targets) if by_product else terms
    if draw.chance(0.35):
        fraction = said["accumulator_fraction_bits"] = max(0, draw.whole(*sorted((min(targets) - 3, terms + 2))))
    if structure == "transposed-2":
        fraction = said.get("accumulator_fraction_bits", terms)
        if draw.chance(0.4):
            state_fraction = said["state_fraction_bits"] = max(0, draw.whole(min(target.fraction, fraction), fraction))
    words_in = max(source.bits - source.fraction, state_bits - state_fraction, target.bits - target.fraction)
    one_product = max(words_in + bits_to_hold(largest) - f + fraction, max(b - t + fraction for b, t in [(target.bits, target.fraction), (state_bits, state_fraction)]))
    needed = max(8, one_product + 1, target.bits, state_bits)
    if needed > 64:
        return None
    said["accumulator_bits"] = draw.one_of([needed, min(64, needed + draw.whole(0, 4)), 64])
    if said["accumulator_bits"] == 64 and draw.chance(0.5):
        del said["accumulator_bits"]
    maybe("accumulator_overflow", 0.4, ["wrap", "saturate"])
    if structure == "transposed-2":
        if "state_fraction_bits" in said or draw.chance(0.3):
            said["state_bits"] = said.get("accumulator_bits", 64) - draw.one_of([0, 0, 2])
            said["state_bits"] = max(said["state_bits"], needed, 8)
        return said
    savable = fraction > max(targets) and not by_product
    if savable and not ("accumulator_fraction_bits" in said and said["accumulator_fraction_bits"] <= max(targets)):
        maybe("fraction_saving", 0.4, ["on", "off"])
    if kind.startswith("fir"):
        maybe("summation", 0.4, ["newest-first", "oldest-first"])
    return said


def float_arithmetic(draw, kind, words, target):
    said = {"number": "float32"}
    maybe = lambda name, probability, choices: said.update({name: draw.one_of(choices)}) if draw.chance(probability) else None
    if not target.is_float:
        maybe("rounding", 0.7, ROUNDINGS)
        maybe("output_overflow", 0.5, ["saturate", "wrap"])
    if kind == "moving-average":
        maybe("structure", 0.8, ["running-sum", "fresh-sum"])
        maybe("division", 0.5, ["divide", "reciprocal"])
        if said.get("structure") == "fresh-sum":
            maybe("summation", 0.5, ["newest-first", "oldest-first"])
    else:
        maybe("multiply_add", 0.7, ["fused", "separate"])
        if kind.startswith("fir"):
            maybe("summation", 0.5, ["newest-first", "oldest-first"])
        elif kind == "one-pole":
            maybe("structure", 0.9, ["difference", "leak", "direct-1"])
        elif kind in SECTIONED:
            maybe("structure", 0.9, ["direct-1", "direct-2", "transposed-2"])
        if "shift_bits" not in words and draw.chance(0.3):
            f = said["coefficient_fraction_bits"] = draw.whole(8, 30)
            rounding = said["coefficient_rounding"] = draw.one_of(ROUNDINGS)
            if not stays_sound(kind, words, f, rounding, True):
                return None
    return said
