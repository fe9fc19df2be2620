"""The plans of rigs/cw-7/exact: what each filter of the boards is promised to compute, by numpy_twins.py of tests/reference,
and signals that reach the corners of it. The C sources are never looked at."""
import pathlib
import re
import random
import struct
import sys
import tomllib

ROOT = pathlib.Path(__file__).resolve().parents[2]
sys.path.insert(0, str(ROOT / "tests/reference"))
import numpy_twins  # noqa: E402
from twin_words import FORMATS  # noqa: E402

FOLDER = ROOT / "rigs/cw-7/exact"
SEED = 20261202


def names():
    return sorted(path.stem for path in FOLDER.glob("*.toml") if path.stem != "cases")


def steady_names():
    """Without those whose filter changes the sample rate: tests/system/exact_test.py streams them."""
    return [name for name in names() if not re.search(r"(decimat|interpolat)or", (FOLDER / f"{name}.toml").read_text())]


class Promise:
    """One plan: words in memory to words in memory."""

    def __init__(self, name):
        path = FOLDER / f"{name}.toml"
        self.signal = tomllib.loads(path.read_text())["signal"]
        self.channels = self.signal.get("channels", 1)
        self.family, self.bits, _ = FORMATS[self.signal["input"]]
        self.shift = 4 if self.signal.get("input_justification") == "left" else 0
        word_bytes = {8: 1, 12: 2, 16: 2, 24: 4, 32: 4}[self.bits]
        letter = {1: "b", 2: "h", 4: "i"}[word_bytes]
        self.letter = letter.upper() if self.family == "u" else letter  # of struct; a float travels as its bits
        self.path = path

    def response(self, words, **other):
        """As after a reset. `other` are words of the arithmetic to have in place of the plan's."""
        out = [None] * len(words)
        for channel in range(self.channels):
            chain = numpy_twins.chain_of_plan(self.path, ROOT / "rigs", other)
            codes = chain.process([word >> self.shift for word in words[channel :: self.channels]])
            out[channel :: self.channels] = [code << self.shift for code in codes]
        return out

    def words(self, numbers):
        """Of numbers from -1 to 1 of full scale; 1 is the top code."""
        top = 1 << (self.bits - 1)
        if self.family == "f":
            return [struct.unpack("<i", struct.pack("<f", number))[0] for number in numbers]
        codes = [min(round(number * top), top - 1) + (top if self.family == "u" else 0) for number in numbers]
        return [code << self.shift for code in codes]

    def signals(self, count=3000):
        """(name, words): noise, quiet noise, rails, impulses, a ramp, each as after a reset."""
        source = random.Random(SEED)
        lsb = 2.0 ** (1 - self.bits)
        quiet = 3.0 * lsb if self.family != "f" else 1e-6
        yield "noise", self.words([source.uniform(-1, 1) for _ in range(count)])
        yield "noise of some codes", self.words([source.uniform(-quiet, quiet) for _ in range(count // 8 * 2)])
        yield "rails", self.words(([1.0] * 60 + [-1.0] * 60) * 6 + ([1.0] * 3 + [-1.0] * 3) * 40)
        for level in (1.0, -1.0, lsb, -lsb):
            yield f"impulse of {level}", self.words([0.0, level] + [0.0] * 400)
        yield "ramp", self.words([-1.0 + 2.0 * n / 701 for n in range(702)])
        yield "a constant, and back", self.words([0.3] * 300 + [-0.3] * 300 + [0.0] * 300)
