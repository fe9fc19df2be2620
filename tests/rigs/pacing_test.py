#!/usr/bin/python3
"""How much of a paced line the framed wire uses.     pacing_test.py PROGRAM

A line carries baud / 10 bytes a second, so baud / 20 samples of 16 bits. With blocks of 256 the busier direction costs
530 bytes for 512 bytes of samples (docs/wire.md, 5): 96.6 % at best. At least 95 % must be reached.
"""

import random
import sys
import time
import unittest

from virtual_board import VirtualBoard

PROGRAM = sys.argv.pop(1)
BLOCK = 256
SECONDS = 2.0
SHARE_AT_LEAST = 0.95
SHARE_AT_BEST = 512.0 / 530.0
# Between the first and the last block: while the window fills, and what the taking in pieces of 0.5 ms leaves.
OUTPUT_IDLE_AT_MOST = 0.02


class Pacing(unittest.TestCase):
    def rate_of(self, baud):
        samples = int(baud / 20.0 * SECONDS) // BLOCK * BLOCK
        rng = random.Random(7)
        codes = [rng.randint(-32768, 32767) for _ in range(samples)]
        with VirtualBoard(PROGRAM, "--baud", str(baud)) as board:
            host = board.host
            host.start(host.filter_named("load-cell"), BLOCK)
            host.stream(codes)
            answered, resends = host.answered_at, host.resends
            board.end()
            stretch = board.statistics["stretches"][-1]
        # From the first answer to the last: before the first one the way there and back is latency, not rate.
        rate = (samples - BLOCK) / (answered[-1] - answered[0])
        share = rate / (baud / 20.0)
        print(f"{baud} baud: {rate:.0f} samples/s, {100 * share:.1f} % of the line; idle: in "
              f"{100 * stretch['input_idle_share']:.2f} %, out {100 * stretch['output_idle_share']:.2f} %", flush=True)
        return share, stretch["output_idle_share"], resends

    def check(self, baud):
        # A machine busy with other things can delay a program by more than the buffers of a pseudo-terminal hold, which
        # no line would. So up to five tries: a board or a wire that wastes the line misses all of them.
        for _ in range(5):
            share, output_idle, resends = self.rate_of(baud)
            if share >= SHARE_AT_LEAST and output_idle <= OUTPUT_IDLE_AT_MOST:
                break
        self.assertGreaterEqual(share, SHARE_AT_LEAST)
        self.assertLessEqual(share, SHARE_AT_BEST + 0.01)
        self.assertLessEqual(output_idle, OUTPUT_IDLE_AT_MOST)
        self.assertEqual(resends, 0)

    def test_115200_baud(self):
        self.check(115200)

    def test_921600_baud(self):
        self.check(921600)

    def test_3000000_baud(self):
        self.check(3000000)

    def test_a_paced_line_is_no_faster_than_its_baud_rate(self):
        baud, size, times = 115200, 32, 40
        with VirtualBoard(PROGRAM, "--baud", str(baud)) as board:
            board.host.echo(b"warm")
            begin = time.monotonic()
            for _ in range(times):
                self.assertEqual(board.host.echo(bytes(range(1, size + 1))), bytes(range(1, size + 1)))
            seconds = time.monotonic() - begin
        # There: type, nonce, 32 bytes, CRC, COBS, delimiter: 43. Back: the same and a delimiter in front.
        self.assertGreaterEqual(seconds, times * (43 + 44) * 10 / baud)

    def test_one_block_of_16_samples_works_and_is_slower(self):
        with VirtualBoard(PROGRAM, "--baud", "921600", "--block", "16", "--credit", "1") as board:
            host = board.host
            host.start(host.filter_named("load-cell"), 16)
            self.assertEqual((host.block_samples, host.credit_blocks), (16, 1))
            begin = time.monotonic()
            codes = list(range(16 * 100))
            self.assertEqual(len(host.stream(codes)), len(codes))
            seconds = time.monotonic() - begin
        # Each block waits for the one before: 41 + 48 bytes of 10 bits, one after the other.
        self.assertGreaterEqual(seconds, 99 * (41 + 48) * 10 / 921600)


if __name__ == "__main__":
    unittest.main()
