"""rigs/cortex-m4/emulate: a line that can be opened again and again, and an end that leaves nothing behind."""
import fcntl
import os
import pathlib
import select
import shutil
import signal
import struct
import subprocess
import sys
import tempfile
import termios
import time
import tty
import unittest

import support
from support import EMULATE, emulator

TIOCGEXCL = 0x80045440  # "is it claimed?"; the termios module has no name for it
ALL_BYTES = bytes(range(256))


def exchange(path, data, wait_s=5.0):
    """Opens the line, sends, returns what came until as much came back, closes."""
    line = os.open(path, os.O_RDWR | os.O_NOCTTY | os.O_NONBLOCK)
    tty.setraw(line)
    os.write(line, data)
    got, until = b"", time.monotonic() + wait_s
    while len(got) < len(data) and select.select([line], [], [], max(0, until - time.monotonic()))[0]:
        got += os.read(line, 4096)
    os.close(line)
    return got


def emulators(image):
    """Process numbers of the emulators that run this image."""
    found = set()
    for folder in pathlib.Path("/proc").glob("[0-9]*"):
        try:
            command = (folder / "cmdline").read_bytes().split(b"\0")
        except OSError:
            continue
        if command[0].endswith(b"qemu-system-arm") and os.fsencode(image) in command:
            found.add(int(folder.name))
    return found


def wait_until(condition, wait_s=5.0):
    until = time.monotonic() + wait_s
    while not condition():
        if time.monotonic() > until:
            return False
        time.sleep(0.01)
    return True


class Emulate(unittest.TestCase):
    def setUp(self):
        self.folder = tempfile.TemporaryDirectory()
        self.addCleanup(self.folder.cleanup)
        self.link = os.path.join(self.folder.name, "board")
        # A copy of our own, so that other tests' emulators are not taken for ours.
        self.image = os.path.join(self.folder.name, "echo.elf")
        shutil.copy(support.images / "halflsb-echo.elf", self.image)

    def start(self, *options, image=None):
        process = subprocess.Popen(
            [EMULATE, image or self.image, "--link", self.link, *options],
            stdout=subprocess.PIPE,
            stderr=subprocess.PIPE,
            text=True,
        )
        self.addCleanup(process.stdout.close)
        self.addCleanup(process.stderr.close)
        self.addCleanup(lambda: process.poll() is None and process.kill())
        return process

    def mine(self):
        return emulators(self.image)

    def refused(self, problem, *options, image=None):
        process = self.start(*options, image=image)
        self.assertEqual(process.wait(20), 1)
        self.assertIn(problem, process.stderr.read())
        self.assertEqual(process.stdout.read(), "")
        self.assertEqual(emulators(image or self.image), set())

    def test_the_line_can_be_opened_many_times_and_loses_no_first_byte(self):
        with emulator("halflsb-echo.elf") as path:
            started = time.monotonic()
            for _ in range(20):
                self.assertEqual(exchange(path, ALL_BYTES), ALL_BYTES)
            # A line that nobody holds open costs a second each time it is opened.
            self.assertLess(time.monotonic() - started, 10.0)

    def test_a_line_claimed_by_one_host_is_free_for_the_next(self):
        def is_claimed(line):
            return struct.unpack("i", fcntl.ioctl(line, TIOCGEXCL, bytes(4)))[0] != 0

        with emulator("halflsb-echo.elf") as path:
            seen = os.open(path, os.O_RDONLY | os.O_NOCTTY | os.O_NONBLOCK)
            self.addCleanup(os.close, seen)
            host = os.open(path, os.O_RDWR | os.O_NOCTTY | os.O_NONBLOCK)
            fcntl.ioctl(host, termios.TIOCEXCL)
            self.assertTrue(is_claimed(seen))
            os.close(host)
            self.assertTrue(wait_until(lambda: not is_claimed(seen)))

    def test_a_signal_stops_it_and_leaves_neither_process_nor_link(self):
        for number in (signal.SIGTERM, signal.SIGINT, signal.SIGHUP):
            with self.subTest(number.name):
                process = self.start()
                self.assertEqual(process.stdout.readline(), f"ready {self.link}\n")
                self.assertEqual(len(self.mine()), 1)
                process.send_signal(number)
                self.assertEqual(process.wait(5), 0)
                self.assertEqual(self.mine(), set())
                self.assertFalse(os.path.lexists(self.link))

    def test_a_signal_while_it_waits_for_the_board_stops_it_at_once(self):
        process = self.start("--wait-s", "60", image=self.silent_image())
        self.assertTrue(wait_until(lambda: len(emulators(self.silent)) == 1))
        process.terminate()
        self.assertEqual(process.wait(5), 0)
        self.assertEqual(emulators(self.silent), set())
        self.assertFalse(os.path.lexists(self.link))

    def test_it_stops_within_three_seconds_when_nobody_reads_the_line(self):
        process = self.start()
        process.stdout.readline()
        line = os.open(self.link, os.O_RDWR | os.O_NOCTTY | os.O_NONBLOCK)
        self.addCleanup(os.close, line)
        full = time.monotonic() + 20
        while time.monotonic() < full:  # until the emulator, blocked in its transmitter, takes no more
            if not select.select([], [line], [], 1.0)[1]:
                break
            os.write(line, ALL_BYTES)
        else:
            self.fail("the line never filled up")
        started = time.monotonic()
        process.terminate()
        self.assertEqual(process.wait(5), 0)
        self.assertLess(time.monotonic() - started, 3.0)
        self.assertEqual(self.mine(), set())

    def test_killed_outright_it_takes_the_emulator_along(self):
        process = self.start()
        process.stdout.readline()
        process.kill()
        process.wait(5)
        self.assertTrue(wait_until(lambda: self.mine() == set()))
        # The link it could not remove is no obstacle for the next one.
        self.assertTrue(os.path.islink(self.link))
        again = self.start()
        self.assertEqual(again.stdout.readline(), f"ready {self.link}\n")
        self.assertEqual(exchange(self.link, ALL_BYTES), ALL_BYTES)
        again.terminate()
        self.assertEqual(again.wait(5), 0)

    def test_with_parent_dies_it_ends_when_its_parent_is_killed(self):
        parent = subprocess.Popen(
            [
                sys.executable,
                "-c",
                "import subprocess, sys, time\nsubprocess.Popen(sys.argv[1:])\ntime.sleep(60)",
                *map(str, [EMULATE, self.image, "--link", self.link, "--parent-dies"]),
            ],
            stdout=subprocess.PIPE,
            text=True,
        )
        self.addCleanup(parent.stdout.close)
        self.assertEqual(parent.stdout.readline(), f"ready {self.link}\n")
        parent.kill()
        parent.wait()
        self.assertTrue(wait_until(lambda: self.mine() == set()))
        self.assertTrue(wait_until(lambda: not os.path.lexists(self.link)))

    def image_with(self, name, vectors):
        """The echo image with other bytes where the processor starts."""
        image = bytearray(pathlib.Path(self.image).read_bytes())
        (headers,) = struct.unpack_from("<I", image, 28)  # e_phoff
        (code,) = struct.unpack_from("<I", image, headers + 4)  # p_offset of the first segment
        image[code : code + len(vectors)] = vectors
        path = os.path.join(self.folder.name, name)
        pathlib.Path(path).write_bytes(image)
        return path

    def silent_image(self):
        branch_to_itself = struct.pack("<IIH", 0x20020000, 0x08000009, 0xE7FE)
        self.silent = self.image_with("silent.elf", branch_to_itself)
        return self.silent

    def test_a_board_that_never_answers_is_given_up(self):
        silent = self.silent_image()
        self.refused("the board sent no answer to HELLO within 1 s, 0 bytes came", "--wait-s", "1", image=silent)

    def test_a_processor_that_cannot_start_is_reported(self):
        locked_up = self.image_with("locked-up.elf", bytes(64))
        self.refused("qemu-system-arm ended with status -6: qemu: fatal: Lockup", image=locked_up)

    def test_what_it_cannot_start_it_says(self):
        self.refused("no such image", image=os.path.join(self.folder.name, "none.elf"))
        pathlib.Path(self.link).write_text("mine")
        self.refused("exists and is not a link")
        self.assertEqual(pathlib.Path(self.link).read_text(), "mine")

    def test_an_emulator_that_ends_by_itself_is_noticed(self):
        process = self.start()
        process.stdout.readline()
        (number,) = self.mine()
        os.kill(number, signal.SIGKILL)
        self.assertEqual(process.wait(5), 1)
        self.assertIn("ended with status -9", process.stderr.read())
        self.assertFalse(os.path.lexists(self.link))


if __name__ == "__main__":
    support.main()
