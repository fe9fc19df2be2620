"""compare: two runs sample by sample, and what the newer build does otherwise, whatever the plan says of the older."""
import json
import subprocess

from support import NOISE, Case, halflsb, main

PLAN = """title = "belt scale"
[signal]
rate_hz = 1200.0
input = "q15"
output = "q15"
filter = "load-cell"

[[filter]]
kind = "moving-average"
points = 16

[[rule]]
kind = "error"
max_lsb = 2.0
"""
STEP = """[[case]]
name = "step"
[case.stimulus]
shape = "step"
length_samples = 512
level_ratio = 0.3
"""


class Compare(Case):
    def capture(self, folder, fault=None, cases=NOISE + STEP, plan=PLAN, filter_set="load-cell", build_id="aa"):
        path = self.write("plan.toml", plan + cases)
        faults = ["--fault", fault] if fault else []
        with self.virtual_board("--filter-set", filter_set, "--build-id", build_id, *faults):
            done = halflsb("check", path, "--rig", self.rig(), "--out", self.folder / folder)
        self.assertIn(done.status, (0, 1), done.err)
        return self.folder / folder

    def compare(self, before, after, *options, status):
        done = halflsb("compare", self.folder / before, self.folder / after, *options)
        self.assert_status(done, status)
        return done

    def comparison(self, before, after, status):
        return json.loads(self.compare(before, after, "--json", status=status).out)["comparison"]

    def responses(self, folder, name):
        import numpy
        (path,) = (self.folder / folder / "captures").glob(f"*{name}.npy")
        return numpy.load(path).astype(int)

    def test_what_a_newer_build_does_otherwise_though_nobody_declared_the_older(self):
        self.capture("old")
        self.capture("new", "truncation", build_id="bb")
        compared = self.comparison("old", "new", 1)
        self.assertEqual((compared["before"]["build_id"], compared["after"]["build_id"]), ("aa", "bb"))
        for case in compared["cases"]:
            before, after = (self.responses(folder, case["name"]) for folder in ("old", "new"))
            where = (before != after).nonzero()[0]
            (channel,) = case["channels"]
            self.assertEqual((channel["different"], channel["first_index"]), (len(where), where[0]))
            self.assertEqual((channel["before"], channel["after"]), (before[where[0]], after[where[0]]))
            self.assertAlmostEqual(channel["mean"], (after - before).mean(), places=9)
            self.assertEqual(channel["largest"], -1)
        (was,), (change,) = compared["board_before"]["channels"], compared["change"]["channels"]
        self.assertEqual((was["finding"], was["is_inferred"]), ("as declared", True))
        self.assertEqual(change["finding"], "found")
        self.assertEqual(change["causes"][0]["members"][0]["what"], "floor in place of half-up")
        text = " ".join(self.compare("old", "new", status=1).out.split())
        self.assertIn("2 cases compared, 2 differ", text)
        self.assertIn("since then channel 1: floor in place of half-up", text)
        self.assertIn("as it was before the board would first differ at sample", text)

    def test_a_change_is_one_from_the_board_before_not_from_the_plan(self):
        declared = PLAN.replace("[[filter]]", '[arithmetic]\nrounding = "half-up"\n\n[[filter]]')
        self.capture("old", "truncation", plan=declared)
        self.capture("new", plan=declared)
        (change,) = self.comparison("old", "new", 1)["change"]["channels"]
        self.assertEqual(change["causes"][0]["members"][0]["what"], "half-up in place of floor")

    def test_one_build_that_returns_two_things_is_told_so(self):
        self.capture("old")
        self.capture("new", "truncation")
        text = " ".join(self.compare("old", "new", status=1).out.split())
        self.assertIn("both runs are of one build: the board does not return the same twice", text)

    def test_the_same_responses_are_no_difference(self):
        self.capture("old")
        self.capture("new", build_id="bb")
        compared = self.comparison("old", "new", 0)
        self.assertFalse(compared["differs"])
        self.assertIsNone(compared["change"])
        self.assertIn("2 cases compared, all return the same", self.compare("old", "new", status=0).out)

    def test_what_was_asked_otherwise_is_left_out_and_named(self):
        self.capture("old")
        self.capture("new", cases=NOISE + STEP.replace("0.3", "0.4") + STEP.replace('name = "step"', 'name = "later step"'))
        compared = self.comparison("old", "new", 0)
        self.assertEqual([case["name"] for case in compared["cases"]], ["noise"])
        self.assertEqual(compared["left_out"], ["step: other samples were sent", "later step: only in the run after"])
        self.capture("other", cases=STEP.replace("0.3", "0.4"))
        done = self.compare("old", "other", status=65)
        self.assertIn("no case of it can be compared", done.err)

    def test_an_older_board_that_nobody_knows_leaves_the_change_unexplained(self):
        self.capture("old", "added-noise")
        self.capture("new")
        compared = self.comparison("old", "new", 1)
        self.assertEqual(compared["not_explained"], ["channel 1: what its board did before is not known"])
        self.assertEqual(compared["change"]["channels"], [])

    def test_each_channel_has_its_own_difference(self):
        pair = PLAN.replace('"load-cell"', '"pair"\nchannels = 2')
        self.capture("old", plan=pair, filter_set="pair")
        self.capture("new", "crosstalk", plan=pair, filter_set="pair")
        compared = self.comparison("old", "new", 1)
        (noise,) = [case for case in compared["cases"] if case["name"] == "noise"]
        self.assertEqual([channel["different"] > 0 for channel in noise["channels"]], [False, True])
        findings = {tuple(channel["channels"]): channel["finding"] for channel in compared["change"]["channels"]}
        self.assertEqual(findings, {(1,): "as declared", (2,): "found"})

    def test_runs_of_other_formats_and_missing_operands_are_refused(self):
        self.capture("old")
        done = halflsb("compare", self.folder / "old")
        self.assert_status(done, 64)
        self.assertIn("compare needs a second RUN", done.err)
        done = halflsb("compare", self.folder / "old", self.folder / "nowhere")
        self.assert_status(done, 65)
        other = PLAN.replace('"load-cell"', '"pair"\nchannels = 2')
        self.capture("new", plan=other, filter_set="pair")
        self.assertIn("its number of channels is 2", self.compare("old", "new", status=65).err)


main()
