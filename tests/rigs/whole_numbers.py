"""Rounding and word lengths in Python's whole numbers."""

ROUNDINGS = {
    "half-up": lambda value, divisor: (2 * value + divisor) // (2 * divisor),
    "floor": lambda value, divisor: value // divisor,
    "toward-zero": lambda value, divisor: value // divisor if value >= 0 else -(-value // divisor),
    "half-away": lambda value, divisor: (1 if value >= 0 else -1) * ((2 * abs(value) + divisor) // (2 * divisor)),
    "twice": lambda value, divisor: (value + divisor) // divisor,
}


def wrap(value, bits):
    value %= 1 << bits
    return value - (1 << bits) if value >> (bits - 1) else value


def into_word(value, bits, wraps):
    if wraps:
        return wrap(value, bits)
    return min(max(value, -(1 << (bits - 1))), (1 << (bits - 1)) - 1)
