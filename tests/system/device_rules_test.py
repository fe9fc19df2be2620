"""The rules that look at the device on the virtual board: deadline, crosstalk, headroom; each passes, and catches its fault."""
from support import Case, halflsb, main
import support

ERROR = '[[rule]]\nkind = "error"\nmax_lsb = 0.5\n'
LOAD_CELL = """[[case]]
name = "belt"
[case.stimulus]
shape = "noise"
length_samples = 4096
"""
LEFT_ALONE = """[[case]]
name = "left alone"
[case.stimulus]
channel = 1
shape = "noise"
length_samples = 8192
"""
HARDEST = """[[case]]
name = "hardest"
[case.stimulus]
shape = "step"
level_ratio = 1.0
length_samples = 256
"""


class DeviceRules(Case):
    def run_on(self, cases, rules, *options, board_filter="load-cell", signal="", block=64):
        support.shutil.rmtree(self.folder / "run", ignore_errors=True)
        file = self.plan(cases, board_filter=board_filter, rules=rules, signal=signal)
        with self.virtual_board("--filter-set", board_filter, *options):
            done = self.check(file, self.rig(wire=f"block_samples = {block}"))
        return done, self.record()

    def rule(self, record, kind):
        found = [rule for rule in record["verdict"]["cases"][0]["rules"] if rule["kind"] == kind]
        self.assertEqual(len(found), 1)
        return found[0]

    # --- deadline: a sample takes well below 1 ms on any machine that tests run on, unless it is made to

    DEADLINE = ERROR + '[[rule]]\nkind = "deadline"\nmax_percentile_ticks = 1.0e5\npercentile = 50.0\nmax_ticks = 1.6e6\n'

    def test_a_board_in_time_passes_and_its_ticks_are_judged_again(self):
        done, record = self.run_on(LOAD_CELL, self.DEADLINE, block=1)
        self.assert_status(done, 0)
        rule = self.rule(record, "deadline")
        self.assertEqual([figure["name"] for figure in rule["figures"]], ["largest", "50 % of blocks", "99 % of blocks"])
        self.assertEqual(rule["figures"][0]["value"], record["cases"][0]["stream"]["largest_ticks_per_sample"])
        import numpy as np

        ticks = np.load(self.folder / "run" / record["cases"][0]["ticks"]["file"])
        self.assertEqual(ticks.dtype, np.dtype("<i4"))
        self.assertEqual(int(ticks[:, 0].sum()), 4096)
        self.assertEqual(int(ticks[:, 1].view(np.uint32).sum()), record["cases"][0]["stream"]["total_ticks"])
        again = halflsb("judge", self.folder / "run", "--json")
        self.assert_status(again, 0)
        self.assertEqual(support.json.loads(again.out)["runs"][0]["verdict"], record["verdict"])

    def test_a_slow_sample_is_late_and_its_codes_are_right(self):
        done, record = self.run_on(LOAD_CELL, self.DEADLINE, "--fault", "slow-sample", block=1)
        self.assert_status(done, 1)
        rule = self.rule(record, "deadline")
        self.assertEqual({figure["name"]: figure["verdict"] for figure in rule["figures"]},
                         {"largest": "fail", "50 % of blocks": "pass", "99 % of blocks": "pass"})
        self.assertGreater(rule["figures"][0]["value"], 2e6)
        self.assertEqual(self.rule(record, "error")["verdict"], "pass")
        again = halflsb("judge", self.folder / "run", "--json")
        self.assert_status(again, 1)
        self.assertEqual(support.json.loads(again.out)["runs"][0]["verdict"], record["verdict"])

    def test_in_blocks_a_slow_sample_is_spread_and_the_report_says_so(self):
        done, record = self.run_on(LOAD_CELL, ERROR + '[[rule]]\nkind = "deadline"\nmax_ticks = 1.6e6\n', "--fault", "slow-sample")
        self.assert_status(done, 0)
        rule = self.rule(record, "deadline")
        self.assertIn("the board times whole blocks, of up to 64 samples", rule["reason"])
        self.assertGreater(rule["figures"][0]["value"], 2e6 / 64)

    def test_edited_ticks_are_refused(self):
        done, record = self.run_on(LOAD_CELL, self.DEADLINE)
        self.assert_status(done, 0)
        file = self.folder / "run" / record["cases"][0]["ticks"]["file"]
        data = bytearray(file.read_bytes())
        data[-1] ^= 1
        file.write_bytes(data)
        again = halflsb("judge", self.folder / "run")
        self.assert_status(again, 65)
        self.assertIn("it was edited", again.err)

    def test_a_deadline_of_a_filter_that_nobody_documented(self):
        cases = LOAD_CELL + '[[case.rule]]\nkind = "deadline"\nmax_ticks = 1.0e6\n'
        file = self.plan(cases, filter_text='[[filter]]\nkind = "unknown"\n', rules="")
        with self.virtual_board("--filter-set", "load-cell"):
            done = self.check(file, self.rig())
        self.assert_status(done, 0)

    def test_without_the_rule_no_ticks_are_kept_but_their_spread_is_told(self):
        done, record = self.run_on(LOAD_CELL, ERROR)
        self.assert_status(done, 0)
        self.assertIsNone(record["cases"][0]["ticks"])
        self.assertFalse((self.folder / "run" / "ticks").exists())
        for key in ("ticks_per_sample", "round_trip_s"):
            spread = record["cases"][0]["stream"][key]
            self.assertTrue(0.0 < spread["median"] <= spread["percentile_99"] <= spread["largest"], spread)

    # --- crosstalk

    CROSSTALK = '[[rule]]\nkind = "crosstalk"\nmax_lsb = 4\nmax_db = -60\n'

    def test_channels_that_are_apart_pass(self):
        done, record = self.run_on(LEFT_ALONE, self.CROSSTALK, board_filter="pair", signal="channels = 2")
        self.assert_status(done, 0)
        self.assertEqual(self.rule(record, "crosstalk")["channel"], 2)

    def test_crosstalk_is_measured_where_it_comes_through(self):
        done, record = self.run_on(LEFT_ALONE, self.CROSSTALK, "--fault", "S16", board_filter="pair", signal="channels = 2")
        self.assert_status(done, 1)
        rule = self.rule(record, "crosstalk")
        coupling = next(figure for figure in rule["figures"] if figure["name"] == "coupling")
        # A 128th of what was sent, each sample floored to a code: -42.14 dB.
        self.assertAlmostEqual(coupling["value"], -42.144, delta=0.1)
        self.assertIn("what comes through is what channel 1 was sent, not filtered", rule["reason"])
        again = halflsb("judge", self.folder / "run", "--json")
        self.assertEqual(support.json.loads(again.out)["runs"][0]["verdict"], record["verdict"])

    # --- headroom

    HEADROOM = '[[rule]]\nkind = "headroom"\n'

    def test_a_sum_that_is_wide_enough_passes(self):
        done, record = self.run_on(HARDEST, self.HEADROOM)
        self.assert_status(done, 0)
        self.assertIn("the stimulus drives", self.rule(record, "headroom")["reason"])

    def test_a_narrow_sum_wraps(self):
        done, record = self.run_on(HARDEST, self.HEADROOM, "--fault", "narrow-accumulator")
        self.assert_status(done, 1)
        wrapped = next(figure for figure in self.rule(record, "headroom")["figures"] if figure["name"] == "wrapped")
        self.assertGreater(wrapped["value"], 100)

    def test_a_stimulus_that_is_too_soft_is_refused_before_anything_is_streamed(self):
        plan = self.plan(HARDEST.replace("1.0", "0.5"), rules=self.HEADROOM)
        done = halflsb("check", plan, "--rig", self.rig())
        self.assert_status(done, 65)
        self.assertIn("drives no node of the filter to its worst", done.err)


if __name__ == "__main__":
    main()
