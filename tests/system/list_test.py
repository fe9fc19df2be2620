"""check --list, labels, several rigs in one call, and a rerun line that can be pasted."""
import os
import subprocess

from support import NOISE, STEP, VIRTUAL_BOARD, Case, Process, halflsb, main
import support

LABELLED = NOISE.replace('name = "noise"', 'name = "noise"\nlabels = ["quick"]') + STEP.replace('name = "step"', 'name = "step"\nlabels = ["quick", "slow"]')
QUICK = "answer_s = 0.5\ngreet_s = 1.0\n"


class List(Case):
    def test_the_cases_with_their_time_and_no_board(self):
        plan = self.plan(LABELLED)
        done = halflsb("check", plan, "--list", "--rig", self.rig(port="/dev/there-is-no-such-port"), cwd=self.folder)
        self.assert_status(done, 0)
        # 6000 samples in blocks of 256: 23 full ones of 530 bytes and 112 samples in 242 (docs/wire.md), at 92160 bytes a second.
        self.assertRegex(done.out, rf"(?m)^ +1  noise +quick +1 +6000  reset +5\.00 +{(23 * 530 + 242) / 92160:.2f}$")
        self.assertRegex(done.out, r"(?m)^ +2  step +quick, slow +1 +600  reset +0\.50 ")
        self.assertRegex(done.out, r"(?m)^ +all +6600 +5\.50 ")
        self.assertFalse((self.folder / ".halflsb").exists())
        done = halflsb("check", plan, "--list", "--label", "slow")
        self.assertIn("1 case would run", done.out)
        self.assertIn("with --rig RIG the time on the wire is told", done.out)

    def test_labels_select_and_an_unknown_one_names_those_there_are(self):
        plan = self.plan(LABELLED)
        with self.virtual_board():
            done = self.check(plan, self.rig(), "--label", "slow")
        self.assert_status(done, 0)
        self.assertEqual(self.record()["cases_planned"], ["step"])
        done = halflsb("check", plan, "--list", "--label", "quik")
        self.assert_status(done, 64)
        self.assertIn("the plan's labels are: quick, slow", done.err)
        done = halflsb("check", plan, "--list", "--label", "slow", "--case", "noise")
        self.assert_status(done, 64)

    def test_a_plan_behind_a_double_dash(self):
        self.plan(NOISE, name="-plan.toml")
        self.assert_status(halflsb("predict", "--", "-plan.toml", cwd=self.folder), 0)

    def rigs(self, *faults):
        """A board and a rig for each, called a, b ..."""
        boards, rigs = [], []
        for letter, fault in zip("abc", faults):
            link = self.folder / f"uart-{letter}"
            options = () if fault is None else ("--fault", fault)
            boards.append(Process([VIRTUAL_BOARD, "--link", link, *options]))
            rigs.append(self.rig(port=link, name=f"{letter}.toml", wire=QUICK))
        return boards, rigs

    def check_on(self, faults, *options, status):
        boards, rigs = self.rigs(*faults)
        for board in boards:
            board.__enter__()
            self.addCleanup(board.stop)
        words = [word for rig in rigs for word in ("--rig", rig)]
        done = halflsb("check", self.plan(NOISE), *words, *options, cwd=self.folder)
        self.assert_status(done, status)
        return done

    def test_several_rigs_run_one_after_the_other_each_in_its_own_folder(self):
        done = self.check_on((None, "A01", None), "--out", self.folder / "all", status=1)
        statuses = [self.record(f"all/{letter}")["verdict"]["counts"]["fail"] for letter in "abc"]
        self.assertEqual(statuses, [0, 1, 0])
        self.assertRegex(done.out, r"(?m)^3 rigs$")
        self.assertRegex(done.out, r"(?m)^  \S*b\.toml +0 +1 +0 +0 +0 +1( |$)")

    def test_a_bench_that_fails_does_not_stop_the_others_and_default_folders_name_the_rig(self):
        self.check_on(("silent", None), status=3)
        folders = sorted(path.name for path in (self.folder / ".halflsb").iterdir())
        self.assertEqual([name[16:] for name in folders], ["-plan-a", "-plan-b"])

    def test_all_rigs_are_read_before_the_first_is_touched(self):
        bad = self.write("bad.toml", "[board]\n")
        done = halflsb("check", self.plan(STEP), "--rig", self.rig(port="/dev/none"), "--rig", bad, "--out", self.folder / "all")
        self.assert_status(done, 65)
        self.assertEqual(done.out, "")
        self.assertFalse((self.folder / "all").exists())

    def test_a_plan_whose_name_is_no_utf8_can_be_rerun_by_pasting(self):
        name = os.fsencode(self.folder) + b"/pl\xff'an.toml"
        os.rename(os.fsencode(self.plan(NOISE)), name)
        with self.virtual_board("--fault", "A01"):
            done = subprocess.run([support.HALFLSB, "check", name, "--rig", self.rig(), "--out", self.folder / "run"], capture_output=True,
                                  cwd=self.folder, timeout=support.LIMIT_S)
            self.assertEqual(done.returncode, 1)
            command = next(line for line in done.stdout.decode().splitlines() if "rerun: " in line).split("rerun: ")[1]
            self.assertIn("\\xff", command)
            again = subprocess.run(["bash", "-c", command.replace("halflsb", str(support.HALFLSB), 1)], cwd=self.folder, capture_output=True,
                                   timeout=support.LIMIT_S)
        self.assertEqual(again.returncode, 1, again.stderr)


if __name__ == "__main__":
    main()
