"""The CW-7 says who it is, and which image is running."""
import re
import subprocess
import unittest

import support
from support import board


def build_id_note(image):
    said = subprocess.run(["readelf", "-n", support.images / image], stdout=subprocess.PIPE, text=True, check=True)
    return re.search(r"Build ID: ([0-9a-f]{40})\n", said.stdout)[1]


class TheGreeting(unittest.TestCase):
    def test_it_names_the_running_image_by_its_build_id_note(self):
        for image in ("halflsb-cw7.elf", "halflsb-cw7-truncate.elf"):
            with self.subTest(image), board(image) as client:
                self.assertEqual(client.greeting().build_id, build_id_note(image))

    def test_no_two_images_have_the_same_build_id(self):
        every = sorted(path.name for path in support.images.glob("halflsb-cw7*.elf"))
        self.assertGreater(len(every), 10)
        self.assertEqual(len({build_id_note(image) for image in every}), len(every))

    def test_it_describes_the_board_and_its_filters(self):
        with board("halflsb-cw7.elf") as client:
            greeting = client.greeting()
        self.assertEqual(greeting.serial, "CW7-0042")
        self.assertEqual([(f.name, f.input, f.output) for f in greeting.filters], FILTERS)
        self.assertEqual({(f.injection, f.channels_in, f.channels_out, f.nodes) for f in greeting.filters}, {(0, 1, 1, 0)})
        self.assertEqual((greeting.tick_hz, greeting.tick_bits), (1_000_000_000, 32))
        self.assertEqual((greeting.block, greeting.credit), (256, 4))


Q15, Q31 = 1, 2
FILTERS = [
    ("load-cell", Q15, Q15),
    ("smoothing", Q15, Q15),
    ("quick-smoothing", Q15, Q15),
    ("mains-notch", Q15, Q15),
    ("settle", Q15, Q15),
    ("settle-q31", Q31, Q31),
]

if __name__ == "__main__":
    support.main()
