"""Results that cannot be written: exit 73, before the board is touched where that can be known, and nothing finished lost."""
import os
import shutil
import subprocess

from support import NOISE, STEP, Case, halflsb, main
import support

AS_NOBODY = ("setpriv", "--reuid=65534", "--regid=65534", "--clear-groups")


class Output(Case):
    def test_a_folder_that_is_not_writable_for_this_user(self):
        locked = self.folder / "locked"
        locked.mkdir(mode=0o755)
        os.chmod(self.folder, 0o755)
        # Root may write anywhere: then the program runs as an ordinary user.
        prefix = AS_NOBODY if os.geteuid() == 0 else ()
        if not prefix:
            os.chmod(locked, 0o555)
        done = halflsb("check", self.plan(NOISE), "--rig", self.rig(port="/dev/none"), "--out", locked / "run", prefix=prefix, cwd=self.folder)
        self.assert_status(done, 73)
        self.assertIn("locked/run", done.err)
        self.assertIn("--out", done.err)

    def test_a_folder_with_something_in_it_is_left_alone(self):
        (self.folder / "run").mkdir()
        self.write("run/precious", "keep")
        done = self.check(self.plan(NOISE), self.rig(port="/dev/none"))
        self.assert_status(done, 73)
        self.assertEqual(list((self.folder / "run").iterdir()), [self.folder / "run" / "precious"])

    def test_a_log_file_that_cannot_be_opened(self):
        done = self.check(self.plan(NOISE), self.rig(port="/dev/none"), "--log", self.folder / "none" / "log")
        self.assert_status(done, 73)

    def test_a_full_disk_keeps_the_cases_that_were_finished(self):
        """On a file system of 256 KiB: the first case fits, the second (400 kB of capture) does not."""
        mount = self.folder / "tiny"
        mount.mkdir()
        long = NOISE.replace('"noise"\n[', '"long"\n[').replace("6000", "200000")
        plan, rig = self.plan(STEP + long + NOISE), self.rig()
        script = f"""
mount -t tmpfs -o size=256k none {mount} || exit 99
{support.HALFLSB} check {plan} --rig {rig} --out {mount}/run
status=$?
cp -r {mount}/run {self.folder}/kept
exit $status
"""
        with self.virtual_board():
            namespace = ["unshare", "--mount"] if os.geteuid() == 0 else ["unshare", "--map-root-user", "--mount"]
            done = subprocess.run([*namespace, "sh", "-c", script], capture_output=True, text=True, timeout=support.LIMIT_S)
        self.assertEqual(done.returncode, 73, done.stdout + done.stderr)
        self.assertIn("no space", done.stderr)
        record = self.record("kept")
        self.assertEqual([case["name"] for case in record["cases"]], ["step"])
        self.assertEqual(record["verdict"]["cases"][0]["verdict"], "pass")
        self.assertTrue((self.folder / "kept" / record["cases"][0]["capture"]["file"]).is_file())

    def test_standard_output_on_a_full_disk_is_not_a_pass(self):
        with self.virtual_board(), open("/dev/full", "w") as full:
            done = subprocess.run([support.HALFLSB, "check", self.plan(STEP), "--rig", self.rig(), "--out", self.folder / "run"],
                                  stdout=full, stderr=subprocess.PIPE, timeout=support.LIMIT_S)
        self.assertEqual(done.returncode, 73, done.stderr)

    def test_a_failure_that_nobody_could_read_says_so_on_standard_error(self):
        for words in ((), ("--json",)):
            with self.virtual_board("--fault", "A01"), open("/dev/full", "w") as full:
                done = subprocess.run([support.HALFLSB, "check", self.plan(NOISE), "--rig", self.rig(), "--out", self.folder / "run", *words],
                                      stdout=full, stderr=subprocess.PIPE, timeout=support.LIMIT_S)
            self.assertEqual(done.returncode, 73, done.stderr)
            self.assertIn(b"standard output", done.stderr)
            shutil.rmtree(self.folder / "run")

    def test_closed_standard_output_is_not_a_pass_and_nothing_else_takes_its_place(self):
        with self.virtual_board():
            command = f"{support.HALFLSB} check {self.plan(STEP)} --rig {self.rig()} --out {self.folder}/run --log {self.folder}/log >&-"
            done = subprocess.run(["bash", "-c", command], capture_output=True, text=True, timeout=support.LIMIT_S)
        self.assertEqual(done.returncode, 73, done.stderr)
        self.assertNotIn("1 pass", (self.folder / "log").read_text())

    def test_a_closed_pipe_ends_quietly(self):
        with self.virtual_board():
            command = f"{support.HALFLSB} check {self.plan(STEP)} --rig {self.rig()} --out {self.folder}/run | true; exit ${{PIPESTATUS[0]}}"
            done = subprocess.run(["bash", "-c", command], capture_output=True, text=True, timeout=support.LIMIT_S)
        self.assertEqual((done.returncode, done.stderr), (0, ""))


if __name__ == "__main__":
    main()
