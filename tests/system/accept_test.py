"""accept: what a baseline holds, what it refuses, and that `unchanged` sees a difference anywhere in a case."""
import hashlib
import json
import os
import tomllib

import numpy as np

from support import NOISE, STEP, Case, halflsb, main
import support

UNCHANGED = '[[rule]]\nkind = "unchanged"\nbaseline = "baseline"\n'
ERROR = '[[rule]]\nkind = "error"\nmax_lsb = 1.0\n'


class Accept(Case):
    def captured(self, name="run", cases=NOISE + STEP, faults=(), status=None, rules=ERROR + UNCHANGED, options=(), formats="q15", **more):
        plan = self.plan(cases, rules=rules, **more)
        plan.write_text(plan.read_text().replace('"q15"', f'"{formats}"'))
        with self.virtual_board("--serial", "CW7-0003", *[word for fault in faults for word in ("--fault", fault)]):
            done = halflsb("check", plan, "--rig",
                           self.rig(wire="answer_s = 0.5\ngreet_s = 1.0\n"), "--out", self.folder / name, *options, cwd=self.folder)
        if status is not None:
            self.assert_status(done, status)
        return done

    def accept(self, name="run", *words, status=0):
        done = halflsb("accept", self.folder / name, *words, cwd=self.folder)
        self.assert_status(done, status)
        return done

    def baseline(self):
        return tomllib.loads((self.folder / "baseline" / "baseline.toml").read_text())

    def nothing_written(self):
        self.assertFalse((self.folder / "baseline").exists())

    def test_a_baseline_holds_hashes_and_samples_of_the_captures(self):
        self.captured(status=2)
        self.assertIn("wrote 3 files", self.accept().out)
        made = self.baseline()
        self.assertEqual((made["board_serial"], made["output"], made["channels"]), ("CW7-0003", "q15", 1))
        self.assertEqual(made["plan_sha256"], hashlib.sha256((self.folder / "plan.toml").read_bytes()).hexdigest())
        for case, recorded in zip(made["case"], self.record()["cases"]):
            capture = np.load(self.folder / "run" / recorded["capture"]["file"])
            kept = np.load(self.folder / "baseline" / case["kept"])
            self.assertEqual(case["name"], recorded["name"])
            self.assertEqual(case["samples"], len(capture))
            self.assertEqual(case["response_sha256"], hashlib.sha256(capture.tobytes()).hexdigest())
            self.assertEqual(case["stimulus_sha256"], recorded["stimulus"]["sha256"])
            self.assertTrue(np.array_equal(kept, capture))
        self.captured("again", status=0)

    def test_a_long_case_keeps_its_first_samples_and_hashes_of_stretches(self):
        self.captured(status=2)
        self.accept("run", "--samples", "1000")
        noise = self.baseline()["case"][0]
        capture = np.load(self.folder / "run" / self.record()["cases"][0]["capture"]["file"])
        self.assertEqual((noise["kept_samples"], noise["block_samples"], len(noise["block_sha256"])), (1000, 24, 250))
        self.assertTrue(np.array_equal(np.load(self.folder / "baseline" / noise["kept"]), capture[:1000]))
        for i, sha256 in enumerate(noise["block_sha256"]):
            self.assertEqual(sha256, hashlib.sha256(capture[24 * i:24 * i + 24].tobytes()).hexdigest())
        self.captured("again", status=0)

    def test_a_changed_firmware_fails_and_may_be_accepted(self):
        self.captured(status=2)
        self.accept()
        done = self.captured("changed", faults=("A01",), status=1)
        self.assertIn("unchanged", done.out)
        before, after = (np.load(self.folder / run / self.record(run)["cases"][0]["capture"]["file"]) for run in ("run", "changed"))
        first = int(np.flatnonzero(before != after)[0])
        self.assertIn(f"noise: first different sample {first}, was {before[first]}, is {after[first]}", self.accept("changed").out)
        self.captured("third", faults=("A01",), status=0)
        self.captured("fourth", status=1)

    def test_cases_that_this_run_does_not_have_stay(self):
        self.captured(status=2)
        self.accept()
        self.captured("some", options=("--case", "step"), status=0)
        out = self.accept("some").out
        self.assertRegex(out, r"(?m)^  same +step$")
        self.assertRegex(out, r"(?m)^  stays +noise$")
        self.assertEqual([case["name"] for case in self.baseline()["case"]], ["noise", "step"])
        self.captured("again", status=0)

    def test_what_is_not_whole_or_fails_is_refused_by_case_and_rule(self):
        self.captured(faults=("A01",), rules=ERROR.replace("1.0", "0.5") + UNCHANGED, status=1)
        done = self.accept(status=65)
        self.assertRegex(done.err, r"case 'noise': rule error of .*plan\.toml:\d+:\d+ fails")
        self.nothing_written()
        self.captured("invalid", cases=NOISE + NOISE.replace('"noise"\n[', '"second"\n['), faults=("unplug=30",), status=3)
        self.assertIn("case 'second': its capture is invalid", self.accept("invalid", status=65).err)
        self.nothing_written()

    def test_a_plan_without_the_rule_is_told_the_words(self):
        self.captured(rules=ERROR, status=0)
        err = self.accept(status=65).err
        self.assertIn('kind = "unchanged"\n', err)
        self.nothing_written()

    def test_an_edited_capture_is_refused(self):
        self.captured(status=2)
        path = self.folder / "run" / self.record()["cases"][0]["capture"]["file"]
        path.write_bytes(path.read_bytes()[:-2] + b"\x01\x00")
        self.assertIn("it was edited", self.accept(status=65).err)
        self.nothing_written()

    def test_the_baseline_stays_below_the_root(self):
        self.captured(status=2)
        outside = self.folder / "outside"
        outside.mkdir()
        inside = self.folder / "inside"
        inside.mkdir()
        (inside / "baseline").symlink_to(outside)
        self.assertIn("it leads out of the root", self.accept("run", "--root", inside, status=65).err)
        self.assertEqual(list(outside.iterdir()), [])
        self.assertIn("there is no such folder", self.accept("run", "--root", self.folder / "none", status=65).err)

    def test_a_damaged_baseline_is_not_overwritten(self):
        self.captured(status=2)
        self.accept()
        file = self.folder / "baseline" / "baseline.toml"
        file.write_text("title = \n")
        self.accept(status=65)
        self.assertEqual(file.read_text(), "title = \n")

    def test_kept_samples_that_were_damaged_are_written_anew(self):
        self.captured(status=2)
        self.accept()
        kept = self.folder / "baseline" / "001-noise.npy"
        whole = kept.read_bytes()
        kept.write_bytes(whole[:-1] + bytes([whole[-1] ^ 1]))
        refused = self.captured("refused", status=65)
        self.assertIn("take the baseline as it was committed, or remove its folder and accept a good run anew", refused.err)
        self.assertIn("wrote 2 files", self.accept().out)
        self.assertEqual(kept.read_bytes(), whole)
        self.captured("again", status=0)

    def test_a_case_of_another_stimulus_is_accepted_as_the_refusal_says(self):
        self.captured(status=2)
        self.accept()
        other = NOISE.replace("seed = 3", "seed = 4") + STEP
        refused = self.captured("refused", cases=other, status=65)
        self.assertIn("  take the change back, or remove this case from baseline/baseline.toml, check again and accept that run\n", refused.err)
        file = self.folder / "baseline" / "baseline.toml"
        head, noise, step = file.read_text().split("[[case]]\n")
        self.assertIn('name = "noise"', noise)
        file.write_text(head + "[[case]]\n" + step)
        self.captured("other", cases=other, status=2)
        out = self.accept("other").out
        self.assertRegex(out, r"(?m)^  new +noise$")
        self.assertRegex(out, r"(?m)^  same +step$")
        self.captured("again", cases=other, status=0)

    def test_two_spellings_of_one_folder_keep_the_cases_of_both(self):
        rule = '[[case.rule]]\nkind = "unchanged"\nbaseline = "{}"\n'
        cases = NOISE + rule.format("baseline") + STEP + rule.format("./baseline/")
        self.captured(cases=cases, rules=ERROR, status=2)
        self.accept()
        self.assertEqual([case["name"] for case in self.baseline()["case"]], ["noise", "step"])
        self.captured("again", cases=cases, rules=ERROR, status=0)

    def test_more_kept_samples_than_a_plan_may_read_are_refused(self):
        self.captured(cases=NOISE.replace("6000", "4300000"), board_filter="average-i32", formats="i32", status=2)
        err = self.accept("run", "--samples", "5000000", status=65).err
        self.assertIn("its 4,300,000 kept samples would take 17,200,128 bytes, and a plan reads files of at most 16,777,216", err)
        self.assertIn("  accept with --samples 4194272 or fewer\n", err)
        self.nothing_written()
        self.accept("run", "--samples", "4194272")
        self.assertEqual((self.folder / "baseline" / "001-noise.npy").stat().st_size, 16 << 20)

    def test_a_baseline_that_cannot_be_written_whole_stays_as_it_was(self):
        self.captured(status=2)
        self.accept()
        self.captured("changed", faults=("A01",), status=1)
        baseline = self.folder / "baseline"
        before = {path.name: path.read_bytes() for path in baseline.iterdir()}
        (baseline / "baseline.toml.part").mkdir()  # where the last file would be written first
        self.accept("changed", status=73)
        (baseline / "baseline.toml.part").rmdir()
        self.assertEqual({path.name: path.read_bytes() for path in baseline.iterdir()}, before)
        self.captured("again", status=0)

    def test_a_disk_without_room_is_told_without_options_that_accept_does_not_have(self):
        self.captured(status=2)
        # A file may have 1 KiB, the samples of a case need more.
        limited = ("bash", "-c", "trap '' XFSZ; ulimit -f 1; exec \"$@\"", "bash")
        done = halflsb("accept", self.folder / "run", cwd=self.folder, prefix=limited)
        self.assert_status(done, 73)
        self.assertIn("free some space, or give this user the right to write there", done.err)
        self.assertFalse((self.folder / "baseline" / "baseline.toml").exists())

    def test_a_folder_that_cannot_be_written(self):
        self.captured(status=2)
        (self.folder / "baseline").write_text("a file in the way")
        done = halflsb("accept", self.folder / "run", cwd=self.folder)
        self.assertIn(done.status, (65, 73))
        self.assertEqual((self.folder / "baseline").read_text(), "a file in the way")


if __name__ == "__main__":
    main()
