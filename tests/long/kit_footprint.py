"""Flash and RAM of the kit, from the map of the firmware as linked."""
import json
import subprocess

from measure import Figures
from support import FIRMWARE, ROOT


def main():
    figures = Figures()
    for image, blocks in (("halflsb-cw7", ()), ("halflsb-cw7-block16", ("--block-samples=16", "--credit-blocks=1"))):
        command = [ROOT / "rigs" / "cortex-m4" / "footprint", FIRMWARE / f"{image}.map", "--json", *blocks]
        kit = json.loads(subprocess.run(command, stdout=subprocess.PIPE, check=True).stdout)["kit"]
        flash, ram = kit["flash_bytes"], kit["ram_beside_blocks_bytes"]
        figures.add(f"flash and RAM of the kit on Cortex-M4, {image}", "flash < 3,072 bytes, RAM beside the blocks in flight < 512",
                    f"{flash:,} bytes, {ram:,} bytes", 1000 < flash < 3072 and 0 < ram < 512)
    figures.end()


main()
