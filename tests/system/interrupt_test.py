"""Ctrl-C, TERM and HUP: exit 130 within a second, finished cases kept."""
import signal
import subprocess
import time

from support import NOISE, STEP, Case, main, wait_until
import support


class Interrupt(Case):
    def interrupted(self, number, when):
        long = NOISE.replace('"noise"\n[', '"long"\n[').replace("6000", "2000000")
        plan, rig = self.plan(STEP + long), self.rig()
        with self.virtual_board("--baud", "115200"):
            command = [support.HALFLSB, "check", plan, "--rig", rig, "--out", self.folder / "run"]
            process = subprocess.Popen([str(word) for word in command], stdout=subprocess.PIPE, stderr=subprocess.PIPE)
            when(process)
            sent = time.monotonic()
            process.send_signal(number)
            out, err = process.communicate(timeout=20)
            took_s = time.monotonic() - sent
        self.assertEqual(process.returncode, 130, out + err)
        return took_s, (out + err).decode()

    def after_the_first_case(self, process):
        for line in process.stdout:
            if b"1/2" in line:
                return

    def test_each_signal_ends_it_within_a_second_and_keeps_what_is_finished(self):
        for number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP):
            with self.subTest(number.name):
                took_s, text = self.interrupted(number, self.after_the_first_case)
                self.assertLess(took_s, 1.0 + 1.0, "a second, and one of grace for a loaded machine")
                record = self.record()
                self.assertEqual([(case["name"], case["verdict"]) for case in record["verdict"]["cases"]], [("step", "pass")])
                self.assertEqual(record["ended_by"]["kind"], "interrupted")
                self.assertIn("1 not run", text)
                # The interrupted case leaves no half file behind.
                self.assertEqual(len(list((self.folder / "run" / "captures").iterdir())), 1)
                support.shutil.rmtree(self.folder / "run")

    def test_settings_are_put_back_through_a_slow_line(self):
        case = NOISE.replace('name = "noise"\n', 'name = "quick"\nsettings = { average-points = 4 }\n').replace("6000", "2000000")
        unknown = {"filter_text": '[[filter]]\nkind = "unknown"\n', "rules": '[[rule]]\nkind = "unchanged"\n'}
        plan = self.plan(case, board_filter="average", **unknown)
        with self.virtual_board("--baud", "115200"):
            process = subprocess.Popen([str(support.HALFLSB), "check", str(plan), "--rig", str(self.rig(baud=115200)), "--out", str(self.folder / "run")],
                                       stdout=subprocess.PIPE, stderr=subprocess.PIPE)
            for line in process.stdout:
                if line.startswith(b"  cases "):
                    break
            time.sleep(0.3)  # 17 kB in flight, 1.5 s on that line
            process.send_signal(signal.SIGINT)
            _, err = process.communicate(timeout=20)
        self.assertEqual(process.returncode, 130, err)
        self.assertNotIn(b"keeps settings", err)
        self.assertEqual(self.record()["warnings"], [])

    def test_while_a_command_of_the_rig_runs(self):
        rig = self.rig(more='[commands]\nbefore_run = [["sh", "-c", "touch started; sleep 600"]]\n')
        process = subprocess.Popen([str(support.HALFLSB), "check", str(self.plan(STEP)), "--rig", str(rig), "--out", str(self.folder / "run")],
                                   stdout=subprocess.PIPE, stderr=subprocess.PIPE)
        wait_until((self.folder / "started").exists, what="the command")
        process.send_signal(signal.SIGINT)
        process.communicate(timeout=10)
        self.assertEqual(process.returncode, 130)


if __name__ == "__main__":
    main()
