"""The kit stays as small as docs promise, in the firmware as linked."""
import json
import subprocess
import unittest

import support
from support import ROOT


def footprint(image, *options):
    command = [ROOT / "rigs/cortex-m4/footprint", support.images / f"{image}.map", "--json", *options]
    return json.loads(subprocess.run(command, stdout=subprocess.PIPE, check=True).stdout)


def loaded_bytes(image):
    """Bytes of flash as the program headers have them: of each segment to be loaded, what the file holds."""
    said = subprocess.run(["readelf", "-lW", support.images / f"{image}.elf"], stdout=subprocess.PIPE, text=True, check=True)
    rows = [line.split() for line in said.stdout.splitlines() if line.strip().startswith("LOAD")]
    return sum(int(row[4], 16) for row in rows)


class Footprint(unittest.TestCase):
    def test_the_kit_takes_under_3_kib_of_flash_and_512_bytes_of_ram_beside_the_blocks(self):
        for image, options in (("halflsb-cw7", ()), ("halflsb-cw7-block16", ("--block-samples=16", "--credit-blocks=1"))):
            with self.subTest(image):
                kit = footprint(image, *options)["kit"]
                self.assertGreater(kit["flash_bytes"], 1000)
                self.assertLess(kit["flash_bytes"], 3 * 1024)
                self.assertGreater(kit["ram_beside_blocks_bytes"], 0)
                self.assertLess(kit["ram_beside_blocks_bytes"], 512)

    def test_the_parts_add_up_to_the_image(self):
        parts = footprint("halflsb-cw7")
        total = sum(part["flash_bytes"] for part in parts.values())
        # Beside the parts: the build-id note (36 bytes) and padding, at most 3 bytes for each of about 90 functions.
        self.assertLessEqual(total, loaded_bytes("halflsb-cw7"))
        self.assertGreater(total, loaded_bytes("halflsb-cw7") - 36 - 3 * 90)


if __name__ == "__main__":
    support.main()
