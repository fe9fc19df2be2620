"""The wide CW-7: two channels, 12 bits at the top of 16, 24 bits in 32, a one-pole; and its image with crosstalk."""
import random
import unittest

import support
from support import board, filtered_on_host
from wire_client import LEFT, WORD

SEED, INSTANTS = 1207, 4000
Q15, I24, U12 = 1, 8, 10
FILTERS = [("pair", Q15, 2), ("level", Q15, 1), ("average-u12-left", U12 | LEFT, 1), ("average-i24", I24, 1)]


def noise(filter_, instants, seed=SEED):
    """Words over the whole range of the format, both ends among them."""
    source = random.Random(seed)
    lowest, highest, step = {Q15: (-(1 << 15), (1 << 15) - 1, 1), I24: (-(1 << 23), (1 << 23) - 1, 1),
                             U12 | LEFT: (0, 0xFFF0, 16)}[filter_.input]
    words = [source.randrange(lowest, highest + 1, step) for _ in range(instants * filter_.channels_in - 2)]
    return [lowest, highest] + words


def mean(codes):
    """Of 16, zeros before the start, halves upward."""
    return [(sum(codes[max(0, n - 15) : n + 1]) + 8) // 16 for n in range(len(codes))]


def level(codes):
    state, out = 0, []
    for x in codes:
        state += x - state // 16
        out.append(state // 16)
    return out


def expected(filter_, words):
    """From what the headers of rigs/filters say, in whole numbers."""
    if filter_.name == "pair":
        return [y for instant in zip(mean(words[::2]), mean(words[1::2])) for y in instant]
    if filter_.name == "average-u12-left":
        return [(y + 2048) * 16 for y in mean([word // 16 - 2048 for word in words])]
    return level(words) if filter_.name == "level" else mean(words)


class Wide(unittest.TestCase):
    def test_the_greeting_has_formats_and_channels(self):
        with board("halflsb-cw7-wide.elf") as client:
            filters = client.greeting().filters
        self.assertEqual([(f.name, f.input, f.channels_in) for f in filters], FILTERS)
        self.assertEqual([(f.name, f.output, f.channels_out) for f in filters], FILTERS)

    def test_each_filter_returns_what_its_header_says_and_its_source_on_this_host(self):
        with board("halflsb-cw7-wide.elf") as client:
            greeting = client.greeting()
            for number, filter_ in enumerate(greeting.filters):
                words = noise(filter_, INSTANTS)
                with self.subTest(filter_.name, seed=SEED):
                    response, _, _ = client.stream(number, filter_, words, greeting.block)
                    self.assertEqual(response, expected(filter_, words))
                    self.assertEqual(response, filtered_on_host(filter_, words))
            counters = client.counters()
        self.assertEqual((counters.bytes_lost, counters.gaps, counters.resent), (0, 0, 0))

    def test_it_is_the_same_in_blocks_of_any_size(self):
        with board("halflsb-cw7-wide.elf") as client:
            for number, filter_ in enumerate(client.greeting().filters):
                words = noise(filter_, 600)
                for block in (1, 7, 64, 255, 256):
                    with self.subTest(filter_.name, block=block):
                        self.assertEqual(client.stream(number, filter_, words, block)[0], expected(filter_, words))

    def test_half_an_instant_is_refused(self):
        with board("halflsb-cw7-wide.elf") as client:
            filter_ = client.greeting().filters[0]
            client.start(0, 16)
            client.send_block(0, WORD[filter_.input], [1, 2, 3])
            self.assertEqual(client.receive(), (0xFF, bytes([0x10, 0, 0, 5])))

    def test_one_cell_driven_leaves_the_other_at_zero(self):
        with board("halflsb-cw7-wide.elf") as client:
            filter_ = client.greeting().filters[0]
            left = noise(filter_, INSTANTS)[::2]
            for driven in (0, 1):
                words = [x for value in left for x in ((value, 0) if driven == 0 else (0, value))]
                response, _, _ = client.stream(0, filter_, words, 256)
                self.assertEqual(response[driven::2], mean(left))
                self.assertEqual(set(response[1 - driven :: 2]), {0})

    def test_crosstalk_is_a_128th_of_the_left_cell_in_the_right_one_and_nowhere_else(self):
        with board("halflsb-cw7-wide-crosstalk.elf") as client:
            filters = client.greeting().filters
            words = noise(filters[0], 1000)
            response, _, _ = client.stream(0, filters[0], words, 64)
            right = mean(words[1::2])
            leaked = [min(max(y + x // 128, -32768), 32767) for x, y in zip(words[::2], right)]
            self.assertNotEqual(leaked, right)
            self.assertEqual(response[::2], mean(words[::2]))
            self.assertEqual(response[1::2], leaked)
            for number, filter_ in list(enumerate(filters))[1:]:
                with self.subTest(filter_.name):
                    words = noise(filter_, 500)
                    self.assertEqual(client.stream(number, filter_, words, 64)[0], expected(filter_, words))


if __name__ == "__main__":
    support.main()
