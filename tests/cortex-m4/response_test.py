"""Every filter of the CW-7, machine code on the emulated processor, returns what its C source returns on this host."""
import unittest

import support
from support import bits_of, board, emulator, filtered_on_host, noise
from wire_client import SAMPLES as SAMPLES_FRAME
from wire_client import WireClient, encode

SAMPLES, SEED = 20_000, 20260


class TheResponse(unittest.TestCase):
    def test_it_equals_the_same_source_on_this_host_bit_for_bit(self):
        with board("halflsb-cw7.elf") as client:
            greeting = client.greeting()
            for number, filter_ in enumerate(greeting.filters):
                with self.subTest(filter_.name, samples=SAMPLES, seed=SEED):
                    samples = noise(SAMPLES, bits_of(filter_), SEED)
                    response, _, _ = client.stream(number, filter_, samples, greeting.block)
                    self.assertEqual(response, filtered_on_host(filter_, samples))
            counters = client.counters()
        self.assertEqual((counters.bytes_lost, counters.gaps, counters.resent), (0, 0, 0))

    def test_it_is_the_same_in_blocks_of_any_size(self):
        with board("halflsb-cw7.elf") as client:
            greeting = client.greeting()
            for number, filter_ in enumerate(greeting.filters):
                samples = noise(600, bits_of(filter_), SEED)
                expected = filtered_on_host(filter_, samples)
                for block in (1, 7, 64, 255, 256):
                    with self.subTest(filter_.name, block=block):
                        self.assertEqual(client.stream(number, filter_, samples, block)[0], expected)

    def test_one_block_of_sixteen_in_flight_gives_the_same_samples(self):
        with board("halflsb-cw7-block16.elf") as client:
            greeting = client.greeting()
            self.assertEqual((greeting.block, greeting.credit), (16, 1))
            for number, filter_ in enumerate(greeting.filters):
                with self.subTest(filter_.name):
                    samples = noise(3000, bits_of(filter_), SEED)
                    response, _, _ = client.stream(number, filter_, samples, greeting.block)
                    self.assertEqual(response, filtered_on_host(filter_, samples))

    def test_a_host_that_vanishes_in_mid_stream_does_not_trouble_the_next(self):
        with emulator("halflsb-cw7.elf") as line:
            with WireClient(line) as client:
                filter_ = client.greeting().filters[0]
                block, credit = client.start(0, 256)
                for sequence in range(credit):
                    client.send_block(sequence, "h", noise(block, 16, sequence))
                client.write(encode(bytes([SAMPLES_FRAME]) + bytes(100))[:50])  # and stops in the middle of a frame
            with WireClient(line) as client:
                samples = noise(1000, 16, SEED)
                self.assertEqual(client.greeting().serial, "CW7-0042")
                self.assertEqual(client.stream(0, filter_, samples, 256)[0], filtered_on_host(filter_, samples))


if __name__ == "__main__":
    support.main()
