"""Everything that a bench does to a run: exit 3, what was awaited, how long, what came instead; finished cases stay."""
import os
import subprocess

from support import FIRMWARE, NOISE, STEP, Case, main
import support

QUICK = "answer_s = 0.5\ngreet_s = 1.0\n"


class Bench(Case):
    def run_with(self, *faults, cases=NOISE, options=(), more="", **plan):
        with self.virtual_board(*[word for fault in faults for word in ("--fault", fault)]):
            return self.check(self.plan(cases, **plan), self.rig(wire=QUICK, more=more), *options)

    def expect_3(self, done, *texts):
        self.assert_status(done, 3)
        for text in texts:
            self.assertIn(text, done.out + done.err)

    def test_no_such_port_lists_what_there_is(self):
        self.expect_3(self.check(self.plan(NOISE), self.rig(port="/dev/ttyUSB77")), "/dev/ttyUSB77", "no such port")

    def test_a_stable_name_that_is_not_plugged_in(self):
        self.expect_3(self.check(self.plan(NOISE), self.rig(port="usb:0403:6001")), "usb:0403:6001")

    def test_a_port_that_is_no_terminal(self):
        self.expect_3(self.check(self.plan(NOISE), self.rig(port=self.write("file", ""))), "terminal")

    def test_no_permission_names_the_group(self):
        # Root may open anything: then the program runs as an ordinary user.
        prefix = ("setpriv", "--reuid=65534", "--regid=65534", "--clear-groups") if os.geteuid() == 0 else ()
        with self.virtual_board():
            self.link.resolve().chmod(0o000)
            os.chmod(self.folder, 0o777)
            done = self.check(self.plan(NOISE), self.rig(), prefix=prefix)
        self.expect_3(done, "permission", "group")

    def test_a_second_job_on_the_same_port(self):
        with self.virtual_board("--baud", "9600"):
            plan, rig = self.plan(NOISE), self.rig()
            command = [str(support.HALFLSB), "check", str(plan), "--rig", str(rig), "--out", str(self.folder / "first")]
            first = subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.STDOUT)
            try:
                for line in first.stdout:
                    if b"cases" in line:
                        break
                self.expect_3(self.check(plan, rig), "busy")
            finally:
                first.terminate()
                first.communicate()

    def test_a_silent_board(self):
        self.expect_3(self.run_with("silent"), "awaited the board's greeting", "for 1.0 s; nothing came")

    def test_an_echo_instead_of_a_board(self):
        self.expect_3(self.run_with("echo-only"), "echo")

    def test_a_boot_message_is_not_in_the_way(self):
        self.assert_status(self.run_with("garbage"), 0)

    def test_another_filter_or_format_than_the_plan_says(self):
        self.expect_3(self.run_with(board_filter="no-such-filter"), "no-such-filter", "load-cell")
        self.clean()
        plan = self.plan(NOISE).read_text().replace('output = "q15"', 'output = "q31"')
        with self.virtual_board():
            done = self.check(self.write("plan.toml", plan), self.rig(wire=QUICK))
        self.expect_3(done, "output q15", "q31")

    def test_a_board_that_goes_away_in_the_middle_keeps_finished_cases(self):
        # 6000 samples are 24 blocks: the first case passes, the second is cut.
        done = self.run_with("unplug=30", cases=NOISE + NOISE.replace('"noise"\n[', '"second"\n[') + STEP)
        self.expect_3(done, "1 pass", "1 invalid", "1 not run")
        record = self.record()
        self.assertEqual([case["verdict"] for case in record["verdict"]["cases"]], ["pass", "invalid"])
        self.assertTrue(record["finished"])
        self.assertEqual(record["verdict"]["cases"][1]["rules"], [])

    def test_a_board_that_restarts_makes_its_case_invalid_and_the_next_ones_run(self):
        done = self.run_with("restart=10", cases=NOISE + STEP)
        self.expect_3(done, "1 pass", "1 invalid", "restart")
        self.assertEqual([case["verdict"] for case in self.record()["verdict"]["cases"]], ["invalid", "pass"])

    def test_a_line_that_flips_drops_and_repeats_bytes_changes_no_sample(self):
        for fault in ("flip-byte=5000", "drop-byte=5003", "repeat-byte=4999", "flip-in=5000", "drop-in=5001"):
            with self.subTest(fault):
                done = self.run_with(fault)
                self.assert_status(done, 0)
                self.assertGreater(self.record()["cases"][0]["stream"]["resends"], 0)
                self.clean()

    def test_a_line_that_stands_still_for_a_while_is_waited_for(self):
        for fault in ("stall=3000:300", "stall=5000:700"):
            with self.subTest(fault):
                with self.virtual_board("--fault", fault):
                    done = self.check(self.plan(NOISE), self.rig())
                self.assert_status(done, 0)
                self.clean()

    def test_a_line_too_bad_to_use_is_said_and_never_judged(self):
        done = self.run_with("flip-byte=100")
        self.expect_3(done)
        for case in self.record()["verdict"]["cases"]:
            self.assertEqual((case["verdict"], case["rules"]), ("invalid", []))
        for case in self.record()["cases"]:
            self.assertIsNone(case["stream"]["bad_frames_at_board"], "a board that was not asked has no counters")

    def test_another_build_id_than_the_image(self):
        image = FIRMWARE / "halflsb-cw7.elf"
        self.expect_3(self.run_with(options=("--image", image)), "build-id", "halflsb-cw7.elf")

    def test_commands_run_in_the_rig_folder_before_the_board_is_opened(self):
        self.write("flash.sh", "#!/bin/sh\necho \"flashing $1 in $(pwd)\" >flashed\n").chmod(0o755)
        done = self.run_with(more='[commands]\nbefore_run = [["./flash.sh", "it; touch evil"]]\n')
        self.assert_status(done, 0)
        self.assertEqual((self.folder / "flashed").read_text(), f"flashing it; touch evil in {self.folder}\n")
        self.assertFalse((self.folder / "evil").exists())

    def test_a_command_that_fails_or_hangs(self):
        self.expect_3(self.run_with(more='[commands]\nbefore_run = [["sh", "-c", "echo no probe found; exit 7"]]\n'), "status 7", "no probe found")
        self.clean()
        self.expect_3(self.run_with(more='[commands]\nbefore_run = [["sleep", "600"]]\nbefore_run_limit_s = 1\n'), "longer than 1 s")
        self.clean()
        self.expect_3(self.run_with(more='[commands]\nbefore_run = [["./not-there.sh"]]\n'), "cannot be started")

    def clean(self):
        support.shutil.rmtree(self.folder / "run", ignore_errors=True)


class SameImage(Case):
    def test_flashing_is_skipped_when_the_board_already_runs_the_image(self):
        image = FIRMWARE / "halflsb-cw7.elf"
        listing = subprocess.run(["readelf", "-n", str(image)], capture_output=True, text=True, check=True).stdout
        build_id = listing.split("Build ID:")[1].split()[0]
        rig = self.rig(wire=QUICK, more='[commands]\nbefore_run = [["touch", "flashed"]]\n')
        with self.virtual_board("--build-id", build_id):
            done = self.check(self.plan(NOISE), rig, "--image", image)
        self.assert_status(done, 0)
        self.assertFalse((self.folder / "flashed").exists())
        self.assertNotIn("firmware not verified", done.out)
        self.assertTrue(self.record()["firmware"]["verified"])
        self.assertTrue(self.record()["firmware"]["before_run_skipped"])


if __name__ == "__main__":
    main()
