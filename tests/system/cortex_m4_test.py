"""The firmware of the CW-7, machine code on an emulated Cortex-M4 behind an emulated UART: the right build passes its
acceptance plan, each defective build is refused by the rule that should see it."""
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
        return {rule["kind"] for case in record["cases"] for rule in case["rules"] if rule["verdict"] == "fail"}

    def test_the_released_firmware_passes_and_is_verified(self):
        done, record = self.accept("halflsb-cw7.elf")
        self.assert_status(done, 0)
        self.assertTrue(record["firmware"]["verified"])
        self.assertEqual(record["counts"]["pass"], 3)
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

    def test_the_other_filters_of_the_firmware_hold_to_their_design(self):
        folder = ROOT / "rigs" / "filters" / "coefficients"
        sections = f'[[filter]]\nkind = "biquad-cascade"\nsections_file = "{{}}"\ncoefficient_fraction_bits = {{}}\n'
        fir = '[[filter]]\nkind = "fir"\ntaps_file = "smoothing.txt"\ncoefficient_fraction_bits = 15\n'
        # One rounding a section, half up; its bound is 0.5 x the L1 norm of its path to the output: 0.5 LSB for the FIR,
        # 0.5 x sum |h| of the all-pole part for the sections (settle: two of about 140 and 140, so 300 is generous).
        for name, text, limit in (("smoothing", fir, 0.5), ("mains-notch", sections.format("mains-notch.txt", 14), 40.0),
                                  ("settle", sections.format("settle.txt", 14), 300.0)):
            with self.subTest(name):
                plan = self.plan(NOISE, board_filter=name, filter_text=text, rules=f'[[rule]]\nkind = "error"\nmax_lsb = {limit}\n')
                for file in folder.glob("*.txt"):
                    support.shutil.copy(file, self.folder)
                done, _ = self.accept("halflsb-cw7.elf", plan)
                self.assert_status(done, 0)


if __name__ == "__main__":
    main()
