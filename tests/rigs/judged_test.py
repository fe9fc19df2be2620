#!/usr/bin/python3
"""The boards of rigs/ in front of the built program: each right filter passes a plan in its own format, each fault of
channels, offset binary, layout and settings is refused.     judged_test.py BUILD_TREE

The limits follow from the headers of rigs/filters; each stands beside its filter."""
import pathlib
import shutil
import sys

sys.path.insert(0, str(pathlib.Path(__file__).resolve().parents[1] / "system"))
from support import FIRMWARE, ROOT, Case, main  # noqa: E402

MEAN = '[[filter]]\nkind = "moving-average"\npoints = 16\n'
# A rounded mean is half an LSB off at most. One-pole: the state is up to 15/16 of a code above the ideal when the feedback
# floors, and the output floors it: within 1; rounded, half a code each. DC blocker: the same with a whole code. Comb: half
# a code a sample, and a quarter of it comes back: 0.5 / (1 - 0.25).
ONE_POLE = '[[filter]]\nkind = "one-pole"\nshift_bits = 4\n'
DC_BLOCKER = '[[filter]]\nkind = "dc-blocker"\npole = 0.99609375\n'
COMB = '[[filter]]\nkind = "comb"\ndelay_samples = 24\ndirect = 0.5\nforward = 0.25\nfeedback = -0.25\n'
LEFT, PACKED = 'justification = "left"', 'justification = "packed"'
BIG = 'byte_order = "big"'

# board's filter, format, words of the layout, the plan's filter, max_lsb, level of the noise
RIGHT = [
    ("level", "q15", "", ONE_POLE, 1.0, 1.0),
    ("level-rounded", "q15", "", ONE_POLE, 1.0, 1.0),
    ("drain", "q15", "", DC_BLOCKER, 1.0, 0.45),  # twice that still fits
    ("echo-comb", "q15", "", COMB, 0.6667, 0.95),
    ("average-q7", "q7", "", MEAN, 0.5, 1.0),
    ("average-i8", "i8", "", MEAN, 0.5, 1.0),
    ("average-i16-big", "i16", BIG, MEAN, 0.5, 1.0),
    ("average-i24", "i24", "", MEAN, 0.5, 1.0),
    ("average-i24-packed", "i24", PACKED, MEAN, 0.5, 1.0),
    ("average-u8", "u8", "", MEAN, 0.5, 1.0),
    ("average-u12", "u12", "", MEAN, 0.5, 1.0),
    ("average-u12-left", "u12", LEFT, MEAN, 0.5, 1.0),
    ("average-u16", "u16", "", MEAN, 0.5, 1.0),
]
PAIR_MIXED = """[[filter]]
kind = "moving-average"
points = 16
channels = [1]
[[filter]]
kind = "biquad-cascade"
sections_file = "settle.txt"
coefficient_fraction_bits = 14
channels = [2]
"""
# Each section rounds its output half up. Half the L1 norm of the way of that rounding to the output, for the stored
# coefficients: 46.3 LSB from the first section (through its feedback and the second section), 58.3 from the second.
PAIR_MIXED_LSB = 105.0


class Judged(Case):
    def plan_of(self, name, sample, layout, filter_text, max_lsb, level, signal="", case=""):
        both = "\n".join(f"{side}_{layout}" for side in ("input", "output")) if layout else ""
        return self.write("plan.toml", f"""title = "{name}"
[signal]
rate_hz = 1200.0
input = "{sample}"
output = "{sample}"
filter = "{name}"
{both}
{signal}
{filter_text}
[[rule]]
kind = "error"
max_lsb = {max_lsb}
[[case]]
name = "noise"
{case}
[case.stimulus]
shape = "noise"
distribution = "uniform"
level_ratio = {level}
seed = 3
length_samples = 6000
""")

    def assert_judged(self, status, plan, *options, rig_more=""):
        """0: every rule passed, 1: a rule failed on a valid capture, 3: no valid capture."""
        shutil.rmtree(self.folder / "run", ignore_errors=True)
        with self.virtual_board(*options):
            self.assert_status(self.check(plan, self.rig(more=rig_more)), status)

    def test_each_right_filter_passes_in_its_format(self):
        for row in RIGHT:
            with self.subTest(row[0]):
                self.assert_judged(0, self.plan_of(*row))

    def test_a_tenth_less_than_the_rounding_is_refused(self):
        """The limits above are no wider than the arithmetic: what a mean loses is seen in every format."""
        for name, sample, layout, filter_text, _, level in RIGHT:
            if filter_text is MEAN:
                with self.subTest(name):
                    self.assert_judged(1, self.plan_of(name, sample, layout, filter_text, 0.45, level))

    def test_faults_of_offset_binary_and_of_layout_are_refused(self):
        rows = {row[0]: row for row in RIGHT}
        for fault, names in (("N01", ("average-u8", "average-u12", "average-u12-left", "average-u16")),
                             ("N02", ("average-u8", "average-u12", "average-u12-left", "average-u16")),
                             ("N04", ("average-i16-big", "average-i24-packed", "average-u12-left")),
                             ("A01", ("average-q7", "average-i24-packed", "average-u12-left")),
                             ("wrong-justification", ("average-u12", "average-u12-left", "average-i24"))):
            for name in names:
                with self.subTest(fault=fault, filter=name):
                    self.assert_judged(1, self.plan_of(*rows[name]), "--fault", fault)

    def test_the_pair_of_load_cells_passes_its_acceptance_and_faults_of_channels_do_not(self):
        plan = ROOT / "rigs" / "cw-7" / "pair.toml"
        for fault in (None, "S15", "S16", "A01"):
            with self.subTest(fault):
                self.assert_judged(0 if fault is None else 1, plan, *(() if fault is None else ("--fault", fault)))

    def test_a_board_whose_channels_differ_is_judged_channel_by_channel(self):
        self.write("settle.txt", (ROOT / "rigs/filters/coefficients/settle.txt").read_text())
        plan = self.plan_of("pair-mixed", "q15", "", PAIR_MIXED, PAIR_MIXED_LSB, 0.95, signal="channels = 2")
        # One driven channel: the same noise on both would look the same when they are swapped.
        plan.write_text(plan.read_text().replace('shape = "noise"', 'shape = "noise"\nchannel = 1'))
        for fault in (None, "channels-swapped", "S16"):
            with self.subTest(fault):
                self.assert_judged(0 if fault is None else 1, plan, *(() if fault is None else ("--fault", fault)))

    def test_a_setting_that_has_no_effect_is_refused(self):
        text = MEAN.replace("16", "7")
        plan = self.plan_of("average", "q15", "", text, 0.5, 1.0, case='settings = { "average-points" = 7 }')
        for fault in (None, "settings-ignored"):
            with self.subTest(fault):
                self.assert_judged(0 if fault is None else 1, plan, *(() if fault is None else ("--fault", fault)))

    def test_a_board_that_is_silent_at_first_passes_at_its_second_attempt_and_not_without_one(self):
        plan = self.plan_of("load-cell", "q15", "", MEAN, 0.5, 1.0)
        for attempts, status in ((1, 3), (2, 0)):
            with self.subTest(attempts=attempts):
                self.assert_judged(status, plan, "--fault", "first-stream-silent",
                                   rig_more=f"[run]\nattempts = {attempts}\n")

    def test_the_wide_firmware_passes_and_its_crosstalk_is_refused(self):
        plan = ROOT / "rigs" / "cw-7" / "pair.toml"
        for image, status in (("halflsb-cw7-wide.elf", 0), ("halflsb-cw7-wide-crosstalk.elf", 1)):
            with self.subTest(image):
                shutil.rmtree(self.folder / "run", ignore_errors=True)
                with self.emulated_board(image):
                    self.assert_status(self.check(plan, self.rig(), "--image", FIRMWARE / image), status)


if __name__ == "__main__":
    main()
