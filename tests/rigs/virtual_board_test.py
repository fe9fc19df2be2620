#!/usr/bin/python3
"""The virtual board against an independent host and independent models: greeting, samples, faults, the line's faults,
its manners as a program.     virtual_board_test.py PROGRAM"""

import fcntl
import functools
import os
import random
import re
import signal
import subprocess
import sys
import tempfile
import termios
import time
import unittest

import models
from virtual_board import VirtualBoard
from wire_host import Refused, WireError, WireHost, frame

PROGRAM = sys.argv.pop(1)
SEED = 20261201

MONO = ("load-cell", "smoothing", "quick-smoothing", "mains-notch", "settle", "settle-q31", "settle-f32", "level",
        "level-rounded", "drain", "echo-comb", "average", "average-q7", "average-i8", "average-i16", "average-i16-big",
        "average-i24", "average-i24-packed", "average-i32", "average-u8", "average-u12", "average-u12-left", "average-u16")
FILTERS = MONO + ("pair", "pair-mixed")
BLOCK = 64


def noise(count, word=models.word_of("load-cell"), seed=SEED):
    rng = random.Random(seed)
    if word is models.WORDS["settle-f32"]:
        return [float(models.numpy.float32(rng.uniform(-1.0, 1.0))) for _ in range(count)]
    return [rng.randint(word.bottom, word.top) for _ in range(count)]


def segments_for(name):
    """Stimuli that show every fault in every filter that claims it: ties, overflow, long runs, reset after noise."""
    if name in models.PAIRS:  # another signal on each channel: the second runs backward
        return [
            [x for instant in zip(segment, segment[::-1]) for x in instant] for segment in segments_for("load-cell")
        ]
    word = models.word_of(name)
    if name == "settle-f32":
        return [noise(2100, word), [0.25] + [0.0] * 40]
    zero, top, bottom = word.zero, word.top, word.bottom
    square = ([top] * 60 + [bottom] * 60) * 3 + ([top] * 5 + [bottom] * 5) * 8
    ties = [[zero + value * 2 ** word.bits // 65536] + [zero] * 40 for value in (16384, -16384, -4096, -28672)]
    return [noise(2100, word), [zero] * 40, *ties, square, noise(300, word, SEED + 1)]


@functools.lru_cache(maxsize=None)
def right_answers(name):
    return models.response(models.model(name), segments_for(name), BLOCK)


def stream_segments(host, segments):
    answers = list(host.stream(segments[0]))
    for segment in segments[1:]:
        host.reset()
        answers += host.stream(segment)
    return answers


def are_equal(a, b):
    return models.numpy.array_equal(models.numpy.array(a), models.numpy.array(b), equal_nan=a and isinstance(a[0], float))


class Samples(unittest.TestCase):
    def test_the_greeting_says_what_the_command_line_asked_for(self):
        options = ["--serial", "CW-7 bench", "--build-id", "00ff10", "--block", "100", "--credit", "3",
                   "--filter-set", "settle,load-cell"]
        with VirtualBoard(PROGRAM, *options) as board:
            greeting = board.host.greet()
            self.assertEqual((greeting.protocol, greeting.serial, greeting.build_id), (1, "CW-7 bench", "00ff10"))
            self.assertEqual((greeting.max_block_samples, greeting.credit_blocks), (100, 3))
            self.assertEqual([f.name for f in greeting.filters], ["settle", "load-cell"])
            self.assertEqual([f.tables for f in greeting.filters], [1, 0])

    def test_it_greets_with_its_own_build_id(self):
        notes = subprocess.run(["readelf", "-n", PROGRAM], capture_output=True, text=True, check=True).stdout
        with VirtualBoard(PROGRAM) as board:
            self.assertEqual(board.host.greet().build_id, re.search(r"Build ID: ([0-9a-f]+)", notes).group(1))

    def test_100000_samples_of_noise_come_back_once_and_in_order(self):
        codes = noise(100_000)
        expected = models.response(models.model("load-cell"), [codes], 256)
        with VirtualBoard(PROGRAM) as board:
            board.host.start(board.host.filter_named("load-cell"), 256)
            self.assertEqual(board.host.stream(codes), expected)
            self.assertEqual(board.host.counters()["blocks"], (100_000 + 255) // 256)
            board.end()
            self.assertEqual(board.statistics["samples"], 100_000)

    def test_each_filter_gives_the_codes_of_its_model(self):
        with VirtualBoard(PROGRAM) as board:
            for name in FILTERS:
                for block in (1, 37, 1024):
                    with self.subTest(filter=name, block=block):
                        segments = [s[:150] for s in segments_for(name)]
                        board.host.start(board.host.filter_named(name), block)
                        answers = stream_segments(board.host, segments)
                        self.assertTrue(are_equal(answers, models.response(models.model(name), segments, block)))

    def test_a_setting_and_a_table_change_the_filter_from_their_sample_on(self):
        codes = noise(500)
        with VirtualBoard(PROGRAM) as board:
            host = board.host
            host.start(host.filter_named("average"), BLOCK)
            host.set(0, 7)
            expected = models.response(models.Passage(models.Average(7, 16, ()), models.word_of("average"), ()), [codes], BLOCK)
            self.assertEqual(host.stream(codes), expected)
            self.assertEqual(host.greet().settings[0].value, 7)

            fir = host.filter_named("smoothing")
            host.start(fir, BLOCK)
            before = host.stream(codes)
            host.load(0, 15, [1000])
            after = host.stream(codes)
            model = models.model("smoothing")
            expected = models.response(model, [codes], BLOCK)
            model.inner.taps[15] = 1000
            expected += [model.step(x) for x in codes]
            self.assertEqual(before + after, expected)
            with self.assertRaises(Refused) as refusal:
                host.load(0, 31, [1])
            self.assertEqual(refusal.exception.reason, 5)

    def test_the_greeting_has_the_format_byte_and_channels_of_each_filter(self):
        left, packed, big = 1 << 5, 2 << 5, 1 << 7
        said = {"average-q7": (6, 1), "average-i8": (7, 1), "average-i16": (3, 1), "average-i16-big": (3 | big, 1),
                "average-i24": (8, 1), "average-i24-packed": (8 | packed, 1), "average-i32": (4, 1),
                "average-u8": (9, 1), "average-u12": (10, 1), "average-u12-left": (10 | left, 1), "average-u16": (11, 1),
                "settle-q31": (2, 1), "settle-f32": (5, 1), "pair": (1, 2), "pair-mixed": (1, 2)}
        with VirtualBoard(PROGRAM) as board:
            filters = board.host.greet().filters
        self.assertEqual(sorted(f.name for f in filters), sorted(FILTERS))
        for f in filters:
            with self.subTest(f.name):
                expected = said.get(f.name, (1, 1))
                self.assertEqual(((f.input, f.channels_in), (f.output, f.channels_out)), (expected, expected))

    def test_the_list_of_filters_names_each_with_its_format(self):
        listing = subprocess.run([PROGRAM, "--list-filters"], capture_output=True, text=True, check=True).stdout
        rows = {row.split()[0]: row for row in listing.splitlines()}
        self.assertEqual(sorted(rows), sorted(FILTERS))
        self.assertEqual(rows["average-u12-left"],
                         "average-u12-left    u12, left-justified   16-point mean, exact sum, halves upward")
        self.assertEqual(rows["pair"], "pair                q15, 2 channels       load-cell on each channel")

    def test_refusals_name_their_reason(self):
        with VirtualBoard(PROGRAM) as board:
            host = board.host
            load_cell = host.filter_named("load-cell")
            for attempt, reason in ((lambda: host.start(load_cell._replace(number=99)), 4),
                                    (lambda: host.start(load_cell, 1025), 5),
                                    (lambda: host.start(load_cell, 16, nodes=1), 6),
                                    (lambda: host.ask(0x20, b"", 0xA0), 1)):
                with self.assertRaises(Refused) as refusal:
                    attempt()
                self.assertEqual(refusal.exception.reason, reason)


class FilterFaults(unittest.TestCase):
    def test_each_fault_gives_the_codes_of_its_model_in_each_filter_that_it_shows_in(self):
        listing = subprocess.run([PROGRAM, "--list-faults"], capture_output=True, text=True, check=True).stdout
        rows = [line for line in listing.splitlines() if re.match(r"[A-Z]\d\d", line)]
        self.assertGreaterEqual(len(rows), 20)
        checked = 0
        for row in rows:
            fault = row[:3]
            shown = re.search(r"\[(.*)\]$", row).group(1)
            names = FILTERS if shown == "any filter" else shown.split(", ")
            alias = row[5:].split()[0]
            with VirtualBoard(PROGRAM, "--fault", fault if checked % 2 else alias) as board:
                for name in names:
                    if (fault, name) == ("N04", "settle-f32"):
                        continue  # swapped floats are not numbers: not comparable in Python
                    with self.subTest(fault=fault, filter=name):
                        segments = segments_for(name)
                        board.host.start(board.host.filter_named(name), BLOCK)
                        answers = stream_segments(board.host, segments)
                        self.assertTrue(are_equal(answers, models.response(models.model(name, (fault,)), segments, BLOCK)))
                        self.assertFalse(are_equal(answers, right_answers(name)))
                        checked += 1
        print(f"{checked} faulty filters gave the codes of their models")

    def assert_gives(self, fault, name, expected):
        with VirtualBoard(PROGRAM, "--fault", fault) as board:
            board.host.start(board.host.filter_named(name), BLOCK)
            answers = stream_segments(board.host, segments_for(name))
            self.assertTrue(are_equal(answers, expected))
            self.assertFalse(are_equal(answers, right_answers(name)))

    def test_channels_swapped_exchanges_the_inputs_and_not_the_filters(self):
        for name in models.PAIRS:
            with self.subTest(name):
                model = models.model(name, ("channels-swapped",))
                self.assert_gives("channels-swapped", name, models.response(model, segments_for(name), BLOCK))

    def test_a_wrong_justification_moves_the_output_in_its_word(self):
        # By 4 bits of 16, and by 8 of 32; a left-justified reader drops what is below.
        for name, moved in (("average-u12", lambda y: y * 16), ("average-u12-left", lambda y: y // 16),
                            ("average-i24", lambda y: y * 256)):
            with self.subTest(name):
                self.assert_gives("wrong-justification", name, [moved(y) for y in right_answers(name)])

    def test_an_ignored_setting_is_answered_and_changes_nothing(self):
        codes = noise(500)
        for options, points in (((), 7), (("--fault", "settings-ignored"), 16)):
            with self.subTest(points), VirtualBoard(PROGRAM, *options) as board:
                board.host.start(board.host.filter_named("average"), BLOCK)
                board.host.set(0, 7)
                model = models.Passage(models.Average(points, 16, ()), models.word_of("average"), ())
                self.assertEqual(board.host.stream(codes), models.response(model, [codes], BLOCK))
                self.assertEqual(board.host.greet().settings[0].value, 7)

    def test_crosstalk_is_a_128th_of_the_driven_channel_and_one_way(self):
        with VirtualBoard(PROGRAM, "--fault", "crosstalk") as board:
            board.host.start(board.host.filter_named("pair"), BLOCK)
            for driven, heard in ((0, 16000 // 128), (1, 0)):
                board.host.reset()
                instants = [[16000, 0] if driven == 0 else [0, 16000]] * 40
                answers = board.host.stream([x for instant in instants for x in instant])
                self.assertEqual(answers[-2:], [16000, heard] if driven == 0 else [heard, 16000])

    def test_a_slow_sample_shows_in_the_ticks_alone(self):
        codes = noise(4000)
        with VirtualBoard(PROGRAM, "--fault", "slow-sample") as board:
            board.host.start(board.host.filter_named("load-cell"), BLOCK)
            answers = board.host.stream(codes)
        self.assertEqual(answers, models.response(models.model("load-cell"), [codes], BLOCK))
        # Ticks are nanoseconds of a host at work: any block may be late besides, so only the slow ones are asked of.
        for slow in (999, 1999, 2999, 3999):
            total, largest = board.host.ticks[slow // BLOCK]
            self.assertGreaterEqual(total, 2_000_000)
            samples = min(BLOCK, len(codes) - slow // BLOCK * BLOCK)
            self.assertEqual(largest, -(-total // samples))
        # 59 of 63 blocks hold no slow sample, and half of those are not all disturbed.
        self.assertLess(sorted(total for total, _ in board.host.ticks)[len(board.host.ticks) // 2], 2_000_000)

    def test_two_faults_act_together(self):
        codes = noise(400)
        with VirtualBoard(PROGRAM, "--fault", "S01", "--fault", "A01") as board:
            board.host.start(board.host.filter_named("settle"), BLOCK)
            self.assertEqual(board.host.stream(codes),
                             models.response(models.model("settle", ("A01", "S01")), [codes], BLOCK))


class LineFaults(unittest.TestCase):
    def test_every_sample_comes_back_right_whatever_the_line_loses(self):
        codes = noise(20_000)
        expected = models.response(models.model("load-cell"), [codes], BLOCK)
        for fault in ("flip-byte=1009", "drop-byte=1013", "repeat-byte=2003", "flip-in=1019", "drop-in=1021",
                      "stall=20000:60", "garbage"):
            with self.subTest(fault=fault), VirtualBoard(PROGRAM, "--fault", fault, host_options={"window": 8, "resend_seconds": 0.05}) as board:
                board.host.start(board.host.filter_named("load-cell"), BLOCK)
                self.assertEqual(board.host.stream(codes), expected)
                counters = board.host.counters()
                self.assertEqual(counters["blocks"], (20_000 + BLOCK - 1) // BLOCK)
                if fault.startswith(("flip-byte", "drop-byte", "repeat-byte")):
                    self.assertGreater(board.host.frames_bad, 10)
                    self.assertGreater(counters["resent"], 10)
                if fault.startswith(("flip-in", "drop-in")):
                    self.assertGreater(counters["frames_bad"], 10)

    def test_both_directions_at_once(self):
        codes = noise(5_000)
        options = ["--fault", "flip-byte=2003", "--fault", "drop-in=1999", "--fault", "garbage"]
        with VirtualBoard(PROGRAM, *options, host_options={"window": 4, "resend_seconds": 0.05}) as board:
            board.host.start(board.host.filter_named("settle"), BLOCK)
            self.assertEqual(board.host.stream(codes), models.response(models.model("settle"), [codes], BLOCK))

    def test_a_board_that_is_silent_in_its_first_stream_answers_the_second(self):
        codes = noise(100 * BLOCK)
        with VirtualBoard(PROGRAM, "--fault", "first-stream-silent", host_options={"answer_seconds": 0.5}) as board:
            host = board.host
            host.start(host.filter_named("load-cell"), BLOCK)
            for attempt in (lambda: host.stream(codes), host.reset):
                with self.assertRaises(WireError) as silence:
                    attempt()
                self.assertIn("no answer", str(silence.exception))
            host.greet()
            host.start(host.filter_named("load-cell"), BLOCK)
            self.assertEqual(host.stream(codes), models.response(models.model("load-cell"), [codes], BLOCK))

    def test_a_silent_board_and_an_echo_never_greet(self):
        for fault in ("silent", "echo-only"):
            with self.subTest(fault=fault), VirtualBoard(PROGRAM, "--fault", fault,
                                                         host_options={"answer_seconds": 0.5}) as board:
                with self.assertRaises(WireError):
                    board.host.greet()

    def test_echo_only_returns_each_of_the_256_byte_values(self):
        with VirtualBoard(PROGRAM, "--fault", "echo-only") as board:
            board.host.to_send += bytes(range(256))
            deadline = time.monotonic() + 5
            while len(board.host.received) < 256 and time.monotonic() < deadline:
                board.host.exchange_bytes(0.1)
            self.assertEqual(bytes(board.host.received), bytes(range(256)))

    def test_an_unplugged_board_is_gone_after_its_answers(self):
        with VirtualBoard(PROGRAM, "--fault", "unplug=10") as board:
            board.host.start(board.host.filter_named("load-cell"), BLOCK)
            with self.assertRaises(WireError) as gone:
                board.host.stream(noise(100 * BLOCK))
            self.assertIn("gone", str(gone.exception))
            self.assertEqual(board.process.wait(timeout=5), 0)

    def test_a_restarted_board_has_no_stream(self):
        with VirtualBoard(PROGRAM, "--fault", "restart=10") as board:
            board.host.start(board.host.filter_named("load-cell"), BLOCK)
            with self.assertRaises(Refused) as refusal:
                board.host.stream(noise(100 * BLOCK))
            self.assertEqual(refusal.exception.reason, 2)
            board.host.start(board.host.filter_named("load-cell"), BLOCK)
            codes = noise(100 * BLOCK)
            self.assertEqual(board.host.stream(codes), models.response(models.model("load-cell"), [codes], BLOCK))

    def test_the_wrong_build_id_is_another(self):
        with VirtualBoard(PROGRAM, "--build-id", "0011aa", "--fault", "wrong-build-id") as board:
            self.assertEqual(board.host.greet().build_id, "ffee55")


class Program(unittest.TestCase):
    def run_for_error(self, *options):
        done = subprocess.run([PROGRAM, *options], capture_output=True, text=True, timeout=10)
        self.assertEqual((done.returncode, done.stdout), (64, ""))
        return done.stderr

    def test_what_it_cannot_do_is_said_with_the_nearest_that_it_can(self):
        self.assertEqual(self.run_for_error("--fault", "truncatoin"),
                         'virtual-board: no fault is called "truncatoin"; the nearest is "truncation"\n')
        self.assertEqual(self.run_for_error("--fault", "C10", "--filter-set", "load-cell,smoothing"),
                         'virtual-board: none of the chosen filters can show "C10": taps stand in the wrong order of '
                         'time\n')
        self.assertEqual(self.run_for_error("--filter-set", "load-cel"),
                         'virtual-board: no filter is called "load-cel"; the nearest is "load-cell"\n')
        self.assertEqual(self.run_for_error("--buad", "9600"),
                         'virtual-board: unknown option "--buad"; the nearest is "--baud"\n')
        self.assertEqual(self.run_for_error("--fault", "flip-byte=0"),
                         'virtual-board: "flip-byte" is written flip-byte=N, N a whole number above 0\n')
        self.assertEqual(self.run_for_error("--fault", "stall=5"),
                         'virtual-board: "stall" is written stall=N:MS, both whole numbers above 0\n')
        self.assertEqual(self.run_for_error("--block", "1025"),
                         'virtual-board: --block takes a whole number from 1 to 1024, not "1025"\n')

    def test_hosts_come_and_go(self):
        with VirtualBoard(PROGRAM) as board:
            for _ in range(3):
                host = WireHost(board.device)
                codes = noise(1000)
                host.start(host.filter_named("load-cell"), BLOCK)
                self.assertEqual(host.stream(codes), models.response(models.model("load-cell"), [codes], BLOCK))
                host.to_send += frame(b"\x10half a frame")[:5]  # leaves in the middle of a frame
                host.exchange_bytes(0.01)
                host.close()

    def test_a_claim_ends_with_the_host_that_made_it(self):
        get_claim = 0x80045440  # TIOCGEXCL
        with VirtualBoard(PROGRAM) as board:
            claim = bytearray(4)
            fcntl.ioctl(board.host.descriptor, get_claim, claim)
            self.assertEqual(claim, bytes(4))
            host = WireHost(board.device)
            fcntl.ioctl(host.descriptor, termios.TIOCEXCL)
            fcntl.ioctl(board.host.descriptor, get_claim, claim)
            self.assertEqual(claim[0], 1)
            host.close()
            deadline = time.monotonic() + 5
            while claim[0] and time.monotonic() < deadline:
                fcntl.ioctl(board.host.descriptor, get_claim, claim)
            self.assertEqual(claim, bytes(4))

    def test_its_link_appears_and_goes_with_it(self):
        with tempfile.TemporaryDirectory() as folder:
            link = os.path.join(folder, "board")
            os.symlink("/dev/null", link)  # an old one is in the way
            for end in (signal.SIGTERM, signal.SIGINT, signal.SIGHUP):
                with VirtualBoard(PROGRAM, "--link", link) as board:
                    self.assertEqual(os.readlink(link), board.device)
                    board.process.send_signal(end)
                    self.assertEqual(board.process.wait(timeout=5), 0)
                self.assertFalse(os.path.lexists(link))
            with open(link, "w", encoding="utf-8"):
                pass
            done = subprocess.run([PROGRAM, "--link", link], capture_output=True, text=True, timeout=10)
            self.assertEqual(done.returncode, 70)
            self.assertTrue(os.path.isfile(link))

    def test_it_writes_its_account_when_asked(self):
        with VirtualBoard(PROGRAM) as board:
            board.host.greet()
            board.process.send_signal(signal.SIGUSR1)
            deadline = time.monotonic() + 5
            while os.path.getsize(board.file.name) == 0 and time.monotonic() < deadline:
                time.sleep(0.01)
            with open(board.file.name, "rb") as account:
                self.assertIn(b'"bytes_in"', account.read())

    def test_it_ends_with_its_parent(self):
        script = f"{PROGRAM!r} --parent-dies & echo $!; read line"
        parent = subprocess.Popen(["sh", "-c", script], stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True)
        lines = sorted(parent.stdout.readline().strip() for _ in range(2))  # two writers, in either order
        self.assertTrue(lines[0].startswith("/dev/"))
        child = int(lines[1])
        parent.kill()
        parent.wait()
        deadline = time.monotonic() + 5
        while time.monotonic() < deadline and self.is_running(child):
            time.sleep(0.01)
        self.assertFalse(self.is_running(child))
        parent.stdin.close()
        parent.stdout.close()

    @staticmethod
    def is_running(process_id):
        try:
            with open(f"/proc/{process_id}/stat", encoding="utf-8") as state:
                return state.read().rsplit(")", 1)[1].split()[0] != "Z"
        except FileNotFoundError:
            return False


if __name__ == "__main__":
    print(f"seed {SEED}")
    unittest.main()
