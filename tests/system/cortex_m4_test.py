"""The firmware of the CW-7, machine code on an emulated Cortex-M4 behind an emulated UART: the right build passes its
acceptance plan, each defective build is refused by the rule that should see it."""
import os
import signal
import subprocess
import time

from support import FIRMWARE, NOISE, ROOT, Case, main
import support

ACCEPTANCE = ROOT / "rigs" / "cw-7" / "acceptance.toml"


class CortexM4(Case):
    def accept(self, image, plan=ACCEPTANCE):
        with self.emulated_board(image):
            done = self.check(plan, self.rig(), "--image", FIRMWARE / image)
        record = self.record()
        support.shutil.rmtree(self.folder / "run")
        return done, record

    def failed_rules(self, record):
        return {rule["kind"] for case in record["verdict"]["cases"] for rule in case["rules"] if rule["verdict"] == "fail"}

    def test_the_released_firmware_passes_and_is_verified(self):
        done, record = self.accept("halflsb-cw7.elf")
        self.assert_status(done, 0)
        self.assertTrue(record["firmware"]["verified"])
        self.assertEqual(record["verdict"]["counts"]["pass"], 3)
        self.assertNotIn("not verified", done.out)

    def test_each_defective_build_is_refused(self):
        for defect, rules in (("truncate", {"error"}), ("window-15", {"error", "response"}), ("late", {"latency"}),
                              ("narrow", {"error"}), ("byteswap", {"error"}), ("drop", {"error"})):
            with self.subTest(defect):
                image = next(FIRMWARE.glob(f"halflsb-cw7-{defect}*.elf"))
                done, record = self.accept(image.name)
                self.assert_status(done, 1)
                self.assertLessEqual(rules, self.failed_rules(record))
                if defect == "late":
                    self.assertEqual(self.failed_rules(record), {"latency"})

    def test_a_starved_emulator_is_slow_and_not_broken(self):
        """Stopped three quarters of the time, it lags behind its line: no resend may bury it."""
        with self.emulated_board("halflsb-cw7.elf") as board:
            emulator = int(subprocess.run(["pgrep", "-P", str(board.process.pid), "qemu"], capture_output=True, text=True, check=True).stdout.split()[0])
            plan, rig = self.plan(NOISE), self.rig()
            command = [str(word) for word in (support.HALFLSB, "check", plan, "--rig", rig, "--out", self.folder / "run")]
            check = subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.STDOUT, text=True)
            try:
                while check.poll() is None:
                    os.kill(emulator, signal.SIGSTOP)
                    time.sleep(0.35)
                    os.kill(emulator, signal.SIGCONT)
                    time.sleep(0.12)
            finally:
                os.kill(emulator, signal.SIGCONT)
            text = check.communicate(timeout=support.LIMIT_S)[0]
        self.assertEqual(check.returncode, 0, text)

    def rounding_bound_lsb(self, file, bits):
        """Each section rounds once, to within half an LSB; what that makes of the output is at most half the L1 norm of the
        path from there: the section's own feedback, then the sections behind it (Jackson 1970)."""
        import numpy as np
        from scipy.signal import lfilter

        rows = np.round(np.array(file.read_text().split(), dtype=float).reshape(-1, 5) * 2**bits) / 2**bits
        impulse = np.zeros(20000)
        impulse[0] = 1.0
        bound = 0.0
        for number, row in enumerate(rows):
            path = lfilter([1.0], [1.0, row[3], row[4]], impulse)
            for behind in rows[number + 1:]:
                path = lfilter(behind[:3], [1.0, behind[3], behind[4]], path)
            bound += 0.5 * np.abs(path).sum()
        return bound

    def test_the_other_filters_of_the_firmware_hold_to_their_design(self):
        folder = ROOT / "rigs" / "filters" / "coefficients"
        for file in folder.glob("*.txt"):
            support.shutil.copy(file, self.folder)
        # Quiet enough that no section clips: saturated feedback is no rounding.
        noise = NOISE.replace("level_ratio = 0.9", "level_ratio = 0.3")
        fir = '[[filter]]\nkind = "fir"\ntaps_file = "smoothing.txt"\ncoefficient_fraction_bits = 15\n'
        plans = [("smoothing", "q15", fir, 0.5)]
        for name, word, coefficients, bits in (("mains-notch", "q15", "mains-notch", 14), ("settle", "q15", "settle", 14), ("settle-q31", "q31", "settle", 30)):
            text = f'[[filter]]\nkind = "biquad-cascade"\nsections_file = "{coefficients}.txt"\ncoefficient_fraction_bits = {bits}\n'
            plans.append((name, word, text, self.rounding_bound_lsb(folder / f"{coefficients}.txt", bits)))
        for name, word, text, limit in plans:
            with self.subTest(name):
                plan = self.plan(noise, board_filter=name, filter_text=text, rules=f'[[rule]]\nkind = "error"\nmax_lsb = {limit}\n')
                plan.write_text(plan.read_text().replace('"q15"', f'"{word}"'))
                done, _ = self.accept("halflsb-cw7.elf", plan)
                self.assert_status(done, 0)


if __name__ == "__main__":
    main()
