"""The rule exact and limits that follow from the arithmetic, on boards: each filter of the virtual board and of the emulated
Cortex-M4 that has a plan in rigs/cw-7/exact equals its twin, and decisions that a plan did not make are refused."""
import re
import subprocess

from support import FIRMWARE, NOISE, ROOT, VIRTUAL_BOARD, Case, halflsb, main

PLANS = sorted(path for path in (ROOT / "rigs" / "cw-7" / "exact").glob("*.toml") if path.stem != "cases")
BY_NAME = {path.stem: path for path in PLANS}
IMAGES = ("halflsb-cw7.elf", "halflsb-cw7-wide.elf", "halflsb-cw7-exact.elf", "halflsb-cw7-rates.elf")


def offered(*options):
    done = subprocess.run([VIRTUAL_BOARD, "--list-filters", *options], capture_output=True, text=True, check=True)
    return [row.split()[0] for row in done.stdout.splitlines()]


class Exact(Case):
    def run_plan(self, name, *options, plan=None, root=ROOT / "rigs"):
        self.runs = getattr(self, "runs", 0) + 1
        out = self.folder / f"run-{self.runs}"
        return halflsb("check", plan or BY_NAME[name], "--rig", self.rig(), "--root", root, "--out", out, *options)

    def test_each_filter_of_the_virtual_board_equals_its_twin(self):
        seen = set()
        for choice in ("all", "decisions", "rates"):
            names = [name for name in offered("--filter-set", choice) if name in BY_NAME]
            seen.update(names)
            with self.virtual_board("--filter-set", ",".join(names)):
                for name in names:
                    with self.subTest(name):
                        self.assert_status(self.run_plan(name), 0)
        self.assertGreaterEqual(len(seen), 35)

    def test_each_filter_of_the_emulated_firmware_equals_its_twin(self):
        seen = set()
        for image in IMAGES:
            with self.emulated_board(image):
                for name in BY_NAME:
                    if name in seen:
                        continue
                    done = self.run_plan(name, "--case", "noise of some codes", "--case", "from rail to rail")
                    if "has no filter" in done.err:
                        continue
                    with self.subTest(name, image=image):
                        self.assert_status(done, 0)
                        seen.add(name)
        self.assertGreaterEqual(len(seen), 30)

    def test_limits_that_follow_from_the_arithmetic_pass_on_every_right_board(self):
        """The same plans with error rules in the place of exact: a bound that a right board exceeds would be no bound."""
        for choice in ("all", "decisions", "rates"):
            names = [name for name in offered("--filter-set", choice) if name in BY_NAME]
            with self.virtual_board("--filter-set", ",".join(names)):
                for name in names:
                    text = BY_NAME[name].read_text().replace('include = ["cw-7/exact/cases.toml"]\n', "")
                    word = "ratio" if '"f32"' in text else "lsb"
                    plan = self.write(f"{name}.toml", text.replace("[signal]", "[signal]\nrate_hz = 1200.0", 1) + f"""
[[rule]]
kind = "error"
max_{word} = "derived"
rms_{word} = "derived"
bias_{word} = "derived"
{NOISE}
[[case]]
name = "impulse"
[case.stimulus]
shape = "impulse"
at_samples = 3
level_ratio = 0.4
length_samples = 608
""")
                    for file in (ROOT / "rigs").glob("**/*.txt"):
                        target = self.folder / file.relative_to(ROOT / "rigs")
                        target.parent.mkdir(parents=True, exist_ok=True)
                        target.write_bytes(file.read_bytes())
                    with self.subTest(name):
                        self.assert_status(self.run_plan(name, plan=plan, root=self.folder), 0)

    def test_a_decision_that_the_plan_did_not_make_is_refused(self):
        """settle-floor truncates where settle rounds: exact tells, and so does the bias of the derived limits."""
        text = BY_NAME["settle"].read_text()
        plan = self.write("plan.toml", re.sub(r'filter\s*= "settle"', 'filter = "settle-floor"', text))
        with self.virtual_board("--filter-set", "settle-floor"):
            done = self.run_plan("settle", plan=plan)
        self.assert_status(done, 1)
        self.assertIn("samples differ from the declared arithmetic, by up to", done.out)

    def test_an_output_taken_at_another_input_of_the_group_is_refused(self):
        """Blocks that are no multiple of the factor tell it by their counts, else every sample differs."""
        text = BY_NAME["belt-eighth"].read_text().replace("phase_samples = 7", "phase_samples = 6")
        plan = self.write("plan.toml", text)
        for file in ("cw-7/exact/cases.toml",):
            target = self.folder / file
            target.parent.mkdir(parents=True, exist_ok=True)
            target.write_bytes((ROOT / "rigs" / file).read_bytes())
        with self.virtual_board("--filter-set", "rates"):
            done = self.run_plan("belt-eighth", "--case", "ramp", plan=plan, root=self.folder)
            self.assert_status(done, 1)
            self.assertIn("750 of 750 samples differ from the declared arithmetic", done.out)
        with self.virtual_board("--filter-set", "rates", "--block", "7"):
            done = self.run_plan("belt-eighth", "--case", "ramp", plan=plan, root=self.folder)
            self.assert_status(done, 3)
            self.assertIn("phase_samples", done.out)


if __name__ == "__main__":
    main()
