#!/usr/bin/python3
"""Filters in stated arithmetic, to the bit: docs/arithmetic.md once more, in Python and NumPy, independent of
oracle/arithmetic.

    numpy_twins.py PLAN.toml [ROOT] <CODES >CODES     codes through the plan's chain, a decimal number a line

A chain is made from the words of a plan: make_chain([(kind, words, arithmetic)], input, output, output_per_input).
"""
import pathlib
import sys
import tomllib
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
import twin_float
import twin_integer
from twin_words import AS_MANY_AS_IT_TAKES, Port, held, rounded, shortened

STRUCTURES = {  # of each kind, the first one when left out
    "fir": ["direct-1"], "fir-decimator": ["direct-1"], "fir-interpolator": ["direct-1"], "comb": ["direct-1"],
    "moving-average": ["running-sum", "fresh-sum"], "one-pole": ["difference", "leak", "direct-1"],
    "iir": ["direct-1", "direct-2", "transposed-2"],
    "biquad-cascade": ["direct-1", "direct-2", "transposed-2"], "dc-blocker": ["direct-1", "direct-2", "transposed-2"],
    "median": [None], "cic-decimator": [None], "cic-interpolator": [None],
}  # fmt: skip


@dataclass
class Stage:
    """One [[filter]] with what is left out filled in."""

    kind: str
    words: dict
    input: Port
    output: Port
    number: str
    structure: str
    rounding: str
    output_rounding: str
    output_overflow: str
    state_overflow: str
    accumulator_bits: int
    accumulator_overflow: str
    accumulator_fraction_bits: int | None
    rounding_at: str
    fraction_saving: bool
    coefficient_fraction_bits: int | None
    coefficient_rounding: str
    feedback_coefficients: str
    said_state_bits: int | None
    said_state_fraction_bits: int | None
    said_state_overflow: str | None
    division: str
    fused: bool
    summation: str
    discarded_bits: list | None

    @property
    def state_bits(self):
        return self.said_state_bits or self.output.bits

    @property
    def state_fraction_bits(self):
        return self.output.fraction if self.said_state_fraction_bits is None else self.said_state_fraction_bits

    def state(self, number):
        return held(number, self.state_bits, self.state_overflow)

    def out(self, number):
        return held(number, self.output.bits, self.output_overflow)

    def out_of_state(self, number):
        return self.out(shortened(number, self.state_fraction_bits, self.output.fraction, self.output_rounding))

    @property
    def one_pole_coefficient(self):
        """k, moved by up to 2^-54 so that the pole 1 - k is a double: what the design is made of."""
        k = 2.0 ** -self.words["shift_bits"] if "shift_bits" in self.words else self.words["coefficient"]
        return 1.0 - (1.0 - k)

    @property
    def one_pole_word(self):
        """Fraction bits, and the stored coefficient."""
        if "shift_bits" in self.words:
            return self.words["shift_bits"], 1
        f = self.coefficient_fraction_bits
        return f, rounded(Fraction(self.one_pole_coefficient) * 2**f, self.coefficient_rounding)

    @property
    def sections(self):
        """[(b, a)], a without its leading 1."""
        if self.kind == "iir":
            return [(self.words["b"], self.words["a"][1:])]
        if self.kind == "dc-blocker":
            pole = self.words["pole"]
            gain = 0.5 * (1.0 + pole) if self.words.get("gain") == "unity-at-nyquist" else 1.0
            return [([gain, -gain], [-pole])]
        return [(row[:3], row[-2:]) for row in self.words["sections"]]


def made_stage(kind, words, arithmetic, source, target):
    said = arithmetic.get
    number = said("number", "float32" if target.is_float else "integer")
    rounding = said("rounding", "toward-zero" if number == "float32" else None)
    if rounding is None and not target.is_float:
        raise ValueError(f"the rounding of the {kind} is not said")
    overflow = said("output_overflow", "saturate")
    fraction_bits = said("coefficient_fraction_bits", words.get("coefficient_fraction_bits"))
    if words.get("coefficient_fraction_bits") is not None:
        fraction_bits = words["coefficient_fraction_bits"]
    return Stage(
        kind, words, source, target, number, said("structure", STRUCTURES[kind][0]), rounding,
        said("output_rounding", rounding), overflow, said("state_overflow", overflow),
        said("accumulator_bits", AS_MANY_AS_IT_TAKES), said("accumulator_overflow", "wrap"), said("accumulator_fraction_bits"), said("rounding_at", "sum"),
        said("fraction_saving", "off") == "on", fraction_bits, said("coefficient_rounding", "half-away"),
        said("feedback_coefficients", "added"), said("state_bits"), said("state_fraction_bits"), said("state_overflow"),
        said("division", "divide"), said("multiply_add", "separate") == "fused", said("summation", "newest-first"), said("discarded_bits"))  # fmt: skip


def made_filter(stage):
    module = twin_float if stage.number == "float32" else twin_integer
    plain = {"fir": "Fir", "fir-decimator": "FirDecimator", "fir-interpolator": "FirInterpolator",
             "moving-average": "MovingAverage", "median": "Median", "cic-decimator": "Cic", "cic-interpolator": "Cic"}  # fmt: skip
    if stage.kind in plain:
        return getattr(module, plain[stage.kind])(stage)
    if stage.kind == "comb":
        words, delay = stage.words, stage.words["delay_samples"]
        forward = [(0, words.get("direct", 1.0)), (delay, words.get("forward", 0.0))]
        return module.Direct1(stage, forward, [(delay, words.get("feedback", 0.0))])
    if stage.kind == "one-pole":
        if stage.structure != "direct-1":
            return module.OnePole(stage)
        # The firmware stores k alone: the pole is 1 - k as stored.
        if stage.number == "float32":
            k = stage.one_pole_coefficient
            if stage.coefficient_fraction_bits is not None:
                f, word = stage.one_pole_word
                k = word * 2.0**-f
            return module.Direct1(stage, [(0, k)], [(1, k - 1.0)])
        f, word = stage.one_pole_word
        stage.coefficient_fraction_bits = f
        return module.Direct1(stage, [(0, Fraction(word, 2**f))], [(1, Fraction(word, 2**f) - 1)])
    return module.Cascade(stage)


class Chain:
    """Codes of the input format to codes of the output format."""

    def __init__(self, stages):
        self.stages, self.filters = stages, [made_filter(stage) for stage in stages]
        self.waiting = [stage.words.get("initial") == "first-sample" for stage in stages]

    def process(self, codes):
        with np.errstate(all="ignore"):
            values = [self.number_of(code) for code in codes]
            for stage, each in zip(self.stages, self.filters):
                values = [y for x in values for y in self.through(stage, each, x)]
            return [self.code_of(value) for value in values]

    def begin(self, each, x):
        """The past of a stage that starts with its first sample."""
        number = self.filters.index(each)
        if self.waiting[number]:
            each.start_with(x)
            self.waiting[number] = False

    def through(self, stage, each, x):
        if stage.number != "float32":
            self.begin(each, x)
            return each.step(x)
        if not stage.input.is_float:
            x = np.float32(float(Fraction(x) / Fraction(2) ** stage.input.fraction))
        self.begin(each, x)
        if stage.output.is_float:
            return [np.float32(float(y) * 2.0**stage.output.fraction) for y in each.step(x)]
        return [twin_float.to_words(y, stage.output, stage.rounding, stage.output_overflow) for y in each.step(x)]

    def number_of(self, code):
        port = self.stages[0].input
        return np.int32(code).view(np.float32) if port.is_float else code - port.zero

    def code_of(self, number):
        port = self.stages[-1].output
        return int(number.view(np.int32)) if port.is_float else number + port.zero


def make_chain(stages, input_format, output_format, output_per_input=1.0):
    """`stages`: (kind, the words of [[filter]], those of its arithmetic)."""
    made, source = [], Port.of(input_format)
    for number, (kind, words, arithmetic) in enumerate(stages):
        if number + 1 == len(stages):
            target = Port.of(output_format, output_per_input)
        else:
            floats = arithmetic.get("number") == "float32"
            target = Port.of(arithmetic.get("stage_format", "f32" if floats else None))
        made.append(made_stage(kind, words, arithmetic, source, target))
        source = target
    return Chain(made)


def chain_of_case(case):
    return make_chain(case["stages"], case["input"], case["output"], case["output_per_input"])


def plan_tables(path, root):
    """A plan with what it includes: tables joined key by key, lists in order, the included first."""
    plan = tomllib.loads((root / path).read_text(encoding="utf-8"))
    tables = {}
    for part in [plan_tables(name, root) for name in plan.pop("include", [])] + [plan]:
        for name, value in part.items():
            if isinstance(value, dict):
                tables[name] = tables.get(name, {}) | value
            else:
                tables[name] = tables.get(name, []) + value if isinstance(value, list) else value
    return tables


def case_of_plan(path, root=None, other=None):
    """A plan file as a case without codes. Files that it names lie under the root, the folder of the plan when left out.
    `other` are words of the arithmetic that take the place of those of the plan."""
    root = pathlib.Path(root or pathlib.Path(path).parent)
    plan, stages = plan_tables(pathlib.Path(path).absolute(), root), []
    for table in plan["filter"]:
        words = {name: value for name, value in table.items() if name not in ("kind", "arithmetic")}
        for name in ("taps", "sections"):
            if f"{name}_file" in words:
                numbers = [float(text) for text in (root / words.pop(f"{name}_file")).read_text().split()]
                words[name] = numbers if name == "taps" else [numbers[i : i + 5] for i in range(0, len(numbers), 5)]
        stages.append((table["kind"], words, plan.get("arithmetic", {}) | table.get("arithmetic", {}) | (other or {})))
    signal = plan["signal"]
    return {"input": signal["input"], "output": signal["output"], "stages": stages,
            "output_per_input": signal.get("output_per_input", 1.0)}  # fmt: skip


def chain_of_plan(path, root=None, other=None):
    return chain_of_case(case_of_plan(path, root, other))


if __name__ == "__main__":
    given = [int(line) for line in sys.stdin]
    print("\n".join(str(code) for code in chain_of_plan(*sys.argv[1:3]).process(given)))
