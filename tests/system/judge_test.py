"""judge: the captures of a run again. By the same plan byte for byte the same verdict; by another a new one; and every
folder that is not whole, not ours or was edited is refused by name with nothing written."""
import hashlib
import json
import signal
import subprocess

from support import NOISE, STEP, Case, halflsb, main
import support

ERROR = '[[rule]]\nkind = "error"\nmax_lsb = 0.5\n'


def verdict_of(text):
    """The bytes of the verdict section: from its key to that of the cases."""
    begin = text.index('\n  "verdict": ')
    return text[begin:text.index('\n  "cases": [', begin)]


def bytes_below(folder):
    return {path.relative_to(folder): path.read_bytes() for path in sorted(folder.rglob("*")) if path.is_file()}


def with_planned(text, names):
    return support.sealed(json.dumps({**json.loads(text), "cases_planned": names}))


def before_explained(text):
    """A failing check ends with what explains it, judge does not."""
    return text.split("explained, ")[0]


class Judge(Case):
    def captured(self, cases=NOISE + STEP, faults=(), status=0, name="run", options=(), **more):
        with self.virtual_board(*[word for fault in faults for word in ("--fault", fault)]):
            done = halflsb("check", self.plan(cases, **more), "--rig", self.rig(wire="answer_s = 0.5\ngreet_s = 1.0\n"),
                           "--out", self.folder / name, *options, cwd=self.folder)
        self.assert_status(done, status)
        return done

    def judge(self, *words, run="run"):
        folder = self.folder / run
        before = bytes_below(folder)
        done = halflsb("judge", folder, *words, cwd=self.folder)
        self.assertEqual(bytes_below(folder), before, "judging wrote something")
        return done

    def refused(self, *texts, words=()):
        done = self.judge(*words)
        self.assert_status(done, 65)
        self.assertEqual(done.out, "")
        for text in texts:
            self.assertIn(text, done.err)

    def edit(self, change, file="run/run.json"):
        path = self.folder / file
        record = json.loads(path.read_text())
        change(record)
        path.write_text(support.sealed(json.dumps(record)))

    def test_by_the_same_plan_the_verdict_is_the_same_byte_for_byte(self):
        for faults, status in (((), 0), (("A01",), 1)):
            with self.subTest(faults):
                checked = self.captured(faults=faults, status=status)
                written = (self.folder / "run" / "run.json").read_text()
                judged = self.judge()
                self.assert_status(judged, status)
                # The reports of the cases, from the first on, are those of check.
                cases = lambda text: text[text.index("\n1/2  "):]
                self.assertEqual(cases(judged.out), before_explained(cases(checked.out)))
                document = self.judge("--json")
                self.assertEqual(verdict_of(document.out), verdict_of(written))
                self.assertEqual(json.loads(document.out)["runs"], [json.loads(written)])
                support.shutil.rmtree(self.folder / "run")

    def test_a_case_that_ended_early_is_judged_by_what_came(self):
        cases = lambda rule: f"""[[case]]
name = "quiet noise"
[case.stimulus]
shape = "noise"
level_ratio = 0.002
length_samples = 400000
[[case.rule]]
{rule}
"""
        band = lambda limits: f'kind = "response"\nbands = [{{ from_hz = 70.0, to_hz = 600.0, {limits} }}]\n'
        self.captured(cases(band("max_db = -12.0")), rules="")
        record = self.record()
        sent = record["cases"][0]["stimulus"]["samples"]
        self.assertLess(sent, 200000)
        [evidence] = [rule["evidence"] for rule in record["verdict"]["cases"][0]["rules"] if rule["kind"] == "response"]
        self.assertLessEqual(evidence["samples"], sent)
        self.assertEqual(evidence["budget_samples"], 400000)
        document = self.judge("--json")
        self.assertEqual(verdict_of(document.out), verdict_of((self.folder / "run" / "run.json").read_text()))
        # -13.15 dB at the first side lobe, and noise of some 0.05 dB.
        failing = self.plan(cases(band("max_db = -16.0")), rules="", name="failing.toml")
        self.assert_status(self.judge(failing), 1)
        narrow = self.plan(cases(band("max_db = -13.1") + "delta_db = 0.001\n"), rules="", name="narrow.toml")
        undecided = self.judge(narrow)
        self.assert_status(undecided, 65)
        self.assertIn(f"{sent:,} samples were sent of 400,000, until its rules were decided; those of this plan are not",
                      undecided.err)
        whole = self.plan(cases('kind = "error"\nmax_lsb = 0.5\n'), rules="", name="whole.toml")
        self.refused("and its rules want all of them", words=(whole,))

    def test_a_record_that_was_edited_by_hand_is_refused(self):
        self.captured(faults=("A01",), status=1)
        path = self.folder / "run" / "run.json"
        whole = path.read_text()
        self.assertEqual(support.sealed(whole), whole)
        for old, new in (('"verdict": "fail"', '"verdict": "pass"'), ('"build_id": "', '"build_id": "0'), ("\n  ", "\n   ")):
            path.write_text(whole.replace(old, new, 1))
            self.refused("run.json: it was edited: its bytes have another SHA-256 than its content_sha256 says")
        path.write_text(whole)
        self.assert_status(self.judge(), 1)

    def test_the_folder_is_enough_when_plan_and_rig_are_gone_or_changed(self):
        taps = self.folder / "taps.txt"
        taps.write_text("\n".join(["0.0625"] * 16) + "\n")
        self.captured(filter_text='[[filter]]\nkind = "fir"\ntaps_file = "taps.txt"\n')
        self.assertEqual((self.folder / "run" / "plan-files" / "taps.txt").read_bytes(), taps.read_bytes())
        taps.write_text("1.0\n")
        (self.folder / "plan.toml").unlink()
        self.assert_status(self.judge(), 0)
        (self.folder / "run" / "plan-files" / "taps.txt").write_text("1.0\n")
        self.refused("plan-files/taps.txt", "it was edited")

    def test_channels_start_states_settings_and_baselines_are_judged_alike(self):
        quiet = NOISE.replace("0.9", "0.5")
        each = STEP.replace('"step"\n[', '"one side"\n[').replace("level_ratio = 0.5\n", "") + 'channel = 2\n[case.each]\n"stimulus.level_ratio" = [0.25, 0.5]\n'
        pair = dict(cases=quiet + each, signal="channels = 2", board_filter="pair", rules=ERROR + '[[rule]]\nkind = "unchanged"\nbaseline = "b"\n')
        settings = dict(cases=quiet.replace("[case.stim", "settings = { average-points = 8 }\n[case.stim") + STEP.replace("[case.stim", 'start = "flush"\n[case.stim'),
                        board_filter="average", filter_text=None)
        for more, status in ((pair, 2), (settings, 1)):
            with self.subTest(more["board_filter"]):
                checked = self.captured(status=status, **more)
                written = (self.folder / "run" / "run.json").read_text()
                judged = self.judge()
                self.assert_status(judged, status)
                # Behind the lines on the board, the cases' reports and the summary.
                self.assertEqual(judged.out[judged.out.index("\n1/"):], before_explained(checked.out[checked.out.index("\n1/"):]))
                document = self.judge("--json")
                self.assertEqual(json.loads(document.out)["runs"], [json.loads(written)])
                self.assertEqual(verdict_of(document.out), verdict_of(written))
                if status == 2:
                    accepted = halflsb("accept", self.folder / "run", cwd=self.folder)
                    self.assert_status(accepted, 0)
                    support.shutil.rmtree(self.folder / "run")
                    self.captured(status=0, **more)
                    # The baseline is among the files of the run: judging does not need the repository.
                    support.shutil.rmtree(self.folder / "b")
                    self.assert_status(self.judge(), 0)
                support.shutil.rmtree(self.folder / "run")

    def test_by_another_plan_it_is_a_new_verdict(self):
        self.captured(faults=("A01",), status=1)
        wide = self.plan(NOISE + STEP, rules=ERROR.replace("0.5", "1.0"), name="wide.toml")
        done = self.judge(wide)
        self.assert_status(done, 0)
        self.assertIn("2 pass", done.out)
        document = json.loads(self.judge(wide, "--json").out)["runs"][0]
        self.assertEqual(document["plan"]["sha256"], hashlib.sha256(wide.read_bytes()).hexdigest())
        self.assertEqual(document["verdict"]["counts"]["pass"], 2)

    def test_a_capture_that_answers_another_question_is_refused_by_name(self):
        self.captured()
        for old, new, text in (
            ("seed = 3", "seed = 4", "SHA-256"),
            ("length_samples = 600\n", "length_samples = 601\n", "600 samples were sent"),
            ("rate_hz = 1200.0", "rate_hz = 1000.0", "captured at 1200 Hz"),
            ('output = "q15"', 'output = "q31"', "output q15"),
            ('filter = "load-cell"', 'filter = "smoothing"', "filter load-cell"),
        ):
            with self.subTest(new):
                text_of_plan = self.plan(NOISE + STEP, name="other.toml").read_text()
                self.assertIn(old, text_of_plan)
                self.refused(text, words=(self.write("other.toml", text_of_plan.replace(old, new)),))

    def test_cases_and_captures_without_each_other_are_named(self):
        self.captured()
        other = self.plan(NOISE + STEP.replace('"step"\n[', '"new step"\n['), name="other.toml")
        done = self.judge(other)
        self.assert_status(done, 3)
        self.assertIn("1 case has no capture in this run: 'new step'", done.out)
        self.assertIn("captures that no case of the plan asks for were not judged: 'step'", done.out)
        self.assertIn("1 pass", done.out)

    def test_some_cases_only(self):
        self.captured(faults=("A01",), status=1)
        done = self.judge("--case", "step")
        self.assertIn("1/1  step", done.out)
        self.assertNotIn("noise", done.out)
        self.assert_status(self.judge("--case", "nosie"), 64)
        self.assert_status(self.judge("--label", "quick"), 64)

    def test_an_invalid_case_stays_invalid_with_its_reason(self):
        checked = self.captured(cases=NOISE + NOISE.replace('"noise"\n[', '"second"\n['), faults=("unplug=30",), status=3)
        done = self.judge()
        self.assert_status(done, 3)
        self.assertEqual(done.out[done.out.index("\n1/2  "):], checked.out[checked.out.index("\n1/2  "):])

    def test_an_interrupted_run_is_judged_as_far_as_it_went(self):
        with self.virtual_board("--baud", "9600"):
            plan, rig = self.plan(STEP + NOISE.replace("6000", "60000")), self.rig()
            process = subprocess.Popen([support.HALFLSB, "check", plan, "--rig", rig, "--out", self.folder / "run"],
                                       stdout=subprocess.PIPE, stderr=subprocess.STDOUT)
            for line in process.stdout:
                if line.startswith(b"1/2"):
                    break
            process.send_signal(signal.SIGINT)
            process.communicate(timeout=support.LIMIT_S)
        self.assertEqual(process.returncode, 130)
        done = self.judge()
        self.assert_status(done, 3)
        self.assertIn("1 pass, 0 fail, 0 invalid, 0 undecided, 1 not run", done.out)
        self.assert_status(self.judge("--case", "step"), 0)
        written = (self.folder / "run" / "run.json").read_text()
        self.assertEqual(verdict_of(self.judge("--json").out), verdict_of(written))

    def test_files_that_are_missing_or_edited(self):
        self.captured()
        for file in ("plan.toml", "rig.toml", "captures/001-noise.npy"):
            with self.subTest(file):
                path = self.folder / "run" / file
                before = path.read_bytes()
                path.write_bytes(before[:-1] + bytes([before[-1] ^ 1]))
                self.refused(f"run/{file}: it was edited")
                path.unlink()
                self.refused(f"run/{file}: it is missing")
                path.write_bytes(before)
        self.assert_status(self.judge(), 0)

    def test_a_plan_that_was_exchanged_together_with_its_hash(self):
        self.captured()
        plan = self.folder / "run" / "plan.toml"
        plan.write_text(plan.read_text().replace("seed = 3", "seed = 4"))
        sha256 = hashlib.sha256(plan.read_bytes()).hexdigest()
        self.edit(lambda record: record["plan"].update(sha256=sha256))
        self.refused("case 'noise'", "it was edited")

    def test_folders_that_are_not_ours_or_not_whole(self):
        self.captured()
        whole = (self.folder / "run" / "run.json").read_text()
        done = halflsb("judge", self.folder / "nothing")
        self.assert_status(done, 65)
        self.assertIn("there is no such folder", done.err)
        (self.folder / "empty").mkdir()
        done = halflsb("judge", self.folder / "empty")
        self.assert_status(done, 65)
        self.assertIn("it holds no run.json", done.err)
        for text, message in (
            ("", "it is no JSON"),
            (whole[:-20], "it is no JSON"),
            ("[" * 100_000, "nested more than 64 deep"),
            ('{"a": ' * 100_000, "nested more than 64 deep"),
            ('{"format": "halflsb run", "format": "x"}', "the key 'format' is there twice"),
            ('{"format": "another"}', "it is not the record of a run"),
            ("[]", "it is not the record of a run"),
            (whole.replace('"format_version": 2', '"format_version": 1'), "cannot be judged again"),
            (whole.replace('"format_version": 2', '"format_version": 3').replace('"tool_version": "0.1.0"', '"tool_version": "9.8.7"'),
             "it is of format version 3, written by halflsb 9.8.7; this halflsb reads version 2"),
            (whole.replace('"finished": true', '"finished": false'), "the run is incomplete"),
            (whole.replace('"number": 1,', '"number": 1e99,'), "number"),
            (whole.replace('"number": 1,', '"number": 1e9999,'), "a number is too large"),
            (whole.replace('"samples": 6000', '"samples": "many"'), "cases[0].stimulus.samples is \"many\""),
            (whole.replace('"seed": null', '"seed": -1'), "seed is -1"),
            (whole.replace('"captures/001-noise.npy"', '"../outside.npy"'), "which is no file of this folder"),
            (whole.replace('"captures/001-noise.npy"', '"/etc/passwd"'), "which is no file of this folder"),
            (whole.replace('"captures/001-noise.npy"', '"captures/../../x"'), "which is no file of this folder"),
            (whole.replace('"name": "step"', '"name": "noise"'), "has the case 'noise' twice"),
            (with_planned(whole, ["noise", "noise"]), "cases_planned has the case 'noise' twice"),
            (with_planned(whole, []), "cases_planned is empty: no run is without a case"),
        ):
            with self.subTest(message):
                self.assertNotEqual(text, whole)
                (self.folder / "run" / "run.json").write_text(text)
                self.refused("run/run.json", message)

    def test_a_link_out_of_the_folder_is_not_followed(self):
        self.captured()
        capture = self.folder / "run" / "captures" / "001-noise.npy"
        outside = self.folder / "outside.npy"
        capture.rename(outside)
        capture.symlink_to(outside)
        self.refused("it leads out of the folder")

    def test_a_root_without_a_plan_is_a_usage_error(self):
        self.captured()
        self.assert_status(self.judge("--root", self.folder), 64)


if __name__ == "__main__":
    main()
