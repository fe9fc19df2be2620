"""explain: the faults of the virtual board are named, a board whose arithmetic nobody declared is described to the
bit, and what is not known is not guessed."""
import json
import re
import subprocess

from support import NOISE, ROOT, VIRTUAL_BOARD, Case, halflsb, main

RIGS = ROOT / "rigs"

# What the answer must say of each fault of the virtual board; of a pair one for each filter.
NAMED = {
    "truncation": "floor in place of half-up",
    "toward-zero": "toward-zero in place of half-up",
    "half-away": "half-away in place of half-up",
    "products-truncated": "each product shortened by floor before it is added",
    "rounding-twice": "the constant of the rounding twice as large, or added twice",
    "wrap": "an output that wraps",
    "feedback-before-saturation": "feedback before the output's overflow",
    "narrow-accumulator": "an accumulator of 16 bits",
    "coefficients-truncated": "coefficients cut off toward zero",
    "shift-off-by-one": r"a window of 16 points, divided by 32|a shift of 1[56] bits in place of 1[45] after the products",
    "a1-sign": "a1 with the opposite sign",
    "reversed-taps": "the taps in the opposite order of time",
    "one-sample-late": "each output 1 sample late",
    "window-15": "a window of 15 points, divided by 16",
    "half-reset": "a reset clears only",
    "no-reset": "a reset leaves the state as it was",
    "state-lost": "each 256 samples from 256 on: the state is that of a reset",
    "bypass": "the input goes past the filter",
    "byte-swap": "at the input: the bytes of each word in the opposite order",
    "polarity": "at the input: the opposite sign",
    "half-buffer-repeated": r"a block in front of the filter is the one before it \(32 samples\)",
    "sample-dropped": "each 1000 samples from 999 on: a sample does not reach the filter, the output is held",
    "sample-duplicated": "each 1000 samples from 999 on: a sample reaches the filter twice",
    "shared-state": "all channels pass one filter and share its state",
    "crosstalk": "1/128 of the input of channel 1 is added to its output",
    "channels-swapped": "its filter gets the samples of channel [12]",
}
# Outside of what is searched: no cause may be named.
UNKNOWN = {"held-output", "added-noise", "drift"}
# The codes are right.
AS_DECLARED = {"slow-sample"}
# Faults that this filter does not show to these stimuli: nothing fails, and nothing is to be explained.
WITHOUT_EFFECT = {("settle", "half-away"), ("pair", "channels-swapped")}
PLAN = """title = "nobody declared it"
[signal]
rate_hz = 1200.0
input = "q15"
output = "q15"
filter = "load-cell"

[[filter]]
kind = "moving-average"
points = 16
"""
FILTERS = ("load-cell", "settle", "quick-smoothing", "pair")


def faults_of(name):
    listed = subprocess.run([VIRTUAL_BOARD, "--list-faults"], capture_output=True, text=True, check=True).stdout
    found = set()
    for line in listed.splitlines():
        fault = re.match(r"(?:[A-Z]\d\d, )?([a-z0-9-]+) ", line)
        shown_by = re.search(r"\[(.*)\]$", line)
        if fault and shown_by and (shown_by[1] == "any filter" or name in shown_by[1].split(", ")):
            found.add(fault[1])
    return found


class Explain(Case):
    def run_exact(self, name, *options, status=None):
        plan = RIGS / "cw-7" / "exact" / f"{name}.toml"
        with self.virtual_board("--filter-set", name, *options):
            done = self.check(plan, self.rig(), "--root", RIGS)
        if status is not None:
            self.assert_status(done, status)
        return done

    def explain(self, *options, status=0):
        done = halflsb("explain", self.folder / "run", *options, cwd=self.folder)
        self.assert_status(done, status)
        return done.out

    def explained(self, status=0):
        (explanation,) = json.loads(self.explain("--json", status=status))["explanations"]
        return explanation["channels"]

    def again(self):
        subprocess.run(["rm", "-rf", self.folder / "run"], check=True)

    def test_every_fault_of_the_virtual_board_is_named_or_unknown(self):
        for name in FILTERS:
            for fault in sorted(faults_of(name)):
                with self.subTest(filter=name, fault=fault):
                    self.again()
                    self.look_at(name, fault)

    def look_at(self, name, fault):
        no_effect = fault in AS_DECLARED or (name, fault) in WITHOUT_EFFECT
        done = self.run_exact(name, "--fault", fault, status=0 if no_effect else 1)
        channels = self.explained(status=2 if fault in UNKNOWN else 0)
        findings = {channel["finding"] for channel in channels}
        if no_effect:
            self.assertEqual(findings, {"as declared"})
            return
        if fault in UNKNOWN:
            self.assertEqual(findings, {"unknown"})
            self.assertIn("no change of filter, arithmetic, codes or stream that was tried", " ".join(done.out.split()))
            return
        self.assertLessEqual(findings, {"found", "as declared"})
        named = [channel["causes"][0]["members"] for channel in channels if channel["finding"] == "found"]
        self.assertTrue(named)
        for members in named:
            self.assertRegex(members[0]["what"], NAMED[fault])
        # The check itself ended with it.
        self.assertRegex(" ".join(done.out.split()), "explained, channels? .*" + NAMED[fault])

    def test_what_nobody_declared_is_printed_to_be_pasted_and_holds_then(self):
        path = self.write("plan.toml", PLAN)
        with self.virtual_board("--filter-set", "load-cell"):
            self.assert_status(self.check(path, self.rig()), 0)
        text = self.explain()
        self.assertIn("channel 1: its arithmetic is found", text)
        block = text[text.index("[arithmetic]"):]
        self.assertEqual(block, '[arithmetic]\nrounding = "half-up"\n')
        self.again()
        path.write_text(path.read_text().replace("[[filter]]", block + "\n[[filter]]"))
        with self.virtual_board("--filter-set", "load-cell"):
            self.assert_status(self.check(path, self.rig()), 0)
        self.assertIn("channel 1: as declared", self.explain())
        rules = {rule["kind"] for case in self.record()["verdict"]["cases"] for rule in case["rules"]}
        self.assertIn("exact", rules)

    def test_rules_that_fail_in_the_declared_arithmetic_are_told_so(self):
        path = self.write("plan.toml", PLAN.replace("[[filter]]", '[arithmetic]\nrounding = "floor"\n\n[[filter]]') +
                          '[[rule]]\nkind = "error"\nmax_lsb = 0.5\n' + NOISE)
        for arithmetic, sentence in (
                (True, "the declared arithmetic reproduces all 6000 samples of 1 case, bit for bit; rules that fail do so because of it"),
                (False, 'the board computes with rounding = "floor", which reproduces all 6000 samples of 1 case, bit for bit; rules that fail do so in this arithmetic')):
            self.again()
            if not arithmetic:
                path.write_text(path.read_text().replace('[arithmetic]\nrounding = "floor"\n', ""))
            with self.virtual_board("--filter-set", "load-cell", "--fault", "truncation"):
                done = self.check(path, self.rig())
            self.assert_status(done, 1)
            self.assertIn("explained, channel 1: " + sentence, " ".join(done.out.split()))

    def test_channels_that_get_different_samples_show_what_is_mixed_up(self):
        declared = '[arithmetic]\nrounding = "half-up"\naccumulator_bits = 32\n\n[[filter]]'
        path = self.write("plan.toml", PLAN.replace('"load-cell"', '"pair"\nchannels = 2').replace("[[filter]]", declared))
        for fault in ("channels-swapped", "crosstalk", "shared-state"):
            with self.subTest(fault=fault):
                self.again()
                with self.virtual_board("--filter-set", "pair", "--fault", fault):
                    self.assert_status(self.check(path, self.rig()), 1)
                causes = [channel["causes"][0]["members"][0]["what"] for channel in self.explained() if channel["causes"]]
                self.assertTrue(causes)
                for cause in causes:
                    self.assertRegex(cause, NAMED[fault])

    def test_the_place_in_the_plan_and_the_sample_are_named(self):
        self.run_exact("load-cell", "--fault", "truncation", status=1)
        text = " ".join(self.explain().split())
        self.assertRegex(text, r"where stage 1, \S*load-cell\.toml:\d+:\d+ ")
        self.assertRegex(text, r"reproduces all [\d,]+ samples of \d+ cases, bit for bit; as the plan declares it the board would first differ at sample \d+ of case \"")
        self.assertIn("next best", text)
        (channel,) = self.explained()
        (change,) = channel["causes"][0]["members"][0]["changes"]
        self.assertEqual((change["slot"], change["stage"]), ("arithmetic", 1))

    def test_some_cases_alone(self):
        self.run_exact("load-cell", "--fault", "truncation", status=1)
        names = self.record()["cases_planned"]
        (channel,) = self.explained()
        self.assertEqual(len(channel["cases"]), len(names))
        done = halflsb("explain", self.folder / "run", "--case", names[0], "--json")
        (explanation,) = json.loads(done.out)["explanations"]
        self.assertEqual(explanation["channels"][0]["cases"], [names[0]])

    def test_a_search_ends_in_time_with_what_it_has(self):
        self.run_exact("quick-smoothing", "--fault", "added-noise", status=1)
        text = self.explain("--for", "0.000001", status=2)
        self.assertIn("the search was ended before its end", " ".join(text.split()))

    # A positive step does not tell floor from cutting toward zero; the level is below a third of the range.
    STEP = PLAN.replace("[[filter]]", '[arithmetic]\nrounding = "half-up"\n\n[[filter]]') + """[[rule]]
kind = "exact"
[[case]]
name = "step"
[case.stimulus]
shape = "step"
at_samples = 20
level_ratio = 0.30001
length_samples = 2048
"""

    def test_the_board_is_asked_what_its_captures_leave_open(self):
        path = self.write("plan.toml", self.STEP)
        for fault, other in (("truncation", "toward-zero"), ("toward-zero", "floor")):
            with self.subTest(fault=fault), self.virtual_board("--filter-set", "load-cell", "--fault", fault):
                for folder in self.folder.glob("run*"):
                    subprocess.run(["rm", "-rf", folder], check=True)
                done = self.check(path, self.rig())
                self.assert_status(done, 1)
                self.assertIn("--rig asks the board which", " ".join(done.out.split()))
                (alone,) = self.explained(status=2)
                self.assertEqual(alone["finding"], "several")
                (explanation,) = json.loads(self.explain("--rig", self.rig(), "--json"))["explanations"]
                (channel,) = explanation["channels"]
                self.assertEqual(channel["finding"], "found")
                self.assertEqual(channel["causes"][0]["members"][0]["what"], NAMED[fault])
                self.assertEqual(channel["cases"], ["step", "question 1, loud noise"])
                (asked,) = explanation["asked"]
                self.assertEqual(asked["folder"], str(self.folder / "run-asked"))
                (question,) = asked["questions"]
                self.assertEqual(question["ruled_out"], [{"channels": [1], "what": f"{other} in place of half-up"}])
                self.assertEqual(question["left"], 1)
                # A second time the folder of the first stays.
                text = " ".join(self.explain("--rig", self.rig()).split())
                self.assertIn(f"recorded in {self.folder}/run-asked-2", text)
                self.assertIn(f"loud noise: the answer rules out channel 1: {other} in place of half-up; 1 cause left", text)

    def test_no_question_goes_beyond_the_level_of_the_run(self):
        path = self.write("plan.toml", self.STEP)
        with self.virtual_board("--filter-set", "load-cell", "--fault", "truncation"):
            self.assert_status(self.check(path, self.rig()), 1)
            self.explain("--rig", self.rig())
        asked = self.folder / "run-asked"
        record = json.loads((asked / "run.json").read_text())
        self.assertEqual([case["name"] for case in record["verdict"]["cases"]], ["question 1, loud noise"])
        level = float(re.search(r"level_ratio = (\S+)", (asked / "plan.toml").read_text())[1])
        self.assertEqual(level, round(0.30001 * 32768) / 32768)
        # The folder is a run as any other is.
        self.assert_status(halflsb("judge", asked), 1)

    def test_another_firmware_is_not_asked_in_its_place(self):
        path = self.write("plan.toml", self.STEP)
        with self.virtual_board("--filter-set", "load-cell", "--fault", "truncation", "--build-id", "aa01"):
            self.assert_status(self.check(path, self.rig()), 1)
        with self.virtual_board("--filter-set", "load-cell", "--fault", "toward-zero", "--build-id", "bb02"):
            done = halflsb("explain", self.folder / "run", "--rig", self.rig())
        self.assert_status(done, 3)
        self.assertIn("2 causes fit", done.out)
        self.assertIn("the board runs build-id bb02", done.err)

    def test_a_board_that_is_not_there_leaves_what_the_captures_say(self):
        path = self.write("plan.toml", self.STEP)
        with self.virtual_board("--filter-set", "load-cell", "--fault", "truncation", "--build-id", ""):
            self.assert_status(self.check(path, self.rig()), 1)
            done = halflsb("explain", self.folder / "run", "--rig", self.rig())
            self.assert_status(done, 0)
            self.assertIn("the firmware of the run has no build-id", " ".join(done.err.split()))
        done = halflsb("explain", self.folder / "run", "--rig", self.rig())
        self.assert_status(done, 3)
        self.assertIn("2 causes fit", done.out)

    def test_nothing_is_asked_where_the_captures_decide(self):
        self.run_exact("load-cell", "--fault", "truncation", status=1)
        done = halflsb("explain", self.folder / "run", "--rig", self.rig())
        self.assert_status(done, 0)
        self.assertFalse((self.folder / "run-asked").exists())

    def test_an_unknown_filter_has_nothing_to_be_compared_with(self):
        plan = self.plan(NOISE, filter_text='[[filter]]\nkind = "unknown"\n', rules='[[rule]]\nkind = "unchanged"\n')
        with self.virtual_board("--filter-set", "load-cell"):
            self.assert_status(self.check(plan, self.rig()), 2)
        done = halflsb("explain", self.folder / "run")
        self.assert_status(done, 65)
        self.assertIn("its filter is unknown", done.err)


main()
