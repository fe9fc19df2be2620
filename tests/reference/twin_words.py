"""Whole numbers in words, and their rounding, as docs/arithmetic.md says: the second opinion on the twins.

A number X with F fraction bits stands for X 2^-F. Everything here is exact: Python's integers have no width.
"""
from dataclasses import dataclass
from fractions import Fraction

# name: family, word bits, fraction bits (docs/plan.md)
FORMATS = {
    "q7": ("q", 8, 7), "q15": ("q", 16, 15), "q31": ("q", 32, 31),
    "i8": ("i", 8, 0), "i16": ("i", 16, 0), "i24": ("i", 24, 0), "i32": ("i", 32, 0),
    "u8": ("u", 8, 0), "u12": ("u", 12, 0), "u16": ("u", 16, 0), "f32": ("f", 32, 0),
}  # fmt: skip

AS_MANY_AS_IT_TAKES = 128  # bits of a word that nobody limited


def half_even(number, divisor):
    quotient, rest = divmod(number, divisor)
    return quotient + (2 * rest > divisor or (2 * rest == divisor and quotient % 2 == 1))


ROUNDINGS = {
    "floor": lambda n, d: n // d,
    "toward-zero": lambda n, d: n // d if n >= 0 else -(-n // d),
    "half-up": lambda n, d: (2 * n + d) // (2 * d),
    "half-away": lambda n, d: (2 * n + d) // (2 * d) if n >= 0 else -((-2 * n + d) // (2 * d)),
    "half-even": half_even,
}


def divided(number, divisor, rounding):
    """number / divisor as a whole number; the divisor is positive."""
    return ROUNDINGS[rounding](number, divisor)


def rounded(value, rounding):
    """A Fraction (or anything that becomes one exactly) as a whole number."""
    value = Fraction(value)
    return divided(value.numerator, value.denominator, rounding)


def shortened(number, has, wanted, rounding):
    """From `has` fraction bits to `wanted`: exact where none is lost."""
    if wanted >= has:
        return number << (wanted - has)
    return divided(number, 1 << (has - wanted), rounding)


def held(number, bits, overflow):
    """In a word of two's complement."""
    top = 1 << (bits - 1)
    if overflow == "saturate":
        return min(max(number, -top), top - 1)
    return (number + top) % (2 * top) - top


@dataclass(frozen=True)
class Port:
    """What stands between two stages, or at an end: words, or float32."""

    is_float: bool
    bits: int
    fraction: int
    zero: int = 0  # subtracted from what comes in, added to what goes out

    @staticmethod
    def of(name, scale=1.0):
        """`scale` is output_per_input: a power of two."""
        family, bits, fraction = FORMATS[name]
        mantissa = Fraction(scale)
        more = mantissa.numerator.bit_length() - mantissa.denominator.bit_length()
        if mantissa != Fraction(2) ** more:
            raise ValueError(f"{scale} is no power of two")
        return Port(family == "f", bits, fraction + more, 1 << (bits - 1) if family == "u" else 0)
