"""The rules that have a case sent once more (repeat, blocks, shift, linearity) on boards: right ones pass, each defect is
caught by the rule that is there for it, and a recorded run is judged the same again."""
import json

from support import Case, halflsb, main

UNKNOWN = """[[filter]]
kind = "unknown"
"""
NOISE = """[[case]]
name = "noise"
[case.stimulus]
shape = "noise"
level_ratio = 0.4
seed = 3
length_samples = 3000
"""
REPEAT = '[[case.rule]]\nkind = "repeat"\n'
BLOCKS = '[[case.rule]]\nkind = "blocks"\nblock_samples = [7]\n'
SHIFT = '[[case.rule]]\nkind = "shift"\nby_samples = [3]\n'
LINEARITY = '[[case.rule]]\nkind = "linearity"\nby_ratio = [-1]\nmax_lsb = 1\nbias_lsb = 0.25\n'
ALL = NOISE + REPEAT + BLOCKS + SHIFT + LINEARITY
SENT_AGAIN = ["noise [repeat]", "noise [blocks 7]", "noise [shift 3]", "noise [linearity -1]"]


class Companions(Case):
    def unknown_plan(self, cases=ALL, name="plan.toml"):
        return self.plan(cases, filter_text=UNKNOWN, rules="", name=name)

    def verdicts(self, folder="run"):
        """Of each case its verdict and the reasons of its rules."""
        cases = self.record(folder)["verdict"]["cases"]
        return {case["name"]: (case["verdict"], " ".join(rule["reason"] or "" for rule in case["rules"])) for case in cases}

    def failing(self, fault):
        """Cases that fail on a board with the fault, with the reasons."""
        with self.virtual_board(f"--fault={fault}"):
            done = halflsb("check", self.unknown_plan(), "--rig", self.rig(), "--out", self.folder / fault)
        self.assert_status(done, 1)
        return {name: reason for name, (verdict, reason) in self.verdicts(fault).items() if verdict == "fail"}

    def test_a_right_board_passes_without_an_oracle(self):
        with self.virtual_board():
            done = self.check(self.unknown_plan(), self.rig())
        self.assert_status(done, 0)
        self.assertEqual(list(self.verdicts()), ["noise", *SENT_AGAIN])
        companions = {case["name"]: case["companion"] for case in self.record()["cases"]}
        self.assertIsNone(companions["noise"])
        self.assertEqual(companions["noise [blocks 7]"],
                         {"base": "noise", "terms": [{"gain": 1, "delay_samples": 0}], "block_samples": 7})
        self.assertEqual(companions["noise [linearity -1]"]["terms"], [{"gain": -1, "delay_samples": 0}])

    def test_a_reset_that_does_nothing_fails_the_repeat(self):
        self.assertIn("state left from the run before", self.failing("no-reset")["noise [repeat]"])
        # Half of a ring is left, and its sum stays wrong.
        self.assertIn("noise [repeat]", self.failing("half-reset"))

    def test_state_that_is_lost_between_blocks_fails_blocks_alone(self):
        failing = self.failing("state-lost")
        self.assertIn("where a block begins", failing["noise [blocks 7]"])
        self.assertNotIn("noise [repeat]", failing)

    def test_what_hangs_on_the_sample_s_place_fails_the_shift(self):
        for fault in ("sample-dropped", "half-buffer-repeated", "drift"):
            with self.subTest(fault):
                self.assertIn("noise [shift 3]", self.failing(fault))

    def test_noise_that_begins_anew_with_each_reset_fails_the_shift(self):
        failing = self.failing("added-noise")
        self.assertIn("noise [shift 3]", failing)
        self.assertNotIn("noise [repeat]", failing)

    def test_what_is_not_linear_fails_linearity_alone(self):
        self.assertEqual(list(self.failing("truncation")), ["noise [linearity -1]"])
        # What is no longer 0 for an input of 0 is an offset too.
        self.assertEqual(list(self.failing("rounding-twice")), ["noise [shift 3]", "noise [linearity -1]"])

    def test_an_output_that_sticks_shows_where_it_moves_little(self):
        cases = NOISE.replace("0.4", "0.002") + LINEARITY.replace("[-1]", "[-1, 3]").replace("max_lsb = 1", "max_lsb = 2")
        with self.virtual_board("--fault=held-output"):
            done = self.check(self.unknown_plan(cases), self.rig())
        self.assert_status(done, 1)
        self.assertEqual(self.verdicts()["noise [linearity 3]"][0], "fail")

    def test_a_known_filter_needs_no_limit_for_linearity(self):
        cases = NOISE + '[[case.rule]]\nkind = "linearity"\nby_ratio = [-1, 2]\nby_samples = [5]\n'
        with self.virtual_board():
            done = self.check(self.plan(cases), self.rig())
        self.assert_status(done, 0)
        self.assertIn("noise [linearity, 5 later added]", self.verdicts())

    def test_a_recorded_run_is_judged_the_same_again(self):
        with self.virtual_board("--fault=truncation"):
            self.check(self.unknown_plan(), self.rig())
        again = halflsb("judge", self.folder / "run", "--json")
        self.assert_status(again, 1)
        self.assertEqual(json.loads(again.out)["runs"][0]["verdict"], self.record()["verdict"])
        # By a plan with fewer rules: what was sent again for others is left over.
        fewer = self.unknown_plan(NOISE + REPEAT, name="fewer.toml")
        done = halflsb("judge", self.folder / "run", fewer)
        self.assert_status(done, 0)
        self.assertIn("captures that no case of the plan asks for", done.out + done.err)
        # By one whose case of that name was not sent to be compared.
        own = self.unknown_plan(NOISE + SHIFT + NOISE.replace('"noise"', '"noise [repeat]"', 1) + SHIFT, name="own.toml")
        done = halflsb("judge", self.folder / "run", own)
        self.assert_status(done, 65)
        self.assertIn("it was sent to be compared with case 'noise', the plan says otherwise", done.err)

    def test_choosing_a_companion_brings_its_base_and_a_base_its_companions(self):
        plan, rig = self.unknown_plan(ALL + NOISE.replace('"noise"', '"other"', 1) + REPEAT), self.rig()
        with self.virtual_board():
            done = self.check(plan, rig, "--case", "noise [shift 3]")
            self.assert_status(done, 0)
            self.assertEqual(list(self.verdicts()), ["noise", "noise [shift 3]"])
            done = halflsb("check", plan, "--rig", rig, "--out", self.folder / "second", "--case", "noise")
            self.assert_status(done, 0)
            self.assertEqual(list(self.verdicts("second")), ["noise", *SENT_AGAIN])

    def test_a_base_that_was_not_captured_leaves_its_companion_undecided(self):
        with self.virtual_board("--fault=first-stream-silent"):
            done = self.check(self.unknown_plan(NOISE + REPEAT), self.rig(wire="answer_s = 0.5"))
        verdicts = self.verdicts()
        self.assertEqual(verdicts["noise"][0], "invalid", repr(done))
        self.assertEqual(verdicts["noise [repeat]"][0], "undecided")
        self.assertIn("not judged: its base, \"noise\", has no whole capture", verdicts["noise [repeat]"][1])
        self.assert_status(done, 3)

    def test_small_blocks_cost_time_that_is_told(self):
        plan = self.unknown_plan(NOISE + BLOCKS)
        done = halflsb("predict", plan, "--rig", self.rig(), "--json")
        self.assert_status(done, 0)
        base, small = [case["wire_s"] for case in json.loads(done.out)["predictions"][0]["cases"]] \
            if "predictions" in json.loads(done.out) else [case["wire_s"] for case in json.loads(done.out)["prediction"]["cases"]]
        # 20 bytes of frame to each 14 of samples.
        self.assertGreater(small, 2.0 * base)
        self.assertLess(small, 3.0 * base)


if __name__ == "__main__":
    main()
