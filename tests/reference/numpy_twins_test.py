"""numpy_twins.py itself against sequences worked by hand and in the literature, and its float32 against the C library.

Sources stand beside the checks; those marked MEMORY were not read in the book but computed for the set-up it is remembered
to have.
"""
import ctypes
import random
import unittest
from fractions import Fraction

import numpy as np
import twin_float
import twin_words
from numpy_twins import make_chain


def response(kind, words, arithmetic, codes, formats="i8"):
    return make_chain([(kind, words, arithmetic)], formats, formats).process(codes)


def first_order(a, rounding, start, count):
    """y[n] = a y[n-1] + x[n] in whole LSB, the product rounded, an impulse of `start`."""
    said = {"rounding": rounding, "coefficient_fraction_bits": 3}
    return response("iir", {"b": [1.0], "a": [1.0, -a]}, said, [start] + [0] * (count - 1))


class Rounding(unittest.TestCase):
    def test_each_rounding_at_the_tie_and_beside_it(self):
        wanted = {  # of -5 .. 5 quarters
            "floor": [-2, -1, -1, -1, -1, 0, 0, 0, 0, 1, 1],
            "toward-zero": [-1, -1, 0, 0, 0, 0, 0, 0, 0, 1, 1],
            "half-up": [-1, -1, -1, 0, 0, 0, 0, 1, 1, 1, 1],
            "half-away": [-1, -1, -1, -1, 0, 0, 0, 1, 1, 1, 1],
            "half-even": [-1, -1, -1, 0, 0, 0, 0, 0, 1, 1, 1],
        }
        for rounding, numbers in wanted.items():
            self.assertEqual([twin_words.shortened(n, 2, 0, rounding) for n in range(-5, 6)], numbers, rounding)
        self.assertEqual([twin_words.shortened(n, 1, 0, "half-even") for n in (-5, -3, 3, 5)], [-2, -2, 2, 2])

    def test_words_hold_their_ends_and_wrap_beyond_them(self):
        numbers = [127, 128, -128, -129, 383, -385]
        self.assertEqual([twin_words.held(n, 8, "wrap") for n in numbers], [127, -128, -128, 127, 127, 127])
        self.assertEqual([twin_words.held(n, 8, "saturate") for n in numbers], [127, 127, -128, -128, 127, -128])


class LimitCycles(unittest.TestCase):
    """Zero-input limit cycles of the first order, computed for the set-ups of the books."""

    def test_oppenheim_and_schafer_7_8_of_an_impulse_lsb_1_8(self):  # the example: MEMORY
        self.assertEqual(first_order(0.5, "half-away", 7, 6), [7, 4, 2, 1, 1, 1])
        self.assertEqual(first_order(-0.5, "half-away", 7, 6), [7, -4, 2, -1, 1, -1])
        self.assertEqual(first_order(-0.5, "half-up", 7, 7), [7, -3, 2, -1, 1, 0, 0])

    def test_proakis_and_manolakis_9_6_15_16_of_an_impulse_lsb_1_16(self):
        self.assertEqual(first_order(0.5, "half-away", 15, 6), [15, 8, 4, 2, 1, 1])
        self.assertEqual(first_order(-0.5, "half-away", 15, 7), [15, -8, 4, -2, 1, -1, 1])
        self.assertEqual(first_order(0.75, "half-away", 15, 9), [15, 11, 8, 6, 5, 4, 3, 2, 2])
        self.assertEqual(first_order(-0.75, "half-away", 15, 10), [15, -11, 8, -6, 5, -4, 3, -2, 2, -2])

    def test_the_dead_band_is_what_jackson_says(self):
        """floor(0.5 / (1 - |a|)) LSB, ties away from zero (Jackson, MEMORY; exhaustive search agrees)."""
        for eighths in (4, 6, 7):
            a = eighths / 8
            ends = [first_order(sign * a, "half-away", start, 80)[-1] for start in range(-128, 128) for sign in (1, -1)]
            self.assertEqual(max(abs(end) for end in ends), int(0.5 / (1 - a)))

    def test_truncation_leaves_a_one_sided_cycle(self):
        """-(ceil(1 / (1 - a)) - 1) LSB for a > 0, none for a < 0; none at all toward zero."""
        ends = {(a, rounding): {first_order(a, rounding, start, 60)[-1] for start in range(-128, 128)}
                for a in (0.75, -0.75) for rounding in ("floor", "toward-zero")}  # fmt: skip
        self.assertEqual(min(ends[0.75, "floor"]), -3)
        self.assertEqual(max(ends[0.75, "floor"]), 0)
        self.assertEqual(ends[-0.75, "floor"], {0})
        self.assertEqual(ends[0.75, "toward-zero"] | ends[-0.75, "toward-zero"], {0})

    def test_overflow_oscillation_of_oppenheim_and_schafer(self):
        """4-bit words, a1 = 3/4, a2 = -3/4, y[-1] = 3/4, y[-2] = -3/4, each product rounded (the example: MEMORY)."""
        for rounding, overflow, wanted in (
            ("half-away", "wrap", [-6, 6, -6, 6]),
            ("half-up", "wrap", [-6, -8, -1, 5, 5, 0, -4, -3]),
            ("half-away", "saturate", [7, 0, -5, -4, 1, 4, 2, -1, -3, -1, 1, 2]),
        ):
            said = {"rounding": rounding, "rounding_at": "product", "coefficient_fraction_bits": 2, "state_bits": 4,
                    "state_fraction_bits": 0, "state_overflow": overflow}  # fmt: skip
            chain = make_chain([("iir", {"b": [1.0], "a": [1.0, -0.75, 0.75]}, said)], "i8", "i8")
            chain.filters[0].sections[0].s.extend([6, -6])
            self.assertEqual(chain.process([0] * len(wanted)), wanted, (rounding, overflow))


class Structures(unittest.TestCase):
    def test_the_worked_example_of_a_half_up_mean_of_4(self):
        codes = [3, 3, 0, 0, -1, -5, 0]  # sums 3 6 6 6 2 -6 -6
        said = {"rounding": "half-up"}
        self.assertEqual(response("moving-average", {"points": 4}, said, codes), [1, 2, 2, 2, 1, -1, -1])
        said = {"rounding": "toward-zero", "structure": "fresh-sum"}
        self.assertEqual(response("moving-average", {"points": 4}, said, codes), [0, 1, 1, 1, 0, -1, -1])

    def test_fraction_saving_returns_all_of_a_constant(self):
        """What one output drops the next one gets: nothing is lost in the end."""
        said = {"rounding": "floor", "fraction_saving": "on", "coefficient_fraction_bits": 4}
        codes = response("fir", {"taps": [1.3125]}, said, [1] * 32)
        self.assertEqual(sum(codes), 42)  # 32 x 21/16
        self.assertEqual(set(codes), {1, 2})
        said = {"rounding": "half-even", "fraction_saving": "on"}
        self.assertEqual(sum(response("moving-average", {"points": 3}, said, [0, 0, 4] + [0] * 9)), 4)

    def test_a_wide_state_makes_difference_and_leak_one(self):
        """s += x - (s >> k); y = s >> k in C, and the same in the words of a one-pole with k more fraction bits."""
        source, state, wanted, codes = random.Random(5), 0, [], []
        for _ in range(300):
            codes.append(source.choice([-128, 127, source.randrange(-128, 128)]))
            state += codes[-1] - (state >> 3)
            wanted.append(state >> 3)
        said = {"rounding": "floor", "structure": "leak", "state_bits": 16, "state_fraction_bits": 3}
        self.assertEqual(response("one-pole", {"shift_bits": 3}, said, codes), wanted)

    def test_a_cic_is_a_boxcar_to_its_order(self):
        codes = [random.Random(9).randrange(-128, 128) for _ in range(120)]
        for order, factor, delay in ((1, 4, 1), (3, 5, 2), (4, 3, 1)):
            box = np.ones(1, dtype=object)
            for _ in range(order):
                box = np.convolve(box, np.ones(factor * delay, dtype=int))
            gain = (factor * delay) ** order
            words, said = {"order": order, "factor": factor, "delay_samples": delay}, {"rounding": "floor"}
            wanted = [int(v) // gain for v in np.convolve(box, codes)[: len(codes) : factor]]
            self.assertEqual(response("cic-decimator", words, said, codes), wanted)
            stuffed = np.zeros(len(codes) * factor, dtype=int)
            stuffed[::factor] = codes
            wanted = [int(v) * factor // gain for v in np.convolve(box, stuffed)[: len(stuffed)]]
            self.assertEqual(response("cic-interpolator", words, said, codes), wanted)

    def test_a_cic_register_of_hogenauers_width_wraps_harmlessly_and_one_bit_less_does_not(self):
        """N = 4, R = 25, 16 bits in: bit 34 is the highest (Hogenauer 1981, p. 159: parameters seen second-hand)."""
        words, codes = {"order": 4, "factor": 25}, [-32768] * 1000
        last = {}
        for bits in (34, 35):
            last[bits] = response("cic-decimator", words, {"rounding": "floor", "state_bits": bits}, codes, "i16")[-1]
        self.assertEqual(last[35], -32768)
        self.assertNotEqual(last[34], -32768)

    def test_the_median_of_an_even_number_is_an_exact_mean(self):
        self.assertEqual(response("median", {"points": 4}, {"rounding": "half-up"}, [5, 2, 9, -9]), [0, 1, 4, 4])
        self.assertEqual(response("median", {"points": 3}, {"rounding": "floor"}, [5, 2, 9, -9]), [0, 2, 5, 2])


class Float32(unittest.TestCase):
    def test_a_running_sum_of_tenths(self):
        """0.1 added 1000 and 10000 times, IEEE single, left to right (computed, published/float32-accumulation)."""
        for count, total in ((1000, 99.9990463256836), (10000, 999.902893066406)):
            chain = make_chain([("moving-average", {"points": count + 1}, {"number": "float32"})], "f32", "f32")
            chain.process([int(np.float32(0.1).view(np.int32))] * count)
            self.assertAlmostEqual(float(chain.filters[0].total), total, delta=total * 1e-15)

    def test_a_fused_product_is_that_of_the_c_library(self):
        fmaf = ctypes.CDLL("libm.so.6").fmaf
        fmaf.restype, fmaf.argtypes = ctypes.c_float, [ctypes.c_float] * 3
        source, bits = random.Random(11), lambda v: int(np.float32(v).view(np.uint32))
        unlike_double = 0
        with np.errstate(all="ignore"):
            for _ in range(30000):
                scale = source.choice([0, 0, 0, -60, 60, -126])
                a, b, c = (np.float32(source.uniform(-1, 1) * 2.0 ** (source.choice([0, 0, scale]))) for _ in range(3))
                if source.random() < 0.3:  # nearly cancels
                    c = np.float32(-(a * b))
                wanted = fmaf(a, b, c)
                self.assertEqual(bits(twin_float.fused(a, b, c)), bits(wanted), (a, b, c))
                unlike_double += bits(a * b + c) != bits(wanted)
        self.assertGreater(unlike_double, 1000)  # the two ways differ often enough to be told apart

    def test_signs_of_zero_and_infinities(self):
        zero, less = np.float32(0.0), np.float32(-0.0)
        self.assertFalse(np.signbit(twin_float.fused(zero, zero, less)))
        self.assertTrue(np.signbit(twin_float.fused(less, np.float32(1), less)))
        self.assertFalse(np.signbit(twin_float.fused(np.float32(1), np.float32(1), np.float32(-1))))
        tiny = np.float32(1e-45)
        self.assertTrue(np.signbit(twin_float.fused(-tiny, tiny, less)))
        port = twin_words.Port.of("q15")
        for y, code in ((np.inf, 32767), (-np.inf, -32768), (np.nan, 0), (0.99999, 32767), (-0.00004, -1), (1.0, 32767)):
            self.assertEqual(twin_float.to_words(np.float32(y), port, "toward-zero", "saturate"), code)

    def test_a_double_rounds_once(self):
        self.assertEqual(twin_float.float_of((1 << 24) + 1, 0), np.float32(1 << 24))
        self.assertEqual(twin_float.float_of((1 << 24) + 3, -1), np.float32(Fraction((1 << 23) + 2)))
        self.assertEqual(twin_float.float_of(1, -150), np.float32(0.0))
        self.assertEqual(twin_float.float_of(3, -151), np.float32(1.4e-45))
        self.assertTrue(np.isinf(twin_float.float_of((1 << 25) - 1, 103)))


if __name__ == "__main__":
    unittest.main()
