#!/usr/bin/python3
"""The virtual board's filters against what their plans in rigs/cw-7/exact promise, bit for bit, through the wire.

exact_board_test.py PROGRAM"""
import re
import struct
import subprocess
import sys
import unittest

from exact_plans import Promise, names
from virtual_board import VirtualBoard

PROGRAM = sys.argv.pop(1)
BLOCK = 64


def listed(choice):
    done = subprocess.run([PROGRAM, "--list-filters", "--filter-set", choice], capture_output=True, text=True, check=True)
    return [row.split()[0] for row in done.stdout.splitlines()]


def answer(host, name, promise, words):
    """What the board returns for words in memory, and its floats as their bits."""
    codes = [word >> promise.shift for word in words]
    if promise.family == "f":
        codes = list(struct.unpack(f"<{len(codes)}f", struct.pack(f"<{len(codes)}i", *codes)))
    host.start(host.filter_named(name), BLOCK)
    got = list(host.stream(codes))
    if promise.family == "f":
        got = list(struct.unpack(f"<{len(got)}i", struct.pack(f"<{len(got)}f", *got)))
    return [code << promise.shift for code in got]


class Board(unittest.TestCase):
    def test_each_filter_returns_what_its_plan_promises(self):
        for choice in ("all", "decisions"):
            promised = [name for name in listed(choice) if name in names()]
            with VirtualBoard(PROGRAM, "--filter-set", ",".join(promised)) as board:
                for name in promised:
                    promise = Promise(name)
                    for signal, words in promise.signals(1500):
                        with self.subTest(name, signal=signal):
                            self.assertEqual(answer(board.host, name, promise, words), promise.response(words))

    def test_the_set_of_decisions_is_promised_whole_and_not_among_all(self):
        decisions = listed("decisions")
        self.assertEqual(len(decisions), 17)
        self.assertLessEqual(set(decisions), set(names()))
        self.assertEqual(set(decisions) & set(listed("all")), set())

    def test_faults_of_any_filter_show_in_each(self):
        """The input inverted, and a sample of latency: what the plan promises for another input, and late."""
        decisions = listed("decisions")
        listing = subprocess.run([PROGRAM, "--list-faults", "--filter-set", "decisions"], capture_output=True, text=True,
                                 check=True).stdout  # fmt: skip
        self.assertTrue(re.search(r"^N06, polarity .*\[any filter\]$", listing, re.M))
        for fault in ("N06", "S01"):
            with VirtualBoard(PROGRAM, "--filter-set", "decisions", "--fault", fault) as board:
                for name in decisions:
                    promise = Promise(name)
                    numbers = [((n * 7919) % 1000 - 500) / 1000 for n in range(700)]
                    words = promise.words(numbers)
                    if fault == "N06":
                        wanted = promise.response(promise.words([-x for x in numbers]))
                    else:
                        wanted = [0, *promise.response(words)[:-1]]
                    with self.subTest(name, fault=fault):
                        self.assertEqual(answer(board.host, name, promise, words), wanted)

    def test_a_fault_that_no_decision_shows_is_refused(self):
        done = subprocess.run([PROGRAM, "--filter-set", "decisions", "--fault", "A01"], capture_output=True, text=True)
        self.assertEqual(done.returncode, 64)
        self.assertIn("A01", done.stderr)


if __name__ == "__main__":
    unittest.main(verbosity=2)
