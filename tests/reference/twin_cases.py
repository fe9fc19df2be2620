"""Random chains of one or two stages in stated arithmetic, and inputs that reach their corners.

A case is {"input", "output", "output_per_input", "stages": [(kind, words, arithmetic)], "codes"}, in the words of a plan.
"""
import numpy as np
from twin_arithmetic import float_arithmetic, integer_arithmetic
from twin_filters import words_of
from twin_words import FORMATS, Port

WORD_FORMATS = [name for name in FORMATS if name != "f32"]
INTEGER_ONLY = ("cic-decimator", "cic-interpolator")
SAMPLES = 420


def codes_of(draw, name, count=SAMPLES):
    """Noise over the whole range, quiet noise, steps from rail to rail, impulses of one code and of full scale, a ramp, and
    silence for limit cycles; in an order of its own each time."""
    family, bits, _ = FORMATS[name]
    if family == "f":
        scale = draw.one_of([1.0, 1.0, 1000.0, 2.0**-120])
        values = np.concatenate([draw.rng.uniform(-1, 1, count // 3), [0.0] * 20, np.sign(draw.rng.uniform(-1, 1, 20)),
                                 np.linspace(-1, 1, count // 3), draw.rng.uniform(-1e-3, 1e-3, count // 6)])  # fmt: skip
        return [int(code) for code in (values * scale).astype(np.float32).view(np.int32)]
    top = 1 << (bits - 1)
    n = count // 7
    impulse = [draw.one_of([-top, top - 1, 1, -1])] + [0] * (n - 1)
    level = draw.one_of([top - 1, -top])
    pieces = [
        [draw.whole(-top, top - 1) for _ in range(2 * n)],
        [draw.whole(-3, 3) for _ in range(n)],
        [level] * (n // 2) + [-1 - level] * (n // 2),
        impulse,
        [-top + (2 * top - 1) * k // (n - 1) for k in range(n)],
        [0] * n,
    ]
    order = draw.rng.permutation(len(pieces))
    numbers = [number for k in order for number in pieces[k]]
    return [number + (top if family == "u" else 0) for number in numbers]


def scale_between(draw, source, target):
    """output_per_input, a power of two. Formats of one family may leave it at 1; else full scale stays near full scale."""
    (from_family, from_bits, from_fraction), (to_family, to_bits, to_fraction) = FORMATS[source], FORMATS[target]
    if from_family == to_family and draw.chance(0.8):
        return 1.0
    full_scale = {"f": 0}  # as a power of two
    span = full_scale.get(to_family, to_bits - 1 - to_fraction) - full_scale.get(from_family, from_bits - 1 - from_fraction)
    return 2.0 ** (span + draw.whole(-2, 2))


def start_of(draw, kind, words, said, source, target, floats):
    """"initial" where docs/arithmetic.md defines its bits."""
    if said.get("fraction_saving") == "on" and kind != "median":
        return None
    if kind == "moving-average" and said.get("division", "divide") == "divide" and draw.chance(0.5):
        return "growing"
    if kind in ("moving-average", "median", "fir", "fir-decimator"):
        return "first-sample"
    if kind != "one-pole" or said.get("structure") == "direct-1":
        return None
    state = said.get("state_fraction_bits", target.fraction)
    return "first-sample" if floats or state >= source.fraction else None


def stages_to(draw, kinds, source_name, output_name, per_input):
    """(kind, words, arithmetic) of each stage, or None where the draw does not go together."""
    stages, source = [], Port.of(source_name)
    for number, kind in enumerate(kinds):
        last, words = number + 1 == len(kinds), words_of(draw, kind)
        if last:
            target_name, target = output_name, Port.of(output_name, per_input)
        else:
            target_name = draw.one_of(WORD_FORMATS + (["f32"] * 4 if kind not in INTEGER_ONLY else []))
            target = Port.of(target_name)
        floats = source.is_float or target.is_float or (kind not in INTEGER_ONLY and draw.chance(0.15))
        if floats and kind in INTEGER_ONLY:
            return None
        if floats:
            said = float_arithmetic(draw, kind, words, target)
        else:
            said = integer_arithmetic(draw, kind, words, source, target)
        if said is None:
            return None
        start = start_of(draw, kind, words, said, source, target, floats) if draw.chance(0.3) else None
        if start:
            words = words | {"initial": start}
        if not last and (target_name != "f32" or draw.chance(0.5)):
            said["stage_format"] = target_name
        stages.append((kind, words, said))
        source = target
    return stages


def random_case(draw, kinds, kind=None):
    """A chain with its input; `kind` is in it. Draws until what it drew goes together."""
    while True:
        chain = [kind or draw.one_of(kinds)]
        if draw.chance(0.25):
            chain.insert(draw.whole(0, 1), draw.one_of(kinds))
        formats = WORD_FORMATS + ["f32"] * 3
        source = draw.one_of(formats)
        output = source if draw.chance(0.6) else draw.one_of(formats)
        per_input = scale_between(draw, source, output)
        stages = stages_to(draw, chain, source, output, per_input)
        if stages:
            return {"input": source, "output": output, "output_per_input": per_input, "stages": stages,
                    "codes": codes_of(draw, source)}  # fmt: skip
