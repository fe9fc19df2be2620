"""The same plan and board give the same captures and the same judged figures whatever the processor offers: with the C
library's fused multiply-add and AVX2 paths masked, nothing of a verdict may move."""
from support import Case, MOVING_AVERAGE, main
import support

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
length_samples = 10000
[[case.rule]]
kind = "response"
bands = [{ from_hz = 5.0, to_hz = 200.0, min_db = -30.0, max_db = 0.1 }]
"""


class SameBits(Case):
    def verdicts(self, environment):
        with self.virtual_board():
            done = self.check(self.plan(CASES, filter_text=MOVING_AVERAGE), self.rig(), environment=environment)
        self.assert_status(done, 0)
        record = self.record()
        support.shutil.rmtree(self.folder / "run")
        return record["verdict"], [case["capture"] for case in record["cases"]]

    def test_masked_instructions_change_nothing(self):
        masked = {"GLIBC_TUNABLES": "glibc.cpu.hwcaps=-FMA,-AVX2,-AVX512F"}
        plain = self.verdicts({})
        self.assertEqual(plain, self.verdicts(masked))
        verdict, captures = plain
        self.assertEqual(len(verdict["cases"]), 3)
        self.assertEqual([len(capture["sha256"]) for capture in captures], [64] * 3)


if __name__ == "__main__":
    main()
