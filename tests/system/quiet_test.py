"""silence, noise and drift on the virtual board: a right board passes, and each rule catches a defect of its own."""
import shutil

from support import ROOT, Case, main

LOAD_CELL = '[[filter]]\nkind = "moving-average"\npoints = 16\n'
SETTLE = '[[filter]]\nkind = "biquad-cascade"\nsections_file = "settle.txt"\n' \
         '[filter.arithmetic]\nrounding = "half-up"\ncoefficient_fraction_bits = 14\n'


def case(name, stimulus, rule):
    return f'[[case]]\nname = "{name}"\n[case.stimulus]\n{stimulus}\n[[case.rule]]\n{rule}\n'


def parcel(rule, level):
    return case("parcel", 'shape = "burst"\nfrequency_hz = 30.0\non_samples = 310\noff_samples = 1\nrepeats = 1\n'
                f"level_ratio = {level}\nlength_samples = 2000", f'kind = "silence"\n{rule}')


def noise(rule):
    return case("belt", 'shape = "noise"\nlevel_ratio = 0.5\nlength_samples = 40000', rule)


class Quiet(Case):
    def judged(self, cases, faults=(), board_filter="load-cell", filter_text=LOAD_CELL):
        self.write("settle.txt", (ROOT / "rigs/filters/coefficients/settle.txt").read_text())
        shutil.rmtree(self.folder / "run", ignore_errors=True)
        plan = self.plan(cases, board_filter=board_filter, filter_text=filter_text, rules="")
        with self.virtual_board(*[word for fault in faults for word in ("--fault", fault)]):
            return self.check(plan, self.rig())

    def figures(self, kind):
        [rule] = [rule for rule in self.record()["verdict"]["cases"][0]["rules"] if rule["kind"] == kind]
        return {figure["name"]: figure for figure in rule["figures"]}

    def test_a_dead_band_wider_than_the_limit_is_refused(self):
        # The right board stands at 49 LSB after this burst; the bound of its roundings is 105.
        for rule, status in (("max_lsb = 49", 0), ("max_lsb = 48", 1), ('max_lsb = "derived"', 0)):
            with self.subTest(rule=rule):
                done = self.judged(parcel(rule, 0.3), (), "settle", SETTLE)
                self.assert_status(done, status)
                self.assertEqual(self.figures("silence")["remains"]["value"], 49.0)
                if status == 1:
                    self.assertIn("stands at 49 LSB", done.out)

    def test_a_value_that_is_stuck_is_refused(self):
        # 49 codes of 30 Hz at 1200 Hz: the mean of 16 moves by up to 5.8 codes a sample, and by at most 3.1 at the end.
        self.assert_status(self.judged(parcel("max_lsb = 0", 0.0015)), 0)
        done = self.judged(parcel("max_lsb = 0", 0.0015), ("held-output",))
        self.assert_status(done, 1)
        self.assertIn("stands at ", done.out)

    def test_noise_that_the_board_adds_is_refused(self):
        # One rounding to the nearest has 1/12 LSB^2.
        rule = 'kind = "noise"\nmin_gain_db = -12.1\nmax_gain_db = -12.0\nmax_excess_lsb = 0.3\n'
        self.assert_status(self.judged(noise(rule)), 0)
        done = self.judged(noise(rule), ("added-noise",))
        self.assert_status(done, 1)
        added = self.figures("noise")["added noise"]
        # Uniform over 17 codes: (17^2 - 1) / 12 = 24, beside the rounding's 1/12: 4.91.
        self.assertAlmostEqual(added["value"], 4.91, delta=0.05)
        # A sum that is a point short lets a sixteenth less through.
        self.assert_status(self.judged(noise('kind = "noise"\nmin_gain = 0.0625\n'), ("S02",)), 1)

    def test_a_drift_is_refused(self):
        rule = 'kind = "drift"\nmax_slope_lsb_per_hour = 1000\nmax_change_lsb = 3\n'
        self.assert_status(self.judged(noise(rule)), 0)
        done = self.judged(noise(rule), ("drift",))
        self.assert_status(done, 1)
        # A code each 1000 samples, 1200 samples a second.
        slope = self.figures("drift")["slope"]
        self.assertAlmostEqual(slope["value"], 4320.0, delta=10.0)
        self.assertEqual(slope["unit"], "LSB per hour")


if __name__ == "__main__":
    main()
