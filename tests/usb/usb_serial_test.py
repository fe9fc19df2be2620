#!/usr/bin/env python3
"""A board behind a real USB serial driver: stable names, rates, locks, permissions, unplugging, renumbering.

    usb_serial_test.py BUILD_TREE [unittest arguments]

Debian's kernel with its FTDI driver runs in an emulated PC; halflsb runs in it against a virtual board out here. One
machine serves all tests; each leaves it as it found it: adapter A plugged in as /dev/ttyUSB0, no other.
"""
import json
import pathlib
import re
import shutil
import signal
import socket
import subprocess
import sys
import tempfile
import threading
import time
import unittest

from kernel_image import MODULES, ROOT, Missing, initramfs, kernel_folder
from line_bridge import LineBridge
from machine import EMULATOR, INIT, Machine
from plans_and_rigs import ANSWER_S, A, B, files

TREE = pathlib.Path(sys.argv[1]) if len(sys.argv) > 1 else ROOT / ".build" / "release"
HALFLSB = TREE / "runner" / "halflsb"
VIRTUAL_BOARD = TREE / "rigs" / "virtual-board" / "virtual-board"
# An emulated PC on a loaded machine: limits that only a hang reaches.
BOOT_S, CHECK_S = 120.0, 60.0


class Board:
    """A virtual board, bridged to the far end of a line of the machine."""

    def __init__(self, far_end, *options):
        self.process = subprocess.Popen([str(VIRTUAL_BOARD), "--parent-dies", "--filter-set", "cw-7", *options],
                                        stdin=subprocess.DEVNULL, stdout=subprocess.PIPE)
        device = self.process.stdout.readline().decode().strip()
        self.bridge = LineBridge(far_end, device)

    def stop(self):
        self.bridge.stop()
        self.process.send_signal(signal.SIGCONT)
        self.process.terminate()
        try:
            self.process.wait(10)
        except subprocess.TimeoutExpired:
            self.process.kill()
            self.process.wait()
        self.process.stdout.close()


def setUpModule():
    global folder, machine, board
    for program, package in ((EMULATOR, "qemu-system-x86"), ("dpkg", "dpkg"), ("apt-get", "apt")):
        if shutil.which(program) is None:
            raise Missing(f"{program} is not installed; the Debian package is {package}")
    folder = pathlib.Path(tempfile.mkdtemp(prefix="halflsb-usb-"))
    unittest.addModuleCleanup(shutil.rmtree, folder, ignore_errors=True)
    kernel = kernel_folder()
    machine = Machine(kernel, initramfs(kernel, HALFLSB, INIT, files()), folder, adapters=2)
    unittest.addModuleCleanup(machine.stop)
    said = machine.boot(BOOT_S)
    if len(said) != 1:
        raise AssertionError(f"modules {MODULES}: {said}\n{machine.kernel_said()}")
    board = Board(machine.line_path(0))
    unittest.addModuleCleanup(board.stop)
    machine.plug(0, "CW7-A")
    machine.until("test -c /dev/ttyUSB0")
    print(said[0].replace("ready", "kernel"), flush=True)


class UsbSerial(unittest.TestCase):
    maxDiff = None
    runs = 0

    # --- what the tests are made of ---

    def check_script(self, plan, rig_name, before=""):
        """In a folder of its own, of which `self.out` is the name."""
        UsbSerial.runs += 1
        self.out = f"/tmp/run{UsbSerial.runs}"
        return f"{before} /halflsb check /root/{plan}.toml --rig /root/{rig_name}.toml --out {self.out}"

    def check(self, plan, rig_name, status):
        done = machine.run(self.check_script(plan, rig_name), CHECK_S)
        self.assertEqual(done.status, status, f"{plan} {rig_name}: {done!r}\n{machine.kernel_said()[-1500:]}")
        return done

    def record(self, out=None):
        return json.loads(machine.run(f"cat {out or self.out}/run.json").out)

    def start_and_wait_for_the_second_case(self, plan, rig_name, before=""):
        """The number of the command, which has finished its first case and streams the second."""
        number = machine.start(self.check_script(plan, rig_name, before))
        machine.until(f"grep -q 1/2 /tmp/{number}.out", CHECK_S)
        sent = board.bridge.to_board_bytes
        until = time.monotonic() + CHECK_S
        while board.bridge.to_board_bytes < sent + 4000:
            self.assertLess(time.monotonic(), until, "the second case does not stream")
            time.sleep(0.005)
        return number

    def told_the_adapter(self, action):
        """What the adapter was told during `action`, as lines "usb_serial_set_baud … baud rate 921600"."""
        log = folder / "adapter.log"
        start = len(log.read_text())
        action()
        return log.read_text()[start:]

    # --- names and rates ---

    def test_ports_lists_the_adapter_by_its_stable_name(self):
        done = machine.run("/halflsb ports")
        self.assertEqual(done.status, 0, repr(done))
        self.assertIn("/dev/ttyUSB0", done.out)
        self.assertIn(A, done.out)

    def test_the_release_plan_passes_at_each_rate_and_the_adapter_is_set_to_it(self):
        for baud in (921600, 3000000, 250000):  # the last has no constant in termios
            with self.subTest(baud=baud):
                told = self.told_the_adapter(lambda: self.check("acceptance", f"any-{baud}", 0))
                record = self.record()
                self.assertEqual([case["verdict"] for case in record["verdict"]["cases"]], ["pass"] * 3)
                self.assertIn("/dev/ttyUSB0", json.dumps(record["board"]))
                rates = re.findall(r"baud(?: rate)? (\d+)", told)
                self.assertTrue(rates, told)
                # The divisor has eighths: 3 MHz / 3.25 is 923077, 0.16 % off, as in the adapter itself.
                self.assertLess(abs(int(rates[-1]) / baud - 1.0), 0.002, told)

    def test_a_rate_beyond_the_adapter_is_refused_before_a_byte_is_sent(self):
        sent = board.bridge.to_board_bytes
        done = self.check("acceptance", "any-4000000", 3)
        self.assertIn("4000000 is not supported", done.text)
        self.assertEqual(board.bridge.to_board_bytes, sent)
        self.check("two", "any-921600", 0)

    def test_the_adapter_is_asked_for_low_latency(self):
        machine.unplug(0)  # or an earlier test has asked already
        machine.until("! test -e /dev/ttyUSB0")
        machine.plug(0, "CW7-A")
        machine.until("test -c /dev/ttyUSB0")
        timer_ms = lambda: machine.run("cat /sys/bus/usb-serial/devices/ttyUSB0/latency_timer").out.strip()
        self.assertNotEqual(timer_ms(), "1")
        self.check("two", "a-115200", 0)
        self.assertEqual(timer_ms(), "1")

    def test_a_check_raises_dtr_and_rts_once_so_that_no_board_wired_to_them_is_reset_in_between(self):
        told = self.told_the_adapter(lambda: self.check("two", "any-921600", 0))
        # request 1: the upper byte says which lines are meant, the lower one how they are to be; 1 is DTR, 2 RTS
        values = [int(value, 16) for value in re.findall(r"control 0x4001, value (0x[0-9a-f]+)", told)]
        lines, drops = {1: 0, 2: 0}, []
        for value in values:
            for line in lines:
                if value >> 8 & line:
                    if lines[line] and not value & line:
                        drops.append(line)
                    lines[line] = value & line
        self.assertEqual((lines, sorted(drops)), ({1: 0, 2: 0}, [1, 2]), told)
        self.assertEqual(values[-1], 0x300, "the lines fall with the last close")
        self.assertIn("data bits 8, stop bits 1", told)
        self.assertIn("parity N", told)

    def test_of_two_adapters_the_serial_number_chooses_and_without_it_the_name_is_refused(self):
        defective = Board(machine.line_path(1), "--fault", "A01")
        self.addCleanup(defective.stop)
        machine.plug(1, "CW7-B")
        self.addCleanup(machine.until, "! test -e /dev/ttyUSB1")
        self.addCleanup(machine.unplug, 1)
        machine.until("test -c /dev/ttyUSB1")
        done = self.check("acceptance", "any-921600", 3)
        for text in ("more than one port", A, B, "usb:VID:PID:SERIAL"):
            self.assertIn(text, done.text)
        self.check("acceptance", "a-921600", 0)
        # That it fails shows that it is the other board.
        self.check("acceptance", "b-921600", 1)

    def test_a_port_on_the_main_board_works_and_its_driver_refuses_what_its_clock_cannot_divide(self):
        other = Board(machine.uart_path())
        self.addCleanup(other.stop)
        self.check("two", "uart-115200", 0)
        sent = other.bridge.to_board_bytes
        done = self.check("two", "uart-921600", 3)  # the classic UART's clock ends at 115200 baud
        self.assertIn("baud 921600 is not supported", done.text)
        self.assertEqual(other.bridge.to_board_bytes, sent)

    # --- one program at a time ---

    def test_a_second_check_finds_the_port_busy_and_the_first_does_not_notice(self):
        machine.run("chmod 666 /dev/ttyUSB0")
        number = self.start_and_wait_for_the_second_case("seconds", "any-921600")
        board.process.send_signal(signal.SIGSTOP)  # holds the first one up
        try:
            first_out = self.out
            sent = board.bridge.to_board_bytes
            # root is kept out by the lock alone, others by the claim of the terminal too
            as_root = self.check("two", "any-921600", 3)
            self.assertRegex(as_root.text, r"the port is busy: halflsb \(process \d+\) uses it")
            by_path = self.check("two", "ttyUSB0", 3)
            self.assertIn("busy", by_path.text)
            other = machine.run(f"su operator -c '{self.check_script('two', 'any-921600')}'")
            self.assertEqual(other.status, 3, repr(other))
            self.assertIn("the port is busy", other.text)
            opened = machine.run("su operator -c 'echo >/dev/ttyUSB0'")
            self.assertNotEqual(opened.status, 0, "a program that takes no lock could write to the board")
        finally:
            board.process.send_signal(signal.SIGCONT)
        first = machine.wait(number, CHECK_S)
        self.assertEqual(first.status, 0, repr(first))
        self.assertEqual([case["verdict"] for case in self.record(first_out)["verdict"]["cases"]], ["pass", "pass"])
        self.assertGreater(board.bridge.to_board_bytes, sent)
        # The claim has gone with the one that made it, also for who is not root.
        after = machine.run(f"su operator -c '{self.check_script('two', 'any-921600')}'", CHECK_S)
        self.assertEqual(after.status, 0, repr(after))

    def test_no_permission_names_the_group(self):
        machine.run("chgrp dialout /dev/ttyUSB0; chmod 660 /dev/ttyUSB0")
        self.addCleanup(machine.run, "chgrp root /dev/ttyUSB0")
        done = machine.run(f"su operator -c '{self.check_script('two', 'any-921600')}'")
        self.assertEqual(done.status, 3, repr(done))
        self.assertIn('no permission to open it; it belongs to the group "dialout"', done.text)

    # --- the cable ---

    def test_unplugged_in_the_middle_of_a_case_and_plugged_in_again_under_another_number(self):
        number = self.start_and_wait_for_the_second_case("unplug", "any-921600")
        # A program that keeps the old device open makes the kernel give the next number to the adapter.
        holder = machine.start("echo $$ >/tmp/holder; exec sleep 100000 <>/dev/ttyUSB0")
        machine.until("test -s /tmp/holder")
        pulled_at = time.monotonic()
        machine.unplug(0)
        done = machine.wait(number, CHECK_S)
        took_s = done.ended_at - pulled_at
        self.assertEqual(done.status, 3, repr(done))
        self.assertLess(took_s, ANSWER_S / 2, "it took the unplug for a silent board")
        self.assertIn("the port is gone: it was unplugged", done.text)
        record = self.record()
        self.assertEqual([(case["name"], case["verdict"]) for case in record["verdict"]["cases"]], [("step", "pass"), ("long", "invalid")])
        self.assertIn("unplugged", json.dumps(record["verdict"]["cases"][1]["invalid"]))
        kept = machine.run(f"ls {self.out}/captures").out.split()
        self.assertEqual(len(kept), 2, "the capture of the finished case, and what came of the other")
        print(f"an unplug ended the run after {took_s:.2f} s", flush=True)

        gone = self.check("two", "any-921600", 3)
        self.assertIn("no such port", gone.text)

        machine.plug(0, "CW7-A")
        machine.until("test -c /dev/ttyUSB1")
        self.check("two", "any-921600", 0)
        self.assertIn("/dev/ttyUSB1", json.dumps(self.record()["board"]))
        old_path = self.check("two", "ttyUSB0", 3)
        self.assertIn("/dev/ttyUSB1 (" + A + ")", old_path.text)

        machine.run("kill $(cat /tmp/holder)")
        machine.wait(holder, 30)
        machine.unplug(0)
        machine.until("! test -e /dev/ttyUSB1")
        machine.plug(0, "CW7-A")
        machine.until("test -c /dev/ttyUSB0")
        self.check("two", "ttyUSB0", 0)

    def silent_line(self):
        """An adapter with nothing behind it: an adapter is plugged in only while somebody holds its other end."""
        line = socket.socket(socket.AF_UNIX)
        line.connect(str(machine.line_path(1)))
        heard, stop = bytearray(), threading.Event()

        def listen():
            line.settimeout(0.1)
            while not stop.is_set():
                try:
                    heard.extend(line.recv(4096))
                except TimeoutError:
                    pass

        thread = threading.Thread(target=listen, daemon=True)
        thread.start()
        self.addCleanup(line.close)
        self.addCleanup(thread.join, 10)
        self.addCleanup(stop.set)
        machine.plug(1, "CW7-B")
        machine.until("test -c /dev/ttyUSB1")
        return heard

    def test_a_silent_board_is_silent_and_not_unplugged(self):
        heard = self.silent_line()
        self.addCleanup(machine.until, "! test -e /dev/ttyUSB1")
        self.addCleanup(machine.unplug, 1)
        done = self.check("two", "b-silent", 3)
        self.assertNotIn("gone", done.text, "an idle line was taken for the end of a file")
        self.assertIn("awaited the board's greeting for 1.0 s; nothing came", done.text)
        self.assertGreater(len(heard), 0)

    def test_unplugged_while_the_greeting_is_awaited(self):
        heard = self.silent_line()
        number = machine.start(self.check_script("two", "b-921600"))
        until = time.monotonic() + CHECK_S
        while not heard:
            self.assertLess(time.monotonic(), until, "no greeting is asked for")
            time.sleep(0.005)
        pulled_at = time.monotonic()
        machine.unplug(1)
        done = machine.wait(number, CHECK_S)
        self.assertEqual(done.status, 3, repr(done))
        self.assertIn("the port is gone: it was unplugged", done.text)
        self.assertLess(done.ended_at - pulled_at, ANSWER_S / 2)

    def test_a_signal_ends_it_at_once_and_the_port_is_free_again(self):
        number = self.start_and_wait_for_the_second_case("unplug", "any-921600", before="echo $$ >/tmp/check; exec")
        sent_at = time.monotonic()
        machine.run("kill -TERM $(cat /tmp/check)")
        done = machine.wait(number, CHECK_S)
        self.assertEqual(done.status, 130, repr(done))
        # Closing a port waits up to 30 s for bytes that have not left.
        self.assertLess(done.ended_at - sent_at, 15.0)
        self.assertEqual([case["verdict"] for case in self.record()["verdict"]["cases"]], ["pass"])
        self.check("two", "any-921600", 0)


if __name__ == "__main__":
    for number in (signal.SIGTERM, signal.SIGHUP):
        signal.signal(number, signal.default_int_handler)
    try:
        unittest.main(argv=[sys.argv[0], *sys.argv[2:]], verbosity=2)
    finally:
        unittest.doModuleCleanups()  # a signal goes past unittest's own
