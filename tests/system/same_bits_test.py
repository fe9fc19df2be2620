"""The same plan and board give the same captures and the same judged figures whatever the processor offers: with the C
library's fused multiply-add and AVX2 paths masked, nothing of a verdict may move."""
from support import Case, MOVING_AVERAGE, NOISE, ROOT, main
import support

MASKED = {"GLIBC_TUNABLES": "glibc.cpu.hwcaps=-FMA,-AVX2,-AVX512F"}

CASES = """
[[case]]
name = "normal noise"
[case.stimulus]
shape = "noise"
distribution = "normal"
level_ratio = 0.2
length_samples = 20000
[[case.rule]]
kind = "response"
bands = [{ from_hz = 10.0, to_hz = 50.0, min_db = -9.0, max_db = 0.1 }]
[[case.rule]]
kind = "error"
max_lsb = 0.5
rms_lsb = 0.4
min_snr_db = 60.0
[[case]]
name = "logarithmic chirp"
[case.stimulus]
shape = "chirp"
sweep = "logarithmic"
from_hz = 1.0
to_hz = 600.0
level_ratio = 0.9
length_samples = 20000
[[case.rule]]
kind = "response"
bands = [{ from_hz = 10.0, to_hz = 50.0, min_db = -9.0, max_db = 0.1 }]
[[case]]
name = "three tones"
[case.stimulus]
shape = "multitone"
frequencies_hz = [10.0, 33.3, 171.0]
level_ratio = 0.9
realisations = 10
length_samples = 10000
[[case.rule]]
kind = "response"
bands = [{ from_hz = 5.0, to_hz = 200.0, min_db = -30.0, max_db = 0.1 }]
"""


EXACT_AND_DERIVED = """
[[rule]]
kind = "exact"
[[rule]]
kind = "error"
max_WORD = "derived"
rms_WORD = "derived"
bias_WORD = "derived"
"""


class SameBits(Case):
    def verdicts(self, environment, plan, status=0, root=".", board=()):
        with self.virtual_board(*board):
            done = self.check(plan, self.rig(), "--root", root, environment=environment)
        self.assert_status(done, status)
        record = self.record()
        support.shutil.rmtree(self.folder / "run")
        return record["verdict"], [case["capture"] for case in record["cases"]]

    def test_masked_instructions_change_nothing(self):
        plan = self.plan(CASES, filter_text=MOVING_AVERAGE)
        plain = self.verdicts({}, plan)
        self.assertEqual(plain, self.verdicts(MASKED, plan))
        verdict, captures = plain
        self.assertEqual(len(verdict["cases"]), 3)
        self.assertEqual([len(capture["sha256"]) for capture in captures], [64] * 3)

    def test_masked_instructions_change_no_twin_and_no_derived_limit(self):
        """Fused float32 is not what the board computes: where its first difference lies tells one product from another."""
        for name, before, after, status in (
            ("settle", "", "", 0),
            ("settle-f32", "", "", 0),
            ("settle-f32", '"separate"', '"fused"', 1),
            ("load-cell-float", "", "", 0),
        ):
            with self.subTest(name, multiply_add=after):
                text = (ROOT / "rigs" / "cw-7" / "exact" / f"{name}.toml").read_text().replace(before, after)
                text = text.replace('include = ["cw-7/exact/cases.toml"]\n', "").replace("[signal]", "[signal]\nrate_hz = 1200.0")
                rules = EXACT_AND_DERIVED.replace("WORD", "ratio" if '"f32"' in text else "lsb")
                plan = self.write(f"{name}.toml", text + rules + NOISE)
                numbers = self.folder / "filters" / "coefficients"
                support.shutil.copytree(ROOT / "rigs" / "filters" / "coefficients", numbers, dirs_exist_ok=True)
                plain = self.verdicts({}, plan, status, self.folder, ("--filter-set", name))
                self.assertEqual(plain, self.verdicts(MASKED, plan, status, self.folder, ("--filter-set", name)))
                told = {rule["kind"]: rule for rule in plain[0]["cases"][0]["rules"]}
                self.assertEqual(told["error"]["verdict"], "pass")
                self.assertEqual(told["exact"]["verdict"], "fail" if status else "pass")


if __name__ == "__main__":
    main()
