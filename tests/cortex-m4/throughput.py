"""How fast the emulated board takes samples, against a bare echo of as many bytes in the same run.

    throughput.py --images FOLDER [--samples N]

Not a test: the figures are the machine's. The emulator is the limit, not the firmware. On a busy machine look at its
processor time: its two threads hand each byte over to one another, so samples over that time is what a free machine does.
"""
import argparse
import os
import pathlib
import resource
import select
import time

import support
from support import board, emulator, noise
from wire_client import WireClient


def emulators_seconds():
    """Processor time of all emulators that have ended."""
    used = resource.getrusage(resource.RUSAGE_CHILDREN)
    return used.ru_utime + used.ru_stime


def board_samples_per_s(samples, block):
    with board("halflsb-cw7.elf") as client:
        filters = client.greeting().filters
        number = [f.name for f in filters].index("load-cell")
        started = time.monotonic()
        client.stream(number, filters[number], samples, block)
        return len(samples) / (time.monotonic() - started)


def echo_bytes_per_s(count, window=2048):
    with emulator("halflsb-echo.elf") as path, WireClient(path) as client:
        data, sent, back = os.urandom(count), 0, 0
        started = time.monotonic()
        while back < count:
            room = min(window - (sent - back), count - sent)
            readable, writable, _ = select.select([client.line], [client.line] if room > 0 else [], [], 5.0)
            if not readable and not writable:
                raise SystemExit(f"the echo stopped after {back} of {count} bytes")
            if readable:
                back += len(os.read(client.line, 65536))
            if writable:
                sent += os.write(client.line, data[sent : sent + room])
        return count / (time.monotonic() - started)


def main():
    parser = argparse.ArgumentParser()
    parser.add_argument("--images", type=pathlib.Path, required=True)
    parser.add_argument("--samples", type=int, default=50_000)
    options = parser.parse_args()
    support.images = options.images
    samples = noise(options.samples, 16, 1)
    for block in (16, 64, 256):
        blocks = -(-options.samples // block)
        # RESPONSE is the longer frame: 14 bytes of content beside its samples, COBS and a delimiter (docs/wire.md, 5).
        wire_bytes = 2 * options.samples + blocks * (14 + 1 + (2 * block + 14) // 254 + 1)
        before = emulators_seconds()
        rate = board_samples_per_s(samples, block)
        seconds = emulators_seconds() - before
        echo = echo_bytes_per_s(wire_bytes)
        print(
            f"block {block:3}: {rate:6.0f} samples/s, {rate * wire_bytes / options.samples:6.0f} bytes/s to the host;"
            f" bare echo {echo:6.0f} bytes/s; {options.samples / seconds:6.0f} samples in a second of processor time"
        )


if __name__ == "__main__":
    main()
