"""What the tests of the emulated board share: images, a running board, samples, the same filters on this host."""
import argparse
import contextlib
import os
import pathlib
import random
import struct
import subprocess
import sys
import tempfile
import unittest

from wire_client import WORD, WireClient

ROOT = pathlib.Path(__file__).resolve().parents[2]
EMULATE = ROOT / "rigs/cortex-m4/emulate"

images = None  # folder of the firmware images
on_host = None  # program that runs rigs/filters on this host


def main():
    """unittest.main() with the folder of the images and the host program before its own arguments."""
    global images, on_host
    parser = argparse.ArgumentParser()
    parser.add_argument("--images", type=pathlib.Path, required=True)
    parser.add_argument("--on-host", type=pathlib.Path)
    options, rest = parser.parse_known_args()
    # The test module imports this one by name, so its copy of the settings is the one to fill.
    support = sys.modules["support"]
    support.images, support.on_host = options.images, options.on_host
    unittest.main(module="__main__", argv=[sys.argv[0], *rest], verbosity=2)


@contextlib.contextmanager
def emulator(image, *options):
    """A running board, as the path of its line."""
    with tempfile.TemporaryDirectory() as folder:
        link = os.path.join(folder, "board")
        process = subprocess.Popen(
            [EMULATE, images / image, "--link", link, "--parent-dies", *options], stdout=subprocess.PIPE, text=True
        )
        try:
            said = process.stdout.readline()
            if said != f"ready {link}\n":
                raise AssertionError(f"emulate {image} said {said!r}")
            yield link
        finally:
            process.terminate()
            process.wait(10)
            process.stdout.close()


@contextlib.contextmanager
def board(image, *options):
    with emulator(image, *options) as link, WireClient(link) as client:
        yield client


def noise(count, bits, seed):
    """Uniform over the whole range, both ends included in the first two samples."""
    source = random.Random(seed)
    top = 1 << (bits - 1)
    return [-top, top - 1] + [source.randrange(-top, top) for _ in range(count - 2)]


def filtered_on_host(filter_, samples):
    letter_in, letter_out = WORD[filter_.input], WORD[filter_.output]
    done = subprocess.run(
        [on_host, filter_.name], input=struct.pack(f"<{len(samples)}{letter_in}", *samples), stdout=subprocess.PIPE, check=True
    )
    return list(struct.unpack(f"<{len(samples)}{letter_out}", done.stdout))


def bits_of(filter_):
    return 8 * struct.calcsize(WORD[filter_.input])
