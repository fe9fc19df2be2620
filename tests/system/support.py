"""What the system tests share: the built program, boards to run it on, rigs and plans in a temporary folder.

Every test file is started as  FILE_test.py BUILD_TREE  and uses unittest from the standard library.
"""
import contextlib
import hashlib
import json
import os
import pathlib
import re
import shutil
import signal
import subprocess
import sys
import tempfile
import time
import unittest

ROOT = pathlib.Path(__file__).resolve().parents[2]
TREE = pathlib.Path(sys.argv[1]).resolve() if len(sys.argv) > 1 else ROOT / ".build" / "release"
HALFLSB = TREE / "runner" / "halflsb"
VIRTUAL_BOARD = TREE / "rigs" / "virtual-board" / "virtual-board"
EMULATE = ROOT / "rigs" / "cortex-m4" / "emulate"
FIRMWARE = TREE / "firmware"
# One run of the program that takes longer than this hangs: generous, for a loaded machine.
LIMIT_S = 120


class Finished:
    """What one run of the program came to."""

    def __init__(self, status, out, err):
        self.status, self.out, self.err = status, out, err

    def __repr__(self):
        return f"status {self.status}\n--- stdout\n{self.out}--- stderr\n{self.err}---"


def sealed(text):
    """run.json with the hash that its content has: what check writes, and what an edit by hand would not."""
    zeros = "0" * 64
    unsealed = re.sub(r'("content_sha256": ")[0-9a-f]{64}', lambda found: found[1] + zeros, text, count=1)
    return unsealed.replace(zeros, hashlib.sha256(unsealed.encode()).hexdigest(), 1)


def halflsb(*arguments, cwd=None, environment=None, limit_s=LIMIT_S, prefix=()):
    env = {**os.environ, "LC_ALL": "C.UTF-8", "COLUMNS": "100", **(environment or {})}
    done = subprocess.run([*map(str, prefix), str(HALFLSB), *map(str, arguments)], cwd=cwd, env=env, timeout=limit_s,
                          stdin=subprocess.DEVNULL, capture_output=True)
    return Finished(done.returncode, done.stdout.decode(), done.stderr.decode())


class Process:
    """A program in the background that says a first line when it is ready; gone at the end of `with`."""

    def __init__(self, command):
        self.command = [str(word) for word in command]

    def __enter__(self):
        self.process = subprocess.Popen(self.command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, stdin=subprocess.DEVNULL)
        self.first_line = self.process.stdout.readline().decode().strip()
        if not self.first_line:
            self.process.wait(10)
            raise RuntimeError(f"{self.command}: {self.process.stderr.read().decode()}")
        return self

    def __exit__(self, *_):
        self.stop()

    def stop(self):
        if self.process.poll() is None:
            self.process.send_signal(signal.SIGTERM)
            try:
                self.process.wait(20)
            except subprocess.TimeoutExpired:
                self.process.kill()
                self.process.wait()
        self.process.stdout.close()
        self.process.stderr.close()


class Case(unittest.TestCase):
    """A test with a folder of its own."""

    maxDiff = None

    def setUp(self):
        self.folder = pathlib.Path(tempfile.mkdtemp(prefix="halflsb-test-"))
        self.addCleanup(shutil.rmtree, self.folder, ignore_errors=True)
        self.link = self.folder / "uart"

    def write(self, name, text):
        path = self.folder / name
        path.write_text(text)
        return path

    def rig(self, port=None, name="rig.toml", baud=921600, wire="", more=""):
        return self.write(name, f"""[board]
name = "bench of the tests"
isolated = true
[link]
use = "serial"
port = "{port or self.link}"
baud = {baud}
[wire]
form = "framed"
{wire}
{more}
""")

    def plan(self, cases, signal="", filter_text=None, rules="[[rule]]\nkind = \"error\"\nmax_lsb = 0.5\n", board_filter="load-cell", name="plan.toml"):
        return self.write(name, f"""title = "plan of the tests"
[signal]
rate_hz = 1200.0
input = "q15"
output = "q15"
filter = "{board_filter}"
{signal}
{filter_text or MOVING_AVERAGE}
{rules}
{cases}
""")

    def virtual_board(self, *options):
        return Process([VIRTUAL_BOARD, "--link", self.link, *options])

    def emulated_board(self, image):
        return Process([EMULATE, FIRMWARE / image, "--link", self.link])

    def check(self, plan, rig, *options, **more):
        return halflsb("check", plan, "--rig", rig, "--out", self.folder / "run", *options, cwd=self.folder, **more)

    def record(self, folder="run"):
        return json.loads((self.folder / folder / "run.json").read_text())

    def assert_status(self, done, status):
        self.assertEqual(done.status, status, repr(done))


MOVING_AVERAGE = """[[filter]]
kind = "moving-average"
points = 16
"""

NOISE = """[[case]]
name = "noise"
[case.stimulus]
shape = "noise"
level_ratio = 0.9
seed = 3
length_samples = 6000
"""

STEP = """[[case]]
name = "step"
[case.stimulus]
shape = "step"
level_ratio = 0.5
at_samples = 10
length_samples = 600
"""


def wait_until(condition, limit_s=20.0, what="it"):
    deadline = time.monotonic() + limit_s
    while not condition():
        if time.monotonic() > deadline:
            raise AssertionError(f"{what} did not happen within {limit_s} s")
        time.sleep(0.02)


def main():
    unittest.main(argv=[sys.argv[0], *sys.argv[2:]], verbosity=1)
