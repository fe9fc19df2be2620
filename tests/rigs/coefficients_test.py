#!/usr/bin/python3
"""The committed coefficients are what make.py writes, and what their names say."""

import subprocess
import sys
import unittest

import numpy
from scipy import signal

import models

RATE_HZ = 1200.0


def gain_db(sections, frequency_hz):
    b, a = numpy.array([1.0]), numpy.array([1.0])
    for at in range(0, len(sections), 5):
        b0, b1, b2, a1, a2 = sections[at : at + 5]
        b, a = numpy.polymul(b, [b0, b1, b2]), numpy.polymul(a, [1.0, a1, a2])
    _, h = signal.freqz(b, a, worN=[frequency_hz], fs=RATE_HZ)
    return 20.0 * numpy.log10(abs(h[0]))


class Coefficients(unittest.TestCase):
    def test_make_writes_what_is_committed(self):
        done = subprocess.run([sys.executable, models.COEFFICIENTS / "make.py", "--check"], capture_output=True, text=True)
        self.assertEqual((done.returncode, done.stdout), (0, ""))

    def test_the_notch_takes_out_50_hz_and_leaves_0_hz(self):
        # The text has 12 decimals: a zero off by 1e-12 leaves less than 1e-10 of the gain of the poles, 1 / (1 - r) = 40.
        self.assertLess(gain_db(models.design("mains-notch"), 50.0), -150.0)
        self.assertAlmostEqual(gain_db(models.design("mains-notch"), 1e-9), 0.0, delta=1e-6)

    def test_settle_is_3_db_down_at_a_fiftieth_of_the_rate(self):
        # Butterworth: 10 log10(2) = 3.0103 dB at the corner, whatever the order.
        self.assertAlmostEqual(gain_db(models.design("settle"), 0.02 * RATE_HZ), -3.0103, delta=1e-3)
        self.assertAlmostEqual(gain_db(models.design("settle"), 1e-9), 0.0, delta=1e-6)

    def test_smoothing_is_symmetric_and_quick_smoothing_is_not(self):
        taps = models.design("smoothing")
        self.assertEqual(len(taps), 31)
        self.assertEqual(taps, taps[::-1])
        quick = models.design("quick-smoothing")
        self.assertNotEqual(quick, quick[::-1])
        for t in (taps, quick):
            self.assertAlmostEqual(sum(t), 1.0, delta=31 * 0.5e-12)


if __name__ == "__main__":
    unittest.main()
