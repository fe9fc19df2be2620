#!/usr/bin/python3
"""The C filters of the boards, compiled for this machine, against what their plans promise, bit for bit.

exact_on_host_test.py PROGRAM...     each a filters_on_host with one image's filters"""
import struct
import subprocess
import sys
import unittest

from exact_plans import Promise, steady_names

PROGRAMS = sys.argv[1:]
CHANGES = [
    ("belt-average", "rounding", "floor"),
    ("belt-average-reciprocal", "coefficient_fraction_bits", 18),
    ("creep", "rounding", "half-up"),
    ("drain", "fraction_saving", "off"),
    ("echo-comb", "rounding", "half-away"),
    ("infeed", "accumulator_bits", 64),
    ("level", "rounding", "half-up"),
    ("load-cell", "rounding", "half-away"),
    ("load-cell-f32", "structure", "fresh-sum"),
    ("load-cell-float", "rounding", "half-even"),
    ("settle", "output_overflow", "wrap"),
    ("settle", "rounding_at", "product"),
    ("settle-direct-2", "state_bits", 16),
    ("settle-f32", "multiply_add", "fused"),
    ("settle-f32-transposed", "structure", "direct-1"),
    ("settle-floor", "rounding", "toward-zero"),
    ("settle-q31", "accumulator_bits", 58),
    ("settle-q31-fast", "accumulator_fraction_bits", 30),
    ("settle-q31-shifted", "output_overflow", "saturate"),
    ("settle-saving", "fraction_saving", "off"),
    ("settle-transposed", "state_fraction_bits", 15),
    ("smoothing", "rounding", "floor"),
    ("smoothing-short-products", "rounding_at", "sum"),
    ("smoothing-short-products", "rounding", "toward-zero"),
]


def response(program, name, promise, words):
    sent = struct.pack(f"<{len(words)}{promise.letter}", *words)
    done = subprocess.run([program, name], input=sent, capture_output=True, check=False)
    if done.returncode != 0:
        return None  # it has no such filter
    return list(struct.unpack(f"<{len(words)}{promise.letter}", done.stdout))


class OnHost(unittest.TestCase):
    def test_each_filter_returns_what_its_plan_promises(self):
        for name in steady_names():
            promise, seen = Promise(name), 0
            for signal, words in promise.signals():
                wanted = promise.response(words)
                for program in PROGRAMS:
                    got = response(program, name, promise, words)
                    if got is None:
                        continue
                    seen += 1
                    with self.subTest(name, signal=signal):
                        self.assertEqual(got, wanted)
            self.assertGreater(seen, 0, f"no program has {name}")

    def test_each_decision_shows(self):
        """With one word of its plan changed the promise is another one: the signals reach what the word is about."""
        for name, word, value in CHANGES:
            promise = Promise(name)
            differing = [signal for signal, words in promise.signals(1500)
                         if promise.response(words, **{word: value}) != promise.response(words)]  # fmt: skip
            with self.subTest(name, word=word):
                self.assertTrue(differing)


if __name__ == "__main__":
    unittest.main(argv=sys.argv[:1], verbosity=2)
