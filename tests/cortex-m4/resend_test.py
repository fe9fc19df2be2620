"""Whatever the line loses, each sample passes the CW-7's filter exactly once."""
import struct
import unittest

import support
from support import board, filtered_on_host, noise
from wire_client import DONE, EXPECT, REFUSED, RESET, SAMPLES, WORD, encode

BLOCK = 64


class Resending(unittest.TestCase):
    def setUp(self):
        self.client = self.enterContext(board("halflsb-cw7.elf"))
        greeting = self.client.greeting()
        self.number = [f.name for f in greeting.filters].index("mains-notch")  # feedback: it would show a second pass
        self.filter = greeting.filters[self.number]
        self.letter = WORD[self.filter.input]
        samples = noise(8 * BLOCK, 16, 7)
        self.blocks = [samples[at : at + BLOCK] for at in range(0, len(samples), BLOCK)]
        right = filtered_on_host(self.filter, samples)
        self.right = [tuple(right[at : at + BLOCK]) for at in range(0, len(right), BLOCK)]
        self.credit = self.client.start(self.number, BLOCK)[1]
        self.before = self.client.counters()

    def grown(self):
        return [now - before for now, before in zip(self.client.counters(), self.before)]

    def expect_block(self, number):
        answer = self.client.response(self.letter)
        self.assertEqual((answer.sequence, answer.samples), (number, self.right[number]))
        return answer

    def send(self, number):
        self.client.send_block(number, self.letter, self.blocks[number])

    def test_a_block_sent_again_is_answered_again_without_computing(self):
        self.send(0)
        first = self.expect_block(0)
        self.send(0)
        self.assertEqual(self.expect_block(0), first)  # the ticks too: the answer was kept
        self.send(1)
        self.expect_block(1)
        frames_bad, bytes_lost, gaps, resent, blocks = self.grown()
        self.assertEqual((frames_bad, bytes_lost, gaps, resent, blocks), (0, 0, 0, 1, 2))

    def test_a_missing_block_is_asked_for_once_and_nothing_is_processed_meanwhile(self):
        self.send(0)
        self.expect_block(0)
        for number in (2, 3, 4):  # 1 was lost
            self.send(number)
        self.assertEqual(self.client.receive(), (EXPECT, struct.pack("<H", 1)))
        self.assertTrue(self.client.silent_for(0.2))
        for number in (1, 2, 3, 4):
            self.send(number)
            self.expect_block(number)
        self.assertEqual(self.grown()[4], 5)

    def test_a_broken_frame_is_dropped_and_counted(self):
        content = bytes([SAMPLES]) + struct.pack(f"<H{BLOCK}h", 0, *self.blocks[0])
        broken = bytearray(encode(content))
        broken[9] ^= 0x10 if broken[9] != 0x10 else 0x20
        self.client.write(bytes(broken))
        self.assertTrue(self.client.silent_for(0.2))
        self.client.write(b"\0garbage without an end of its own\0")
        self.send(0)
        self.expect_block(0)
        self.assertEqual(self.grown()[0], 2)

    def test_reset_makes_the_state_as_after_start(self):
        for number in (0, 1):
            self.send(number)
            self.expect_block(number)
        self.client.send(RESET, struct.pack("<HQ", 2, 2 * BLOCK))
        self.assertEqual(self.client.receive(), (DONE, struct.pack("<HQ", 2, 2 * BLOCK)))
        self.client.send_block(3, self.letter, self.blocks[0])
        self.assertEqual(self.client.response(self.letter).samples, self.right[0])

    def test_what_it_cannot_do_is_refused(self):
        self.client.send(RESET, struct.pack("<HQ", 0, 1))  # not the current sample index
        self.assertEqual(self.client.receive(), (REFUSED, struct.pack("<BHB", RESET, 0, 3)))
        self.client.send(0x20, b"")  # pull mode
        kind, body = self.client.receive()
        self.assertEqual((kind, body[0], body[3]), (REFUSED, 0x20, 1))


if __name__ == "__main__":
    support.main()
