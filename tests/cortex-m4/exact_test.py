"""Each filter of each right image against what its plan in rigs/cw-7/exact promises, bit for bit, in the emulator: the
machine code that the cross compiler made, its libraries of 64-bit and of floating-point arithmetic among it."""
import pathlib
import struct
import sys
import unittest

sys.path.insert(0, str(pathlib.Path(__file__).resolve().parents[1] / "rigs"))
import exact_plans  # noqa: E402
import support  # noqa: E402
from support import board  # noqa: E402

IMAGES = ("halflsb-cw7.elf", "halflsb-cw7-wide.elf", "halflsb-cw7-exact.elf")
F32, SAMPLES = 5, 600


def floats(words):
    return list(struct.unpack(f"<{len(words)}f", struct.pack(f"<{len(words)}i", *words)))


def bits(numbers):
    return list(struct.unpack(f"<{len(numbers)}i", struct.pack(f"<{len(numbers)}f", *numbers)))


class Exact(unittest.TestCase):
    def test_each_filter_returns_what_its_plan_promises(self):
        promised = set(exact_plans.steady_names())
        for image in IMAGES:
            with board(image) as client:
                greeting = client.greeting()
                for number, filter_ in enumerate(greeting.filters):
                    promise = exact_plans.Promise(filter_.name)
                    promised.discard(filter_.name)
                    for signal, words in promise.signals(SAMPLES):
                        with self.subTest(filter_.name, image=image, signal=signal):
                            sent = floats(words) if filter_.input == F32 else words
                            got, _, _ = client.stream(number, filter_, sent, greeting.block)
                            self.assertEqual(bits(got) if filter_.input == F32 else got, promise.response(words))
        self.assertEqual(promised, set(), "plans of filters that no image has")


if __name__ == "__main__":
    support.main()
