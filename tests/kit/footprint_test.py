#!/usr/bin/python3
"""What the README of the kit promises of a Cortex-M4.     footprint_test.py ARM_GCC SOURCE_DIR"""

import pathlib
import re
import subprocess
import sys
import tempfile

FLASH_BYTES_MOST = 3 * 1024
FIXED_RAM_BYTES_MOST = 512

compiler, root = sys.argv[1], pathlib.Path(sys.argv[2])
sources = sorted((root / "rigs/kit").glob("*.c"))
flags = "-mcpu=cortex-m4 -mthumb -Os -std=c99 -Wall -Wextra -Wconversion -Wshadow -pedantic -Werror".split()
failures = 0


def footprint(block, credit, word):
    macros = [f"-DHALFLSB_BLOCK_SAMPLES={block}", f"-DHALFLSB_CREDIT_BLOCKS={credit}", f"-DHALFLSB_WORD_BYTES={word}"]
    text = ram = 0
    with tempfile.TemporaryDirectory() as folder:
        for source in sources:
            target = pathlib.Path(folder) / (source.stem + ".o")
            subprocess.run([compiler, *flags, f"-I{root}", *macros, "-c", source, "-o", target], check=True)
            size = subprocess.run([compiler.replace("gcc", "size"), target], check=True, capture_output=True, text=True)
            fields = size.stdout.splitlines()[1].split()
            text += int(fields[0]) + int(fields[1])
            ram += int(fields[1]) + int(fields[2])
    return text, ram


def ram_of_blocks(block, credit, word):
    """README.md: credit x (receive bytes + answer bytes)."""
    samples = block * word
    receive = max(samples + 10 + (samples + 7) // 254, 53)
    answer = 12 + (samples + 3) // 4 * 4 + 4
    return credit * (receive + answer)


fixed = set()
for block, credit, word in ((16, 1, 2), (64, 4, 2), (64, 4, 4), (256, 4, 2), (256, 8, 4)):
    text, ram = footprint(block, credit, word)
    blocks = ram_of_blocks(block, credit, word)
    fixed.add(ram - blocks)
    print(f"block {block}, credit {credit}, word {word}: flash {text}, RAM {ram} = {blocks} for the blocks + {ram - blocks}")
    failures += not text <= FLASH_BYTES_MOST
    failures += not 0 <= ram - blocks <= FIXED_RAM_BYTES_MOST

readme = (root / "rigs/kit/README.md").read_text()
stated = int(re.search(r"fixed part of (\d+) bytes", readme).group(1))
print(f"fixed part: {sorted(fixed)}; README: {stated}")
failures += not max(fixed) <= stated
sys.exit(1 if failures else 0)
