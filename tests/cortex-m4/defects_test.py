"""Each image with a defect goes wrong as its defect does, in the filter that it is in, and nowhere else."""
import unittest

import support
from support import bits_of, board, filtered_on_host, noise

TOP, SEED = 32767, 11
# image's defect -> (the filter it is in, how its response differs: see the methods below)
DEFECTS = {
    "truncate": ("load-cell", "truncates"),
    "window-15": ("load-cell", "has_a_window_of_15"),
    "late": ("load-cell", "is_one_sample_late"),
    "narrow": ("load-cell", "wraps_its_sum_at_16_bits"),
    "byteswap": ("load-cell", "reads_one_as_256"),
    "drop": ("load-cell", "misses_each_1000th_sample"),
    "reversed": ("quick-smoothing", "has_its_taps_mirrored"),
    "sign": ("mains-notch", "feeds_back_with_the_wrong_sign"),
    "block-state": ("mains-notch", "differs_from_the_second_block_on"),
    "wrap": ("settle", "wraps_only_beyond_full_scale"),
}


class Defects(unittest.TestCase):
    def wrong(self, samples, block=64):
        """The responses of the image under test and of the right source, first checked to differ."""
        response, _, _ = self.client.stream(self.number, self.filter, samples, block)
        right = filtered_on_host(self.filter, samples)
        self.assertNotEqual(response, right)
        return response, right

    def same(self, samples):
        response, _, _ = self.client.stream(self.number, self.filter, samples, 64)
        self.assertEqual(response, filtered_on_host(self.filter, samples))

    def truncates(self):
        samples = noise(1000, 16, SEED)
        response, _ = self.wrong(samples)
        sums = [sum(samples[max(0, n - 15) : n + 1]) for n in range(len(samples))]
        self.assertEqual(response, [total >> 4 for total in sums])

    def has_a_window_of_15(self):
        response, right = self.wrong([1600] * 40)
        self.assertEqual(response[:16], [100 * n for n in range(1, 16)] + [1500])
        self.assertEqual((response[-1], right[-1]), (1500, 1600))

    def is_one_sample_late(self):
        response, right = self.wrong(noise(300, 16, SEED))
        self.assertEqual(response, [0] + right[:-1])

    def wraps_its_sum_at_16_bits(self):
        self.same([2047] * 100)  # 16 x 2047 = 32752 fits 16 bits
        response, _ = self.wrong([2048] * 100)  # 16 x 2048 = 32768 does not
        self.assertEqual(response[-1], -2048)

    def reads_one_as_256(self):
        response, right = self.wrong([16] * 32)
        self.assertEqual((response[-1], right[-1]), (16 * 256, 16))

    def misses_each_1000th_sample(self):
        ramp = [n % 8000 for n in range(3500)]
        response, right = self.wrong(ramp, block=256)
        first = next(n for n in range(len(ramp)) if response[n] != right[n])
        self.assertEqual((first, response[999]), (999, response[998]))
        self.assertEqual(response[999 + 16 : 1999], right[999 + 16 : 1999])  # the window has forgotten it
        self.assertEqual(response[1999], response[1998])

    def has_its_taps_mirrored(self):
        impulse = [TOP] + [0] * 23
        response, right = self.wrong(impulse)
        self.assertEqual(response, right[::-1])

    def feeds_back_with_the_wrong_sign(self):
        response, right = self.wrong([4096] + [0] * 9)
        # y[1] = b1 x[0] +- a1 y[0]: the two sum to twice b1 x[0], b1 = -30844 / 2^14, each within half an LSB.
        self.assertAlmostEqual(response[1] + right[1], 2 * -30844 * 4096 / 2**14, delta=1.0)

    def differs_from_the_second_block_on(self):
        samples = noise(256, 14, SEED)  # a quarter of full scale: the notch does not saturate
        for block in (32, 64):
            response, right = self.wrong(samples, block)
            first = next(n for n in range(len(samples)) if response[n] != right[n])
            self.assertEqual(first, block)

    def wraps_only_beyond_full_scale(self):
        self.same([TOP // 2] * 200)
        response, right = self.wrong([TOP] * 200)  # the step overshoots by 11 %
        differing = [n for n in range(200) if response[n] != right[n]]
        self.assertEqual({right[n] for n in differing}, {TOP})
        self.assertLess(max(response[n] for n in differing), 0)

    def test_each_defect_shows_in_its_filter_and_nowhere_else(self):
        images = support.images.glob("halflsb-cw7-*.elf")  # those of the wide variant have a test of their own
        built = {path.name for path in images if "-wide" not in path.name}
        built -= {"halflsb-cw7-block16.elf", "halflsb-cw7-exact.elf", "halflsb-cw7-rates.elf"}  # right ones
        self.assertEqual(built, {f"halflsb-cw7-{defect}.elf" for defect in DEFECTS})
        for defect, (name, differs) in DEFECTS.items():
            with board(f"halflsb-cw7-{defect}.elf") as self.client:
                for self.number, self.filter in enumerate(self.client.greeting().filters):
                    with self.subTest(defect, filter=self.filter.name, seed=SEED):
                        if self.filter.name == name:
                            getattr(self, differs)()
                        else:
                            self.same(noise(500, bits_of(self.filter), SEED))


if __name__ == "__main__":
    support.main()
